//! Documents: reading, editing, printing.

use dotwright::shape::{Document, Scale, demo};
use proptest::prelude::*;
use std::path::{Path, PathBuf};

fn parse(text: &str) -> Document {
    Document::parse(text, "dot.toml", Path::new("")).unwrap_or_else(|e| panic!("{e}"))
}

fn shapes() -> Vec<PathBuf> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("shapes");
    let mut all: Vec<PathBuf> = std::fs::read_dir(folder)
        .expect("the folder of shapes")
        .filter_map(|e| Some(e.ok()?.path()))
        .filter(|p| p.extension().is_some_and(|x| x == "toml"))
        .collect();
    all.sort();
    all
}

const DOT: &str = r#"# A dot.
title = "Dot"   # its name

[sizes]
neck   = 18 # nm
radius = "45 nm"
gap    = "2*radius + neck/2"   # follows

[material]
name = "GaAs"

[[outline]]
add = "disc"   # the first lobe
centre = [0, 0]
radius = "radius"

[[outline]]
add = "polygon"
points = [
  [0, 0],      # one
  ["gap", 1],  # two
  [5, 50],
]
"#;

#[test]
fn values_come_out_of_names_units_and_expressions() {
    let d = parse(DOT);
    let sizes: Vec<(&str, f64, bool)> = d
        .sizes()
        .iter()
        .map(|s| (s.name.as_str(), s.value, s.derived))
        .collect();
    assert_eq!(
        sizes,
        [
            ("neck", 18.0, false),
            ("radius", 45.0, false),
            ("gap", 99.0, true)
        ]
    );
    assert_eq!(d.evaluate("gap/3 + 0.001 um"), Ok(34.0));
    assert!(
        d.evaluate("gab")
            .expect_err("no such size")
            .contains("did you mean `gap`?")
    );
    // ħ²/2m of GaAs: 38.0998211/0.067.
    assert!((d.kinetic() - 568.654_046).abs() < 1e-5);
    assert_eq!((d.units().energy, d.units().length), ("meV", "nm"));
    assert_eq!((d.solve().modes, d.solve().accuracy), (20, 1e-6));
}

#[test]
fn an_edit_changes_its_value_and_nothing_else() {
    let d = parse(DOT);
    for (path, value, before, after) in [
        ("neck", "20", "neck   = 18 # nm", "neck   = 20 # nm"),
        (
            "sizes.neck",
            "2*3",
            "neck   = 18 # nm",
            "neck   = \"2*3\" # nm",
        ),
        (
            "neck",
            "1.5 um",
            "neck   = 18 # nm",
            "neck   = \"1.5 um\" # nm",
        ),
        (
            "title",
            "7",
            "title = \"Dot\"   # its name",
            "title = \"7\"   # its name",
        ),
        (
            "outline.1.radius",
            "3e1",
            "radius = \"radius\"",
            "radius = 3e1",
        ),
        (
            "outline.1.add",
            "disc",
            "add = \"disc\"   # the",
            "add = \"disc\"   # the",
        ),
        (
            "outline.1.centre",
            "[1, 2]",
            "centre = [0, 0]",
            "centre = [1, 2]",
        ),
        (
            "outline.1.centre.y",
            "-4",
            "centre = [0, 0]",
            "centre = [0, -4]",
        ),
        (
            "outline.2.points.2.x",
            "7",
            "[\"gap\", 1],  # two",
            "[7, 1],  # two",
        ),
        (
            "outline.2.points.2.2",
            "gap",
            "[\"gap\", 1],  # two",
            "[\"gap\", \"gap\"],  # two",
        ),
        (
            "material.name",
            "inas",
            "name = \"GaAs\"",
            "name = \"inas\"",
        ),
    ] {
        let e = d.set(path, value).unwrap_or_else(|e| panic!("{path}: {e}"));
        assert_eq!(e.text(), DOT.replacen(before, after, 1), "{path} = {value}");
    }
    // Keys and tables that are not there yet.
    let e = d
        .set("outline.1.turn", "30")
        .expect("a key any step may have");
    assert!(
        e.text().contains("radius = \"radius\"\nturn = 30\n"),
        "{}",
        e.text()
    );
    let e = d.set("finish.grow", "-2").expect("a new table");
    assert!(
        e.text().ends_with("]\n\n[finish]\ngrow = -2\n"),
        "{}",
        e.text()
    );
    assert_eq!(e.finish().grow, -2.0);
    let e = d
        .set_all(&[("solve.modes", "3"), ("solve.degree", "4"), ("neck", "9")])
        .expect("three at once");
    assert_eq!(
        (e.solve().modes, e.solve().degree, e.sizes()[0].value),
        (3, Some(4), 9.0)
    );
    assert_eq!(e.get("solve.modes").as_deref(), Some("3"));
    assert_eq!(e.get("outline.2.points.2.x").as_deref(), Some("gap"));
    assert_eq!(e.get("finish.grow"), None);
}

