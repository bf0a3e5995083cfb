//! Physical constants, CODATA 2022 (P. J. Mohr, D. B. Newell, B. N. Taylor & E. Tiesinga,
//! Rev. Mod. Phys. 97, 025002 (2025); NIST 2024), and what follows from them in canonical units.
//!
//! Constants fixed by the 2019 definition of the SI are exact; those made from exact ones are
//! computed here, so that they carry every digit of a double.

use std::f64::consts::PI;

/// Planck constant h, J s (exact, SI 2019).
pub const PLANCK: f64 = 6.626_070_15e-34;
/// Reduced Planck constant ħ = h/2π, J s (exact up to rounding).
pub const HBAR: f64 = PLANCK / (2.0 * PI);
/// Elementary charge e, C (exact, SI 2019).
pub const ELEMENTARY_CHARGE: f64 = 1.602_176_634e-19;
/// Boltzmann constant k_B, J/K (exact, SI 2019).
pub const BOLTZMANN: f64 = 1.380_649e-23;
/// Speed of light c, m/s (exact, SI 1983).
pub const SPEED_OF_LIGHT: f64 = 299_792_458.0;
/// Electron mass mₑ, kg: 9.109 383 7139(28)e-31 (CODATA 2022).
pub const ELECTRON_MASS: f64 = 9.109_383_713_9e-31;
/// Bohr magneton μ_B = eħ/2mₑ, J/T: 9.274 010 0657(29)e-24 (CODATA 2022).
pub const BOHR_MAGNETON: f64 = 9.274_010_065_7e-24;
/// Vacuum permittivity ε₀, F/m: 8.854 187 8188(14)e-12 (CODATA 2022).
pub const VACUUM_PERMITTIVITY: f64 = 8.854_187_818_8e-12;

/// One meV in joule (exact).
const MEV: f64 = 1e-3 * ELEMENTARY_CHARGE;

/// ħ²/2mₑ in meV nm²: kinetic energy of k = 1/nm at the free electron mass; 38.099 821 1.
/// Known to 3e-10, the uncertainty of mₑ.
pub const KINETIC: f64 = HBAR * HBAR / (2.0 * ELECTRON_MASS) / MEV * 1e18;
/// Boltzmann constant in meV/K (exact up to rounding).
pub const MEV_PER_KELVIN: f64 = BOLTZMANN / MEV;
/// Bohr magneton in meV/T.
pub const MEV_PER_TESLA: f64 = BOHR_MAGNETON / MEV;
/// ħω_c/B = ħe/mₑ in meV/T at the free electron mass; divide by m*/mₑ.
pub const CYCLOTRON: f64 = HBAR * ELEMENTARY_CHARGE / ELECTRON_MASS / MEV;
/// Flux quantum of one electron h/e in T nm² (exact up to rounding).
pub const FLUX_QUANTUM: f64 = PLANCK / ELEMENTARY_CHARGE * 1e18;
/// e²/4πε₀ in meV nm: Coulomb energy of two electrons at 1 nm in vacuum.
pub const COULOMB: f64 =
    ELEMENTARY_CHARGE * ELEMENTARY_CHARGE / (4.0 * PI * VACUUM_PERMITTIVITY) / MEV * 1e9;
/// Photon frequency in THz of a quantum of 1 meV: 1 meV/h (exact up to rounding).
pub const THZ_PER_MEV: f64 = MEV / PLANCK * 1e-12;
/// hc in meV µm: energy times vacuum wavelength of a photon (exact up to rounding).
pub const MEV_MICROMETRE: f64 = PLANCK * SPEED_OF_LIGHT / MEV * 1e6;

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;

    /// The table was made independently, with 50-digit arithmetic, from the CODATA values.
    #[test]
    fn every_constant_agrees_with_the_table() {
        let text = include_str!("../../tests/reference/constants.toml");
        let table: toml_edit::Document<&str> = toml_edit::Document::parse(text).unwrap();
        // 13 digits are printed; derived constants inherit their rounding to 12 or 13 digits.
        let cases = [
            ("planck", PLANCK, 1e-15),
            ("hbar", HBAR, 1e-13),
            ("elementary_charge", ELEMENTARY_CHARGE, 1e-15),
            ("electron_mass", ELECTRON_MASS, 1e-15),
            ("boltzmann", BOLTZMANN, 1e-15),
            ("bohr_magneton", BOHR_MAGNETON, 1e-15),
            ("vacuum_permittivity", VACUUM_PERMITTIVITY, 1e-15),
            ("speed_of_light", SPEED_OF_LIGHT, 1e-15),
            ("hbar2_over_2me_meV_nm2", KINETIC, 1e-12),
            ("kB_meV_per_K", MEV_PER_KELVIN, 1e-12),
            ("muB_meV_per_T", MEV_PER_TESLA, 1e-12),
            ("hbar_omega_c_meV_per_T_free", CYCLOTRON, 1e-12),
            ("flux_quantum_T_nm2", FLUX_QUANTUM, 1e-12),
            ("e2_over_4pi_eps0_meV_nm", COULOMB, 1e-12),
            ("meV_to_THz", THZ_PER_MEV, 1e-12),
            ("meV_times_um", MEV_MICROMETRE, 1e-12),
        ];
        for (name, ours, tolerance) in cases {
            let theirs = table[name].as_float().unwrap();
            assert!(
                (ours / theirs - 1.0).abs() < tolerance,
                "{name}: {ours:e} against {theirs:e}"
            );
        }
        assert_eq!(
            table.as_table().len(),
            cases.len(),
            "a constant of the table is untested"
        );
    }

    /// μ_B and mₑ are adjusted together: eħ/2mₑ must return the magneton within 1e-9.
    #[test]
    fn the_magneton_follows_from_the_mass() {
        let derived = ELEMENTARY_CHARGE * HBAR / (2.0 * ELECTRON_MASS);
        assert!((derived / BOHR_MAGNETON - 1.0).abs() < 1e-9);
    }
}
