//! Broken documents: every message names line and column, the word, and what would be right.

use dotwright::shape::Document;
use std::path::Path;

const HEAD: &str = "scale = \"lab\"\n[material]\nname = \"GaAs\"\n";

/// What is wrong with `body` after a head of three lines.
fn refused(body: &str) -> String {
    refused_whole(&format!("{HEAD}{body}"))
}

/// What is wrong with a whole document, on reading or on making its outline.
fn refused_whole(text: &str) -> String {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("shapes");
    match Document::parse(text, "dot.toml", &folder) {
        Err(errors) => errors.to_string(),
        Ok(document) => match document.outline() {
            Err(errors) => errors.to_string(),
            Ok(made) => panic!("accepted, with notes {:?}:\n{text}", made.notes),
        },
    }
}

/// Body, place (line:column of the whole document), word under the caret, words of the message.
const TABLE: &[(&str, &str, &str, &[&str])] = &[
    ("radius = = 4\n", "4:10", "=", &["not TOML"]),
    ("[[outline]\nadd = \"disc\"\n", "4:", "", &["not TOML"]),
    (
        "[sizes]\na = 1\na = 2\n",
        "6:1",
        "a",
        &["not TOML", "duplicate key"],
    ),
    (
        "[[outline]]\nadd = \"disc\"\nradius = 4\nradios = 5\n",
        "7:1",
        "radios",
        &["not a key of step 1 (disc)", "did you mean `radius`?"],
    ),
    (
        "outlines = 3\n",
        "4:1",
        "outlines",
        &["not a key of [material]"],
    ),
    (
        "[sollve]\nmodes = 3\n[[outline]]\nadd = \"disc\"\nradius = 4\n",
        "4:2",
        "sollve",
        &["did you mean `solve`?"],
    ),
    (
        "[[outline]]\nadd = \"disc\"\nradius = true\n",
        "6:10",
        "true",
        &["wants a number", "\"45 nm\""],
    ),
    (
        "[[outline]]\nadd = \"disc\"\nradius = [1, 2]\n",
        "6:10",
        "[1, 2]",
        &["wants a number", "a list"],
    ),
    (
        "[[outline]]\nadd = \"disc\"\ncentre = 3\nradius = 4\n",
        "6:10",
        "3",
        &["two numbers", "[0, 0]"],
    ),
    (
        "[[outline]]\nadd = \"disc\"\ncentre = [1, 2, 3]\nradius = 4\n",
        "6:10",
        "[1, 2, 3]",
        &["a list of 3"],
    ),
    (
        "[[outline]]\nadd = 4\nradius = 4\n",
        "5:7",
        "4",
        &["wants a text", "quotes"],
    ),
    (
        "[[outline]]\nadd = \"disk\"\nradius = 4\n",
        "5:7",
        "\"disk\"",
        &["not a kind of figure", "`disc`"],
    ),
    (
        "[[outline]]\nadd = \"banana\"\n",
        "5:7",
        "\"banana\"",
        &["not a kind", "known here", "stadium"],
    ),
    (
        "[[outline]]\nadd = \"disc\"\nradius = \"necc\"\n[sizes]\nneck = 3\n",
        "6:11",
        "necc",
        &["no size `necc`", "did you mean `neck`?"],
    ),
    (
        "[sizes]\na = \"b + 1\"\nb = \"c\"\nc = \"2*a\"\n[[outline]]\nadd = \"disc\"\nradius = \"a\"\n",
        "5:1",
        "a",
        &["circle", "a → b → c → a", "number of its own"],
    ),
    (
        "[sizes]\na = \"a\"\n[[outline]]\nadd = \"disc\"\nradius = \"a\"\n",
        "5:1",
        "a",
        &["a → a"],
    ),
    (
        "[sizes]\na = \"1/(2-2)\"\n[[outline]]\nadd = \"disc\"\nradius = \"a\"\n",
        "5:7",
        "/",
        &["division by zero"],
    ),
    (
        "[sizes]\na = \"sqrt(3-4)\"\n[[outline]]\nadd = \"disc\"\nradius = \"a\"\n",
        "5:6",
        "sqrt",
        &["square root of -1"],
    ),
    (
        "[sizes]\na = \"10^400\"\n[[outline]]\nadd = \"disc\"\nradius = \"a\"\n",
        "5:8",
        "^",
        &["too large"],
    ),
    (
        "[sizes]\npi = 3\n[[outline]]\nadd = \"disc\"\nradius = 4\n",
        "5:1",
        "pi",
        &["taken"],
    ),
    (
        "[sizes]\nneck-width = 3\n[[outline]]\nadd = \"disc\"\nradius = 4\n",
        "5:1",
        "neck-width",
        &["neck_width"],
    ),
    (
        "[sizes]\na = nan\n[[outline]]\nadd = \"disc\"\nradius = 4\n",
        "5:5",
        "nan",
        &["finite"],
    ),
    (
        "[[outline]]\nadd = \"disc\"\nradius = -4\n",
        "6:10",
        "-4",
        &["is -4", "greater than zero"],
    ),
    (
        "[[outline]]\nadd = \"disc\"\nradius = nan\n",
        "6:10",
        "nan",
        &["NaN", "finite"],
    ),
    (
        "[[outline]]\nadd = \"disc\"\nradius = inf\n",
        "6:10",
        "inf",
        &["finite"],
    ),
    (
        "[[outline]]\nadd = \"disc\"\nradius = \"4 meV\"\n",
        "6:11",
        "4 meV",
        &["an energy", "a length is wanted", "nm"],
    ),
    (
        "[[outline]]\nadd = \"disc\"\nradius = \"4 furlong\"\n",
        "6:13",
        "furlong",
        &["not a unit"],
    ),
    (
        "[[outline]]\nadd = \"disc\"\nradius = \"2*\"\n",
        "6:12",
        "*",
        &["breaks off"],
    ),
    (
        "[[outline]]\nadd = \"disc\"\nradius = \"(2\"\n",
        "6:11",
        "(",
        &["not closed"],
    ),
    (
        "[[outline]]\nadd = \"disc\"\nradius = \"\"\n",
        "6:10",
        "\"\"",
        &["empty expression"],
    ),
    (
        "[[outline]]\nadd = \"disc\"\n",
        "5:7",
        "\"disc\"",
        &["has no `radius`", "radius = 45"],
    ),
    (
        "[[outline]]\nradius = 3\n",
        "4:1",
        "[[outline]]",
        &["does not say what it does", "add = \"disc\""],
    ),
    (
        "[[outline]]\nad = \"disc\"\nradius = 3\n",
        "5:1",
        "ad",
        &["did you mean `add`?"],
    ),
    (
        "[[outline]]\nadd = \"disc\"\ncut = \"disc\"\nradius = 3\n",
        "6:1",
        "cut",
        &["both", "two steps"],
    ),
    (
        "[[outline]]\ncut = \"disc\"\nradius = 3\n",
        "5:1",
        "cut",
        &["nothing yet", "begin with `add`"],
    ),
    (
        "[outline]\nadd = \"disc\"\nradius = 3\n",
        "4:2",
        "outline",
        &["two brackets"],
    ),
    ("", "1:1", "s", &["no outline", "[[outline]]"]),
    (
        "[[outline]]\nadd = \"ring\"\ninner = 5\nouter = 4\n",
        "6:9",
        "5",
        &["not below its outer radius", "smaller"],
    ),
    (
        "[[outline]]\nadd = \"sector\"\nradius = 5\nfrom = 90\nto = 30\n",
        "8:6",
        "30",
        &["above `from`"],
    ),
    (
        "[[outline]]\nadd = \"polygon\"\npoints = [[0, 0], [1, 1]]\n",
        "6:10",
        "[[0, 0], [1, 1]]",
        &["2 points", "at least 3"],
    ),
    (
        "[[outline]]\nadd = \"polygon\"\npoints = [[0, 0], [1], [1, 1]]\n",
        "6:19",
        "[1]",
        &["a list of 1"],
    ),
    (
        "[[outline]]\nadd = \"layout\"\nfile = \"x.gds\"\n",
        "5:7",
        "\"layout\"",
        &["later version", "PNG"],
    ),
    (
        "[wall]\nheight = 250\n[[outline]]\nadd = \"disc\"\nradius = 4\n",
        "4:2",
        "wall",
        &["later version"],
    ),
    (
        "[field]\nB = 1\n[[outline]]\nadd = \"disc\"\nradius = 4\n",
        "4:2",
        "field",
        &["magnetic field", "later version"],
    ),
    (
        "[finish]\nround = -1\n[[outline]]\nadd = \"disc\"\nradius = 4\n",
        "5:9",
        "-1",
        &["zero or more"],
    ),
    (
        "[finish]\nrund = 1\n[[outline]]\nadd = \"disc\"\nradius = 4\n",
        "5:1",
        "rund",
        &["did you mean `round`?"],
    ),
    (
        "[solve]\nmodes = 0\n[[outline]]\nadd = \"disc\"\nradius = 4\n",
        "5:9",
        "0",
        &["whole number from 1"],
    ),
    (
        "[solve]\naccuracy = 2\n[[outline]]\nadd = \"disc\"\nradius = 4\n",
        "5:12",
        "2",
        &["between 1e-10 and 0.1"],
    ),
    (
        "[solve]\ndegree = 7\n[[outline]]\nadd = \"disc\"\nradius = 4\n",
        "5:10",
        "7",
        &["from 2 to 5"],
    ),
    (
        "[[outline]]\nadd = \"disc\"\nradius = 4\nrepeat = { count = 2.5, turn = 3 }\n",
        "7:20",
        "2.5",
        &["whole number"],
    ),
    (
        "[[outline]]\nadd = \"disc\"\nradius = 4\nrepeat = { count = 2 }\n",
        "7:1",
        "repeat",
        &["where the copies go", "turn = 60"],
    ),
    (
        "[[outline]]\nadd = \"disc\"\nradius = 4\nrepeat = 3\n",
        "7:1",
        "repeat",
        &["count = 6"],
    ),
    (
        "[[outline]]\nadd = \"disc\"\nradius = 4\nmirror = \"z\"\n",
        "7:11",
        "z",
        &["no size `z`"],
    ),
    (
        "[[outline]]\nadd = \"disc\"\nradius = 4\nabout = [0, 0]\n",
        "7:1",
        "about",
        &["nothing to hold"],
    ),
    (
        "[[outline]]\nadd = \"picture\"\nfile = \"x.png\"\n",
        "5:7",
        "\"picture\"",
        &["has no `pixel`"],
    ),
    (
        "[[outline]]\nadd = \"picture\"\nfile = \"x.png\"\npixel = 1\nlevel = 128\n",
        "8:9",
        "128",
        &["between 0", "0.5"],
    ),
    (
        "[[outline]]\nadd = \"polygon\"\npoints = [[0, 0], [4, 4], [4, 0], [0, 4]]\n",
        "5:7",
        "\"polygon\"",
        &["step 1 (polygon)", "crosses", "in order"],
    ),
    (
        "[[outline]]\nadd = \"polygon\"\npoints = [[0, 0], [4, 4], [8, 8]]\n",
        "5:7",
        "\"polygon\"",
        &["step 1 (polygon)"],
    ),
    (
        "[[outline]]\nadd = \"polygon\"\npoints = [[0, 0], [0, 0], [8, 8], [3, 0]]\n",
        "5:7",
        "\"polygon\"",
        &["points 1 and 2", "once"],
    ),
    (
        "[[outline]]\nadd = \"disc\"\nradius = 4\n[[outline]]\ncut = \"disc\"\nradius = 5\n",
        "8:7",
        "\"disc\"",
        &["step 2 (disc)", "leaves nothing", "remove the step"],
    ),
    (
        "[[outline]]\nadd = \"disc\"\nradius = 4\n[[outline]]\nkeep = \"disc\"\nradius = 5\ncentre = [50, 0]\n",
        "8:8",
        "\"disc\"",
        &["step 2 (disc)", "leaves nothing"],
    ),
    (
        "[[outline]]\nadd = \"disc\"\nradius = 4\n[finish]\ngrow = -5\n",
        "8:8",
        "-5",
        &["growing"],
    ),
    (
        "[[outline]]\nadd = \"rectangle\"\nsize = [10, 4]\n[finish]\nround = 3\n",
        "8:9",
        "3",
        &["rounding", "no room", "smaller radius"],
    ),
    (
        "[[outline]]\nadd = \"picture\"\nfile = \"nowhere.png\"\npixel = 1\n",
        "5:7",
        "\"picture\"",
        &["nowhere.png", "no such file", "relative to the folder"],
    ),
    (
        "[[outline]]\nadd = \"points\"\nfile = \"micrograph.png\"\n",
        "5:7",
        "\"points\"",
        &["micrograph.png", "UTF-8"],
    ),
    (
        "[[outline]]\nadd = \"picture\"\nfile = \"traced-edge.csv\"\npixel = 1\n",
        "5:7",
        "\"picture\"",
        &["traced-edge.csv", "no readable PNG"],
    ),
    (
        "[[outline]]\nadd = \"picture\"\nfile = \".\"\npixel = 1\n",
        "5:7",
        "\"picture\"",
        &["step 1 (picture)"],
    ),
];

