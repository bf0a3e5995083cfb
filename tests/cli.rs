//! The program as people run it: words in, output, notes and exit codes out.
#![allow(clippy::unwrap_used)]

use dotwright::units::parse_concise;
use serde_json::Value;
use std::fs;
use std::io::Write;
use std::path::Path;
use std::process::{Command, Output, Stdio};

const DOT: &str = "shapes/two-lobe.toml";
const COMMANDS: [&str; 6] = ["levels", "map", "sheet", "check", "materials", "generate"];

fn program(words: &[&str]) -> Command {
    let mut command = Command::new(env!("CARGO_BIN_EXE_dotwright"));
    command
        .args(words)
        .current_dir(env!("CARGO_MANIFEST_DIR"))
        .env("LC_ALL", "C")
        .env("TERM", "dumb")
        .stdin(Stdio::null());
    command
}

fn run(words: &[&str]) -> Output {
    program(words).output().unwrap()
}

fn out(output: &Output) -> String {
    String::from_utf8(output.stdout.clone()).unwrap()
}

fn err(output: &Output) -> String {
    String::from_utf8(output.stderr.clone()).unwrap()
}

/// Runs with a text on standard input.
fn fed(words: &[&str], text: &[u8]) -> Output {
    let mut child = program(words)
        .stdin(Stdio::piped())
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .unwrap();
    // a program that refuses its arguments does not read its input
    let _ = child.stdin.take().unwrap().write_all(text);
    child.wait_with_output().unwrap()
}

/// Standard output of a run that must succeed.
fn done(words: &[&str]) -> String {
    let output = run(words);
    assert_eq!(output.status.code(), Some(0), "{words:?}: {}", err(&output));
    out(&output)
}

/// Standard error of a run that must end with `code`, without data and without a panic.
fn refused(words: &[&str], code: i32) -> String {
    let output = run(words);
    let said = err(&output);
    assert_eq!(output.status.code(), Some(code), "{words:?}: {said}");
    assert_eq!(out(&output), "", "{words:?} printed data");
    assert!(!said.contains("panicked"), "{words:?}: {said}");
    assert!(said.len() > 20, "{words:?} says too little: {said:?}");
    said
}

#[test]
fn json_has_the_keys_of_the_contract() {
    let object: Value = serde_json::from_str(&done(&["levels", DOT, "--format", "json"])).unwrap();
    let keys = |v: &Value| v.as_object().unwrap().keys().cloned().collect::<Vec<_>>();
    let has = |v: &Value, wanted: &[&str]| {
        for key in wanted {
            assert!(keys(v).iter().any(|k| k == key), "no {key} in {v}");
        }
    };
    has(
        &object,
        &[
            "title",
            "units",
            "lattice",
            "certificate",
            "levels",
            "timings_ms",
            "notes",
        ],
    );
    has(&object["units"], &["energy", "length"]);
    has(
        &object["lattice"],
        &["cell", "degree", "unknowns", "inside", "cut"],
    );
    has(
        &object["certificate"],
        &["shift", "below", "found", "complete"],
    );
    has(
        &object["timings_ms"],
        &["lattice", "operators", "factor", "solve"],
    );
    assert_eq!(object["units"]["energy"], "meV");
    assert!(object["notes"].is_array() && object["certificate"]["complete"].is_boolean());
    let levels = object["levels"].as_array().unwrap();
    assert!(!levels.is_empty());
    for (k, level) in levels.iter().enumerate() {
        has(
            level,
            &["index", "energy", "error", "multiplicity", "residual"],
        );
        assert_eq!(level["index"], k + 1);
        assert!(level["multiplicity"].as_u64().unwrap() >= 1);
        assert!(level["error"].as_f64().unwrap() < 1e-5 * level["energy"].as_f64().unwrap());
    }
}

#[test]
fn csv_and_json_agree() {
    let words = ["levels", DOT, "--modes", "7", "--format"];
    let object: Value = serde_json::from_str(&done(&[&words[..], &["json"]].concat())).unwrap();
    let table = done(&[&words[..], &["csv"]].concat());
    let mut lines = table.lines();
    assert_eq!(
        lines.next(),
        Some("index,energy_meV,error_meV,multiplicity,residual,label")
    );
    let rows: Vec<Vec<&str>> = lines.map(|l| l.split(',').collect()).collect();
    assert_eq!(rows.len(), 7);
    for (row, level) in rows.iter().zip(object["levels"].as_array().unwrap()) {
        assert_eq!(row[0], level["index"].to_string());
        let energy: f64 = row[1].parse().unwrap();
        // two runs of threads may add in another order
        assert!((energy / level["energy"].as_f64().unwrap() - 1.0).abs() < 1e-10);
        assert_eq!(row[3], level["multiplicity"].to_string());
    }
}

