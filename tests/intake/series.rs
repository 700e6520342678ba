//! Series.
