//! Points and boxes.

use std::ops::{Add, Mul, Neg, Sub};

/// A point, or a vector, of the plane.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Point {
    /// Abscissa.
    pub x: f64,
    /// Ordinate.
    pub y: f64,
}

/// Shorthand for [`Point`].
pub const fn pt(x: f64, y: f64) -> Point {
    Point { x, y }
}

impl Point {
    /// Scalar product.
    pub fn dot(self, o: Self) -> f64 {
        self.x * o.x + self.y * o.y
    }
    /// z component of the vector product.
    pub fn cross(self, o: Self) -> f64 {
        self.x * o.y - self.y * o.x
    }
    /// Euclidean length.
    pub fn norm(self) -> f64 {
        self.x.hypot(self.y)
    }
    /// The vector turned by +90°.
    pub fn left(self) -> Self {
        pt(-self.y, self.x)
    }
    /// Unit vector of the same direction; a zero vector stays zero.
    pub fn unit(self) -> Self {
        let n = self.norm();
        if n > 0.0 { self * (1.0 / n) } else { self }
    }
    /// The vector turned by the angle of the unit vector `e` (a product of complex numbers).
    pub fn turned(self, e: Self) -> Self {
        pt(self.x * e.x - self.y * e.y, self.x * e.y + self.y * e.x)
    }
    /// Mirror image in the x axis (the complex conjugate).
    pub fn conj(self) -> Self {
        pt(self.x, -self.y)
    }
    /// Angle of the vector, radians in (−π, π].
    pub fn angle(self) -> f64 {
        self.y.atan2(self.x)
    }
    /// Whether both coordinates are numbers.
    pub fn is_finite(self) -> bool {
        self.x.is_finite() && self.y.is_finite()
    }
    /// Coordinate 0 (x) or 1 (y).
    pub fn axis(self, axis: usize) -> f64 {
        if axis == 0 { self.x } else { self.y }
    }
    /// Unit vector of an angle in radians.
    pub fn polar(angle: f64) -> Self {
        pt(angle.cos(), angle.sin())
    }
}

impl Add for Point {
    type Output = Self;
    fn add(self, o: Self) -> Self {
        pt(self.x + o.x, self.y + o.y)
    }
}
impl Sub for Point {
    type Output = Self;
    fn sub(self, o: Self) -> Self {
        pt(self.x - o.x, self.y - o.y)
    }
}
impl Mul<f64> for Point {
    type Output = Self;
    fn mul(self, s: f64) -> Self {
        pt(self.x * s, self.y * s)
    }
}
impl Neg for Point {
    type Output = Self;
    fn neg(self) -> Self {
        pt(-self.x, -self.y)
    }
}

/// Unit vector of an angle, exact at the multiples of a right angle, so that turning by 90°
/// keeps upright edges upright.
pub(super) fn exact_polar(angle: f64) -> Point {
    let quarter = angle / std::f64::consts::FRAC_PI_2;
    let k = quarter.round();
    if (quarter - k).abs() > 4.0 * f64::EPSILON * k.abs().max(1.0) {
        return Point::polar(angle);
    }
    match k.rem_euclid(4.0) as u8 {
        0 => pt(1.0, 0.0),
        1 => pt(0.0, 1.0),
        2 => pt(-1.0, 0.0),
        _ => pt(0.0, -1.0),
    }
}

/// An axis-parallel box.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Box2 {
    /// Lower left.
    pub lo: Point,
    /// Upper right.
    pub hi: Point,
}

impl Box2 {
    /// The box that holds nothing.
    pub const EMPTY: Self = Self {
        lo: pt(f64::INFINITY, f64::INFINITY),
        hi: pt(f64::NEG_INFINITY, f64::NEG_INFINITY),
    };
    /// Grows the box to hold `p`.
    pub fn include(&mut self, p: Point) {
        self.lo = pt(self.lo.x.min(p.x), self.lo.y.min(p.y));
        self.hi = pt(self.hi.x.max(p.x), self.hi.y.max(p.y));
    }
    /// Width and height.
    pub fn size(&self) -> Point {
        self.hi - self.lo
    }
    /// Length of the diagonal.
    pub fn diagonal(&self) -> f64 {
        self.size().norm()
    }
    /// Centre.
    pub fn centre(&self) -> Point {
        (self.lo + self.hi) * 0.5
    }
    /// The box with `margin` added on every side.
    pub fn widened(&self, margin: f64) -> Self {
        let m = pt(margin, margin);
        Self {
            lo: self.lo - m,
            hi: self.hi + m,
        }
    }
    /// Whether the boxes share a point.
    pub fn meets(&self, o: &Self) -> bool {
        self.lo.x <= o.hi.x && o.lo.x <= self.hi.x && self.lo.y <= o.hi.y && o.lo.y <= self.hi.y
    }
    /// Whether `p` is in the closed box.
    pub fn holds(&self, p: Point) -> bool {
        self.lo.x <= p.x && p.x <= self.hi.x && self.lo.y <= p.y && p.y <= self.hi.y
    }
    /// Distance of `p` from the box, 0 inside.
    pub fn distance(&self, p: Point) -> f64 {
        let d = |lo: f64, v: f64, hi: f64| (lo - v).max(v - hi).max(0.0);
        d(self.lo.x, p.x, self.hi.x).hypot(d(self.lo.y, p.y, self.hi.y))
    }
}
