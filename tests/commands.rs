//! The commands as a script meets them: exit status, what stands on which stream, what is written where.

mod support;

use std::io::Read as _;
use std::process::{Output, Stdio};

use ironhum::book::{Access, Book};
use serde_json::Value;
use support::{Program, demo_fleet};

const BASIS: &str = r#"
name = "flat"
currency = "EUR"
first_year = 2027
horizon_years = 20
discount_rate_pct = 5
energy_price_per_kwh = 0.1
life_years = 40
"#;
const UNITS: &str = "unit,rated_kva,phases,hv_kv,lv_kv,no_load_loss_w,load_loss_w,peak_kva,load_factor_pu,year_made,note\n\
                     007,100,3,20,0.4,390,2100,80,0.5,1972,=1+1\n\
                     B,100,3,20,0.4,,2100,80,0.5,1972,\n";
const OFFERS: &str =
    "offer,rated_kva,no_load_loss_w,load_loss_w,price\nN100,100,130,1250,5600.50\n";

fn small() -> Program {
    let program = Program::new();
    program.import("units", &program.write("units.csv", UNITS), &[]);
    program.import("offers", &program.write("offers.csv", OFFERS), &[]);
    program.import("basis", &program.write("basis.toml", BASIS), &[]);
    program
}

fn code(output: &Output) -> i32 {
    output.status.code().expect("no signal")
}

fn errors(output: &Output) -> String {
    String::from_utf8_lossy(&output.stderr).into_owned()
}

/// No NaN and no infinity ever appear; numbers of a document are finite.
fn finite(value: &Value) {
    match value {
        Value::Array(list) => list.iter().for_each(finite),
        Value::Object(map) => map.values().for_each(finite),
        Value::Number(number) => assert!(number.as_f64().is_some_and(f64::is_finite)),
        _ => {}
    }
}

#[test]
fn each_reading_command_writes_text_csv_and_one_json_document() {
    let program = Program::new();
    program.import_demo();
    for command in [
        &["rank", "--top", "5"][..],
        &["losses", "--top", "5"],
        &["factors"],
        &["check"],
        &["journal"],
        &["unit", "ZQ-0105"],
        &["tender", "ol-2027-1"],
        &["settle", "ol-2027-1"],
        &["columns", "units"],
        &["work"],
        &["work", "annuity", "discount_rate_pct=6", "years=30"],
    ] {
        let of = |format| [command, &["--format", format]].concat();
        let json = program.json(&of("json"));
        assert_eq!(json["schema_version"], 1, "{command:?}");
        finite(&json);
        let csv = program.done(&of("csv"));
        let mut reader = csv::Reader::from_reader(csv.as_bytes());
        assert!(reader.records().all(|row| row.is_ok()), "{command:?}: ragged CSV");
        let text = program.done(&of("text"));
        assert!(!text.contains('\u{1b}') && text.lines().count() > 1, "{command:?}");
    }
}

#[test]
fn the_demo_without_a_terminal_prints_ranking_and_tender() {
    let program = Program::new();
    let mut command = program.command(&["demo"]);
    command.env_remove("IRONHUM_BOOK").env("XDG_DATA_HOME", program.home());
    let output = command.output().expect("starts");
    assert_eq!(code(&output), 0, "{}", errors(&output));
    let text = String::from_utf8(output.stdout).expect("UTF-8");
    assert!(text.contains("units ranked over 30 years") && text.contains("Lot L2"));
    assert!(program.home().join("ironhum/demo.sqlite").exists());
    assert!(!program.home().join("ironhum/book.sqlite").exists());
}

#[test]
fn the_demo_is_never_written_into_the_named_book() {
    let program = Program::new();
    let mut command = program.command(&["demo"]);
    command.env("XDG_DATA_HOME", program.home());
    assert_eq!(code(&command.output().expect("starts")), 0);
    assert!(!program.book().exists(), "IRONHUM_BOOK names the planner's book");
    let read_only = program.run(&["demo", "--read-only"]);
    assert_eq!(code(&read_only), 2);
}

