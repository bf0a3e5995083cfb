//! `materials`: the built-in table.

use super::options::{Format, Materials};
use super::output::print;
use super::stop::Stop;
use crate::shape::{MATERIALS, Material};

/// Prints the table.
///
/// # Errors
/// Faults of the output.
pub fn materials(asked: &Materials) -> Result<(), Stop> {
    let table = match asked.format {
        Format::Text => text(),
        Format::Csv => csv(),
        Format::Json => json(),
    };
    print(table.as_bytes())
}

fn or_dash(value: Option<f64>) -> String {
    value.map_or("-".into(), |v| v.to_string())
}

fn text() -> String {
    let wide = MATERIALS.iter().map(|m| m.name.chars().count()).max();
    let wide = wide.unwrap_or(0).max(4);
    let mut out = format!(
        "{:wide$}  {:>6}  {:>6}  {:>6}\n",
        "name", "m/mₑ", "g", "ε/ε₀"
    );
    for m in &MATERIALS {
        let (g, e) = (or_dash(m.g), or_dash(m.permittivity));
        out += &format!("{:wide$}  {:>6}  {g:>6}  {e:>6}\n", m.name, m.mass);
    }
    out += "\nSources and cautions:\n";
    let mut told: Vec<&str> = Vec::new();
    for m in &MATERIALS {
        if told.contains(&m.source) {
            continue;
        }
        told.push(m.source);
        let names: Vec<&str> = sharing(m.source).map(|m| m.name).collect();
        out += &format!("  {}: {}\n", names.join(", "), m.source);
    }
    out += "\nIn a document: [material] name = \"GaAs\", or any mass = 0.067, g, permittivity.\n";
    out
}

fn sharing(source: &str) -> impl Iterator<Item = &'static Material> {
    MATERIALS.iter().filter(move |m| m.source == source)
}

fn csv() -> String {
    let mut writer = ::csv::Writer::from_writer(Vec::new());
    let header = ["name", "mass", "g", "permittivity", "source"].map(str::to_owned);
    let number = |v: Option<f64>| v.map_or(String::new(), |v| v.to_string());
    let rows = MATERIALS.iter().map(|m| {
        let (g, e) = (number(m.g), number(m.permittivity));
        [
            m.name.to_owned(),
            m.mass.to_string(),
            g,
            e,
            m.source.to_owned(),
        ]
    });
    for record in std::iter::once(header).chain(rows) {
        writer
            .write_record(&record)
            .expect("records of equal length into memory");
    }
    let bytes = writer.into_inner().expect("memory takes every byte");
    String::from_utf8(bytes).expect("made of text")
}

fn json() -> String {
    let list: Vec<serde_json::Value> = MATERIALS
        .iter()
        .map(|m| {
            serde_json::json!({
                "name": m.name,
                "mass": m.mass,
                "g": m.g,
                "permittivity": m.permittivity,
                "source": m.source,
            })
        })
        .collect();
    format!("{:#}\n", serde_json::Value::from(list))
}
