//! What can be typed: the tree of commands and options, from which help, completions and the manual are made.

use std::path::PathBuf;

use clap::builder::{PossibleValuesParser, TypedValueParser};
use clap::{Parser, Subcommand, ValueEnum};

use crate::engine::transformer::ageing::Paper;
use crate::exchange::{Decimal, Delimiter, Encoding};
use crate::study::intake::What;
use crate::study::rank::By;

/// How results are written.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, ValueEnum)]
pub enum Format {
    /// For people: rounded, with units.
    #[default]
    Text,
    /// The main table, full precision.
    Csv,
    /// One document, full precision.
    Json,
}

/// When colour is used.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, ValueEnum)]
pub enum Colour {
    /// Where the terminal has it and NO_COLOR is not set.
    #[default]
    Auto,
    /// Always.
    Always,
    /// Never.
    Never,
}

/// Transformer losses and owning cost: which units to replace, when and with what, and which bid to take.
///
/// Screening economics, not switching or loading instructions. Work on energised or oil-filled plant, PCB
/// handling, loading beyond nameplate and protection settings follow local codes, manufacturer instructions
/// and licensed engineers.
#[derive(Clone, Debug, Parser)]
#[command(
    name = "ironhum",
    version,
    arg_required_else_help = false,
    after_help = "Without a command the dashboard opens on the book.\n\
                  Exit status: 0 done, 1 could not be done, 2 wrong use, 3 input rejected, \
                  4 no feasible solution, 128+n on signal n."
)]
pub struct Args {
    /// What to do; without a command the dashboard opens.
    #[command(subcommand)]
    pub command: Option<Command>,
    /// The book (an SQLite file); else $IRONHUM_BOOK, else book.sqlite in the data directory
    #[arg(long, global = true, value_name = "FILE")]
    pub book: Option<PathBuf>,
    /// The basis; else the book's only or current one
    #[arg(long, global = true, value_name = "NAME")]
    pub basis: Option<String>,
    /// How results are written
    #[arg(long, global = true, value_enum, default_value_t)]
    pub format: Format,
    /// Change nothing
    #[arg(long, global = true)]
    pub read_only: bool,
    /// Print phase times as one JSON line on standard error
    #[arg(long, global = true)]
    pub timings: bool,
    /// When colour is used on the screens
    #[arg(long, global = true, value_enum, default_value_t)]
    pub color: Colour,
    /// Draw screens with ASCII characters only
    #[arg(long, global = true)]
    pub ascii: bool,
}

/// The commands.
#[derive(Clone, Debug, Subcommand)]
pub enum Command {
    /// Make a fresh demo book and open it; without a terminal print its ranking and tender result
    Demo,
    /// Take a file in: CSV, TSV, semicolon with decimal comma, XLSX; basis and tender are TOML
    Import(Import),
    /// List everything doubtful in the book: missing, estimated, implausible, contradictory
    Check,
    /// Annual energy and cost of losses of each unit, in year 1 of the basis
    Losses(Shown),
    /// Rank the units: what to replace, when and with what
    Rank(Rank),
    /// The capitalised loss factors A, B and auxiliary of a basis, or of a lot
    Factors(Factors),
    /// Evaluate the bids of a tender
    Tender(Tender),
    /// Award a lot of a tender to a bid, with who, when and why
    Award(Award),
    /// Take the measured units of the awarded bids into the fleet, with their measured losses
    Deliver(Deliver),
    /// Measured against guaranteed losses of a tender: excess, penalty, beyond tolerance or not
    Settle(Settle),
    /// A report to hand on, as Markdown
    Report(Report),
    /// One unit's dossier
    Unit(Unit),
    /// One trade calculation with its working shown; without a name list them
    Work(Work),
    /// Who changed what, when, from what and why
    Journal(Journal),
    /// Say what columns a file has: name, unit, range, what a blank means
    Columns {
        /// The file
        #[arg(value_parser = one_of(&What::WORDS))]
        what: What,
    },
    /// Write a consistent copy of the book
    Backup {
        /// The copy; must not exist
        file: PathBuf,
    },
    /// Print the completions of a shell
    Completions {
        /// The shell
        shell: clap_complete::Shell,
    },
    /// Print the manual page
    Man,
}

