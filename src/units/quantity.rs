//! Quantities in text: a number and a unit, `"45 nm"`, brought to canonical units.

use super::constants::{ELEMENTARY_CHARGE, MEV_MICROMETRE, MEV_PER_KELVIN, THZ_PER_MEV};
use std::fmt;
use std::str::FromStr;

/// What a number measures. The canonical unit of each is given with it.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Dimension {
    /// A pure number.
    Number,
    /// Length, nm.
    Length,
    /// Energy, meV; temperatures count as kT, frequencies as hν, wavenumbers as hc/λ.
    Energy,
    /// Magnetic field, T.
    Field,
    /// Angle, degrees.
    Angle,
    /// Mass, electron masses.
    Mass,
    /// Electric potential, mV.
    Voltage,
}

impl Dimension {
    /// The canonical unit, as it is printed; empty for a pure number.
    pub const fn unit(self) -> &'static str {
        match self {
            Self::Number => "",
            Self::Length => "nm",
            Self::Energy => "meV",
            Self::Field => "T",
            Self::Angle => "°",
            Self::Mass => "mₑ",
            Self::Voltage => "mV",
        }
    }

    /// The dimension in words, with its article: "a length".
    pub const fn words(self) -> &'static str {
        match self {
            Self::Number => "a pure number",
            Self::Length => "a length",
            Self::Energy => "an energy",
            Self::Field => "a magnetic field",
            Self::Angle => "an angle",
            Self::Mass => "a mass",
            Self::Voltage => "a voltage",
        }
    }

    /// Units of this dimension a message may offer.
    pub const fn examples(self) -> &'static str {
        match self {
            Self::Number => "no unit",
            Self::Length => "nm, A (ångström), um, mm",
            Self::Energy => "meV, ueV, eV, K, GHz, THz",
            Self::Field => "T, mT",
            Self::Angle => "deg, rad",
            Self::Mass => "me",
            Self::Voltage => "mV, V",
        }
    }
}

/// A number in the canonical unit of its dimension.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Quantity {
    /// The number, in [`Dimension::unit`].
    pub value: f64,
    /// What it measures.
    pub dimension: Dimension,
}

/// Why a text is no quantity.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum UnitError {
    /// The text does not begin with a number.
    #[error("\"{0}\" is not a number; write it like 45, 4.5e1 or \"45 nm\"")]
    NotANumber(String),
    /// Infinite, NaN, or too large for a double.
    #[error("\"{0}\" is not a finite number")]
    NotFinite(String),
    /// No unit of that name.
    #[error("\"{unit}\" is not a unit known here{}", nearest_unit(.nearest))]
    UnknownUnit {
        /// The text in the place of the unit.
        unit: String,
        /// The known unit that is written most like it.
        nearest: Option<&'static str>,
    },
    /// A unit of another dimension than asked for.
    #[error("\"{text}\" is {}, and {} is wanted here ({})", .got.words(), .wanted.words(), .wanted.examples())]
    WrongDimension {
        /// The text.
        text: String,
        /// What it measures.
        got: Dimension,
        /// What was asked for.
        wanted: Dimension,
    },
}

fn nearest_unit(nearest: &Option<&'static str>) -> String {
    match nearest {
        Some(unit) => format!("; did you mean {unit}?"),
        None => "; use nm, um, meV, eV, K, GHz, T, deg, …".to_owned(),
    }
}

