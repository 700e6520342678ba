//! What to decide: keep or replace, and which bid.
