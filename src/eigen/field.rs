//! Scalars in bundles: one row of a block of `B` vectors, and the fused products on it.
//!
//! A block of vectors is stored row by row, so that one entry of a sparse matrix meets `B` numbers
//! that lie side by side. Complex rows keep real and imaginary parts apart: every product is then
//! a plain real one on `B` lanes, which compilers turn into vector instructions without help.

use super::factor::Factorable;
use crate::units::Scalar;
use num_complex::Complex64;
use std::fmt::Debug;

/// A scalar the eigenvalue solver can work with.
pub trait Field: Scalar + Factorable {
    /// One row of a block of `B` vectors.
    type Row<const B: usize>: Copy + Send + Sync + Debug + 'static;
    /// A row of zeros.
    fn zeros<const B: usize>() -> Self::Row<B>;
    /// Entry `c` of a row.
    fn at<const B: usize>(row: &Self::Row<B>, c: usize) -> Self;
    /// Sets entry `c` of a row.
    fn put<const B: usize>(row: &mut Self::Row<B>, c: usize, x: Self);
    /// `acc += a·x`; `fused` says that the machine has fused multiply-add.
    fn axpy<const B: usize>(fused: bool, acc: &mut Self::Row<B>, a: Self, x: &Self::Row<B>);
    /// `acc += conj(a)·x`.
    fn axpy_conj<const B: usize>(fused: bool, acc: &mut Self::Row<B>, a: Self, x: &Self::Row<B>);
    /// `row *= f`.
    fn stretch<const B: usize>(row: &mut Self::Row<B>, f: f64);
    /// The scalar with both parts given; the imaginary part is dropped in the real field.
    fn from_parts(re: f64, im: f64) -> Self;
}

/// `a·b + c`. The library routine behind `mul_add` is slow without the instruction.
#[inline(always)]
fn fma(fused: bool, a: f64, b: f64, c: f64) -> f64 {
    if fused { a.mul_add(b, c) } else { a * b + c }
}

impl Field for f64 {
    type Row<const B: usize> = [f64; B];

    #[inline(always)]
    fn zeros<const B: usize>() -> [f64; B] {
        [0.0; B]
    }
    #[inline(always)]
    fn at<const B: usize>(row: &[f64; B], c: usize) -> f64 {
        row[c]
    }
    #[inline(always)]
    fn put<const B: usize>(row: &mut [f64; B], c: usize, x: f64) {
        row[c] = x;
    }
    #[inline(always)]
    fn axpy<const B: usize>(fused: bool, acc: &mut [f64; B], a: f64, x: &[f64; B]) {
        for c in 0..B {
            acc[c] = fma(fused, a, x[c], acc[c]);
        }
    }
    #[inline(always)]
    fn axpy_conj<const B: usize>(fused: bool, acc: &mut [f64; B], a: f64, x: &[f64; B]) {
        Self::axpy(fused, acc, a, x);
    }
    #[inline(always)]
    fn stretch<const B: usize>(row: &mut [f64; B], f: f64) {
        for x in row {
            *x *= f;
        }
    }
    #[inline(always)]
    fn from_parts(re: f64, _im: f64) -> f64 {
        re
    }
}

impl Field for Complex64 {
    type Row<const B: usize> = [[f64; B]; 2];

    #[inline(always)]
    fn zeros<const B: usize>() -> [[f64; B]; 2] {
        [[0.0; B]; 2]
    }
    #[inline(always)]
    fn at<const B: usize>(row: &[[f64; B]; 2], c: usize) -> Complex64 {
        Complex64::new(row[0][c], row[1][c])
    }
    #[inline(always)]
    fn put<const B: usize>(row: &mut [[f64; B]; 2], c: usize, x: Complex64) {
        row[0][c] = x.re;
        row[1][c] = x.im;
    }
    #[inline(always)]
    fn axpy<const B: usize>(fused: bool, acc: &mut [[f64; B]; 2], a: Complex64, x: &[[f64; B]; 2]) {
        for c in 0..B {
            acc[0][c] = fma(fused, a.re, x[0][c], acc[0][c]);
            acc[1][c] = fma(fused, a.re, x[1][c], acc[1][c]);
        }
        for c in 0..B {
            acc[0][c] = fma(fused, -a.im, x[1][c], acc[0][c]);
            acc[1][c] = fma(fused, a.im, x[0][c], acc[1][c]);
        }
    }
    #[inline(always)]
    fn axpy_conj<const B: usize>(
        fused: bool,
        acc: &mut [[f64; B]; 2],
        a: Complex64,
        x: &[[f64; B]; 2],
    ) {
        Self::axpy(fused, acc, Complex64::new(a.re, -a.im), x);
    }
    #[inline(always)]
    fn stretch<const B: usize>(row: &mut [[f64; B]; 2], f: f64) {
        for part in row {
            for x in part {
                *x *= f;
            }
        }
    }
    #[inline(always)]
    fn from_parts(re: f64, im: f64) -> Complex64 {
        Complex64::new(re, im)
    }
}

/// Runs a kernel compiled for the best instructions of this machine; the kernel is told whether
/// fused multiply-add is among them. Kernels must be `#[inline(always)]` down to the last loop.
#[inline(always)]
pub(super) fn run<R>(kernel: impl FnOnce(bool) -> R) -> R {
    match pulp::Arch::new() {
        pulp::Arch::Scalar => kernel(false),
        arch => arch.dispatch(
            #[inline(always)]
            || kernel(true),
        ),
    }
}
