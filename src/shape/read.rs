//! From the text of a document to its model.

use super::fault::Fault;
use super::materials::{MATERIALS, material};
use super::model::{Finish, Host, Scale, Solve, Step};
use super::near;
use super::reader::{Reader, Section};
use super::sizes::{self, Size, Sizes};
use super::steps;
use crate::units::Dimension::{Length, Mass, Number};
use std::ops::Range;
use toml_edit::Item;

/// The keys of a document, with those of its tables.
pub(super) const TOP: [&str; 7] = [
    "title", "scale", "sizes", "material", "outline", "finish", "solve",
];
pub(super) const MATERIAL: [&str; 4] = ["name", "mass", "g", "permittivity"];
pub(super) const FINISH: [&str; 2] = ["round", "grow"];
pub(super) const SOLVE: [&str; 4] = ["modes", "accuracy", "cell", "degree"];

/// Tables that are announced but not made yet.
pub(super) const LATER: [(&str, &str); 7] = [
    ("wall", "a finite wall"),
    ("landscape", "a potential landscape"),
    ("field", "a magnetic field"),
    ("process", "process tolerances"),
    ("require", "a specification"),
    ("sweep", "a sweep"),
    ("regions", "regions of other materials"),
];

/// A document in numbers.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Model {
    pub(super) title: Option<String>,
    pub(super) scale: Scale,
    pub(super) sizes: Vec<Size>,
    pub(super) host: Option<Host>,
    pub(super) steps: Vec<Step>,
    pub(super) finish: Finish,
    /// The bytes of `round` and of `grow`, for their faults.
    pub(super) round: Range<usize>,
    pub(super) grow: Range<usize>,
    pub(super) solve: Solve,
    pub(super) notes: Vec<String>,
}

/// Reads a text.
///
/// # Errors
/// All faults found; never an empty list.
pub(super) fn read(text: &str) -> Result<Model, Vec<Fault>> {
    let document = toml_edit::Document::parse(text).map_err(|e| vec![syntax(&e)])?;
    let start = 0..0;
    let top = Section {
        table: document.as_table(),
        title: "a shape document",
        span: &start,
    };
    let mut reader = Reader {
        text,
        lab: true,
        sizes: Sizes::default(),
        faults: Vec::new(),
    };
    check_top(&mut reader, top);
    let scale = read_scale(&mut reader, top);
    reader.lab = scale == Scale::Lab;
    let title = read_title(&mut reader, top);
    if let Some(table) = reader.table(top, "sizes") {
        let span = top.key_span("sizes");
        sizes::read(
            &mut reader,
            Section {
                table,
                title: "[sizes]",
                span: &span,
            },
        );
    }
    let host = read_host(&mut reader, top, scale);
    let steps = steps::read(&mut reader, top);
    let (finish, round, grow) = read_finish(&mut reader, top);
    let solve = read_solve(&mut reader, top);
    if !reader.faults.is_empty() {
        return Err(reader.faults);
    }
    let notes = reader
        .sizes
        .unused()
        .iter()
        .map(|name| format!("the size `{name}` is not used anywhere"))
        .collect();
    Ok(Model {
        title,
        scale,
        sizes: reader.sizes.list(),
        host,
        steps,
        finish,
        round,
        grow,
        solve,
        notes,
    })
}

fn syntax(error: &toml_edit::TomlError) -> Fault {
    Fault {
        span: Some(error.span().unwrap_or(0..0)),
        what: format!("this is not TOML: {}", error.message().replace('\n', ", ")),
        remedy: "a document is made of lines like radius = 45, and of tables like [sizes]"
            .to_owned(),
    }
}

fn check_top(reader: &mut Reader<'_>, top: Section<'_>) {
    for (name, _) in top.table.iter() {
        if let Some((_, words)) = LATER.iter().find(|l| l.0 == name) {
            reader.fault(
                top.key_span(name),
                format!("`{name}` ({words}) comes in a later version"),
                "remove it; this version solves hard walls without potential and field",
            );
        } else if !TOP.contains(&name) {
            let known = TOP.iter().copied().chain(LATER.iter().map(|l| l.0));
            let remedy = match near::nearest(name, known) {
                Some(k) => format!("did you mean `{k}`?"),
                None => match owner(name) {
                    Some(table) => format!("it belongs under [{table}]"),
                    None => format!("known here: {}", TOP.join(", ")),
                },
            };
            reader.fault(
                top.key_span(name),
                format!(
                    "`{}` is not a key of a shape document",
                    name.chars().take(40).collect::<String>()
                ),
                remedy,
            );
        }
    }
}

/// The table a key belongs to, for keys written outside of it.
fn owner(name: &str) -> Option<&'static str> {
    [
        ("material", &MATERIAL[1..]),
        ("finish", &FINISH[..]),
        ("solve", &SOLVE[..]),
    ]
    .into_iter()
    .find(|t| t.1.contains(&name))
    .map(|t| t.0)
}

fn value_span(section: Section<'_>, key: &str) -> Range<usize> {
    section
        .get(key)
        .and_then(Item::span)
        .unwrap_or_else(|| section.key_span(key))
}

fn read_scale(reader: &mut Reader<'_>, top: Section<'_>) -> Scale {
    if top.get("scale").is_none() {
        return Scale::Lab;
    }
    match reader.string(top, "scale", "lab") {
        Some("reduced") => Scale::Reduced,
        Some("lab") | None => Scale::Lab,
        Some(other) => {
            reader.fault(
                value_span(top, "scale"),
                format!(
                    "\"{}\" is not a scale",
                    other.chars().take(40).collect::<String>()
                ),
                "write \"lab\" (nm, meV, T) or \"reduced\" (lengths are numbers, −Δu = E u)",
            );
            Scale::Lab
        }
    }
}