#[test]
fn the_table_has_the_proof_under_it() {
    let page = done(&["levels", DOT, "--modes", "5"]);
    assert!(
        page.contains("5 levels below") || page.contains("levels below"),
        "{page}"
    );
    assert!(page.contains("none missing"), "{page}");
    assert!(page.contains("caution: "), "{page}");
    assert_eq!(
        page.lines()
            .filter(|l| l.trim_start().starts_with(|c: char| c.is_ascii_digit()) && l.contains('('))
            .count(),
        5,
        "{page}"
    );
}

#[test]
fn without_a_terminal_the_table_and_a_map_are_printed() {
    for words in [
        &[][..],
        &[DOT][..],
        &["--modes", "3", "--set", "neck=20"][..],
    ] {
        let page = done(words);
        assert!(
            page.contains("none missing") && page.contains("density of level 1"),
            "{page}"
        );
        assert!(
            page.is_ascii() || page.lines().take(3).any(|l| !l.is_ascii()),
            "{page}"
        );
        assert!(
            !page.contains('\u{1b}'),
            "escape sequences without a terminal"
        );
        assert!(page.lines().count() > 30, "{page}");
    }
}

#[test]
fn sizes_are_set_and_standard_input_is_read() {
    let document = fs::read(Path::new(env!("CARGO_MANIFEST_DIR")).join(DOT)).unwrap();
    let words = ["levels", "-", "--modes", "2", "--format", "csv"];
    let piped = fed(&words, &document);
    assert_eq!(piped.status.code(), Some(0), "{}", err(&piped));
    let first = |text: &str| {
        let row = text.lines().nth(1).unwrap().to_owned();
        row.split(',').nth(1).unwrap().parse::<f64>().unwrap()
    };
    let same = done(&["levels", DOT, "--modes", "2", "--format", "csv"]);
    assert!((first(&out(&piped)) / first(&same) - 1.0).abs() < 1e-10);
    let heavier = done(&[
        "levels",
        DOT,
        "--modes",
        "2",
        "--format",
        "csv",
        "--set",
        "material.mass=0.134",
        "--set",
        "left=46",
    ]);
    assert!(
        first(&heavier) < 0.6 * first(&same),
        "twice the mass halves the energy"
    );
}

#[test]
fn energies_are_taken_with_their_units() {
    let first = |from: &str| {
        let csv = done(&[
            "levels", DOT, "--from", from, "--modes", "1", "--format", "csv",
        ]);
        csv.lines()
            .nth(1)
            .unwrap()
            .split(',')
            .next()
            .unwrap()
            .to_owned()
    };
    assert_eq!(first("3 meV"), first("0.003 eV"));
    assert_eq!(first("3 meV"), first("3"));
    let said = refused(&["levels", DOT, "--from", "3 nm"], 2);
    assert!(said.contains("energy"), "{said}");
}

