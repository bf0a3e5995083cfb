//! Where the density of a mode sits, in a few numbers.

use super::plate::inside;
use crate::geometry::{Box2, Point};
use crate::modes::{Modes, Raster};

/// Samples along the longer side: a mode with twenty half waves still has ten samples in each.
const FINE: usize = 200;

/// Figures of one mode's density.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Portrait {
    /// Mean place.
    pub centroid: Point,
    /// Root of the mean square distance from it.
    pub spread: f64,
    /// Share left of the middle of the outline's box.
    pub left: f64,
    /// Share below the middle of the outline's box.
    pub lower: f64,
    /// Participation area 1/∫|ψ|⁴ (R. J. Bell and P. Dean, 1970, for areas).
    pub area: f64,
}

/// Measures mode `mode` (from 0) within closed polylines; `None` for a mode that is 0 everywhere.
pub fn portrait(modes: &Modes, mode: usize, lines: &[Vec<Point>]) -> Option<Portrait> {
    let bounds = modes.outline().bounds();
    let raster = fine_raster(bounds)?;
    let values = modes.sample(mode, &raster);
    let within = inside(lines, &raster);
    let middle = bounds.centre();
    let cell = raster.step.x * raster.step.y;
    let (mut mass, mut fourth, mut left, mut lower) = (0.0, 0.0, 0.0, 0.0);
    let (mut mean, mut square) = (Point::default(), 0.0);
    for (k, _) in within.iter().enumerate().filter(|w| *w.1) {
        let d = values[k] * values[k];
        let (i, j) = (k % raster.width, k / raster.width);
        // offsets from the middle keep far-off outlines exact
        let p = Point {
            x: raster.origin.x - middle.x + raster.step.x * i as f64,
            y: raster.origin.y - middle.y + raster.step.y * j as f64,
        };
        mass += d;
        fourth += d * d;
        mean = mean + p * d;
        square += d * p.dot(p);
        left += d * share_below(p.x / raster.step.x);
        lower += d * share_below(p.y / raster.step.y);
    }
    if mass <= 0.0 || !mass.is_finite() {
        return None;
    }
    let mean = mean * (1.0 / mass);
    Some(Portrait {
        centroid: middle + mean,
        spread: (square / mass - mean.dot(mean)).max(0.0).sqrt(),
        left: left / mass,
        lower: lower / mass,
        area: mass * mass * cell / fourth,
    })
}

/// How much of a sample's cell lies below zero, its centre being `x` cells from there.
fn share_below(x: f64) -> f64 {
    (0.5 - x).clamp(0.0, 1.0)
}

fn fine_raster(bounds: Box2) -> Option<Raster> {
    let size = bounds.size();
    let longer = size.x.max(size.y);
    if !longer.is_finite() || size.x <= 0.0 || size.y <= 0.0 {
        return None;
    }
    let count = |side: f64| ((side / longer * FINE as f64).ceil() as usize).max(8);
    let (width, height) = (count(size.x), count(size.y));
    let step = Point {
        x: size.x / width as f64,
        y: size.y / height as f64,
    };
    Some(Raster {
        origin: bounds.lo + step * 0.5,
        step,
        width,
        height,
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::geometry::Outline;
    use crate::progress::Watch;
    use crate::spectrum::{Model, Wanted, solve};

    #[test]
    fn a_box_mode_has_its_closed_figures() {
        // ψ = 2/√(ab) sin(2πx/a) sin(πy/b): 1/∫ψ⁴ = (4/9) ab; ⟨x²⟩ = a²(1/12 − 1/(2π²n²))
        let (a, b) = (3.0, 2.0);
        let at = |x, y| Point { x, y };
        let corners = [
            at(1.0, 1.0),
            at(1.0 + a, 1.0),
            at(1.0 + a, 1.0 + b),
            at(1.0, 1.0 + b),
        ];
        let wanted = Wanted {
            count: 3,
            ..Wanted::default()
        };
        let outline = Outline::polygon(&corners).expect("a rectangle");
        let found = solve(&Model::hard(outline.clone(), 1.0), &wanted, &Watch::quiet())
            .expect("a rectangle");
        // the levels are ordered (1,1), (2,1), (1,2)
        let p = portrait(&found.modes, 1, &[corners.to_vec()]).expect("there is a mode");
        let pi2 = std::f64::consts::PI.powi(2);
        let spread = (a * a * (1.0 / 12.0 - 1.0 / (8.0 * pi2))
            + b * b * (1.0 / 12.0 - 1.0 / (2.0 * pi2)))
            .sqrt();
        // midpoint sums over 200 samples of smooth functions that vanish at the wall: 1e-4
        assert!((p.area - 4.0 / 9.0 * a * b).abs() < 1e-4, "{}", p.area);
        assert!((p.spread - spread).abs() < 1e-4, "{} {spread}", p.spread);
        assert!((p.left - 0.5).abs() < 1e-6 && (p.lower - 0.5).abs() < 1e-6);
        assert!((p.centroid.x - 2.5).abs() < 1e-6 && (p.centroid.y - 2.0).abs() < 1e-6);
    }
}