/// Whole documents.
const WHOLE: &[(&str, &str, &str, &[&str])] = &[
    ("\u{0}\u{1}\u{2}", "1:", "", &["not TOML"]),
    (
        "scale = \"nano\"\n",
        "1:9",
        "\"nano\"",
        &["\"lab\"", "\"reduced\""],
    ),
    (
        "[[outline]]\nadd = \"disc\"\nradius = 1\n",
        "1:1",
        "",
        &["needs a material", "GaAs"],
    ),
    (
        "scale = \"reduced\"\n[material]\nname = \"GaAs\"\n[[outline]]\nadd = \"disc\"\nradius = 1\n",
        "2:2",
        "material",
        &["no material", "remove"],
    ),
    (
        "scale = \"reduced\"\n[[outline]]\nadd = \"disc\"\nradius = \"45 nm\"\n",
        "4:11",
        "45 nm",
        &["reduced scale", "pure number"],
    ),
    (
        "[material]\nname = \"GaAz\"\n[[outline]]\nadd = \"disc\"\nradius = 1\n",
        "2:8",
        "\"GaAz\"",
        &["`GaAs`", "mass = 0.067"],
    ),
    (
        "[material]\nmass = -1\n[[outline]]\nadd = \"disc\"\nradius = 1\n",
        "2:8",
        "-1",
        &["greater than zero"],
    ),
    (
        "round = 3\n[material]\nname = \"GaAs\"\n[[outline]]\nadd = \"disc\"\nradius = 1\n",
        "1:1",
        "round",
        &["under [finish]"],
    ),
    (
        "material = 3\n[[outline]]\nadd = \"disc\"\nradius = 1\n",
        "1:1",
        "material",
        &["[material]"],
    ),
];

