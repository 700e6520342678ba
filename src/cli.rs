//! The commands: what was typed, the question it asks of a study, and how the answer is written.
//!
//! Standard output carries results only; problems go to standard error. A command is one file under `cli/`.

mod args;
mod award;
mod book;
mod check;
mod columns;
mod dashboard;
mod demo;
mod exit;
mod factors;
mod import;
mod journal;
mod losses;
mod print;
mod rank;
mod report;
mod settle;
mod tender;
mod threads;
mod timings;
mod unit;
mod work;

use std::ffi::OsString;
use std::process::ExitCode;

use clap::{CommandFactory, Parser};

pub use args::{Args, Command};
pub use exit::Exit;

use exit::Failure;
use print::Printer;
use timings::Timings;

/// Runs the program with the arguments of the process.
pub fn main() -> ExitCode {
    run(std::env::args_os()).into()
}

/// Runs the program: parses, does, and says with what exit status.
pub fn run(arguments: impl IntoIterator<Item = OsString>) -> Exit {
    let arguments: Vec<OsString> = arguments.into_iter().collect();
    let args = match Args::try_parse_from(&arguments) {
        Ok(args) => args,
        Err(error) => {
            let help = !error.use_stderr();
            return match (error.print(), help) {
                (Ok(()), true) => Exit::Done,
                (Err(e), true) if e.kind() == std::io::ErrorKind::BrokenPipe => Exit::Done,
                (_, true) => Exit::Failed,
                (_, false) => Exit::Usage,
            };
        }
    };
    threads::make();
    let mut printer = Printer::new(args.format);
    let timings = Timings::start(args.timings && !matches!(args.command, Some(Command::Rank(_))));
    let done = dispatch(&args, &mut printer);
    let flushed = printer.flush().map_err(Failure::from);
    if let Some(line) = timings.finish() {
        printer.complain(&line);
    }
    let whole = |exit| match exit {
        // The terminal may be gone with its user.
        Exit::Signal(_) => Ok(exit),
        _ => flushed.map(|()| exit),
    };
    match done.and_then(whole) {
        Ok(exit) => exit,
        Err(failure) => {
            if let Some(message) = &failure.message {
                printer.complain(message);
            }
            failure.exit
        }
    }
}

fn dispatch(args: &Args, printer: &mut Printer) -> Result<Exit, Failure> {
    match &args.command {
        None => dashboard::open(args),
        Some(Command::Demo) => demo::demo(args, printer),
        Some(Command::Import(import)) => import::import(args, import, printer),
        Some(Command::Check) => check::check(args, printer),
        Some(Command::Losses(options)) => losses::losses(args, options, printer),
        Some(Command::Rank(options)) => rank::rank(args, options, printer),
        Some(Command::Factors(options)) => factors::factors(args, options, printer),
        Some(Command::Tender(options)) => tender::tender(args, options, printer),
        Some(Command::Unit(options)) => unit::unit(args, options, printer),
        Some(Command::Award(options)) => award::award(args, options, printer),
        Some(Command::Deliver(options)) => award::deliver(args, options, printer),
        Some(Command::Settle(options)) => settle::settle(args, options, printer),
        Some(Command::Report(options)) => report::report(args, options, printer),
        Some(Command::Work(options)) => work::work(options, printer),
        Some(Command::Journal(options)) => journal::journal(args, options, printer),
        Some(Command::Columns { what }) => columns::columns(*what, printer),
        Some(Command::Backup { file }) => book::backup(args, file, printer),
        Some(Command::Completions { shell }) => {
            let mut text = Vec::new();
            clap_complete::generate(*shell, &mut Args::command(), "ironhum", &mut text);
            printer.text(&String::from_utf8_lossy(&text))?;
            Ok(Exit::Done)
        }
        Some(Command::Man) => {
            let mut text = Vec::new();
            clap_mangen::Man::new(Args::command()).render(&mut text)?;
            printer.text(&String::from_utf8_lossy(&text))?;
            Ok(Exit::Done)
        }
    }
}