#[test]
fn an_edit_that_leads_nowhere_names_what_is_near() {
    let d = parse(DOT);
    for (path, value, message) in [
        ("nekc", "1", "did you mean `neck`?"),
        ("acuracy", "1", "did you mean"),
        ("accuracy", "1e-4", "did you mean `solve.accuracy`?"),
        ("solve.acuracy", "1", "did you mean `accuracy`?"),
        ("sizes.waist", "1", "there is no size"),
        ("outline.3.radius", "1", "numbered 1 to 2"),
        ("outline.0.radius", "1", "no step 0"),
        ("outline.x.radius", "1", "no step x"),
        ("outline.1.radios", "1", "did you mean `radius`?"),
        ("outline.2.radius", "1", "not a key of step 2 (polygon)"),
        ("outline.2.points.4.x", "1", "numbered 1 to 3"),
        ("outline.2.points.1.z", "1", "no entry z"),
        ("outline.2.points.1.x.y", "1", "beyond a single value"),
        ("outline", "1", "no size and no key `outline`"),
        ("wall.height", "1", "`wall` comes in a later version"),
        ("field.B", "2", "`field` comes in a later version"),
        ("", "1", "no size and no key"),
        ("neck", "", "no value for neck"),
        ("neck", "gap", "go round in a circle"),
        ("neck", "2*", "breaks off here"),
        ("radius", "-3 nm", "greater than zero"),
        ("neck", "true", "wants a number"),
        ("neck", "nan", "finite"),
        ("solve.modes", "1.5", "whole number"),
    ] {
        let e = d.set(path, value).expect_err(path).to_string();
        assert!(e.contains(message), "{path} = {value}: {e}");
        assert!(e.contains("dot.toml"), "{e}");
    }
}

#[test]
fn the_other_ways_toml_writes_tables_serve_as_well() {
    let text = r#"
scale = "reduced"
sizes = { r = 2 }
outline = [{ add = "disc", radius = "r" }, { cut = "disc", radius = "r/2" }]
finish.grow = 0.1
"#;
    let d = parse(text);
    assert_eq!(
        (d.steps().len(), d.finish().grow, d.kinetic()),
        (2, 0.1, 1.0)
    );
    assert_eq!(d.scale(), Scale::Reduced);
    let e = d
        .set_all(&[
            ("r", "3"),
            ("outline.2.radius", "0.5"),
            ("finish.round", "0.2"),
        ])
        .expect("inline edits");
    assert!(e.text().contains("sizes = { r = 3 }"), "{}", e.text());
    assert!(
        e.text().contains("{ cut = \"disc\", radius = 0.5 }"),
        "{}",
        e.text()
    );
    assert_eq!(e.finish().round, 0.2);
}

#[test]
fn windows_line_ends_and_a_byte_order_mark_are_fine() {
    let text = DOT.replace('\n', "\r\n");
    assert_eq!(parse(&text).text(), text);
    let marked = format!("\u{feff}{DOT}");
    assert_eq!(parse(&marked).sizes().len(), 3);
}

#[test]
fn unused_sizes_are_noted() {
    let d = parse(&DOT.replace("gap    =", "spare = 1\ngap    ="));
    let made = d.outline().expect("an outline");
    assert!(
        made.notes.iter().any(|n| n.contains("`spare` is not used")),
        "{:?}",
        made.notes
    );
}

#[test]
fn every_shape_of_the_folder_is_read_and_printed_unchanged() {
    let all = shapes();
    assert!(all.len() >= 12);
    for path in all {
        let text = std::fs::read_to_string(&path).expect("a text");
        let d = Document::read(&path).unwrap_or_else(|e| panic!("{e}"));
        assert_eq!(d.text(), text);
        assert!(
            text.starts_with('#'),
            "{} begins with a comment",
            path.display()
        );
        // An edit that writes what is there already changes nothing but that value's spelling.
        let modes = d.solve().modes.to_string();
        assert_eq!(
            d.set("solve.modes", &modes)
                .unwrap_or_else(|e| panic!("{e}"))
                .text(),
            text
        );
    }
    assert_eq!(demo().title(), "Two-lobe dot K7");
}

