//! Blocks of `B` vectors (panels) and the dense products between them.

// Small triangular loops read like their formulas with indices, and like nothing with iterators.
#![allow(clippy::needless_range_loop)]

use super::field::{Field, run};

/// `B` vectors of equal length, stored row by row.
pub(super) type Panel<T, const B: usize> = Vec<<T as Field>::Row<B>>;
/// A `B`×`B` matrix, row by row.
pub(super) type Square<T, const B: usize> = [<T as Field>::Row<B>; B];

/// Rows worked on at a time, so that a piece of the changing panel stays in the first cache.
const CHUNK: usize = 256;

/// A `B`×`B` matrix of zeros.
#[inline(always)]
pub(super) fn square<T: Field, const B: usize>() -> Square<T, B> {
    [T::zeros::<B>(); B]
}

#[inline(always)]
fn gram_chunk<T: Field, const B: usize>(
    fused: bool,
    v: &[T::Row<B>],
    w: &[T::Row<B>],
    sum: &mut Square<T, B>,
) {
    let mut acc = *sum;
    for (v, w) in v.iter().zip(w) {
        for (a, acc) in acc.iter_mut().enumerate() {
            T::axpy_conj(fused, acc, T::at(v, a), w);
        }
    }
    *sum = acc;
}

#[inline(always)]
fn update_chunk<T: Field, const B: usize>(
    fused: bool,
    w: &mut [T::Row<B>],
    v: &[T::Row<B>],
    h: &Square<T, B>,
) {
    for (w, v) in w.iter_mut().zip(v) {
        let mut acc = *w;
        for (a, h) in h.iter().enumerate() {
            T::axpy(fused, &mut acc, T::at(v, a), h);
        }
        *w = acc;
    }
}

/// `vₖᴴ w` for every panel vₖ.
pub(super) fn gram<T: Field, const B: usize>(
    v: &[&Panel<T, B>],
    w: &Panel<T, B>,
) -> Vec<Square<T, B>> {
    run(
        #[inline(always)]
        |fused| {
            let mut sums = vec![square::<T, B>(); v.len()];
            let mut start = 0;
            while start < w.len() {
                let end = (start + CHUNK).min(w.len());
                for (v, sum) in v.iter().zip(&mut sums) {
                    gram_chunk::<T, B>(fused, &v[start..end], &w[start..end], sum);
                }
                start = end;
            }
            sums
        },
    )
}

/// `w += Σ vₖ hₖ`.
pub(super) fn update<T: Field, const B: usize>(
    w: &mut Panel<T, B>,
    v: &[&Panel<T, B>],
    h: &[Square<T, B>],
) {
    run(
        #[inline(always)]
        |fused| {
            let mut start = 0;
            while start < w.len() {
                let end = (start + CHUNK).min(w.len());
                for (v, h) in v.iter().zip(h) {
                    update_chunk::<T, B>(fused, &mut w[start..end], &v[start..end], h);
                }
                start = end;
            }
        },
    );
}

/// The negative of a square.
pub(super) fn negative<T: Field, const B: usize>(h: &Square<T, B>) -> Square<T, B> {
    let mut h = *h;
    for row in &mut h {
        T::stretch(row, -1.0);
    }
    h
}

/// `w ← w s`.
pub(super) fn times<T: Field, const B: usize>(w: &mut Panel<T, B>, s: &Square<T, B>) {
    run(
        #[inline(always)]
        |fused| {
            for w in w.iter_mut() {
                let mut acc = T::zeros::<B>();
                for (a, s) in s.iter().enumerate() {
                    T::axpy(fused, &mut acc, T::at(w, a), s);
                }
                *w = acc;
            }
        },
    );
}

/// Upper triangular R with RᴴR = `g` (Hermitian), or the first column whose pivot is not above
/// `floor` times its diagonal.
pub(super) fn cholesky<T: Field, const B: usize>(
    g: &Square<T, B>,
    floor: f64,
) -> Result<Square<T, B>, usize> {
    let mut r = square::<T, B>();
    for j in 0..B {
        let whole = T::at(&g[j], j).re();
        let mut pivot = whole;
        for k in 0..j {
            pivot -= T::at(&r[k], j).abs2();
        }
        // Written so that NaN fails too.
        if !(pivot > floor * whole.abs() && pivot.is_finite()) {
            return Err(j);
        }
        let d = pivot.sqrt();
        T::put(&mut r[j], j, T::from_re(d));
        for c in j + 1..B {
            let mut x = T::at(&g[j], c);
            for k in 0..j {
                x -= T::at(&r[k], j).conj() * T::at(&r[k], c);
            }
            T::put(&mut r[j], c, x.scale(1.0 / d));
        }
    }
    Ok(r)
}

/// The inverse of an upper triangular square.
pub(super) fn inverse<T: Field, const B: usize>(r: &Square<T, B>) -> Square<T, B> {
    let mut x = square::<T, B>();
    for c in 0..B {
        for i in (0..=c).rev() {
            let mut sum = T::from_re(if i == c { 1.0 } else { 0.0 });
            for k in i + 1..=c {
                sum -= T::at(&r[i], k) * T::at(&x[k], c);
            }
            T::put(&mut x[i], c, sum / T::at(&r[i], i));
        }
    }
    x
}

/// `a b`.
pub(super) fn product<T: Field, const B: usize>(
    a: &Square<T, B>,
    b: &Square<T, B>,
) -> Square<T, B> {
    let mut x = square::<T, B>();
    for (x, a) in x.iter_mut().zip(a) {
        for (k, b) in b.iter().enumerate() {
            T::axpy(false, x, T::at(a, k), b);
        }
    }
    x
}

/// `a += b`.
pub(super) fn accumulate<T: Field, const B: usize>(a: &mut Square<T, B>, b: &Square<T, B>) {
    for (a, b) in a.iter_mut().zip(b) {
        T::axpy(false, a, T::from_re(1.0), b);
    }
}