fn check(body: &str, message: &str, place: &str, word: &str, parts: &[&str]) -> Result<(), String> {
    let fail = |why: String| Err(format!("--- {why}\n{body}\n=== {message}"));
    if !message.contains(&format!("dot.toml:{place}")) {
        return fail(format!("not at {place}"));
    }
    for part in parts {
        if !message.contains(part) {
            return fail(format!("does not say {part:?}"));
        }
    }
    // The caret of some block must stand under the word.
    let lines: Vec<&str> = message.lines().collect();
    let under = |pair: &[&str]| {
        let at = pair[1].chars().position(|c| c == '^')?;
        let carets = pair[1].chars().filter(|&c| c == '^').count();
        Some(pair[0].chars().skip(at).take(carets).collect::<String>())
    };
    let words: Vec<String> = lines.windows(2).filter_map(under).collect();
    if !words.iter().any(|w| w == word || word.is_empty()) {
        return fail(format!("the caret is under {words:?}, not {word:?}"));
    }
    Ok(())
}

#[test]
fn every_broken_document_is_explained() {
    let mut failures = Vec::new();
    for &(body, place, word, parts) in TABLE {
        failures.extend(check(body, &refused(body), place, word, parts).err());
    }
    for &(body, place, word, parts) in WHOLE {
        failures.extend(check(body, &refused_whole(body), place, word, parts).err());
    }
    assert!(failures.is_empty(), "{}", failures.join("\n\n"));
}

#[test]
fn all_faults_of_a_file_are_reported_in_order() {
    let message = refused(
        "colour = 1\n[sizes]\na = \"b\"\nc = \"1/0\"\n[[outline]]\nadd = \"disc\"\nradius = \"c\"\ncenter = [0, 0]\n[[outline]]\ncut = \"ring\"\ninner = 3\n[solve]\nmodes = \"x\"\n",
    );
    let places: Vec<&str> = message
        .lines()
        .filter_map(|l| {
            l.strip_prefix("dot.toml:")
                .and_then(|r| r.split(": ").next())
        })
        .collect();
    // The size `c` is broken, but the step that uses it is not blamed for that.
    assert_eq!(
        places,
        ["4:1", "6:6", "7:7", "11:1", "13:7", "16:10"],
        "{message}"
    );
}
