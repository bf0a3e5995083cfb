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
}
