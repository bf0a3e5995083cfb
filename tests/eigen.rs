//! The eigenvalue solver against closed forms, dense solutions and its own promises.
// Textbook loops of an independent check are read beside the textbook.
#![allow(clippy::unwrap_used, clippy::needless_range_loop)]

#[path = "common/pencils.rs"]
mod pencils;

use dotwright::eigen::{
    EigenError, Field, Found, Plan, Problem, Settings, Window, count_below, draft, solve,
    solve_with,
};
use dotwright::progress::{Step, Watch};
use num_complex::Complex64;
use pencils::{Pencil, five_point, random, square, square_levels, torus};
use sprs::CsMat;
use std::sync::{Arc, Mutex};

fn lowest<T: Field>(pencil: &Pencil<T>, count: usize) -> Found<T> {
    solve(
        &pencil.problem(),
        &Settings::new(Window::Lowest(count)),
        &Watch::quiet(),
    )
    .unwrap()
}

/// Every promise of a result that can be checked from outside.
fn check<T: Field>(pencil: &Pencil<T>, found: &Found<T>, tolerance: f64) {
    assert!(found.count.complete, "{:?}", found.count);
    assert_eq!(found.count.below, found.count.found);
    assert!(found.count.backward <= 1e-11);
    assert!(found.values.windows(2).all(|w| w[0] <= w[1]));
    let mass: Vec<Vec<T>> = found
        .vectors
        .iter()
        .map(|x| times(&pencil.mass, x))
        .collect();
    for (i, x) in found.vectors.iter().enumerate() {
        let kx = times(&pencil.stiffness, x);
        let mut r = 0.0;
        for j in 0..x.len() {
            let d = kx[j] - mass[i][j].scale(found.values[i]);
            r += d.abs2() / pencil.mass.get(j, j).unwrap().re();
        }
        // The reported residual is the true one, to rounding of the products.
        let r = r.sqrt() / found.values[i].abs();
        assert!(
            (r - found.residuals[i]).abs() <= 1e-3 * r + 1e-10,
            "{r} {}",
            found.residuals[i]
        );
        // The norm of diag(M)⁻¹ may exceed the one the iteration judges by; not by much.
        assert!(r <= 30.0 * tolerance, "residual {i}: {r:e}");
        for j in 0..=i {
            let dot: T = mass[i]
                .iter()
                .zip(&found.vectors[j])
                .map(|(&a, &b)| b.conj() * a)
                .sum();
            let expected = T::from_re(if i == j { 1.0 } else { 0.0 });
            // Within a slice to rounding; across slices to the tolerance, over the relative gap.
            assert!((dot - expected).abs() < tolerance, "{i} {j}: {dot:?}");
        }
    }
}

fn times<T: Field>(a: &CsMat<T>, x: &[T]) -> Vec<T> {
    a.outer_iterator()
        .map(|row| row.iter().map(|(j, &v)| v * x[j]).sum())
        .collect()
}

/// All levels of a small pencil by the solver's dense way (itself checked against Jacobi below).
fn all_levels<T: Field>(pencil: &Pencil<T>) -> Vec<f64> {
    lowest(pencil, pencil.stiffness.rows()).values
}

/// Eigenvalues of a real symmetric pencil by Cholesky and Jacobi rotations: slow and independent.
fn jacobi(pencil: &Pencil<f64>) -> Vec<f64> {
    let n = pencil.stiffness.rows();
    let dense = |a: &CsMat<f64>| -> Vec<Vec<f64>> {
        (0..n)
            .map(|i| {
                (0..n)
                    .map(|j| a.get(i, j).copied().unwrap_or(0.0))
                    .collect()
            })
            .collect()
    };
    let (mut a, m) = (dense(&pencil.stiffness), dense(&pencil.mass));
    let mut l = vec![vec![0.0; n]; n];
    for i in 0..n {
        for j in 0..=i {
            let s: f64 = m[i][j] - (0..j).map(|k| l[i][k] * l[j][k]).sum::<f64>();
            l[i][j] = if i == j { s.sqrt() } else { s / l[j][j] };
        }
    }
    for _ in 0..2 {
        for c in 0..n {
            for i in 0..n {
                let s: f64 = a[i][c] - (0..i).map(|k| l[i][k] * a[k][c]).sum::<f64>();
                a[i][c] = s / l[i][i];
            }
        }
        let t = a.clone();
        for i in 0..n {
            for j in 0..n {
                a[i][j] = t[j][i];
            }
        }
    }
    for _ in 0..40 {
        for p in 0..n {
            for q in p + 1..n {
                if a[p][q].abs() < 1e-300 {
                    continue;
                }
                let tau = (a[q][q] - a[p][p]) / (2.0 * a[p][q]);
                let t = tau.signum() / (tau.abs() + (1.0 + tau * tau).sqrt());
                let c = (1.0 + t * t).sqrt().recip();
                let s = t * c;
                for row in a.iter_mut() {
                    (row[p], row[q]) = (c * row[p] - s * row[q], s * row[p] + c * row[q]);
                }
                for k in 0..n {
                    (a[p][k], a[q][k]) = (c * a[p][k] - s * a[q][k], s * a[p][k] + c * a[q][k]);
                }
            }
        }
    }
    let mut d: Vec<f64> = (0..n).map(|i| a[i][i]).collect();
    d.sort_by(f64::total_cmp);
    d
}

