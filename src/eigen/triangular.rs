//! Solves with the supernodal factor L D Lᴴ for blocks of right-hand sides.
//!
//! The factor's own library solves column by column of the block; here the block lies row by row,
//! so one number of L, once fetched, serves all right-hand sides, and nothing is allocated or
//! permuted. Four columns of L are taken at a time (eight on the way back, to fill the pipeline).

use super::field::{Field, run};
use super::panel::Panel;

/// Where the pieces of a supernodal factor lie.
///
/// Supernode s holds columns `end[s-1]..end[s]`; its block of values, column by column, starts
/// at `value[s]` and has one row per own column, then one per entry of its pattern.
#[derive(Debug, Clone, Copy)]
pub(super) struct Layout<'a> {
    /// One past the last column of each supernode.
    pub end: &'a [u32],
    /// Start of each pattern in `rows`.
    pub pattern: &'a [u32],
    /// Row numbers below the diagonal blocks.
    pub rows: &'a [u32],
    /// Start of each block in the values.
    pub value: &'a [u32],
}

impl Layout<'_> {
    /// First and one past the last column of supernode `s`.
    #[inline(always)]
    pub fn columns(&self, s: usize) -> (usize, usize) {
        (
            if s == 0 { 0 } else { self.end[s - 1] as usize },
            self.end[s] as usize,
        )
    }
}

#[inline(always)]
fn columns<T, const G: usize>(block: &[T], high: usize, j: usize) -> [&[T]; G] {
    std::array::from_fn(|q| &block[(j + q) * high..(j + q + 1) * high])
}

/// Subtracts columns `j..j+G` of L times their unknowns from the rows below, within `x`.
#[inline(always)]
fn forward_group<T: Field, const B: usize, const G: usize>(
    fused: bool,
    block: &[T],
    high: usize,
    j: usize,
    x: &mut [T::Row<B>],
) {
    let l: [&[T]; G] = columns(block, high, j);
    for q in 0..G {
        for r in q + 1..G {
            let known = x[j + q];
            T::axpy(fused, &mut x[j + r], -l[q][j + r], &known);
        }
    }
    let known: [T::Row<B>; G] = std::array::from_fn(|q| x[j + q]);
    let x = &mut x[j + G..high];
    let l: [&[T]; G] = std::array::from_fn(|q| &l[q][j + G..high]);
    for i in 0..x.len() {
        let mut acc = x[i];
        for q in 0..G {
            T::axpy(fused, &mut acc, -l[q][i], &known[q]);
        }
        x[i] = acc;
    }
}

/// Finishes unknowns `j..j+G` of Lᴴ x = y from the rows below, within `x`.
#[inline(always)]
fn backward_group<T: Field, const B: usize, const G: usize>(
    fused: bool,
    block: &[T],
    high: usize,
    j: usize,
    x: &mut [T::Row<B>],
) {
    let l: [&[T]; G] = columns(block, high, j);
    let mut acc: [T::Row<B>; G] = std::array::from_fn(|q| x[j + q]);
    {
        let x = &x[j + G..high];
        let l: [&[T]; G] = std::array::from_fn(|q| &l[q][j + G..high]);
        for i in 0..x.len() {
            let known = x[i];
            for q in 0..G {
                T::axpy_conj(fused, &mut acc[q], -l[q][i], &known);
            }
        }
    }
    for q in (0..G).rev() {
        for r in q + 1..G {
            let known = acc[r];
            T::axpy_conj(fused, &mut acc[q], -l[q][j + r], &known);
        }
    }
    x[j..j + G].copy_from_slice(&acc);
}

#[inline(always)]
fn forward<T: Field, const B: usize>(
    fused: bool,
    l: Layout<'_>,
    values: &[T],
    x: &mut [T::Row<B>],
    work: &mut Vec<T::Row<B>>,
) {
    for s in 0..l.end.len() {
        let (a, b) = l.columns(s);
        let rows = &l.rows[l.pattern[s] as usize..l.pattern[s + 1] as usize];
        let (size, high) = (b - a, b - a + rows.len());
        let block = &values[l.value[s] as usize..l.value[s + 1] as usize];
        work.clear();
        work.extend_from_slice(&x[a..b]);
        work.resize(high, T::zeros::<B>());
        let mut j = 0;
        while j + 4 <= size {
            forward_group::<T, B, 4>(fused, block, high, j, work);
            j += 4;
        }
        while j < size {
            forward_group::<T, B, 1>(fused, block, high, j, work);
            j += 1;
        }
        // D is on the diagonal of the block; divide on the way out.
        for (j, (x, w)) in x[a..b].iter_mut().zip(work.iter()).enumerate() {
            *x = *w;
            T::stretch(x, 1.0 / block[j * high + j].re());
        }
        for (&i, w) in rows.iter().zip(&work[size..]) {
            T::axpy(fused, &mut x[i as usize], T::from_re(1.0), w);
        }
    }
}

#[inline(always)]
fn backward<T: Field, const B: usize>(
    fused: bool,
    l: Layout<'_>,
    values: &[T],
    x: &mut [T::Row<B>],
    work: &mut Vec<T::Row<B>>,
) {
    for s in (0..l.end.len()).rev() {
        let (a, b) = l.columns(s);
        let rows = &l.rows[l.pattern[s] as usize..l.pattern[s + 1] as usize];
        let (size, high) = (b - a, b - a + rows.len());
        let block = &values[l.value[s] as usize..l.value[s + 1] as usize];
        work.clear();
        work.extend_from_slice(&x[a..b]);
        work.extend(rows.iter().map(|&i| x[i as usize]));
        let mut j = size;
        // Eight accumulators of four lanes hide the latency of the additions; wider rows have
        // enough with four.
        let wide = B * if T::COMPLEX { 2 } else { 1 } <= 4;
        while wide && j >= 8 {
            j -= 8;
            backward_group::<T, B, 8>(fused, block, high, j, work);
        }
        while j >= 4 {
            j -= 4;
            backward_group::<T, B, 4>(fused, block, high, j, work);
        }
        while j >= 1 {
            j -= 1;
            backward_group::<T, B, 1>(fused, block, high, j, work);
        }
        x[a..b].copy_from_slice(&work[..size]);
    }
}

/// Solves L D Lᴴ x = b in place of `x`; `work` keeps its memory between calls.
pub(super) fn solve<T: Field, const B: usize>(
    layout: Layout<'_>,
    values: &[T],
    x: &mut Panel<T, B>,
    work: &mut Panel<T, B>,
) {
    run(
        #[inline(always)]
        |fused| {
            forward::<T, B>(fused, layout, values, x, work);
            backward::<T, B>(fused, layout, values, x, work);
        },
    );
}