#[test]
fn every_shape_of_the_folder_gives_an_outline_without_remarks() {
    for path in shapes() {
        let d = Document::read(&path).unwrap_or_else(|e| panic!("{e}"));
        let made = d.outline().unwrap_or_else(|e| panic!("{e}"));
        assert!(
            made.notes.is_empty(),
            "{}: {:?}",
            path.display(),
            made.notes
        );
        assert_eq!(made.outline.components().len(), 1, "{}", path.display());
        // A second evaluation, with pictures from memory, gives the same.
        assert_eq!(d.outline().unwrap_or_else(|e| panic!("{e}")), made);
        let longest = made.outline.bounds().diagonal();
        assert!(
            d.scale() == Scale::Reduced || (10.0..500.0).contains(&longest),
            "{longest} nm"
        );
    }
    assert!(demo().outline().expect("the built-in shape").outline.area() > 5000.0);
}

/// Box of the outline of one step in a reduced document: left, right, bottom, top.
fn bounds(step: &str) -> [f64; 4] {
    let d = parse(&format!("scale = \"reduced\"\n[[outline]]\n{step}\n"));
    let b = d
        .outline()
        .unwrap_or_else(|e| panic!("{e}"))
        .outline
        .bounds();
    [b.lo.x, b.hi.x, b.lo.y, b.hi.y]
}

#[test]
fn figures_are_mirrored_then_turned_then_moved_then_repeated() {
    let plain = "add = \"rectangle\"\ncorner = [1, 2]\nsize = [4, 2]";
    for (placing, expected) in [
        ("", [1., 5., 2., 4.]),
        // Turning is about the middle of the figure unless a point is given.
        ("turn = 90", [2., 4., 1., 5.]),
        ("turn = 90\nabout = [0, 0]", [-4., -2., 1., 5.]),
        ("move = [10, -2]", [11., 15., 0., 2.]),
        // Mirroring is in a line through the origin, or through the point.
        ("mirror = \"x\"", [1., 5., -4., -2.]),
        ("mirror = \"y\"", [-5., -1., 2., 4.]),
        ("mirror = 45", [2., 4., 1., 5.]),
        ("mirror = \"y\"\nabout = [5, 0]", [5., 9., 2., 4.]),
        ("mirror = \"y\"\nturn = 90", [-4., -2., 1., 5.]),
        (
            "mirror = \"y\"\nturn = 90\nmove = [1, 1]",
            [-3., -1., 2., 6.],
        ),
        ("repeat = { count = 3, move = [10, 1] }", [1., 25., 2., 6.]),
        ("repeat = { count = 4, turn = 90 }", [-5., 5., -5., 5.]),
        (
            "repeat = { count = 2, turn = 180, about = [5, 3] }",
            [1., 9., 2., 4.],
        ),
        ("repeat = { count = 1, turn = 7 }", [1., 5., 2., 4.]),
    ] {
        let got = bounds(&format!("{plain}\n{placing}"));
        let off = got
            .iter()
            .zip(expected)
            .fold(0.0f64, |m, (a, b)| m.max((a - b).abs()));
        assert!(off < 1e-12, "{placing}: {got:?}, not {expected:?}");
    }
}

#[test]
fn every_kind_of_figure_has_its_area() {
    use std::f64::consts::PI;
    for (step, area) in [
        ("add = \"disc\"\nradius = 2", 4.0 * PI),
        ("add = \"ellipse\"\nhalf_axes = [3, 2]\nturn = 30", 6.0 * PI),
        ("add = \"rectangle\"\nsize = [3, 2]", 6.0),
        ("add = \"polygon\"\npoints = [[0, 0], [0, 2], [3, 0]]", 3.0),
        (
            "add = \"sector\"\nradius = 2\nfrom = -90\nto = 180",
            3.0 * PI,
        ),
        ("add = \"ring\"\ninner = 1\nouter = 2", 3.0 * PI),
        ("add = \"stadium\"\nradius = 1\nstraight = 5", PI + 10.0),
        (
            "add = \"track\"\npoints = [[0, 0], [5, 0]]\nwidth = 2",
            PI + 10.0,
        ),
        ("add = \"disc\"\nradius = 2\n[finish]\ngrow = 1", 9.0 * PI),
        // Rounded first, then grown: corners of radius 1 + 1.
        (
            "add = \"rectangle\"\nsize = [6, 4]\n[finish]\nround = 1\ngrow = 1",
            48.0 - 4.0 * (4.0 - PI),
        ),
    ] {
        let d = parse(&format!("scale = \"reduced\"\n[[outline]]\n{step}\n"));
        let made = d.outline().unwrap_or_else(|e| panic!("{e}"));
        assert!(
            (made.outline.area() / area - 1.0).abs() < 1e-12,
            "{step}: {}",
            made.outline.area()
        );
    }
}

