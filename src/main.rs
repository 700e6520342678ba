//! The program `ironhum`.

use std::process::ExitCode;

fn main() -> ExitCode {
    ironhum::cli::main()
}
