//! The field a problem lives in: real without a magnetic field, complex with one.

use num_complex::Complex64;
use std::fmt::Debug;
use std::iter::Sum;
use std::ops::{Add, AddAssign, Div, Mul, MulAssign, Neg, Sub, SubAssign};

/// A real or complex double: what stiffness matrices and modes are made of.
pub trait Scalar:
    Copy
    + Debug
    + Default
    + PartialEq
    + Send
    + Sync
    + 'static
    + Add<Output = Self>
    + Sub<Output = Self>
    + Mul<Output = Self>
    + Div<Output = Self>
    + Neg<Output = Self>
    + AddAssign
    + SubAssign
    + MulAssign
    + Sum
{
    /// True for the complex field.
    const COMPLEX: bool;
    /// The scalar with this real part and no imaginary part.
    fn from_re(x: f64) -> Self;
    /// Complex conjugate.
    fn conj(self) -> Self;
    /// Real part.
    fn re(self) -> f64;
    /// Imaginary part; zero in the real field.
    fn im(self) -> f64;
    /// Square of the modulus.
    fn abs2(self) -> f64;
    /// This scalar times a real number.
    fn scale(self, x: f64) -> Self;
    /// Modulus.
    fn abs(self) -> f64 {
        self.abs2().sqrt()
    }
}

impl Scalar for f64 {
    const COMPLEX: bool = false;
    fn from_re(x: f64) -> Self {
        x
    }
    fn conj(self) -> Self {
        self
    }
    fn re(self) -> f64 {
        self
    }
    fn im(self) -> f64 {
        0.0
    }
    fn abs2(self) -> f64 {
        self * self
    }
    fn scale(self, x: f64) -> Self {
        self * x
    }
}

impl Scalar for Complex64 {
    const COMPLEX: bool = true;
    fn from_re(x: f64) -> Self {
        Complex64::new(x, 0.0)
    }
    fn conj(self) -> Self {
        Complex64::conj(&self)
    }
    fn re(self) -> f64 {
        self.re
    }
    fn im(self) -> f64 {
        self.im
    }
    fn abs2(self) -> f64 {
        self.norm_sqr()
    }
    fn scale(self, x: f64) -> Self {
        self * x
    }
}