#[test]
fn steps_that_change_nothing_are_noted() {
    let two = |first: &str, second: &str| {
        let d = parse(&format!(
            "scale = \"reduced\"\n[[outline]]\n{first}\n[[outline]]\n{second}\n"
        ));
        d.outline()
            .unwrap_or_else(|e| panic!("{e}"))
            .notes
            .join("; ")
    };
    let disc = "add = \"disc\"\nradius = 2";
    assert!(
        two(disc, "cut = \"disc\"\nradius = 1\ncentre = [9, 0]")
            .contains("step 2 (disc): the cut lies outside")
    );
    assert!(
        two(disc, "add = \"disc\"\nradius = 1")
            .contains("step 2 (disc): the added part lies inside")
    );
    assert!(two(disc, "keep = \"disc\"\nradius = 3").contains("step 2 (disc)"));
    assert!(two(disc, "add = \"disc\"\nradius = 1\ncentre = [9, 0]").contains("2 separate parts"));
    assert_eq!(two(disc, "cut = \"disc\"\nradius = 1"), "");
}

#[test]
fn unreadable_documents_are_explained() {
    let e = Document::read(Path::new("no/such/dot.toml"))
        .expect_err("missing")
        .to_string();
    assert!(e.contains("no/such/dot.toml: there is no such file"), "{e}");
    let e = Document::read(Path::new("."))
        .expect_err("a folder")
        .to_string();
    assert!(e.contains("folder"), "{e}");
    let e = Document::parse_bytes(b"a = 1\n\xff\xfe", "x", Path::new(""))
        .expect_err("bytes")
        .to_string();
    assert!(e.contains("not text in UTF-8 (line 2)"), "{e}");
    let large = "#".repeat((4 << 20) + 1);
    let e = Document::parse(&large, "x", Path::new(""))
        .expect_err("large")
        .to_string();
    assert!(
        e.contains("more than 4 MB") && e.contains("add = \"points\""),
        "{e}"
    );
}

/// Likely lines of documents, good and bad.
fn line() -> impl Strategy<Value = String> {
    prop_oneof![
        "(title|scale|sizes|material|outline|finish|solve|wall|radius|centre|add|cut|keep|points|turn|move|repeat|mirror|file|pixel|modes|accuracy|name|mass|a|b) = (1|-2|0|1e9|nan|inf|\"a\"|\"b*2\"|\"1/a\"|\"disc\"|\"polygon\"|\"ring\"|\"GaAs\"|\"lab\"|\"reduced\"|\"3 nm\"|\\[1, 2\\]|\\[\\[0, 0\\], \\[1, \"a\"\\], \\[0, 1\\]\\]|\\{ count = 3, turn = 60 \\}|true|1979-05-27|\\[\\])",
        "\\[(sizes|material|finish|solve|outline|field|outline.x)\\]",
        "\\[\\[(outline|sizes|landscape)\\]\\]",
        "# \\PC{0,10}",
    ]
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(400))]

    #[test]
    fn random_documents_never_panic(lines in prop::collection::vec(line(), 0..14)) {
        let text = lines.join("\n");
        match Document::parse(&text, "x.toml", Path::new("")) {
            Ok(d) => { let _ = d.outline(); }
            Err(e) => {
                prop_assert!(!e.faults.is_empty());
                prop_assert!(e.to_string().contains("x.toml"));
            }
        }
    }

    #[test]
    fn random_bytes_never_panic(bytes in prop::collection::vec(any::<u8>(), 0..200)) {
        if let Err(e) = Document::parse_bytes(&bytes, "x.toml", Path::new("")) {
            let _ = e.to_string();
        }
    }

    #[test]
    fn random_edits_never_panic_and_keep_the_comments(
        path in "(neck|radius|gap|sizes|solve|finish|outline|title|material)(\\.(neck|1|2|3|points|centre|radius|grow|modes|name|x)){0,4}",
        value in "(\\PC{0,8}|[0-9]{1,3}|neck|\\[1, 2\\]|\\{\\}|\"\"|'|#)",
    ) {
        if let Ok(e) = parse(DOT).set(&path, &value) {
            for comment in ["# A dot.", "# its name", "# nm", "# follows", "# the first lobe", "# one", "# two"] {
                let whole = path == "outline.2.points";
                prop_assert!(whole || e.text().contains(comment), "{comment} lost by {path} = {value}");
            }
            let again = parse(e.text());
            prop_assert_eq!(again.text(), e.text());
        }
    }
}
