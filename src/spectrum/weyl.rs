//! Weyl's two-term law with hard walls: N(λ) ≈ Aλ/4π − L√λ/4π (Weyl 1911; for the perimeter term
//! Ivrii 1980).

use std::f64::consts::PI;

/// Mean number of levels below λ on an outline of this area and perimeter.
pub fn count(area: f64, perimeter: f64, lambda: f64) -> f64 {
    ((area * lambda - perimeter * lambda.max(0.0).sqrt()) / (4.0 * PI)).max(0.0)
}

/// The λ below which `n` levels are expected.
pub fn level(area: f64, perimeter: f64, n: f64) -> f64 {
    // A k² − L k − 4πn = 0
    let k = (perimeter + (perimeter * perimeter + 16.0 * PI * area * n).sqrt()) / (2.0 * area);
    k * k
}