const PAPERS: &[(&str, Paper)] =
    &[(Paper::Normal.word(), Paper::Normal), (Paper::Upgraded.word(), Paper::Upgraded)];

/// One word of a list, as typed.
fn one_of<T: Clone + Send + Sync + 'static>(
    words: &'static [(&'static str, T)],
) -> impl TypedValueParser<Value = T> {
    PossibleValuesParser::new(words.iter().map(|(word, _)| *word)).try_map(|typed| {
        let found = words.iter().find(|(word, _)| *word == typed);
        found.map(|(_, value)| value.clone()).ok_or("is no word of the list")
    })
}

/// Options of `import`.
#[derive(Clone, Debug, clap::Args)]
#[expect(clippy::struct_excessive_bools, reason = "each is a switch that can be typed")]
pub struct Import {
    /// What the file holds
    #[arg(value_parser = one_of(&What::WORDS))]
    pub what: What,
    /// The file; - reads standard input. At most 2 GiB, and 5 million rows of records
    pub file: PathBuf,
    /// Rename a column of the file
    #[arg(long, value_name = "THEIRS=OURS")]
    pub map: Vec<String>,
    /// Pass over unknown columns
    #[arg(long)]
    pub ignore_unknown: bool,
    /// Store the good rows, leave the bad ones
    #[arg(long)]
    pub skip_bad: bool,
    /// Write the bad rows with their reasons to a file
    #[arg(long, value_name = "FILE")]
    pub rejects: Option<PathBuf>,
    /// Store nothing, say what would change
    #[arg(long)]
    pub dry_run: bool,
    /// A blank cell erases the old value
    #[arg(long)]
    pub clear_blank: bool,
    /// Make the basis the current one: what commands without --basis take
    #[arg(long)]
    pub current: bool,
    /// Name of the price series (else the file's name)
    #[arg(long, value_name = "NAME")]
    pub name: Option<String>,
    /// What parts the cells (else recognised)
    #[arg(long, value_name = "WORD", value_parser = one_of(Delimiter::WORDS))]
    pub delimiter: Option<Delimiter>,
    /// The decimal sign (else recognised)
    #[arg(long, value_name = "WORD", value_parser = one_of(Decimal::WORDS))]
    pub decimal: Option<Decimal>,
    /// The encoding of the text (else recognised)
    #[arg(long, value_name = "WORD", value_parser = one_of(Encoding::WORDS))]
    pub encoding: Option<Encoding>,
    /// Why, for the journal
    #[arg(long, value_name = "TEXT")]
    pub why: Option<String>,
}

/// How much of a table is shown.
#[derive(Clone, Debug, Default, clap::Args)]
pub struct Shown {
    /// Show only the first N
    #[arg(long, value_name = "N")]
    pub top: Option<usize>,
}

/// Reads an order of the ranking as a command offers it: by a figure of money.
fn order() -> impl TypedValueParser<Value = By> {
    const ORDERS: [By; 2] = [By::Saving, By::Waiting];
    PossibleValuesParser::new(ORDERS.map(By::word))
        .map(|word| ORDERS.into_iter().find(|by| by.word() == word).unwrap_or_default())
}

/// Options of `rank`.
#[derive(Clone, Debug, Default, clap::Args)]
pub struct Rank {
    /// Show only the first N
    #[arg(long, value_name = "N")]
    pub top: Option<usize>,
    /// The figure that orders the ranking
    #[arg(long, value_name = "BY", default_value = By::Saving.word(), value_parser = order())]
    pub by: By,
}