#[test]
fn bad_words_are_refused_with_what_would_be_right() {
    for (words, told) in [
        (&["levels"][..], "SHAPE"),
        (&["levels", "nothere.toml"], "no such file"),
        (&["levels", "shapes"], "folder"),
        (&["nothere.toml"], "no such file"),
        (&["level", DOT], "did you mean `levels`"),
        (&[DOT, "extra"], "one shape"),
        (&["levels", DOT, "extra"], "extra"),
        (&["levels", DOT, "--modes", "0"], "from 1"),
        (&["levels", DOT, "--modes", "-3"], "from 1"),
        (&["levels", DOT, "--modes", "2.5"], "whole number"),
        (
            &["levels", DOT, "--modes", "99999999999999999999"],
            "whole number",
        ),
        (&["levels", DOT, "--accuracy", "0"], "1e-10"),
        (&["levels", DOT, "--accuracy", "1"], "0.1"),
        (&["levels", DOT, "--accuracy", "NaN"], "1e-6"),
        (&["levels", DOT, "--accuracy", "-0.5"], "1e-6"),
        (&["levels", DOT, "--from", "deep"], "--from"),
        (&["levels", DOT, "--from", "inf"], "--from"),
        (&["levels", DOT, "--set", "neck"], "equals sign"),
        (&["levels", DOT, "--set", "=4"], "equals sign"),
        (&["levels", DOT, "--set", "nek=4"], "did you mean `neck`"),
        (&["levels", DOT, "--set", "neck=1/0"], "neck"),
        (&["levels", DOT, "--format", "xml"], "json"),
        (&["levels", DOT, "--frmat", "csv"], "--format"),
        (&["map", DOT, "-o", "x.png"], "--mode"),
        (&["map", DOT, "--mode", "1"], "--output"),
        (&["map", DOT, "--mode", "0", "-o", "x.png"], "from 1"),
        (&["map", DOT, "--mode", "1", "-o", "x.jpg"], ".png"),
        (
            &["map", DOT, "--mode", "1", "-o", "x.png", "--width", "10"],
            "200",
        ),
        (
            &["map", DOT, "--mode", "1", "-o", "x.png", "--width", "1e9"],
            "12000",
        ),
        (
            &["map", DOT, "--mode", "1", "-o", "x.png", "--show", "phase"],
            "magnetic field",
        ),
        (
            &["map", DOT, "--mode", "1", "-o", "x.png", "--show", "sign"],
            "wave",
        ),
        (
            &["map", DOT, "--mode", "1", "-o", "x.png", "--theme", "pink"],
            "dark",
        ),
        (&["sheet", DOT], "--output"),
        (&["check", DOT, "--below", "3 nm"], "--below"),
        (&["materials", "GaAs"], "GaAs"),
        (&["generate"], "FOLDER"),
        (&["sweep", DOT, "--size", "neck"], "later version"),
        (&["tolerance"], "later version"),
        (&["intake", "--help"], "later version"),
    ] {
        let said = refused(words, 2);
        assert!(said.contains(told), "{words:?} should say {told:?}: {said}");
    }
    assert!(!Path::new(env!("CARGO_MANIFEST_DIR")).join("x.png").exists());
}

#[test]
fn a_broken_document_is_shown_with_its_line() {
    for (text, told) in [
        (&b"titel = \"x\"\n"[..], "title"),
        (b"title = \n", "standard input:1"),
        (b"\xff\xfe\x00", "UTF-8"),
        (b"", "outline"),
        (b"[sizes]\na = \"b\"\nb = \"a\"\n[[outline]]\nadd = \"disc\"\ncentre = [0, 0]\nradius = \"a\"\n", "a"),
    ] {
        let output = fed(&["levels", "-"], text);
        let said = err(&output);
        assert_eq!(output.status.code(), Some(2), "{said}");
        assert!(said.contains("standard input") && said.contains(told), "{said}");
    }
}

#[test]
fn a_reader_who_leaves_is_no_failure() {
    for words in [
        &["levels", DOT][..],
        &["materials"],
        &[],
        &["map", DOT, "--mode", "1", "-o", "-"],
        &["--help"],
    ] {
        let mut child = program(words)
            .stdout(Stdio::piped())
            .stderr(Stdio::piped())
            .spawn()
            .unwrap();
        drop(child.stdout.take());
        let output = child.wait_with_output().unwrap();
        assert_eq!(output.status.code(), Some(0), "{words:?}: {}", err(&output));
        assert_eq!(err(&output), "", "{words:?}");
    }
}

#[cfg(target_os = "linux")]
#[test]
fn a_full_disk_is_the_machines_fault() {
    let full = || {
        fs::OpenOptions::new()
            .write(true)
            .open("/dev/full")
            .unwrap()
    };
    for words in [
        &["levels", DOT][..],
        &["materials"],
        &["map", DOT, "--mode", "1", "-o", "-"],
    ] {
        let output = program(words).stdout(full()).output().unwrap();
        assert_eq!(output.status.code(), Some(1), "{words:?}: {}", err(&output));
        assert!(
            err(&output).contains("cannot be written"),
            "{}",
            err(&output)
        );
    }
    let said = refused(&["map", DOT, "--mode", "1", "-o", "/dev/full"], 1);
    assert!(said.contains("/dev/full: cannot be written"), "{said}");
}

#[test]
fn a_failed_picture_leaves_nothing_behind() {
    let folder = tempfile::tempdir().unwrap();
    let at = |name: &str| folder.path().join(name).to_str().unwrap().to_owned();
    for (target, told) in [(at("none/m.png"), "folder"), (at("."), "folder")] {
        let said = refused(&["map", DOT, "--mode", "1", "-o", &target], 1);
        assert!(said.contains(told), "{said}");
    }
    refused(
        &["map", "nothere.toml", "--mode", "1", "-o", &at("m.png")],
        2,
    );
    let document = at("dot.toml");
    fs::copy(Path::new(env!("CARGO_MANIFEST_DIR")).join(DOT), &document).unwrap();
    let link = at("dot.png");
    #[cfg(unix)]
    {
        std::os::unix::fs::symlink(&document, &link).unwrap();
        let said = refused(&["map", &document, "--mode", "1", "-o", &link], 2);
        assert!(said.contains("must not replace"), "{said}");
    }
    let left = fs::read_dir(folder.path()).unwrap().count();
    assert_eq!(left, 2, "only the document and the link");
}

