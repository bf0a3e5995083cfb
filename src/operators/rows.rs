//! Sums of rows, the inner loops of assembly: inlined, so that callers' vector units are used.

/// Adds Σ_k a_k x_k to a row, four rows at a time; row k starts at `k * stride`.
#[inline(always)]
pub(super) fn sum_rows(to: &mut [f64], factors: &[f64], rows: &[f64], stride: usize) {
    let n = to.len();
    let mut k = 0;
    while k + 4 <= factors.len() {
        let f = &factors[k..k + 4];
        let (a, b) = (&rows[k * stride..][..n], &rows[(k + 1) * stride..][..n]);
        let (c, d) = (
            &rows[(k + 2) * stride..][..n],
            &rows[(k + 3) * stride..][..n],
        );
        for (i, t) in to.iter_mut().enumerate() {
            *t += f[0] * a[i] + f[1] * b[i] + f[2] * c[i] + f[3] * d[i];
        }
        k += 4;
    }
    while k < factors.len() {
        axpy(to, factors[k], &rows[k * stride..][..n]);
        k += 1;
    }
}

/// Adds f·x to a row.
#[inline(always)]
pub(super) fn axpy(to: &mut [f64], f: f64, x: &[f64]) {
    for (t, x) in to.iter_mut().zip(x) {
        *t += f * x;
    }
}
