//! Sparse matrix times a block of vectors.

use super::Number;
use sprs::CsMat;

/// y = A x for `b` vectors stored one after the other.
pub fn multiply<T: Number>(a: &CsMat<T>, x: &[T], y: &mut [T], b: usize) {
    let n = a.rows();
    let starts = a.indptr();
    let starts = starts.raw_storage();
    let (columns, values) = (a.indices(), a.data());
    for c in 0..b {
        let (x, y) = (&x[c * n..(c + 1) * n], &mut y[c * n..(c + 1) * n]);
        for i in 0..n {
            let (s, e) = (starts[i], starts[i + 1]);
            y[i] = dot(&values[s..e], &columns[s..e], x);
        }
    }
}

#[inline]
fn dot<T: Number>(values: &[T], columns: &[usize], x: &[T]) -> T {
    // four sums, so that additions do not wait for each other
    let mut s = [T::default(); 4];
    let v = values.chunks_exact(4);
    let c = columns.chunks_exact(4);
    let rest: T = v
        .remainder()
        .iter()
        .zip(c.remainder())
        .map(|(v, &c)| *v * x[c])
        .sum();
    for (v, c) in v.zip(c) {
        s[0] += v[0] * x[c[0]];
        s[1] += v[1] * x[c[1]];
        s[2] += v[2] * x[c[2]];
        s[3] += v[3] * x[c[3]];
    }
    s[0] + s[1] + (s[2] + s[3]) + rest
}
