//! The level table as one JSON object with stable keys.

use super::Account;
use serde::Serialize;

#[derive(Serialize)]
struct Whole<'a> {
    title: &'a str,
    units: Units<'a>,
    lattice: Lattice,
    certificate: Certificate,
    levels: Vec<Level<'a>>,
    timings_ms: Timings,
    notes: Vec<&'a str>,
    model: &'a str,
    program: &'static str,
}

#[derive(Serialize)]
struct Units<'a> {
    energy: &'a str,
    length: &'a str,
}

#[derive(Serialize)]
struct Lattice {
    cell: f64,
    degree: usize,
    unknowns: usize,
    inside: usize,
    cut: usize,
    finest: f64,
}

#[derive(Serialize)]
struct Certificate {
    shift: f64,
    below: usize,
    found: usize,
    complete: bool,
}

#[derive(Serialize)]
struct Level<'a> {
    index: usize,
    energy: f64,
    error: f64,
    multiplicity: usize,
    residual: f64,
    label: Option<&'a str>,
}

#[derive(Serialize)]
struct Timings {
    lattice: f64,
    operators: f64,
    factor: f64,
    solve: f64,
}

/// One object and a line feed; numbers carry every digit of a double. Units of pure numbers are
/// `"1"`. Keys may be added in later versions, none is renamed or dropped.
pub fn json(account: &Account) -> String {
    let s = account.spectrum;
    let or_one = |unit| match unit {
        "" => "1",
        u => u,
    };
    let levels = s.levels.iter().map(|l| Level {
        index: l.index,
        energy: l.energy,
        error: l.error,
        multiplicity: l.multiplicity,
        residual: l.residual,
        label: l.label.as_deref(),
    });
    let whole = Whole {
        title: account.title,
        units: Units {
            energy: or_one(account.energy),
            length: or_one(account.length),
        },
        lattice: Lattice {
            cell: s.lattice.cell,
            degree: s.lattice.degree,
            unknowns: s.lattice.unknowns,
            inside: s.lattice.inside,
            cut: s.lattice.cut,
            finest: s.lattice.finest,
        },
        certificate: Certificate {
            shift: s.certificate.shift,
            below: s.certificate.below,
            found: s.certificate.found,
            complete: s.certificate.complete,
        },
        levels: levels.collect(),
        timings_ms: Timings {
            lattice: s.timings.lattice,
            operators: s.timings.operators,
            factor: s.timings.factor,
            solve: s.timings.solve,
        },
        notes: account.remarks().collect(),
        model: account.model,
        program: concat!("dotwright ", env!("CARGO_PKG_VERSION")),
    };
    let mut text = serde_json::to_string_pretty(&whole)
        .expect("only maps with text keys, numbers and text: these always serialise");
    text.push('\n');
    text
}

#[cfg(test)]
mod tests {
    use super::super::example;
    use super::*;
    use serde_json::Value;

    #[test]
    fn the_keys_are_those_of_the_contract() {
        let spectrum = example::spectrum(4);
        let text = json(&Account {
            title: "A \"dot\"",
            model: "hard wall",
            energy: "meV",
            length: "nm",
            spectrum: &spectrum,
            notes: &["from the shape".into()],
        });
        let v: Value = serde_json::from_str(&text).expect("JSON");
        for path in [
            "/title",
            "/units/energy",
            "/units/length",
            "/lattice/cell",
            "/lattice/degree",
            "/lattice/unknowns",
            "/lattice/inside",
            "/lattice/cut",
            "/certificate/shift",
            "/certificate/below",
            "/certificate/found",
            "/certificate/complete",
            "/levels/0/index",
            "/levels/3/energy",
            "/levels/0/error",
            "/levels/0/multiplicity",
            "/levels/0/residual",
            "/timings_ms/lattice",
            "/timings_ms/operators",
            "/timings_ms/factor",
            "/timings_ms/solve",
            "/notes/1",
        ] {
            assert!(
                v.pointer(path).is_some_and(|v| !v.is_null()),
                "{path} in {text}"
            );
        }
        assert_eq!(v["title"], "A \"dot\"");
        assert_eq!(
            v["levels"][2]["energy"].as_f64(),
            Some(spectrum.levels[2].energy)
        );
        // the order of the contract, which people read
        let at = |key: &str| text.find(&format!("\n  \"{key}\"")).expect("a key");
        let keys = [
            "title",
            "units",
            "lattice",
            "certificate",
            "levels",
            "timings_ms",
            "notes",
        ];
        assert!(keys.windows(2).all(|w| at(w[0]) < at(w[1])));
    }
}
