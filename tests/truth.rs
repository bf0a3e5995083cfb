//! Every hard-walled table of `tests/reference`, under random placements: the true error against
//! the bar printed.
mod common;
use common::*;
use dotwright::geometry::{Loop, Outline, Piece, pt};
use dotwright::progress::Watch;
use dotwright::spectrum::{Model, Wanted, solve};
use std::f64::consts::{PI, TAU};

const L: [(f64, f64); 6] = [
    (0., 0.),
    (1., 0.),
    (1., -1.),
    (-1., -1.),
    (-1., 1.),
    (0., 1.),
];
const G1: [(f64, f64); 8] = [
    (0., 0.),
    (0., 1.),
    (2., 3.),
    (2., 2.),
    (3., 2.),
    (2., 1.),
    (1., 1.),
    (1., 0.),
];
const G2: [(f64, f64); 8] = [
    (1., 0.),
    (0., 1.),
    (0., 2.),
    (2., 2.),
    (2., 3.),
    (3., 2.),
    (2., 1.),
    (1., 1.),
];

type Placed = Box<dyn Fn(f64, (f64, f64)) -> Outline>;
fn poly(v: &[(f64, f64)]) -> Placed {
    let v = v.to_vec();
    Box::new(move |a, t| placed(&v, a, t))
}
fn arc(c: (f64, f64), r: f64, start: f64, sweep: f64) -> Piece {
    Piece::Arc {
        centre: pt(c.0, c.1),
        radius: r,
        start,
        sweep,
    }
}
fn cases() -> Vec<(&'static str, &'static str, Placed)> {
    vec![
        (
            "disc",
            "disc_dirichlet.csv",
            Box::new(|_, t| Outline::disc(pt(t.0, t.1), 1.0).expect("a disc")),
        ),
        (
            "annulus",
            "annulus_0.5.csv",
            Box::new(|a, t| Outline {
                loops: vec![
                    Loop {
                        pieces: vec![arc(t, 1.0, a, TAU)],
                    },
                    Loop {
                        pieces: vec![arc(t, 0.5, a, -TAU)],
                    },
                ],
            }),
        ),
        (
            "ellipse",
            "ellipse_1_0.5.csv",
            Box::new(|a, t| Outline {
                loops: vec![Loop {
                    pieces: vec![Piece::Ellipse {
                        centre: pt(t.0, t.1),
                        half_axes: pt(1.0, 0.5),
                        turn: a,
                        start: 0.0,
                        sweep: TAU,
                    }],
                }],
            }),
        ),
        (
            "square",
            "rectangle_1x1.csv",
            poly(&[(0., 0.), (1., 0.), (1., 1.), (0., 1.)]),
        ),
        (
            "rectangle",
            "rectangle_2x1.csv",
            poly(&[(0., 0.), (2., 0.), (2., 1.), (0., 1.)]),
        ),
        (
            "equilateral",
            "triangle_equilateral_side1.csv",
            poly(&[(0., 0.), (1., 0.), (0.5, 0.75f64.sqrt())]),
        ),
        (
            "right isosceles",
            "triangle_right_isosceles.csv",
            poly(&[(0., 0.), (1., 0.), (0., 1.)]),
        ),
        (
            "sector",
            "sector_270.csv",
            Box::new(|a, t| {
                let c = pt(t.0, t.1);
                let (p, q) = (
                    c + dotwright::geometry::Point::polar(a),
                    c + dotwright::geometry::Point::polar(a + 1.5 * PI),
                );
                Outline {
                    loops: vec![Loop {
                        pieces: vec![
                            Piece::Line { from: c, to: p },
                            arc(t, 1.0, a, 1.5 * PI),
                            Piece::Line { from: q, to: c },
                        ],
                    }],
                }
            }),
        ),
        ("L", "lshape.csv", poly(&L)),
        ("isospectral 1", "isospectral_1.csv", poly(&G1)),
        ("isospectral 2", "isospectral_2.csv", poly(&G2)),
    ]
}

#[test]
fn tables() {
    let mut rng = Stream(7);
    let reps: usize = std::env::var("REPS")
        .ok()
        .and_then(|s| s.parse().ok())
        .unwrap_or(3);
    for (name, table, make) in cases() {
        let exact = column(table, "lambda");
        let n = exact.len().min(50);
        let (mut worst, mut miss, mut total) = (0.0f64, 0, 0);
        let (mut over, mut ratio) = (vec![], vec![]);
        for _ in 0..reps {
            let o = make(rng.within(0.0, TAU), (rng.next(), rng.next()));
            let s = solve(
                &Model::hard(o.clone(), 1.0),
                &Wanted {
                    count: n,
                    ..Wanted::default()
                },
                &Watch::quiet(),
            )
            .expect("levels");
            assert!(
                s.levels.is_sorted_by(|a, b| a.energy <= b.energy),
                "{name}: out of order"
            );
            assert!(s.certificate.complete, "{name}: not certified");
            for (l, e) in s.levels.iter().zip(&exact) {
                let d = (l.energy - e).abs();
                worst = worst.max(d / e);
                total += 1;
                if d > l.error + 1e-12 * e {
                    miss += 1;
                }
                over.push(l.error / d.max(1e-13 * e));
                let eta2 = l.error / dotwright::spectrum::bars::SPREAD;
                ratio.push((l.energy + dotwright::spectrum::bars::SHIFT * eta2 - e) / eta2);
            }
        }
        // the accuracy asked for by default, and the bars' coverage, as the README promises
        assert!(worst < 1e-6, "{name}: true error {worst:.1e}");
        assert!(
            miss * 100 <= total,
            "{name}: {miss} of {total} outside their bars"
        );
        over.sort_by(f64::total_cmp);
        ratio.sort_by(f64::total_cmp);
        let q = |v: &Vec<f64>, x: f64| v[((v.len() - 1) as f64 * x) as usize];
        println!(
            "{name:16} worst {worst:.1e}  missed {miss} of {total}  over median {:.1}  err/eta2 min {:.3} 5% {:.3} median {:.3} 99% {:.3} max {:.3}",
            q(&over, 0.5),
            q(&ratio, 0.0),
            q(&ratio, 0.05),
            q(&ratio, 0.5),
            q(&ratio, 0.99),
            q(&ratio, 1.0)
        );
    }
}

