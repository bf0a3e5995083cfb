//! Plain solves with one Hermitian matrix, and its inertia.

use super::EigenError;
use super::factor::{Factor, Symbolic};
use super::field::Field;
use super::levels::gather;
use super::panel::Panel;
use super::pencil::{Pattern, Pencil};
use crate::progress::shared;
use sprs::CsMat;

/// Vectors solved for at a time.
const B: usize = 8;
/// Unknowns times vectors a thread takes at least.
const WORTH: usize = 16_384;

/// Factorises `k` (by rows, both triangles stored) and lends its inverse to `work`, which gets
/// the number of negative eigenvalues and a solver that overwrites `count` right-hand sides,
/// stored one after the other, with the solutions.
///
/// # Errors
/// Those of a matrix that is not finite or not Hermitian; [`EigenError::TooLarge`] when the
/// factor would take more than `memory` bytes; [`EigenError::Unstable`] for a singular matrix.
pub fn with_inverse<T: Field, R>(
    k: &CsMat<T>,
    places: &[[f64; 2]],
    memory: u64,
    work: impl FnOnce(usize, &mut dyn FnMut(&mut [T], usize)) -> R,
) -> Result<R, EigenError> {
    let n = k.rows();
    let one = CsMat::new(
        (n, n),
        (0..=n).collect(),
        (0..n).collect::<Vec<_>>(),
        vec![T::from_re(1.0); n],
    );
    let pattern = Pattern::new(k, &one, places, 0)?;
    let symbolic = Symbolic::new(&pattern)?;
    let needed = (symbolic.length() * size_of::<T>()) as u64;
    if needed > memory {
        return Err(EigenError::TooLarge {
            needed,
            limit: memory,
        });
    }
    let pencil = Pencil::new(&pattern, k, &one)?;
    let mut factor = Factor::<T>::new(&symbolic);
    factor.at(&pencil, 0.0)?;
    let mut solve = |x: &mut [T], count: usize| {
        let groups: Vec<&[T]> = x[..count * n].chunks(B * n).collect();
        // a thread is not worth less than a millisecond
        let stretch = (WORTH / (n * B)).max(1);
        let solved = shared(&groups, stretch, |groups| {
            let solve = |group: &&[T]| {
                let inward: Vec<Vec<T>> = group.chunks(n).map(|x| pencil.inward(x)).collect();
                let mut panel: Panel<T, B> = gather(n, inward.iter().map(Vec::as_slice));
                factor.solve(&mut panel, &mut Vec::new());
                panel
            };
            groups.iter().map(solve).collect::<Vec<_>>()
        });
        let solved = solved.iter().flatten();
        for (panel, group) in solved.zip(x[..count * n].chunks_mut(B * n)) {
            for (c, x) in group.chunks_mut(n).enumerate() {
                for (&i, row) in pattern.order.iter().zip(panel) {
                    x[i as usize] = T::at(row, c);
                }
            }
        }
    };
    Ok(work(factor.below, &mut solve))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn solves_and_counts() {
        // Tridiagonal −1, d, −1: eigenvalues d − 2 cos(jπ/(n+1)).
        let n = 50;
        let d = 0.3;
        let mut k = sprs::TriMat::new((n, n));
        for i in 0..n {
            k.add_triplet(i, i, d);
            if i + 1 < n {
                k.add_triplet(i, i + 1, -1.0);
                k.add_triplet(i + 1, i, -1.0);
            }
        }
        let k: CsMat<f64> = k.to_csr();
        let places: Vec<_> = (0..n).map(|i| [i as f64, 0.0]).collect();
        let angle = |j: usize| std::f64::consts::PI * j as f64 / (n as f64 + 1.0);
        let negative = (1..=n).filter(|&j| d < 2.0 * angle(j).cos()).count();
        let count = 11;
        let b: Vec<f64> = (0..count * n).map(|i| (i as f64).sin()).collect();
        let mut x = b.clone();
        let below = with_inverse(&k, &places, u64::MAX, |below, solve| {
            solve(&mut x, count);
            below
        })
        .expect("the matrix is regular");
        assert_eq!(below, negative);
        for (b, x) in b.chunks(n).zip(x.chunks(n)) {
            for (i, row) in k.outer_iterator().enumerate() {
                let kx: f64 = row.iter().map(|(j, v)| v * x[j]).sum();
                assert!((kx - b[i]).abs() < 1e-10);
            }
        }
    }
}