/// Size of a PNG and its texts.
fn read_png(bytes: &[u8]) -> (u32, u32, Vec<(String, String)>) {
    let reader = png::Decoder::new(std::io::Cursor::new(bytes))
        .read_info()
        .unwrap();
    let info = reader.info();
    let latin = info.uncompressed_latin1_text.iter();
    let mut texts: Vec<_> = latin.map(|t| (t.keyword.clone(), t.text.clone())).collect();
    let utf8 = info.utf8_text.iter();
    texts.extend(utf8.map(|t| (t.keyword.clone(), t.get_text().unwrap())));
    (info.width, info.height, texts)
}

#[test]
fn a_map_is_a_picture_that_says_what_it_shows() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("m.png");
    let words = [
        "map", DOT, "--mode", "3", "--show", "wave", "--theme", "dark", "--width", "640", "-o",
    ];
    let said = done(&[&words[..], &[path.to_str().unwrap()]].concat());
    assert_eq!(said, "", "data goes to the file");
    let bytes = fs::read(&path).unwrap();
    let (width, height, texts) = read_png(&bytes);
    assert_eq!(width, 640);
    assert!((200..1200).contains(&height));
    let text = |key: &str| {
        texts
            .iter()
            .find(|t| t.0 == key)
            .map(|t| t.1.as_str())
            .unwrap()
    };
    assert_eq!(text("Level"), "3");
    assert_eq!(text("Quantity"), "wave");
    assert!(text("Energy").ends_with(" meV") && text("Energy").contains('('));
    assert!(text("Error").ends_with(" meV"));
    assert!(text("Software").starts_with("dotwright "));
    assert!(!text("Title").is_empty());
    let piped = run(&[&words[..], &["-"]].concat());
    assert_eq!(piped.status.code(), Some(0));
    assert_eq!(read_png(&piped.stdout).0, 640);
    assert_eq!(
        fs::read_dir(folder.path()).unwrap().count(),
        1,
        "no part files"
    );
}

#[test]
fn a_sheet_shows_the_levels_asked_for() {
    let output = run(&["sheet", DOT, "--modes", "6", "--width", "600", "-o", "-"]);
    assert_eq!(output.status.code(), Some(0), "{}", err(&output));
    let (width, _, texts) = read_png(&output.stdout);
    assert_eq!(width, 600);
    assert!(
        texts.contains(&("Levels".to_owned(), "1 to 6".to_owned())),
        "{texts:?}"
    );
}

#[test]
fn every_command_has_help_with_an_example() {
    let whole = done(&["--help"]);
    for command in COMMANDS {
        assert!(whole.contains(command), "{command} is not in the help");
        let help = done(&[command, "--help"]);
        assert!(help.contains("Usage: dotwright"), "{help}");
        assert!(command == "materials" || help.contains("Example"), "{help}");
        assert_eq!(done(&["help", command]), help);
    }
    for later in [
        "transitions",
        "sweep",
        "aim",
        "tolerance",
        "sensitivity",
        "intake",
    ] {
        assert!(!whole.contains(later), "{later} is not in this version");
    }
    assert!(done(&["--version"]).starts_with("dotwright "));
}

#[test]
fn manuals_and_completions_know_every_option() {
    let folder = tempfile::tempdir().unwrap();
    let made = done(&["generate", folder.path().join("share").to_str().unwrap()]);
    let files: Vec<&str> = made.lines().collect();
    assert_eq!(files.len(), 12, "{made}");
    let all: Vec<String> = files
        .iter()
        .map(|f| fs::read_to_string(f).unwrap())
        .collect();
    for command in COMMANDS {
        let help = done(&[command, "--help"]);
        let page = files
            .iter()
            .position(|f| f.ends_with(&format!("dotwright-{command}.1")))
            .unwrap();
        for word in help
            .split_whitespace()
            .filter(|w| w.starts_with("--") && w.len() > 3)
        {
            let option = word.trim_end_matches([',', ']', ')']);
            let bare = option.trim_start_matches("--");
            assert!(
                all[page].replace('\\', "").contains(option),
                "{command}: {option}"
            );
            let shells = files
                .iter()
                .zip(&all)
                .filter(|f| f.0.contains("completions"));
            for (name, text) in shells {
                assert!(text.contains(bare), "{name} lacks {option}");
            }
        }
    }
    for (name, text) in files.iter().zip(&all) {
        assert!(
            !text.contains("tolerance"),
            "{name} lists what is not there"
        );
    }
}

