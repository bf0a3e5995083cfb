//! The simple shapes.

use super::error::GeometryError;
use super::outline::{Loop, Outline};
use super::piece::Piece;
use super::point::{Point, exact_polar, pt};
use super::similarity::Similarity;
use std::f64::consts::{FRAC_PI_2, PI, TAU};

/// A size must be a positive number.
fn positive(what: &'static str, value: f64) -> Result<(), GeometryError> {
    if value > 0.0 && value.is_finite() {
        Ok(())
    } else {
        Err(GeometryError::NotPositive { what, value })
    }
}

fn finite(what: &str, values: &[f64]) -> Result<(), GeometryError> {
    if values.iter().all(|v| v.is_finite()) {
        Ok(())
    } else {
        Err(GeometryError::NotFinite {
            what: what.to_string(),
        })
    }
}

impl Outline {
    /// An outline of one loop.
    pub fn single(pieces: Vec<Piece>) -> Self {
        Self {
            loops: vec![Loop { pieces }],
        }
    }

    /// A disc.
    pub fn disc(centre: Point, radius: f64) -> Result<Self, GeometryError> {
        finite("the centre", &[centre.x, centre.y])?;
        positive("the radius", radius)?;
        Ok(Self::single(vec![Piece::arc(centre, radius, 0.0, TAU)]))
    }

    /// An ellipse; `turn` is the angle of its first axis, radians.
    pub fn ellipse(centre: Point, half_axes: Point, turn: f64) -> Result<Self, GeometryError> {
        finite("the centre or the turn", &[centre.x, centre.y, turn])?;
        positive("the first half axis", half_axes.x)?;
        positive("the second half axis", half_axes.y)?;
        if half_axes.x == half_axes.y {
            return Self::disc(centre, half_axes.x);
        }
        Ok(Self::single(vec![Piece::Ellipse {
            centre,
            half_axes,
            turn,
            start: 0.0,
            sweep: TAU,
        }]))
    }

    /// An axis-parallel rectangle from its lower left corner.
    pub fn rectangle(corner: Point, size: Point) -> Result<Self, GeometryError> {
        finite("the corner", &[corner.x, corner.y])?;
        positive("the width", size.x)?;
        positive("the height", size.y)?;
        let (a, c) = (corner, corner + size);
        let v = [a, pt(c.x, a.y), c, pt(a.x, c.y)];
        Ok(Self::single(
            (0..4).map(|k| Piece::line(v[k], v[(k + 1) % 4])).collect(),
        ))
    }

    /// A sector of a disc from one angle counter-clockwise to another, radians.
    pub fn sector(centre: Point, radius: f64, from: f64, to: f64) -> Result<Self, GeometryError> {
        finite("the centre or an angle", &[centre.x, centre.y, from, to])?;
        positive("the radius", radius)?;
        let sweep = to - from;
        if sweep <= 0.0 || sweep > TAU * (1.0 + 1e-12) {
            return Err(GeometryError::Sizes(format!(
                "the sector runs from {}° to {}°; the second angle must be larger, by at most 360°",
                from.to_degrees(),
                to.to_degrees()
            )));
        }
        if sweep > TAU * (1.0 - 1e-12) {
            return Self::disc(centre, radius);
        }
        let (a, b) = (exact_polar(from) * radius, exact_polar(to) * radius);
        Ok(Self::single(vec![
            Piece::line(centre, centre + a),
            Piece::arc(centre, radius, from, sweep),
            Piece::line(centre + b, centre),
        ]))
    }

    /// A disc with a concentric hole.
    pub fn ring(centre: Point, inner: f64, outer: f64) -> Result<Self, GeometryError> {
        let mut out = Self::disc(centre, outer)?;
        positive("the inner radius", inner)?;
        if inner >= outer {
            return Err(GeometryError::Sizes(format!(
                "the inner radius {inner} of the ring must be smaller than the outer one, {outer}"
            )));
        }
        let pieces = vec![Piece::arc(centre, inner, 0.0, -TAU)];
        out.loops.push(Loop { pieces });
        Ok(out)
    }

    /// A stadium: two half discs and a straight stretch of length `straight` between them, along
    /// `turn` radians.
    pub fn stadium(
        centre: Point,
        radius: f64,
        straight: f64,
        turn: f64,
    ) -> Result<Self, GeometryError> {
        finite("the centre or the turn", &[centre.x, centre.y, turn])?;
        positive("the radius", radius)?;
        if straight == 0.0 {
            return Self::disc(centre, radius);
        }
        positive("the straight stretch", straight)?;
        let h = 0.5 * straight;
        let pieces = vec![
            Piece::line(pt(-h, -radius), pt(h, -radius)),
            Piece::arc(pt(h, 0.0), radius, -FRAC_PI_2, PI),
            Piece::line(pt(h, radius), pt(-h, radius)),
            Piece::arc(pt(-h, 0.0), radius, FRAC_PI_2, PI),
        ];
        let place = Similarity::turned(pt(0.0, 0.0), turn).then(&Similarity::moved(centre));
        Ok(Self::single(pieces).transformed(&place))
    }

    /// The image under a similarity; a mirror keeps the material on the left.
    pub fn transformed(&self, by: &Similarity) -> Self {
        let loops = self.loops.iter().map(|l| {
            let l = Loop {
                pieces: l.pieces.iter().map(|p| p.transformed(by)).collect(),
            };
            if by.mirror { l.reversed() } else { l }
        });
        Self {
            loops: loops.collect(),
        }
    }
}