#[test]
fn exit_status_tells_wrong_use_from_rejected_input() {
    let program = small();
    let cases: &[(&[&str], i32, &str)] = &[
        (&["rank", "--basis", "flit"], 2, "did you mean flat"),
        (&["unit", "b"], 2, "did you mean B"),
        (&["factors", "--peak-pu", "nan"], 3, "peak_pu"),
        (&["factors", "--loss-factor-pu", "5"], 3, "loss_factor_pu 5"),
        (&["factors", "--load-growth-pct", "-150"], 3, "load_growth_pct"),
        (&["factors", "--load-factor-pu", "0.5", "--loss-factor-pu", "0.1"], 3, "LF²"),
        (&["factors", "--profile", "none"], 2, "profile none"),
        (&["work", "anuity"], 2, "annuity"),
        (&["work", "annuity", "rate=6"], 2, "rate"),
        (&["work", "annuity", "discount_rate_pct=-100", "years=3"], 3, "discount_rate_pct"),
        (&["tender", "T1"], 2, "tender T1"),
        (&["--book", "/nowhere/at/all", "rank"], 1, "/nowhere/at/all"),
        (&["frobnicate"], 2, "frobnicate"),
        (&["import", "units", "/nowhere.csv"], 1, "/nowhere.csv"),
        (&[], 2, "terminal"),
    ];
    for (arguments, status, words) in cases {
        let output = program.run(arguments);
        assert_eq!(code(&output), *status, "{arguments:?}: {}", errors(&output));
        assert!(output.stdout.is_empty(), "{arguments:?}: results only on standard output");
        assert!(errors(&output).contains(words), "{arguments:?}: {}", errors(&output));
    }
}

#[test]
fn a_basis_that_cannot_be_computed_is_not_let_in() {
    let program = small();
    for (change, words) in [
        ("horizon_years = 20", "horizon_years = 0"),
        ("discount_rate_pct = 5", "discount_rate_pct = -100"),
        ("energy_price_per_kwh = 0.1", "energy_price_per_kwh = 0.1\nprice_series = \"x\""),
        ("energy_price_per_kwh = 0.1", ""),
        ("life_years = 40", "law = \"eu\""),
        ("life_years = 40", "life_years = 40\nfailure_scale_years = 60"),
        (
            "horizon_years = 20\ndiscount_rate_pct = 5",
            "horizon_years = 200\ndiscount_rate_pct = -99",
        ),
    ]
    .map(|(from, to)| (BASIS.replace(from, to).replace("flat", "other"), to))
    {
        let file = program.write("bad.toml", &change);
        let output = program.run(&["import", "basis", &file.to_string_lossy()]);
        assert_eq!(code(&output), 3, "{words}: {}", errors(&output));
    }
    assert_eq!(code(&program.run(&["rank"])), 0, "the book still has one basis");
}

#[test]
fn a_second_basis_asks_which_and_one_can_be_made_current() {
    let program = small();
    let other = program.write("other.toml", BASIS.replace("flat", "other").replace("= 5", "= 9"));
    program.import("basis", &other, &[]);
    let output = program.run(&["rank"]);
    assert_eq!(code(&output), 2);
    assert!(errors(&output).contains("flat") && errors(&output).contains("other"));
    program.import("basis", &other, &["--current"]);
    assert_eq!(program.json(&["rank", "--format", "json"])["basis"], "other");
    assert_eq!(program.json(&["rank", "--format", "json", "--basis", "flat"])["basis"], "flat");
}

#[test]
fn units_left_out_are_named_with_the_reason() {
    let program = small();
    let result = program.json(&["rank", "--format", "json"]);
    assert_eq!(result["totals"]["units"], 1);
    assert_eq!(result["left_out"][0]["unit"], "B");
    assert!(
        result["left_out"][0]["why"].as_str().is_some_and(|why| why.contains("no_load_loss_w"))
    );
    assert_eq!(result["units"][0]["unit"], "007", "leading zeros count");
    assert!(program.done(&["rank"]).contains("\n1 unit left out:"));
}