#[test]
fn materials_are_listed_three_ways() {
    let text = done(&["materials"]);
    assert!(text.contains("GaAs") && text.contains("0.067"));
    let csv = done(&["materials", "--format", "csv"]);
    assert!(csv.starts_with("name,mass,g,permittivity,source\n"));
    let json: Value = serde_json::from_str(&done(&["materials", "--format", "json"])).unwrap();
    assert_eq!(json.as_array().unwrap().len(), csv.lines().count() - 1);
    assert!(
        json.as_array()
            .unwrap()
            .iter()
            .any(|m| m["name"] == "GaAs" && m["mass"] == 0.067)
    );
}

/// Every command of the README is run in an empty folder beside the shapes.
#[cfg(unix)]
#[test]
fn what_the_readme_shows_can_be_done() {
    let root = Path::new(env!("CARGO_MANIFEST_DIR"));
    let folder = tempfile::tempdir().unwrap();
    std::os::unix::fs::symlink(root.join("shapes"), folder.path().join("shapes")).unwrap();
    let readme = fs::read_to_string(root.join("README.md")).unwrap();
    // the level table shown is the one printed: intervals overlap, row by row
    let table = |text: &str| -> Vec<(f64, f64)> {
        let rows = text
            .lines()
            .filter(|l| l.starts_with("    ") && l.contains('('));
        let energy = |l: &str| parse_concise(l.split_whitespace().nth(1).unwrap()).unwrap();
        rows.map(energy).collect()
    };
    let shown = table(&readme);
    let printed = table(&done(&["levels", "shapes/notch-dot.toml", "--modes", "4"]));
    assert_eq!((shown.len(), printed.len()), (4, 4));
    for (a, b) in shown.iter().zip(&printed) {
        assert!((a.0 - b.0).abs() <= a.1 + b.1, "{a:?} against {b:?}");
    }
    let mut count = 0;
    for line in readme.lines().filter_map(|l| l.strip_prefix("$ dotwright")) {
        let mut words: Vec<&str> = Vec::new();
        // the only quoting the README needs: parts between double quotes are one word
        for (k, part) in line.split('"').enumerate() {
            if k % 2 == 1 {
                words.push(part);
            } else {
                words.extend(part.split_whitespace());
            }
        }
        let output = program(&words).current_dir(folder.path()).output().unwrap();
        assert_eq!(output.status.code(), Some(0), "{line}: {}", err(&output));
        count += 1;
    }
    assert!(count >= 10, "only {count} commands found");
    for picture in ["m.png", "slide.png", "sheet.png"] {
        assert!(folder.path().join(picture).exists(), "{picture}");
    }
}

/// The set of signals a process catches, as Linux tells it.
#[cfg(target_os = "linux")]
fn catches(process: u32, signal: u32) -> bool {
    let status = fs::read_to_string(format!("/proc/{process}/status")).unwrap_or_default();
    let set = status.lines().find_map(|l| l.strip_prefix("SigCgt:"));
    let set = set.and_then(|s| u64::from_str_radix(s.trim(), 16).ok());
    set.is_some_and(|s| s >> (signal - 1) & 1 == 1)
}

#[cfg(target_os = "linux")]
#[test]
fn a_signal_calls_a_long_solve_off() {
    let folder = tempfile::tempdir().unwrap();
    let picture = folder.path().join("m.png");
    for (name, number) in [("-INT", 2), ("-TERM", 15)] {
        let mut child = program(&["sheet", "shapes/unit-disc.toml", "--modes", "3000", "-o"])
            .arg(&picture)
            .stdout(Stdio::piped())
            .stderr(Stdio::piped())
            .spawn()
            .unwrap();
        let id = child.id();
        while !catches(id, number) {
            assert!(child.try_wait().unwrap().is_none(), "over before it began");
            std::thread::yield_now();
        }
        let sent = Command::new("kill").args([name, &id.to_string()]).status();
        assert!(sent.unwrap().success());
        let output = child.wait_with_output().unwrap();
        assert_eq!(
            output.status.code(),
            Some(128 + number as i32),
            "{}",
            err(&output)
        );
        assert!(err(&output).contains("called off"), "{}", err(&output));
        assert_eq!(out(&output), "");
        assert_eq!(fs::read_dir(folder.path()).unwrap().count(), 0);
    }
}
