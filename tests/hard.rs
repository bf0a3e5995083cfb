mod common;
use common::*;
use dotwright::geometry::Outline;
use dotwright::progress::Watch;
use dotwright::spectrum::{Wanted, solve};

fn run(name: &str, o: &Outline, count: usize) {
    let mut last: Vec<(f64, f64)> = vec![];
    for a in [1e-4, 1e-6, 1e-7] {
        let clock = std::time::Instant::now();
        match solve(
            o,
            1.0,
            &Wanted {
                count,
                accuracy: a,
                ..Wanted::default()
            },
            None,
            &Watch::quiet(),
        ) {
            Err(e) => println!("{name}: {e}"),
            Ok(s) => {
                let t = clock.elapsed().as_secs_f64() * 1e3;
                let worst = s
                    .levels
                    .iter()
                    .map(|l| l.error / l.energy)
                    .fold(0.0, f64::max);
                let mut text = String::new();
                if !last.is_empty() {
                    let d = s
                        .levels
                        .iter()
                        .zip(&last)
                        .map(|(l, e)| (l.energy - e.0).abs() / l.energy)
                        .fold(0.0, f64::max);
                    let miss = s
                        .levels
                        .iter()
                        .zip(&last)
                        .filter(|(l, e)| (l.energy - e.0).abs() > e.1 + l.error)
                        .count();
                    text = format!("diff to before {d:.1e} outside bar {miss}");
                }
                println!(
                    "{name} {a:.0e}: n {} regions h {:.4} finest {:.4} bar {worst:.1e} {t:.0} ms first {:.8} {text} {:?}",
                    s.lattice.unknowns,
                    s.lattice.cell,
                    s.lattice.finest,
                    s.levels[0].energy,
                    s.notes
                );
                last = s.levels.iter().map(|l| (l.energy, l.error)).collect();
            }
        }
    }
}

#[test]
fn hard() {
    let only = std::env::var("ONLY").ok();
    let mut go = |name: &str, v: &[(f64, f64)]| {
        if only.as_deref().is_none_or(|o| name.starts_with(o)) {
            run(name, &placed(v, 0.3, (0.1, 0.2)), 20);
        }
    };
    go(
        "dumbbell",
        &[
            (0., 0.),
            (1., 0.),
            (1., 0.45),
            (1.5, 0.45),
            (1.5, 0.),
            (2.5, 0.),
            (2.5, 1.),
            (1.5, 1.),
            (1.5, 0.55),
            (1., 0.55),
            (1., 1.),
            (0., 1.),
        ],
    );
    go(
        "slot",
        &[
            (0., 0.),
            (2., 0.),
            (2., 1.),
            (1.02, 1.),
            (1.02, 0.3),
            (0.98, 0.3),
            (0.98, 1.),
            (0., 1.),
        ],
    );
    go(
        "staircase",
        &[
            (0., 0.),
            (1.2, 0.),
            (1.2, 0.2),
            (1.0, 0.2),
            (1.0, 0.4),
            (0.8, 0.4),
            (0.8, 0.6),
            (0.6, 0.6),
            (0.6, 0.8),
            (0.4, 0.8),
            (0.4, 1.0),
            (0.2, 1.0),
            (0.2, 1.2),
            (0., 1.2),
        ],
    );
    go(
        "spike",
        &[(0., 0.), (1., 0.), (3., 0.1), (1., 0.3), (1., 1.), (0., 1.)],
    );
    go(
        "wedge notch",
        &[
            (0., 0.),
            (2., 0.),
            (2., 1.),
            (1.1, 1.),
            (1.0, 0.4),
            (0.9, 1.),
            (0., 1.),
        ],
    );
    go("needle", &[(0., 0.), (1., 0.), (0.5, 0.087)]);
    go("thin bar", &[(0., 0.), (10., 0.), (10., 0.1), (0., 0.1)]);
    go(
        "star",
        &(0..10)
            .map(|k| {
                let a = k as f64 * std::f64::consts::PI / 5.0;
                let r = if k % 2 == 0 { 1.0 } else { 0.4 };
                (r * a.cos(), r * a.sin())
            })
            .collect::<Vec<_>>(),
    );
    go(
        "hexagon",
        &(0..6)
            .map(|k| {
                let a = k as f64 * std::f64::consts::PI / 3.0;
                (a.cos(), a.sin())
            })
            .collect::<Vec<_>>(),
    );
    go(
        "40-gon",
        &(0..40)
            .map(|k| {
                let a = k as f64 * std::f64::consts::PI / 20.0;
                (a.cos(), a.sin())
            })
            .collect::<Vec<_>>(),
    );
    go(
        "step 0.01",
        &[
            (0., 0.),
            (1., 0.),
            (1., 0.01),
            (2., 0.01),
            (2., 1.),
            (0., 1.),
        ],
    );
}