/// Options of `factors`.
#[derive(Clone, Debug, Default, clap::Args)]
pub struct Factors {
    /// Factors of a lot of this tender
    #[arg(long, value_name = "TENDER")]
    pub tender: Option<String>,
    /// The lot [default: the only one of the tender]
    #[arg(long, value_name = "LOT", requires = "tender")]
    pub lot: Option<String>,
    /// Peak load of year 1 over the rating
    #[arg(long, value_name = "PU")]
    pub peak_pu: Option<f64>,
    /// Loss factor of the load
    #[arg(long, value_name = "PU")]
    pub loss_factor_pu: Option<f64>,
    /// Load factor of the load, where its loss factor is not known
    #[arg(long, value_name = "PU")]
    pub load_factor_pu: Option<f64>,
    /// Profile of the load
    #[arg(long, value_name = "NAME")]
    pub profile: Option<String>,
    /// Yearly growth of the load
    #[arg(long, value_name = "PCT", allow_negative_numbers = true)]
    pub load_growth_pct: Option<f64>,
    /// Take every factor from the basis, also where the lot states its own: the working to publish
    #[arg(long, requires = "tender")]
    pub from_basis: bool,
    /// Show how each factor comes about
    #[arg(long)]
    pub working: bool,
}

/// Options of `tender`.
#[derive(Clone, Debug, clap::Args)]
#[expect(clippy::struct_field_names, reason = "the words that are typed")]
pub struct Tender {
    /// The tender
    pub tender: String,
    /// Only this lot
    #[arg(long, value_name = "LOT")]
    pub lot: Option<String>,
    /// Show how each figure comes about
    #[arg(long)]
    pub working: bool,
    /// Answer for this bid: where it stands, what it lacked, and its working
    #[arg(long, value_name = "BID")]
    pub bid: Option<String>,
    /// Take every factor from the basis, also where a lot states its own
    #[arg(long)]
    pub from_basis: bool,
    /// Say how sure the winner is under the ranges of the basis
    #[arg(long)]
    pub risk: bool,
    /// How that is drawn.
    #[command(flatten)]
    pub drawn: Drawn,
}

/// How a simulation is drawn. Any of these asks for one.
#[derive(Clone, Debug, Default, clap::Args)]
pub struct Drawn {
    /// Number of draws [default: 10000]
    #[arg(long, value_name = "N")]
    pub draws: Option<usize>,
    /// Seed of the draws; the same seed gives the same figures [default: 1]
    #[arg(long, value_name = "S")]
    pub seed: Option<u64>,
    /// Two inputs that move together, with their rank correlation from -1 to 1
    #[arg(long, value_name = "INPUT,INPUT,RHO")]
    pub correlate: Vec<String>,
}

/// Options of `report`.
#[derive(Clone, Debug, clap::Args)]
pub struct Report {
    /// What is reported
    #[command(subcommand)]
    pub what: Reported,
}

/// What can be reported.
#[derive(Clone, Debug, Subcommand)]
pub enum Reported {
    /// The comparison of the bids of a tender, with factors, winner map, risk and settlement
    Tender(ReportTender),
}

/// Options of `report tender`.
#[derive(Clone, Debug, clap::Args)]
pub struct ReportTender {
    /// The tender
    pub tender: String,
    /// The Markdown file, ending in .md; - writes to standard output
    pub file: PathBuf,
    /// Only this lot
    #[arg(long, value_name = "LOT")]
    pub lot: Option<String>,
    /// Take every factor from the basis, also where a lot states its own
    #[arg(long)]
    pub from_basis: bool,
    /// How the risk is drawn, where the basis names ranges.
    #[command(flatten)]
    pub drawn: Drawn,
}

/// Options of `award`.
#[derive(Clone, Debug, clap::Args)]
#[command(
    after_help = "The award and its journal entry carry the name of the user who is logged on: $USER, else $LOGNAME, \
    else $USERNAME. Set one of them for one command to sign with another name: USER=\"A. Buyer\" ironhum award …"
)]
pub struct Award {
    /// The tender
    pub tender: String,
    /// The lot
    #[arg(long, value_name = "LOT")]
    pub lot: String,
    /// The bid that it goes to
    #[arg(long, value_name = "BID", required_unless_present = "withdraw")]
    pub bid: Option<String>,
    /// Take the award back; the journal keeps it
    #[arg(long, conflicts_with = "bid")]
    pub withdraw: bool,
    /// Award it although it misses a limit of the lot
    #[arg(long, conflicts_with = "withdraw")]
    pub despite: bool,
    /// Why; needed where another bid is recommended, and to take an award back
    #[arg(long, value_name = "TEXT")]
    pub why: Option<String>,
}