fn close(found: &[f64], exact: &[f64], relative: f64) {
    for (i, (a, b)) in found.iter().zip(exact).enumerate() {
        assert!(
            (a - b).abs() <= relative * b.abs().max(1e-3),
            "level {}: {a} for {b}",
            i + 1
        );
    }
}

#[test]
fn the_square_with_its_degeneracies() {
    // Error of splines of degree p at √λ h: c(h√λ)^2p, far below these bounds.
    for (p, cells, count, bound) in [
        (3, 8, 4, 2e-4),
        (3, 31, 20, 2e-6),
        (5, 29, 50, 1e-7),
        (3, 62, 50, 2e-6),
    ] {
        let pencil = square(p, cells);
        let found = lowest(&pencil, count);
        check(&pencil, &found, 1e-7);
        close(&found.values, &square_levels(count), bound);
        assert_eq!(found.first_index, 1);
    }
}

#[test]
fn a_group_cut_by_the_windows_end_is_told() {
    let pencil = square(5, 29);
    // 2: the lower of the pair 5π²; the other must be told as beyond.
    let found = lowest(&pencil, 2);
    assert_eq!(found.values.len(), 2);
    assert_eq!(found.beyond.len(), 1);
    assert!((found.beyond[0] / found.values[1] - 1.0).abs() < 1e-9);
    assert_eq!(found.count.below, 3);
    assert!(found.count.complete);
    // 3 closes the pair: nothing beyond.
    assert!(lowest(&pencil, 3).beyond.is_empty());
}

#[test]
fn random_pairs_against_jacobi() {
    for seed in 1..=4 {
        for definite in [true, false] {
            let pencil = random(60, 4, definite, seed);
            let exact = jacobi(&pencil);
            let found = lowest(&pencil, 60);
            check(&pencil, &found, 1e-7);
            close(&found.values, &exact, 1e-10);
        }
    }
}

#[test]
fn random_sparse_pairs_against_dense() {
    for seed in 1..=3 {
        for definite in [true, false] {
            let pencil = random(400, 3, definite, seed);
            let all = all_levels(&pencil);
            for count in [1, 7, 40] {
                let found = lowest(&pencil, count);
                check(&pencil, &found, 1e-7);
                close(&found.values, &all, 1e-9);
            }
        }
    }
}

#[test]
fn windows_in_the_middle_of_the_spectrum() {
    let pencil = square(3, 31);
    let exact = lowest(&pencil, 120).values;
    for (value, count) in [(19.0, 5), (300.0, 12), (1000.0, 30), (exact[40], 9)] {
        let window = Window::From { value, count };
        let found = solve(&pencil.problem(), &Settings::new(window), &Watch::quiet()).unwrap();
        check(&pencil, &found, 1e-7);
        let first = exact.iter().filter(|&&x| x < value * (1.0 - 1e-9)).count();
        assert_eq!(found.first_index, first + 1);
        close(&found.values, &exact[first..], 1e-9);
        assert_eq!(found.values.len(), count);
    }
}

#[test]
fn a_lattice_in_a_field() {
    // 18×18 cells, 6 quanta: 324 unknowns, groups of six.
    let pencil = torus(18, 18, 6);
    let all = all_levels(&pencil);
    let found = lowest(&pencil, 40);
    check(&pencil, &found, 1e-7);
    close(&found.values, &all, 1e-9);
    for group in found.values[..36].chunks(6) {
        assert!((group[5] - group[0]).abs() < 1e-9, "{group:?}");
    }
}

#[test]
fn a_highly_degenerate_landau_level() {
    // 24 quanta on 24×24: the lowest level has 24 copies, far more than a block holds.
    let pencil = torus(24, 24, 24);
    let found = lowest(&pencil, 30);
    check(&pencil, &found, 1e-7);
    assert!((found.values[23] - found.values[0]).abs() < 1e-9);
    assert!(found.values[24] - found.values[0] > 0.05);
    // The window ends inside the second group: the rest of it is beyond.
    assert_eq!(found.values.len() + found.beyond.len(), 48);
    close(&found.values, &all_levels(&pencil), 1e-9);
}

