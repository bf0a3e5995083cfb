//! Time of certified levels on tensor splines on a square, by size and window.

#[path = "../common/pencils.rs"]
mod pencils;

use divan::{Bencher, black_box};
use dotwright::eigen::{Plan, Settings, Window, draft, solve_with};
use dotwright::progress::Watch;

fn main() {
    divan::main();
}

/// (degree, cells, levels)
const CASES: [(usize, usize, usize); 8] = [
    (3, 31, 20),
    (3, 31, 50),
    (5, 29, 20),
    (5, 29, 50),
    (3, 62, 20),
    (3, 62, 50),
    (3, 125, 20),
    (5, 61, 20),
];

#[divan::bench(args = CASES)]
fn cold(bencher: Bencher, (p, cells, count): (usize, usize, usize)) {
    let pencil = pencils::square(p, cells);
    let settings = Settings::new(Window::Lowest(count));
    bencher.bench_local(|| {
        let found = solve_with(
            &mut Plan::new(),
            &pencil.problem(),
            &settings,
            &Watch::quiet(),
        );
        black_box(found.expect("the square is solved"))
    });
}

#[divan::bench(args = CASES)]
fn warm(bencher: Bencher, (p, cells, count): (usize, usize, usize)) {
    let pencil = pencils::square(p, cells);
    let mut settings = Settings::new(Window::Lowest(count));
    let mut plan = Plan::new();
    let before = solve_with(&mut plan, &pencil.problem(), &settings, &Watch::quiet())
        .expect("the square is solved");
    settings.start = Some(&before.vectors);
    settings.guess = before.values.last().copied();
    bencher.bench_local(|| {
        let found = solve_with(&mut plan, &pencil.problem(), &settings, &Watch::quiet());
        black_box(found.expect("the square is solved"))
    });
}

#[divan::bench(args = CASES)]
fn drafted(bencher: Bencher, (p, cells, count): (usize, usize, usize)) {
    let pencil = pencils::square(p, cells);
    let settings = Settings::new(Window::Lowest(count));
    let mut plan = Plan::new();
    let before = solve_with(&mut plan, &pencil.problem(), &settings, &Watch::quiet())
        .expect("the square is solved");
    bencher.bench_local(|| {
        let quick = draft(
            &mut plan,
            &pencil.problem(),
            &before.vectors,
            &before.values,
            &Watch::quiet(),
        );
        black_box(quick.expect("the square is drafted"))
    });
}