/// Units: name, dimension, canonical units in one of it.
const UNITS: &[(&str, Dimension, f64)] = &[
    ("nm", Dimension::Length, 1.0),
    ("A", Dimension::Length, 0.1),
    ("Å", Dimension::Length, 0.1),
    ("angstrom", Dimension::Length, 0.1),
    ("pm", Dimension::Length, 1e-3),
    ("um", Dimension::Length, 1e3),
    ("µm", Dimension::Length, 1e3),
    ("mm", Dimension::Length, 1e6),
    ("m", Dimension::Length, 1e9),
    ("meV", Dimension::Energy, 1.0),
    ("ueV", Dimension::Energy, 1e-3),
    ("µeV", Dimension::Energy, 1e-3),
    ("neV", Dimension::Energy, 1e-6),
    ("eV", Dimension::Energy, 1e3),
    ("J", Dimension::Energy, 1e3 / ELEMENTARY_CHARGE),
    ("K", Dimension::Energy, MEV_PER_KELVIN),
    ("mK", Dimension::Energy, 1e-3 * MEV_PER_KELVIN),
    ("MHz", Dimension::Energy, 1e-6 / THZ_PER_MEV),
    ("GHz", Dimension::Energy, 1e-3 / THZ_PER_MEV),
    ("THz", Dimension::Energy, 1.0 / THZ_PER_MEV),
    ("1/cm", Dimension::Energy, 1e-4 * MEV_MICROMETRE),
    ("cm-1", Dimension::Energy, 1e-4 * MEV_MICROMETRE),
    ("T", Dimension::Field, 1.0),
    ("mT", Dimension::Field, 1e-3),
    ("kG", Dimension::Field, 0.1),
    ("G", Dimension::Field, 1e-4),
    ("deg", Dimension::Angle, 1.0),
    ("degree", Dimension::Angle, 1.0),
    ("degrees", Dimension::Angle, 1.0),
    ("°", Dimension::Angle, 1.0),
    ("rad", Dimension::Angle, 180.0 / std::f64::consts::PI),
    ("mrad", Dimension::Angle, 0.18 / std::f64::consts::PI),
    ("me", Dimension::Mass, 1.0),
    ("m_e", Dimension::Mass, 1.0),
    ("mₑ", Dimension::Mass, 1.0),
    ("mV", Dimension::Voltage, 1.0),
    ("V", Dimension::Voltage, 1e3),
    ("%", Dimension::Number, 0.01),
];

/// The names of all units.
pub fn unit_names() -> impl Iterator<Item = &'static str> {
    UNITS.iter().map(|u| u.0)
}

/// Dimension and canonical value of one unit; capitals count (mm is not Mm, MHz is not mHz).
///
/// # Errors
/// [`UnitError::UnknownUnit`], with the nearest known unit.
pub fn unit(name: &str) -> Result<Quantity, UnitError> {
    // Greek small mu and the Kelvin and ångström signs have two code points each.
    let folded = name
        .replace('\u{3bc}', "µ")
        .replace('\u{212b}', "Å")
        .replace('\u{212a}', "K");
    if let Some(&(_, dimension, value)) = UNITS.iter().find(|u| u.0 == folded) {
        return Ok(Quantity { value, dimension });
    }
    let nearest = UNITS
        .iter()
        .map(|u| {
            (
                strsim::damerau_levenshtein(&u.0.to_lowercase(), &folded.to_lowercase()),
                u.0,
            )
        })
        .filter(|&(distance, known)| distance * 2 <= known.chars().count())
        .min_by_key(|n| n.0)
        .map(|n| n.1);
    Err(UnitError::UnknownUnit {
        unit: name.to_owned(),
        nearest,
    })
}

impl Quantity {
    /// Reads `text` where `wanted` is called for: a bare number is in the canonical unit.
    ///
    /// # Errors
    /// Those of [`Quantity::from_str`], and [`UnitError::WrongDimension`].
    pub fn of(text: &str, wanted: Dimension) -> Result<f64, UnitError> {
        let (number, unit_text) = split(text)?;
        if unit_text.is_empty() {
            return Ok(number);
        }
        let got: Self = text.parse()?;
        if got.dimension == wanted {
            Ok(got.value)
        } else {
            Err(UnitError::WrongDimension {
                text: text.trim().to_owned(),
                got: got.dimension,
                wanted,
            })
        }
    }
}

impl FromStr for Quantity {
    type Err = UnitError;

    /// Reads `"45 nm"`, `"0.25eV"`, `"12 A"`, `"-3"`; the space before the unit is optional.
    fn from_str(text: &str) -> Result<Self, UnitError> {
        let (number, unit_text) = split(text)?;
        let one = if unit_text.is_empty() {
            Self {
                value: 1.0,
                dimension: Dimension::Number,
            }
        } else {
            unit(unit_text)?
        };
        let value = number * one.value;
        if !value.is_finite() {
            return Err(UnitError::NotFinite(text.trim().to_owned()));
        }
        Ok(Self {
            value,
            dimension: one.dimension,
        })
    }
}

impl fmt::Display for Quantity {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self.dimension {
            Dimension::Number => write!(f, "{}", self.value),
            Dimension::Angle => write!(f, "{}°", self.value),
            dimension => write!(f, "{} {}", self.value, dimension.unit()),
        }
    }
}

