//! The level table as comma-separated values, one level a line.

use super::Account;

/// A header line and one line a level. The unit stands in the name of its column, `energy_meV`;
/// pure numbers have plain names. Numbers carry every digit of a double.
pub fn csv(account: &Account) -> String {
    let unit = |name: &str| match account.energy {
        "" => name.to_owned(),
        unit => format!("{name}_{unit}"),
    };
    let mut writer = ::csv::Writer::from_writer(Vec::new());
    let header = [
        "index".to_owned(),
        unit("energy"),
        unit("error"),
        "multiplicity".to_owned(),
        "residual".to_owned(),
        "label".to_owned(),
    ];
    let rows = account.spectrum.levels.iter().map(|l| {
        [
            l.index.to_string(),
            format!("{:?}", l.energy),
            format!("{:?}", l.error),
            l.multiplicity.to_string(),
            format!("{:?}", l.residual),
            l.label.clone().unwrap_or_default(),
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

#[cfg(test)]
mod tests {
    use super::super::{example, json};
    use super::*;
    use proptest::prelude::*;
    use serde_json::Value;

    proptest! {
        /// Whatever the numbers and labels, both formats say the same.
        #[test]
        fn csv_and_json_agree(
            energies in prop::collection::vec(1e-12f64..1e12, 1..12),
            error in 0.0f64..1.0,
            label in "\\PC{0,12}",
        ) {
            let mut spectrum = example::spectrum(energies.len());
            for (level, energy) in spectrum.levels.iter_mut().zip(&energies) {
                level.energy = *energy;
                level.error = error * energy;
                level.label = Some(label.clone());
            }
            let account = Account {
                title: &label,
                model: "",
                energy: "meV",
                length: "nm",
                spectrum: &spectrum,
                notes: &[],
            };
            let object: Value = serde_json::from_str(&json(&account)).expect("JSON");
            let table = csv(&account);
            let mut reader = ::csv::Reader::from_reader(table.as_bytes());
            let names = reader.headers().expect("a header").clone();
            prop_assert_eq!(&names[1], "energy_meV");
            let mut count = 0;
            for (row, level) in reader.records().zip(object["levels"].as_array().expect("a list")) {
                let row = row.expect("a record");
                for (name, field) in names.iter().zip(&row) {
                    let key = name.trim_end_matches("_meV");
                    match &level[key] {
                        Value::Number(n) => {
                            let read: f64 = field.parse().expect("a number");
                            let other = n.as_f64().expect("a number");
                            // serde_json's fast reader may miss the last bit, not more
                            prop_assert!((read - other).abs() <= 3e-16 * read.abs(), "{read} {other}");
                        }
                        other => prop_assert_eq!(other.as_str(), Some(field)),
                    }
                }
                count += 1;
            }
            prop_assert_eq!(count, energies.len());
        }
    }
}
