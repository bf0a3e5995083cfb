//! Effective masses, g factors and permittivities of common hosts of lateral structures.
//!
//! A parabolic, isotropic in-plane band is assumed throughout: E = ħ²k²/2m. In narrow-gap hosts
//! (InSb, InAs) the band is not parabolic beyond some ten meV, and levels there come out high.

/// A host material, or a surface state.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Material {
    /// The name a document uses.
    pub name: &'static str,
    /// Effective mass of the in-plane motion, electron masses.
    pub mass: f64,
    /// Effective g factor at the band edge.
    pub g: Option<f64>,
    /// Static relative permittivity.
    pub permittivity: Option<f64>,
    /// Where the mass comes from, and what to be careful with.
    pub source: &'static str,
}

const VURGAFTMAN: &str = "mass: Vurgaftman, Meyer & Ram-Mohan, J. Appl. Phys. 89, 5815 (2001); all three quoted from memory";
const REINERT: &str = "Reinert, Nicolay, Schmidt, Ehm & Hüfner, Phys. Rev. B 63, 115415 (2001), surface state measured by photoemission; quoted from memory";

/// The built-in table, by name.
pub const MATERIALS: [Material; 12] = [
    semiconductor("GaAs", 0.067, -0.44, 12.9, VURGAFTMAN),
    semiconductor("InAs", 0.026, -14.9, 15.15, VURGAFTMAN),
    semiconductor("InSb", 0.0135, -51.0, 16.8, VURGAFTMAN),
    semiconductor("InP", 0.0795, 1.26, 12.5, VURGAFTMAN),
    semiconductor(
        "In0.53Ga0.47As",
        0.043,
        -4.5,
        13.9,
        "mass: interpolated with bowing 0.0091 after Vurgaftman, Meyer & Ram-Mohan, J. Appl. Phys. 89, 5815 (2001); g and permittivity quoted from memory",
    ),
    semiconductor(
        "GaN",
        0.20,
        1.95,
        9.5,
        "wurtzite, c plane; mass: Vurgaftman, Meyer & Ram-Mohan, J. Appl. Phys. 89, 5815 (2001); g and permittivity quoted from memory",
    ),
    semiconductor(
        "Si(100)",
        0.19,
        2.0,
        11.7,
        "transverse mass of the two low valleys of a (100) layer: Ando, Fowler & Stern, Rev. Mod. Phys. 54, 437 (1982); valley splitting left out; quoted from memory",
    ),
    semiconductor(
        "Ge(111)",
        0.082,
        1.6,
        16.2,
        "transverse mass of the single low L valley of a (111) layer: Ando, Fowler & Stern, Rev. Mod. Phys. 54, 437 (1982); quoted from memory",
    ),
    surface("Cu(111)", 0.412, REINERT),
    surface("Ag(111)", 0.397, REINERT),
    surface(
        "Au(111)",
        0.255,
        "Reinert, Nicolay, Schmidt, Ehm & Hüfner, Phys. Rev. B 63, 115415 (2001), mean of the two spin-split branches; spin-orbit splitting left out; quoted from memory",
    ),
    surface("free", 1.0, "electron mass, CODATA 2022"),
];

const fn semiconductor(
    name: &'static str,
    mass: f64,
    g: f64,
    permittivity: f64,
    source: &'static str,
) -> Material {
    Material {
        name,
        mass,
        g: Some(g),
        permittivity: Some(permittivity),
        source,
    }
}

const fn surface(name: &'static str, mass: f64, source: &'static str) -> Material {
    Material {
        name,
        mass,
        g: None,
        permittivity: None,
        source,
    }
}

/// The material of that name; capitals do not count.
pub fn material(name: &str) -> Option<&'static Material> {
    MATERIALS.iter().find(|m| m.name.eq_ignore_ascii_case(name))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_material_is_physical_and_has_a_source() {
        for m in &MATERIALS {
            assert!(m.mass > 0.01 && m.mass <= 1.0, "{}", m.name);
            assert!(
                m.permittivity.is_none_or(|e| e > 1.0 && e < 20.0),
                "{}",
                m.name
            );
            assert!(m.source.len() > 20);
            assert_eq!(material(&m.name.to_lowercase()), Some(m));
        }
        assert_eq!(material("cheese"), None);
    }
}