#[test]
fn an_offer_without_a_life_is_named() {
    let program = small();
    let basis = BASIS.replace("life_years = 40", "").replace("flat", "lifeless");
    program.import("basis", &program.write("lifeless.toml", basis), &[]);
    let output = program.run(&["rank", "--basis", "lifeless"]);
    assert_eq!(code(&output), 3);
    assert!(errors(&output).contains("N100"), "{}", errors(&output));
}

#[test]
fn a_reader_that_stops_early_is_a_quiet_end() {
    let program = Program::new();
    program.import_demo();
    let mut child = program
        .command(&["losses", "--format", "csv"])
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .expect("starts");
    let mut first = [0_u8; 16];
    child.stdout.take().expect("piped").read_exact(&mut first).expect("something comes");
    let output = child.wait_with_output().expect("ends");
    assert!(output.status.success() && output.stderr.is_empty(), "{}", errors(&output));
}

#[test]
fn the_same_question_gives_the_same_bytes() {
    let program = Program::new();
    program.import_demo();
    let ask = |threads: &str| {
        let mut command = program.command(&["rank", "--format", "json"]);
        command.env("RAYON_NUM_THREADS", threads).output().expect("starts").stdout
    };
    assert_eq!(ask("1"), ask("2"));
    assert_eq!(ask("2"), ask("2"));
}

#[cfg(unix)]
#[test]
fn a_book_where_nothing_can_be_written_is_read_as_it_stands() {
    use std::os::unix::fs::PermissionsExt as _;
    let program = small();
    let closed = program.home().join("closed");
    std::fs::create_dir(&closed).expect("made");
    let copy = closed.join("copy.sqlite");
    program.done(&["backup", &copy.to_string_lossy()]);
    std::fs::set_permissions(&closed, std::fs::Permissions::from_mode(0o555)).expect("closed");
    let output = program.run(&["--book", &copy.to_string_lossy(), "rank"]);
    std::fs::set_permissions(&closed, std::fs::Permissions::from_mode(0o755)).expect("opened");
    assert_eq!(code(&output), 0, "{}", errors(&output));
}

#[test]
fn text_that_a_spreadsheet_would_run_is_defused_in_csv() {
    let program = Program::new();
    program.import("units", &program.write("u.csv", UNITS.replace("007", "=cmd")), &[]);
    program.import("offers", &program.write("offers.csv", OFFERS), &[]);
    program.import("basis", &program.write("basis.toml", BASIS), &[]);
    assert!(program.done(&["rank", "--format", "csv"]).contains(",'=cmd,"));
}

#[test]
fn timings_are_one_json_line_on_standard_error() {
    let program = Program::new();
    program.import_demo();
    for command in [
        &["rank", "--timings"][..],
        &["losses", "--timings"],
        &["--timings", "tender", "ol-2027-1"],
    ] {
        let output = program.run(command);
        let errors = errors(&output);
        let line: Value = serde_json::from_str(errors.trim()).expect("one JSON line");
        assert!(line["total_s"].as_f64().is_some_and(|s| s > 0.0), "{command:?}");
    }
}

#[test]
fn the_demo_files_are_taken_twice_without_a_change() {
    let program = Program::new();
    program.import_demo();
    let before = program.json(&["journal", "--format", "json", "--top", "1000"]);
    for (what, file) in [
        ("units", "units.csv"),
        ("offers", "offers.csv"),
        ("basis", "basis.toml"),
        ("bids", "bids.csv"),
    ] {
        program.import(what, &demo_fleet(file), &[]);
    }
    assert_eq!(program.json(&["journal", "--format", "json", "--top", "1000"]), before);
}

