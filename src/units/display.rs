//! Energies and times for people.

use super::concise::concise;
use super::constants::{MEV_PER_KELVIN, THZ_PER_MEV};

/// A unit a laboratory reads an energy in.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum EnergyUnit {
    /// meV.
    Millielectronvolt,
    /// µeV.
    Microelectronvolt,
    /// GHz, the frequency E/h.
    Gigahertz,
    /// K, the temperature E/k_B.
    Kelvin,
}

impl EnergyUnit {
    /// All units, in the order they are offered.
    pub const ALL: [Self; 4] = [
        Self::Millielectronvolt,
        Self::Microelectronvolt,
        Self::Gigahertz,
        Self::Kelvin,
    ];

    /// The symbol.
    pub const fn symbol(self) -> &'static str {
        match self {
            Self::Millielectronvolt => "meV",
            Self::Microelectronvolt => "µeV",
            Self::Gigahertz => "GHz",
            Self::Kelvin => "K",
        }
    }

    /// How many of this unit make one meV.
    pub fn per_mev(self) -> f64 {
        match self {
            Self::Millielectronvolt => 1.0,
            Self::Microelectronvolt => 1e3,
            Self::Gigahertz => 1e3 * THZ_PER_MEV,
            Self::Kelvin => 1.0 / MEV_PER_KELVIN,
        }
    }
}

/// An energy in meV and its error, in `unit`, concise: `"2.345(3) GHz"`.
pub fn energy(mev: f64, error: f64, unit: EnergyUnit) -> String {
    let scale = unit.per_mev();
    format!("{} {}", concise(mev * scale, error * scale), unit.symbol())
}

/// A time in seconds with three digits and a fitting unit: `"16.4 ms"`, `"2 min 05 s"`.
pub fn duration(seconds: f64) -> String {
    if !seconds.is_finite() {
        return "?".to_owned();
    }
    let size = seconds.abs();
    let (factor, symbol) = match size {
        0.0 => return "0 s".to_owned(),
        s if s < 999.5e-9 => (1e9, "ns"),
        s if s < 999.5e-6 => (1e6, "µs"),
        s if s < 999.5e-3 => (1e3, "ms"),
        s if s < 59.95 => (1.0, "s"),
        _ => return long(seconds),
    };
    let x = seconds * factor;
    let decimals = match x.abs() {
        a if a < 9.995 => 2,
        a if a < 99.95 => 1,
        _ => 0,
    };
    format!("{x:.decimals$} {symbol}")
}

fn long(seconds: f64) -> String {
    let sign = if seconds < 0.0 { "-" } else { "" };
    let whole = seconds.abs().round();
    let (hours, minutes, rest) = (
        (whole / 3600.0).floor(),
        (whole / 60.0).floor() % 60.0,
        whole % 60.0,
    );
    if hours > 0.0 {
        format!("{sign}{hours} h {minutes:02} min")
    } else {
        format!("{sign}{minutes} min {rest:02} s")
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn times_have_three_digits() {
        for (seconds, text) in [
            (0.0, "0 s"),
            (3.2e-9, "3.20 ns"),
            (0.016_44, "16.4 ms"),
            (0.9996, "1.00 s"),
            (59.96, "1 min 00 s"),
            (125.0, "2 min 05 s"),
            (7260.0, "2 h 01 min"),
            (f64::NAN, "?"),
        ] {
            assert_eq!(duration(seconds), text);
        }
    }

    #[test]
    fn one_energy_in_four_units() {
        let texts = EnergyUnit::ALL.map(|unit| energy(1.0, 1e-3, unit));
        // E/h and E/k_B of 1 meV: 241.7989 GHz and 11.60452 K (CODATA 2022).
        assert_eq!(
            texts,
            [
                "1.0000(10) meV",
                "1000.0(10) µeV",
                "241.80(25) GHz",
                "11.605(13) K"
            ]
        );
    }
}
