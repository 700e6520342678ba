//! The program `ironhum`.

fn main() {}