#[test]
fn many_levels_in_slices() {
    let pencil = square(3, 50);
    let found = lowest(&pencil, 400);
    assert!(found.count.complete);
    assert_eq!(found.values.len(), 400);
    check(&pencil, &found, 1e-7);
    // Level 400 has h√λ = 1.4: 2e-2 is what c(h√λ)^6 leaves there; the first must be fine.
    close(&found.values, &square_levels(400), 2e-2);
    close(&found.values[..50], &square_levels(50), 1e-6);
}

#[test]
fn differences_and_a_hint_that_is_wrong() {
    let pencil = five_point(40, 37);
    let level = |i: usize, n: usize| {
        (std::f64::consts::PI * i as f64 / (2.0 * (n as f64 + 1.0)))
            .sin()
            .powi(2)
    };
    let mut exact: Vec<f64> = (1..=40)
        .flat_map(|i| (1..=37).map(move |j| level(i, 40) + level(j, 37)))
        .collect();
    exact.sort_by(f64::total_cmp);
    for guess in [None, Some(1e-9), Some(1e6), Some(-5.0), Some(exact[24])] {
        let mut settings = Settings::new(Window::Lowest(25));
        settings.guess = guess;
        let found = solve(&pencil.problem(), &settings, &Watch::quiet()).unwrap();
        check(&pencil, &found, 1e-7);
        close(&found.values, &exact, 1e-10);
    }
}

#[test]
fn a_warm_start_takes_fewer_solves() {
    let before = lowest(&square(3, 31), 20);
    // An edit: the same lattice, stiffer by up to 1 % here and there.
    let mut after = square(3, 31);
    edit(&mut after, 0.01);
    let cold = lowest(&after, 20);
    let mut settings = Settings::new(Window::Lowest(20));
    settings.start = Some(&before.vectors);
    settings.guess = before.values.last().copied();
    let warm = solve(&after.problem(), &settings, &Watch::quiet()).unwrap();
    check(&after, &warm, 1e-7);
    close(&warm.values, &cold.values, 1e-10);
    assert!(
        warm.effort.solves + 8 <= cold.effort.solves,
        "{} warm, {} cold",
        warm.effort.solves,
        cold.effort.solves
    );
}

/// Adds a smooth potential of relative size `size` to K.
fn edit(pencil: &mut Pencil<f64>, size: f64) {
    let level = 20.0 * size;
    let places = pencil.places.clone();
    let mass = pencil.mass.clone();
    let weight = |i: usize| 1.0 + (3.0 * places[i][0]).sin() + places[i][1] * places[i][1];
    let rows: Vec<Vec<(usize, f64)>> = mass
        .outer_iterator()
        .map(|r| r.iter().map(|(j, &m)| (j, m)).collect())
        .collect();
    for (i, row) in rows.iter().enumerate() {
        for &(j, m) in row {
            *pencil.stiffness.get_mut(i, j).unwrap() += level * m * 0.5 * (weight(i) + weight(j));
        }
    }
}

#[test]
fn a_draft_after_an_edit() {
    let before = lowest(&square(5, 29), 20);
    let mut after = square(5, 29);
    edit(&mut after, 0.01);
    let exact = lowest(&after, 20).values;
    let mut plan = Plan::new();
    let quick = draft(
        &mut plan,
        &after.problem(),
        &before.vectors,
        &before.values,
        &Watch::quiet(),
    )
    .unwrap();
    for (a, b) in quick.values.iter().zip(&exact) {
        // Rayleigh–Ritz comes from above; one inverse step leaves about 1e-6.
        assert!(a / b - 1.0 > -1e-11 && a / b - 1.0 < 2e-6, "{a} for {b}");
    }
    for x in &quick.vectors {
        let norm: f64 = times(&after.mass, x)
            .iter()
            .zip(x)
            .map(|(a, b)| a * b)
            .sum();
        assert!((norm - 1.0).abs() < 1e-10);
    }
}

#[test]
fn a_plan_serves_every_matrix_of_its_pattern() {
    let mut plan = Plan::new();
    let settings = Settings::new(Window::Lowest(10));
    let a = square(3, 20);
    let mut b = square(3, 20);
    edit(&mut b, 0.1);
    let c = square(4, 20);
    for pencil in [&a, &b, &c, &a] {
        let found = solve_with(&mut plan, &pencil.problem(), &settings, &Watch::quiet()).unwrap();
        check(pencil, &found, 1e-7);
        close(&found.values, &lowest(pencil, 10).values, 1e-11);
    }
}