/// Options of `deliver`.
#[derive(Clone, Debug, clap::Args)]
pub struct Deliver {
    /// The tender
    pub tender: String,
    /// Only this lot
    #[arg(long, value_name = "LOT")]
    pub lot: Option<String>,
    /// Leave this unit out, this time; units beyond tolerance are always left out
    #[arg(long, value_name = "SERIAL")]
    pub except: Vec<String>,
    /// Take this unit although it is beyond tolerance
    #[arg(long, value_name = "SERIAL")]
    pub also: Vec<String>,
    /// What stands before the serial number in the identifier of the unit
    #[arg(long, value_name = "TEXT")]
    pub prefix: Option<String>,
    /// Why, for the journal
    #[arg(long, value_name = "TEXT")]
    pub why: Option<String>,
}

/// Options of `settle`.
#[derive(Clone, Debug, clap::Args)]
pub struct Settle {
    /// The tender
    pub tender: String,
    /// Only this lot
    #[arg(long, value_name = "LOT")]
    pub lot: Option<String>,
    /// Only this bid: the letter to its supplier
    #[arg(long, value_name = "BID")]
    pub bid: Option<String>,
    /// Show how each figure comes about, or the one that is named (from the lot or the serial that is given); ? lists the names
    #[arg(long, value_name = "FIGURE", num_args = 0..=1, default_missing_value = "")]
    pub working: Option<String>,
    /// Show the working of this unit only
    #[arg(long, value_name = "SERIAL")]
    pub serial: Option<String>,
}

/// Options of `unit`.
#[derive(Clone, Debug, clap::Args)]
#[command(group = clap::ArgGroup::new("fitted").args(["fit", "fit_bid"]))]
#[expect(clippy::struct_field_names, reason = "the words that are typed")]
pub struct Unit {
    /// The unit
    pub unit: String,
    /// Show how each figure comes about, or the one that is named
    #[arg(long, value_name = "FIGURE", num_args = 0..=1, default_missing_value = "")]
    pub working: Option<String>,
    /// Ambient temperature all year, in °C [default: 20]
    #[arg(long, value_name = "C", allow_negative_numbers = true)]
    pub ambient_c: Option<f64>,
    /// A year of ambient temperatures: a file with timestamp or interval, and ambient_c
    #[arg(long, value_name = "FILE", conflicts_with = "ambient_c")]
    pub ambient: Option<PathBuf>,
    /// Paper of the windings: normal, or thermally upgraded [default: normal]
    #[arg(long, value_name = "KIND", value_parser = one_of(PAPERS))]
    pub paper: Option<Paper>,
    /// Say how an offer fits its place: terminals, load, fault level, law
    #[arg(long, value_name = "OFFER")]
    pub fit: Option<String>,
    /// The same of a bid
    #[arg(long, num_args = 3, value_names = ["TENDER", "LOT", "BID"], conflicts_with = "fit")]
    pub fit_bid: Option<Vec<String>>,
    /// The unit that it would run beside, in parallel
    #[arg(long, value_name = "UNIT", requires = "fitted")]
    pub beside: Option<String>,
    /// Fault level of the network at the primary, in MVA [default: infinite]
    #[arg(long, value_name = "MVA", requires = "fitted")]
    pub network_mva: Option<f64>,
    /// Highest fault level that the switchgear at the secondary bears, in MVA
    #[arg(long, value_name = "MVA", requires = "fitted")]
    pub fault_limit_mva: Option<f64>,
}

/// Options of `work`.
#[derive(Clone, Debug, clap::Args)]
pub struct Work {
    /// The calculation; without it all are listed with their inputs
    pub calc: Option<String>,
    /// Inputs as name=value; lists as name=1,2,3
    #[arg(value_name = "NAME=VALUE", allow_negative_numbers = true)]
    pub inputs: Vec<String>,
}

/// Options of `journal`.
#[derive(Clone, Debug, clap::Args)]
pub struct Journal {
    /// Show the latest N entries
    #[arg(long, value_name = "N", default_value_t = 100)]
    pub top: usize,
}