/// The number at the head of `text`, and the unit after it (maybe empty).
fn split(text: &str) -> Result<(f64, &str), UnitError> {
    let text = text.trim();
    let mut end = number_length(text);
    // "3 e" and "5e" have no exponent: the e belongs to the unit.
    let number = loop {
        match text[..end].replace('\u{2212}', "-").parse::<f64>() {
            Ok(number) => break number,
            Err(_) => match text[..end].char_indices().next_back() {
                Some((k, _)) => end = k,
                None => return Err(UnitError::NotANumber(text.to_owned())),
            },
        }
    };
    if !number.is_finite() {
        return Err(UnitError::NotFinite(text.to_owned()));
    }
    Ok((number, text[end..].trim_start()))
}

/// Length in bytes of the longest head that could be a decimal number.
fn number_length(text: &str) -> usize {
    let mut before = ' ';
    for (k, c) in text.char_indices() {
        let sign = matches!(c, '+' | '-' | '\u{2212}');
        let fits = c.is_ascii_digit()
            || c == '.'
            || (matches!(c, 'e' | 'E') && before.is_ascii_digit() | (before == '.'))
            || (sign && (k == 0 || matches!(before, 'e' | 'E')));
        if !fits {
            return k;
        }
        before = c;
    }
    text.len()
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    fn read(text: &str) -> (f64, Dimension) {
        let q: Quantity = text.parse().unwrap();
        (q.value, q.dimension)
    }

    #[test]
    fn quantities_come_in_canonical_units() {
        assert_eq!(read("45 nm"), (45.0, Dimension::Length));
        assert_eq!(read("45nm"), (45.0, Dimension::Length));
        assert_eq!(read(" 0.25 eV "), (250.0, Dimension::Energy));
        assert_eq!(read("12 A"), (1.2000000000000002, Dimension::Length));
        assert_eq!(read("1e-3 mm"), (1000.0, Dimension::Length));
        assert_eq!(read("\u{2212}2 \u{3bc}m"), (-2000.0, Dimension::Length));
        assert_eq!(read("3eV").0, 3000.0);
        assert_eq!(read("3e2eV").0, 300_000.0);
        assert_eq!(read("50 mT").0, 0.05);
        assert_eq!(read("90°"), (90.0, Dimension::Angle));
        assert_eq!(read("0.067 me"), (0.067, Dimension::Mass));
        assert_eq!(read("-7.5"), (-7.5, Dimension::Number));
        // kT at 4.2 K is 0.3619 meV; 1 THz is 4.1357 meV (h in eV s, CODATA 2022).
        assert!((read("4.2 K").0 - 0.361_928).abs() < 1e-6);
        assert!((read("1 THz").0 - 4.135_667_697).abs() < 1e-9);
        assert!((read("8.0655439 cm-1").0 - 1.0).abs() < 1e-7);
        assert!((read("3.141592653589793 rad").0 - 180.0).abs() < 1e-12);
    }

    #[test]
    fn messages_say_what_would_be_right() {
        let message = |t: &str| t.parse::<Quantity>().unwrap_err().to_string();
        assert_eq!(
            message("3 mev"),
            "\"mev\" is not a unit known here; did you mean meV?"
        );
        assert!(message("about 3").contains("not a number"));
        assert!(message("").contains("not a number"));
        assert!(message("1e999 nm").contains("finite"));
        assert!(message("nan").contains("not a number"));
        let wrong = Quantity::of("3 meV", Dimension::Length).unwrap_err();
        assert_eq!(
            wrong.to_string(),
            "\"3 meV\" is an energy, and a length is wanted here (nm, A (ångström), um, mm)"
        );
        assert_eq!(Quantity::of("3", Dimension::Length), Ok(3.0));
    }

    proptest! {
        #[test]
        fn no_text_panics(text in "\\PC{0,20}") {
            let _ = text.parse::<Quantity>();
        }

        #[test]
        fn print_then_parse_is_identity(value in -1e6f64..1e6, k in 0usize..UNITS.len()) {
            let q = Quantity { value, dimension: UNITS[k].1 };
            prop_assert_eq!(q.to_string().parse::<Quantity>(), Ok(q));
        }
    }
}