/// Text that hides, turns or moves what a terminal shows comes from a file; text output and problems show marks, JSON
/// and CSV keep it.
#[test]
fn hidden_characters_never_reach_the_terminal() {
    let program = Program::new();
    program.import_demo();
    let trick = "x\u{202e}y\u{200b}z\u{2066}\u{feff}\u{ad}\u{e0041}";
    let file = |name: &str, text: String| program.write(name, text);
    let units = format!(
        "unit,site,rated_kva,peak_kva,load_factor_pu,no_load_loss_w,load_loss_w,phases,hv_kv,lv_kv\n\
         {trick},{trick},400,300,0.5,900,4600,3,20,0.4\n"
    );
    program.import("units", &file("u.csv", units), &["--why", trick]);
    let bids = format!(
        "tender,lot,bid,bidder,price,no_load_loss_w,load_loss_w\nol-2027-1,L1,{trick},{trick},9000,430,0\n"
    );
    program.import("bids", &file("b.csv", bids), &[]);
    let wrong = format!("unit,rated_kva,{trick}\n{trick},big,\n\u{9b}2J,1,\n");
    let wrong = file("w\u{202e}.csv", wrong);
    let hidden = |text: &str| {
        let is = |c: char| {
            (c.is_control() && c != '\n')
                || matches!(c, '\u{ad}' | '\u{200b}'..='\u{200f}' | '\u{202a}'..='\u{202e}' | '\u{2060}'..='\u{206f}' | '\u{feff}')
                || ('\u{e0000}'..='\u{e007f}').contains(&c)
        };
        text.chars().find(|c| is(*c))
    };
    let wrong = wrong.to_string_lossy();
    for arguments in [
        &["rank"][..],
        &["losses"],
        &["check"],
        &["journal"],
        &["unit", trick],
        &["unit", &trick[1..]],
        &["unit", trick, "--working"],
        &["tender", "ol-2027-1"],
        &["tender", "ol-2027-1", "--working", "--bid", trick],
        &["tender", trick],
        &["report", "tender", "ol-2027-1", "-"],
        &["import", "units", &wrong],
        &["import", "units", &wrong, "--ignore-unknown"],
        &["rank", "--basis", trick],
    ] {
        let output = program.run(arguments);
        for bytes in [&output.stdout, &output.stderr] {
            let text = String::from_utf8_lossy(bytes);
            assert_eq!(hidden(&text), None, "{arguments:?}\n{text}");
        }
    }
    assert!(program.done(&["rank", "--format", "json"]).contains(trick));
    assert!(program.done(&["rank", "--format", "csv"]).contains(trick));
}

#[test]
fn any_number_of_threads_that_is_asked_for_will_do() {
    let program = small();
    let wanted = program.done(&["rank", "--format", "json"]);
    for threads in ["0", "1", "100000", "18446744073709551615", "-3", "many"] {
        let mut command = program.command(&["rank", "--format", "json"]);
        let output = command.env("RAYON_NUM_THREADS", threads).output().expect("starts");
        assert_eq!(code(&output), 0, "{threads}: {}", errors(&output));
        assert_eq!(String::from_utf8_lossy(&output.stdout), wanted, "{threads}");
    }
}

#[test]
fn a_backup_is_whole_or_not_there() {
    let program = small();
    let copy = program.home().join("copy.sqlite");
    program.done(&["backup", &copy.to_string_lossy()]);
    let beside = |name: &str| {
        let entries = std::fs::read_dir(program.home()).expect("home");
        let names = entries.map(|e| e.expect("entry").file_name().to_string_lossy().into_owned());
        names.filter(|n| n.starts_with(name)).collect::<Vec<_>>()
    };
    assert_eq!(beside("copy"), ["copy.sqlite"]);
    let before = std::fs::read(&copy).expect("copy");
    let output = program.run(&["backup", &copy.to_string_lossy()]);
    assert_eq!(code(&output), 1);
    assert!(errors(&output).contains("is there already; nothing is overwritten"));
    assert_eq!(std::fs::read(&copy).expect("copy"), before);
    assert_eq!(beside("copy"), ["copy.sqlite"]);
    let command = ["--book", &*copy.to_string_lossy(), "rank", "--format", "json"];
    assert_eq!(program.json(&command), program.json(&["rank", "--format", "json"]));
}