#[test]
fn dense_rows_at_the_end_come_last() {
    // A bordered problem: two unknowns coupled through M to all others, as corner functions are.
    let inner = square(3, 16);
    let n = inner.stiffness.rows();
    let mut k = sprs::TriMat::new((n + 2, n + 2));
    let mut m = sprs::TriMat::new((n + 2, n + 2));
    for (t, a) in [(&mut k, &inner.stiffness), (&mut m, &inner.mass)] {
        for (&v, (i, j)) in a.iter() {
            t.add_triplet(i, j, v);
        }
    }
    for c in 0..2 {
        k.add_triplet(n + c, n + c, 1.0);
        m.add_triplet(n + c, n + c, 0.01);
        for i in 0..n {
            let x = 1e-5 * (inner.places[i][c] * 5.0).sin();
            m.add_triplet(i, n + c, x);
            m.add_triplet(n + c, i, x);
        }
    }
    let mut places = inner.places.clone();
    places.extend([[0.3, 0.3], [0.6, 0.3]]);
    let whole = Pencil {
        stiffness: k.to_csr(),
        mass: m.to_csr(),
        places,
    };
    let problem = Problem {
        tail: 2,
        ..whole.problem()
    };
    let found = solve(
        &problem,
        &Settings::new(Window::Lowest(12)),
        &Watch::quiet(),
    )
    .unwrap();
    check(&whole, &found, 1e-7);
    close(&found.values, &all_levels(&whole), 1e-9);
}

#[test]
fn called_off_and_watched() {
    let pencil = square(3, 31);
    let settings = Settings::new(Window::Lowest(20));
    let watch = Watch::quiet();
    watch.cancel();
    let result = solve(&pencil.problem(), &settings, &watch);
    assert!(matches!(result, Err(EigenError::Cancelled(_))));
    // Called off in the middle: by the listener, at the second report.
    let steps: Arc<Mutex<Vec<Step>>> = Arc::default();
    let seen = Arc::clone(&steps);
    let handle: Arc<Mutex<Option<Watch>>> = Arc::default();
    let held = Arc::clone(&handle);
    let watch = Watch::listened(move |step| {
        seen.lock().unwrap().push(step);
        if seen.lock().unwrap().len() == 2 {
            held.lock().unwrap().as_ref().unwrap().cancel();
        }
    });
    *handle.lock().unwrap() = Some(watch.clone());
    let result = solve(&pencil.problem(), &settings, &watch);
    assert!(matches!(result, Err(EigenError::Cancelled(_))));
    assert_eq!(steps.lock().unwrap().len(), 2);
    assert!(
        steps
            .lock()
            .unwrap()
            .iter()
            .all(|s| s.of == 20 && s.done <= 20)
    );
}

#[test]
fn bad_input_is_refused_in_words() {
    let pencil = square(3, 8);
    let n = pencil.stiffness.rows();
    let ask = |count| {
        let settings = Settings::new(Window::Lowest(count));
        solve(&pencil.problem(), &settings, &Watch::quiet()).map(|_| ())
    };
    assert!(matches!(ask(0), Err(EigenError::NothingAsked)));
    assert!(matches!(ask(n + 1), Err(EigenError::TooMany { available, .. }) if available == n));
    let above = Window::From {
        value: 1e9,
        count: 1,
    };
    let result = solve(&pencil.problem(), &Settings::new(above), &Watch::quiet());
    assert!(matches!(
        result,
        Err(EigenError::TooMany { available: 0, .. })
    ));

    for bad in [f64::NAN, f64::INFINITY] {
        let mut broken = square(3, 8);
        *broken.stiffness.get_mut(3, 4).unwrap() = bad;
        assert!(matches!(
            refused(&broken),
            EigenError::NotFinite {
                matrix: "stiffness",
                row: 3
            }
        ));
    }
    let mut broken = square(3, 8);
    *broken.mass.get_mut(3, 4).unwrap() *= 1.001;
    assert!(matches!(
        refused(&broken),
        EigenError::NotHermitian { matrix: "mass", .. }
    ));
    let mut broken = square(3, 8);
    *broken.mass.get_mut(5, 5).unwrap() = -1.0;
    assert!(matches!(
        refused(&broken),
        EigenError::MassNotPositive { .. }
    ));
    // Indefinite with a positive diagonal.
    let mut broken = square(3, 8);
    for (i, j) in [(10, 11), (11, 10)] {
        *broken.mass.get_mut(i, j).unwrap() *= 10.0;
    }
    assert!(matches!(
        refused(&broken),
        EigenError::MassNotPositive { .. }
    ));
    let mut large = square(3, 40);
    for (i, j) in [(700, 701), (701, 700)] {
        *large.mass.get_mut(i, j).unwrap() *= 10.0;
    }
    assert!(matches!(
        refused(&large),
        EigenError::MassNotPositive { .. }
    ));

    let problem = Problem {
        places: &pencil.places[1..],
        ..pencil.problem()
    };
    let result = solve(&problem, &Settings::new(Window::Lowest(1)), &Watch::quiet());
    assert!(matches!(result, Err(EigenError::Shape(_))));
    let mut small = Settings::new(Window::Lowest(5));
    small.memory = 1000;
    let result = solve(&pencil.problem(), &small, &Watch::quiet());
    assert!(matches!(
        result,
        Err(EigenError::TooLarge { limit: 1000, .. })
    ));
    let mut wrong = Settings::new(Window::Lowest(5));
    wrong.tolerance = f64::NAN;
    let result = solve(&pencil.problem(), &wrong, &Watch::quiet());
    assert!(matches!(
        result,
        Err(EigenError::Setting {
            name: "tolerance",
            ..
        })
    ));
}