fn read_title(reader: &mut Reader<'_>, top: Section<'_>) -> Option<String> {
    let title = reader.string(top, "title", "Two-lobe dot, variant 7")?;
    if title.chars().count() > 300 || title.chars().any(char::is_control) {
        reader.fault(
            value_span(top, "title"),
            "this title is longer than 300 characters, or not one line of plain text",
            "write one short line",
        );
    }
    Some(title.to_owned())
}

fn read_host(reader: &mut Reader<'_>, top: Section<'_>, scale: Scale) -> Option<Host> {
    if top.get("material").is_none() {
        if scale == Scale::Lab {
            reader.fault(
                0..0,
                "a shape in lab units needs a material",
                "add [material] with name = \"GaAs\" or mass = 0.067; or set scale = \"reduced\" for pure numbers",
            );
        }
        return None;
    }
    let span = top.key_span("material");
    let table = reader.table(top, "material")?;
    let section = Section {
        table,
        title: "[material]",
        span: &span,
    };
    reader.check_keys(section, &MATERIAL);
    if scale == Scale::Reduced {
        reader.fault(
            span.clone(),
            "a shape of reduced scale has no material",
            "remove [material], or set scale = \"lab\"",
        );
        return None;
    }
    let name = reader.string(section, "name", "GaAs");
    let built_in = name.and_then(material);
    if let (Some(name), None) = (name, built_in)
        && section.get("mass").is_none()
    {
        let known: Vec<&str> = MATERIALS.iter().map(|m| m.name).collect();
        reader.fault(
            value_span(section, "name"),
            format!(
                "there is no material \"{}\" in the table",
                name.chars().take(40).collect::<String>()
            ),
            format!(
                "{}; or give its mass: mass = 0.067",
                near::remedy(name, &known, "").trim_end_matches('?')
            ),
        );
    } else if section.get("name").is_none() && section.get("mass").is_none() {
        reader.missing(section, "name", "\"GaAs\" or mass = 0.067");
    }
    let mut own = |key: &str, dimension| reader.number(section, key, dimension);
    let (mass, g, permittivity) = (
        own("mass", Mass),
        own("g", Number),
        own("permittivity", Number),
    );
    let mass = mass.and_then(|m| reader.above_zero(section, "mass", m));
    let permittivity = permittivity.and_then(|m| reader.above_zero(section, "permittivity", m));
    Some(Host {
        name: name.map(|n| built_in.map_or(n, |m| m.name).to_owned()),
        mass: mass.or(built_in.map(|m| m.mass))?,
        g: g.or(built_in.and_then(|m| m.g)),
        permittivity: permittivity.or(built_in.and_then(|m| m.permittivity)),
    })
}

fn read_finish(reader: &mut Reader<'_>, top: Section<'_>) -> (Finish, Range<usize>, Range<usize>) {
    let Some(table) = reader.table(top, "finish") else {
        return Default::default();
    };
    let span = top.key_span("finish");
    let section = Section {
        table,
        title: "[finish]",
        span: &span,
    };
    reader.check_keys(section, &FINISH);
    let round = reader.number(section, "round", Length).unwrap_or(0.0);
    if round < 0.0 {
        reader.fault(
            value_span(section, "round"),
            format!("`round` is {round}"),
            "it is the radius of every corner: zero or more",
        );
    }
    let grow = reader.number(section, "grow", Length).unwrap_or(0.0);
    let spans = (value_span(section, "round"), value_span(section, "grow"));
    (Finish { round, grow }, spans.0, spans.1)
}

fn read_solve(reader: &mut Reader<'_>, top: Section<'_>) -> Solve {
    let mut solve = Solve::default();
    let Some(table) = reader.table(top, "solve") else {
        return solve;
    };
    let span = top.key_span("solve");
    let section = Section {
        table,
        title: "[solve]",
        span: &span,
    };
    reader.check_keys(section, &SOLVE);
    if let Some(n) = whole(reader, section, "modes", 1.0..=100_000.0) {
        solve.modes = n;
    }
    if let Some(a) = reader.number(section, "accuracy", Number) {
        if a > 1e-10 && a < 0.1 {
            solve.accuracy = a;
        } else {
            reader.fault(
                value_span(section, "accuracy"),
                format!("`accuracy` is {a:e}"),
                "it is relative, between 1e-10 and 0.1; 1e-6 is usual",
            );
        }
    }
    if let Some(h) = reader.number(section, "cell", Length) {
        solve.cell = reader.above_zero(section, "cell", h);
    }
    solve.degree = whole(reader, section, "degree", 2.0..=5.0);
    solve
}

/// A whole number within `range`.
fn whole(
    reader: &mut Reader<'_>,
    section: Section<'_>,
    key: &str,
    range: std::ops::RangeInclusive<f64>,
) -> Option<usize> {
    let value = reader.number(section, key, Number)?;
    if range.contains(&value) && value.fract() == 0.0 {
        return Some(value as usize);
    }
    reader.fault(
        value_span(section, key),
        format!("`{key}` is {value}"),
        format!(
            "write a whole number from {} to {}",
            range.start(),
            range.end()
        ),
    );
    None
}