#[test]
fn features() {
    let acc: f64 = std::env::var("ACC")
        .ok()
        .and_then(|s| s.parse().ok())
        .unwrap_or(1e-6);
    for r in [0.1, 0.05, 0.02] {
        // L with its inner corner rounded
        let line = |a: (f64, f64), b: (f64, f64)| Piece::Line {
            from: pt(a.0, a.1),
            to: pt(b.0, b.1),
        };
        let o = Outline {
            loops: vec![Loop {
                pieces: vec![
                    line((0., 1.), (-1., 1.)),
                    line((-1., 1.), (-1., -1.)),
                    line((-1., -1.), (1., -1.)),
                    line((1., -1.), (1., 0.)),
                    line((1., 0.), (r, 0.)),
                    arc((r, r), r, -PI / 2.0, -PI / 2.0),
                    line((0., r), (0., 1.)),
                ],
            }],
        };
        let mut last: Vec<f64> = vec![];
        for a in [acc, 1e-8] {
            let clock = std::time::Instant::now();
            let s = solve(
                &Model::hard(o.clone(), 1.0),
                &Wanted {
                    count: 20,
                    accuracy: a,
                    ..Wanted::default()
                },
                &Watch::quiet(),
            )
            .expect("levels");
            let t = clock.elapsed().as_secs_f64() * 1e3;
            let worst = s
                .levels
                .iter()
                .map(|l| l.error / l.energy)
                .fold(0.0, f64::max);
            if !last.is_empty() {
                let d = s
                    .levels
                    .iter()
                    .zip(&last)
                    .map(|(l, e)| (l.energy - e).abs() / e)
                    .fold(0.0, f64::max);
                assert!(d < 1e-6, "rounded {r}: {d:.1e} between accuracies");
                println!("rounded {r}: difference {d:.1e}");
            }
            println!(
                "rounded {r} acc {a:.0e}: n {} finest {:.4} bar {worst:.1e} {t:.0} ms first {:.10} {:?}",
                s.lattice.unknowns, s.lattice.finest, s.levels[0].energy, s.timings
            );
            last = s.levels.iter().map(|l| l.energy).collect();
        }
    }
}

/// A dumbbell with a narrow channel, a staircase of short edges, a slot, a needle, a wedge: no
/// outside tables; the reference is the same program at a tenth of the accuracy, on another
/// lattice and in another placement. Two answers agree when their intervals meet.
#[test]
fn hard_features_agree_between_settings() {
    let cases: [(&str, Vec<(f64, f64)>); 5] = [
        (
            "dumbbell",
            vec![
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
        ),
        (
            "staircase",
            vec![
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
        ),
        (
            "wedge notch",
            vec![
                (0., 0.),
                (2., 0.),
                (2., 1.),
                (1.1, 1.),
                (1.0, 0.4),
                (0.9, 1.),
                (0., 1.),
            ],
        ),
        ("needle", vec![(0., 0.), (1., 0.), (0.5, 0.087)]),
        (
            "star",
            (0..10)
                .map(|k| {
                    let (a, r) = (f64::from(k) * PI / 5.0, if k % 2 == 0 { 1.0 } else { 0.4 });
                    (r * a.cos(), r * a.sin())
                })
                .collect(),
        ),
    ];
    for (name, v) in cases {
        let at = |accuracy: f64, angle: f64| {
            let wanted = Wanted {
                count: 20,
                accuracy,
                ..Wanted::default()
            };
            let s = solve(
                &Model::hard(placed(&v, angle, (0.1, 0.2)), 1.0),
                &wanted,
                &Watch::quiet(),
            )
            .expect(name);
            assert!(
                s.certificate.complete && s.notes.is_empty(),
                "{name}: {:?}",
                s.notes
            );
            s.levels
        };
        let (first, second) = (at(1e-6, 0.3), at(1e-7, 1.2));
        for (a, b) in first.iter().zip(&second) {
            let d = (a.energy - b.energy).abs();
            assert!(d <= a.error + b.error, "{name}, level {}: {d:.1e}", a.index);
            assert!(d <= 1e-6 * b.energy, "{name}, level {}: {d:.1e}", a.index);
        }
    }
}