fn refused(pencil: &Pencil<f64>) -> EigenError {
    let settings = Settings::new(Window::Lowest(5));
    solve(&pencil.problem(), &settings, &Watch::quiet())
        .map(|_| ())
        .unwrap_err()
}

#[test]
fn tiny_problems() {
    for n in 1..=12 {
        let pencil = five_point(1, n);
        for count in [1, n] {
            let found = lowest(&pencil, count);
            check(&pencil, &found, 1e-7);
            for (i, &x) in found.values.iter().enumerate() {
                let angle = std::f64::consts::PI * (i + 1) as f64 / (2.0 * (n as f64 + 1.0));
                // A row of points: half of the hopping of the plane's levels is missing.
                let exact = 0.5 + angle.sin().powi(2);
                assert!((x - exact).abs() < 1e-12, "{x} {exact}");
            }
        }
    }
    let one: Pencil<Complex64> = Pencil {
        stiffness: CsMat::new((1, 1), vec![0, 1], vec![0], vec![Complex64::new(-2.0, 0.0)]),
        mass: CsMat::new((1, 1), vec![0, 1], vec![0], vec![Complex64::new(4.0, 0.0)]),
        places: vec![[0.0, 0.0]],
    };
    assert!((lowest(&one, 1).values[0] + 0.5).abs() < 1e-15);
}

#[test]
fn inertia_is_the_dense_count_at_random_shifts() {
    fn run<T: Field>(pencil: &Pencil<T>, shifts: usize, seed: u64) {
        let all = all_levels(pencil);
        let (low, high) = (all[0], all[all.len() - 1]);
        let mut dice = pencils::Dice(seed);
        let mut plan = Plan::new();
        for _ in 0..shifts {
            let shift = low + (high - low) * (0.55 * dice.roll() + 0.5);
            let there = all.iter().filter(|&&x| x < shift).count();
            assert_eq!(
                count_below(&mut plan, &pencil.problem(), shift).unwrap(),
                there
            );
        }
        // As near to levels as 1e-9, where the factorisation is all but singular.
        for i in (0..all.len() - 1).step_by(all.len() / 10) {
            if all[i + 1] - all[i] > 1e-6 * all[i].abs() {
                let shift = all[i] + 1e-9 * all[i].abs();
                assert_eq!(
                    count_below(&mut plan, &pencil.problem(), shift).unwrap(),
                    i + 1
                );
            }
        }
    }
    run(&square(3, 12), 60, 1);
    run(&random(150, 4, true, 5), 50, 2);
    run(&random(150, 4, false, 6), 50, 3);
    run(&torus(12, 12, 3), 40, 4);
}

#[test]
fn a_shift_that_falls_on_a_level() {
    // The shift starts at half of the expected last level: put it on a level, a pair, nearly on.
    for (pencil, count) in [(square(5, 29), 20), (five_point(30, 30), 20)] {
        let exact = lowest(&pencil, 30).values;
        for level in [5, 9, 10, 11] {
            for off in [0.0, 1e-15, 1e-12, -1e-9, 1e-7] {
                let mut settings = Settings::new(Window::Lowest(count));
                settings.guess = Some(2.0 * exact[level] * (1.0 + off));
                let found = solve(&pencil.problem(), &settings, &Watch::quiet()).unwrap();
                check(&pencil, &found, 1e-7);
                close(&found.values, &exact, 1e-10);
            }
        }
    }
}