#[test]
fn a_trial_may_be_made_on_a_book_that_is_not_to_be_changed() {
    let program = small();
    let before = std::fs::read(program.book()).expect("book");
    let units = program.write("more.csv", "unit,rated_kva\nNEW,400\n");
    let command = ["import", "units", &*units.to_string_lossy(), "--dry-run", "--read-only"];
    let said = program.done(&command);
    assert!(said.contains("units: 1 would be new"), "{said}");
    assert_eq!(std::fs::read(program.book()).expect("book"), before);
    let output =
        program.run(&command[..3].iter().copied().chain(["--read-only"]).collect::<Vec<_>>());
    assert_eq!(code(&output), 2);
}

#[cfg(unix)]
#[test]
fn what_is_no_book_is_said_in_words() {
    use std::os::unix::fs::PermissionsExt as _;

    let program = small();
    let book = program.book();
    let said = |path: &std::path::Path| {
        let output = program.run(&["--book", &path.to_string_lossy(), "rank"]);
        assert_eq!(code(&output), 1, "{}", errors(&output));
        errors(&output)
    };
    for version in ["0", "-1", "-2147483648"] {
        let copy = program.home().join("damaged.sqlite");
        std::fs::copy(&book, &copy).expect("copy");
        let store = rusqlite::Connection::open(&copy).expect("store");
        store.execute_batch(&format!("PRAGMA user_version = {version}")).expect("version");
        drop(store);
        let said = said(&copy);
        assert!(said.contains("its version number is damaged; go back to a backup"), "{said}");
    }
    assert!(said(program.home()).contains("is not a book: it is a directory"));
    let pipe = program.home().join("pipe");
    let made = std::process::Command::new("mkfifo").arg(&pipe).status().expect("mkfifo");
    assert!(made.success());
    assert!(said(&pipe).contains("is not a book: it is no ordinary file"));
    let locked = program.home().join("locked.sqlite");
    std::fs::copy(&book, &locked).expect("copy");
    std::fs::set_permissions(&locked, std::fs::Permissions::from_mode(0o0)).expect("mode");
    // Who may read everything reads this too.
    if std::fs::File::open(&locked).is_err() {
        assert!(said(&locked).contains("locked.sqlite: Permission denied"));
    }
}

/// A source without end is stopped at a bound and told so.
#[test]
fn a_source_without_end_is_stopped() {
    use std::io::Write as _;

    let program = Program::new();
    let endless = |what: &str, name: &[&str], head: &str, row: &dyn Fn(u64) -> String| {
        let arguments = [&["import", what, "-"], name].concat();
        let mut command = program.command(&arguments);
        let piped = command.stdin(Stdio::piped()).stdout(Stdio::piped()).stderr(Stdio::piped());
        let mut child = piped.spawn().expect("starts");
        let mut input = std::io::BufWriter::new(child.stdin.take().expect("input"));
        let mut number = 0;
        let mut wrote = input.write_all(head.as_bytes());
        while wrote.is_ok() {
            assert!(number < 40_000_000, "nobody stops it");
            wrote = input.write_all(row(number).as_bytes());
            number += 1;
        }
        let _ = input.into_parts();
        let output = child.wait_with_output().expect("ends");
        assert_eq!(code(&output), 3);
        errors(&output)
    };
    let said = endless("profiles", &[], "interval,a\n", &|n| format!("{},1\n", n + 1));
    assert!(said.contains("-:527042: (file): (blank): has more than 527040 rows"), "{said}");
    let said = endless("units", &[], "unit,rated_kva\n", &|_| "a,x\n".to_owned());
    assert!(
        said.contains("-:5000002: (file): (blank): has more than 5000000 rows"),
        "{}",
        &said[said.len() - 300..]
    );
}

#[test]
fn a_no_load_loss_out_of_the_total_is_said() {
    let program = small();
    let units = program.write(
        "total.csv",
        "unit,rated_kva,load_loss_w,total_loss_w,peak_kva,load_factor_pu\nTOTAL,400,4600,5500,300,0.5\n",
    );
    program.import("units", &units, &[]);
    for command in ["rank", "losses"] {
        let json = program.json(&[command, "--format", "json"]);
        let units = json["units"].as_array().expect("units");
        let unit = units.iter().find(|u| u["unit"] == "TOTAL").expect("is there");
        let flags = unit["flags"].as_array().expect("flags");
        assert!(flags.contains(&"no_load_loss_from_total".into()), "{command}: {flags:?}");
    }
    assert!(
        program.done(&["rank"]).contains("the no-load loss is total_loss_w less the load loss")
    );
}

/// The example of a file's layout is a file that is taken, and names what may have a range.
#[test]
fn columns_of_toml_files_show_a_file_that_is_taken() {
    let program = Program::new();
    for what in ["basis", "tender"] {
        let shown = program.done(&["columns", what]);
        let (facts, example) = shown.split_once("invented):\n").expect("has an example");
        program.import(what, &program.write("example.toml", example), &[]);
        assert_eq!(facts.contains("A [range.NAME] may stand for: "), what == "basis", "{facts}");
    }
    let shown = program.done(&["columns", "basis"]);
    let named = shown.split("may stand for: ").nth(1).and_then(|rest| rest.split(".\n").next());
    let names: Vec<&str> = named.expect("a list").split(", ").collect();
    assert!(names.contains(&"stray_share_pu") && names.contains(&"peak_pu"), "{names:?}");
    assert!(!names.contains(&"cash_flow") && !names.contains(&"max_mass_kg"), "{names:?}");
    assert!(!program.done(&["columns", "units"]).contains("layout"));
}

/// What is said to a planner can be done: a window of ratings is raised where there is one.
#[test]
fn a_limit_that_leaves_no_offer_says_what_helps() {
    let program = small();
    for (window, helps) in
        [("", "import a larger one"), ("offer_sizes_up = 1\n", "raise offer_sizes_up")]
    {
        let basis = format!("{BASIS}loading_limit_pu = 0.5\n{window}");
        program.import("basis", &program.write("basis.toml", basis), &[]);
        let ranked = program.json(&["rank", "--format", "json"]);
        let why = ranked["left_out"][0]["why"].as_str().expect("a reason");
        assert!(why.contains("above loading_limit_pu") && why.contains(helps), "{why}");
    }
}

/// The dashboard reads a book and opens it a second time to store an award: the locks of the first stay, without which
/// another program could take the log away that both still use.
#[cfg(target_os = "linux")]
#[test]
fn a_book_that_is_opened_twice_keeps_its_locks() {
    use std::os::unix::fs::MetadataExt as _;
    let program = small();
    let first = Book::open(program.book(), Access::ReadOnly).expect("a book");
    assert_eq!(first.counts().expect("counts").units, 2);
    let inode = format!(":{} ", std::fs::metadata(program.book()).expect("a file").ino());
    let locks = || {
        let all = std::fs::read_to_string("/proc/locks").expect("the locks of the system");
        all.lines().filter(|line| line.contains(&inode)).count()
    };
    let held = locks();
    assert!(held > 0, "a book that is read is locked");
    drop(Book::open(program.book(), Access::ReadWrite).expect("the same"));
    assert_eq!(locks(), held);
}

/// A first import that fails takes nothing away that another has stored meanwhile.
#[test]
fn a_failed_first_import_leaves_the_book_to_others() {
    let program = Program::new();
    let bad = program.write("bad.csv", "unit,rated_kva\nA,big\n");
    let output = program.run(&["import", "units", &bad.to_string_lossy()]);
    assert_eq!(code(&output), 3);
    assert!(program.book().exists(), "the empty book stays: another program may have opened it");
    let good = program.write("good.csv", "unit,rated_kva\nA,400\n");
    program.import("units", &good, &[]);
}
