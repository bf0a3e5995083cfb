mod common;
use common::*;
use dotwright::geometry::{Outline, pt};
use dotwright::lattice::{Key, Lattice, Splits};
use dotwright::operators::assemble;
use dotwright::progress::Watch;

#[test]
fn disc_levels() {
    let exact = column("disc_dirichlet.csv", "lambda");
    let o = Outline::disc(pt(0.3, 0.1), 1.0);
    for (p, h) in [
        (2, 0.1),
        (3, 0.1),
        (4, 0.1),
        (5, 0.1),
        (5, 0.07),
        (6, 0.1),
        (7, 0.1),
    ] {
        let t0 = std::time::Instant::now();
        let l = Lattice::new(&o, h, p, &Splits::default()).unwrap();
        let t1 = std::time::Instant::now();
        let pair = assemble(&l, &Watch::quiet()).unwrap();
        let t2 = std::time::Instant::now();
        let w = dense(&pair, 50);
        let e: Vec<f64> = w.iter().zip(&exact).map(|(a, b)| (a - b) / b).collect();
        println!(
            "p {p} h {h} n {} nnz {} area {:.1e} first {:.1e} worst20 {:.1e} worst {:.1e} lattice {:?} assemble {:?}",
            pair.len(),
            pair.columns.len(),
            l.area() - std::f64::consts::PI,
            e[0],
            e[..20]
                .iter()
                .cloned()
                .fold(0.0, |a: f64, b| a.max(b.abs())),
            e.iter().cloned().fold(0.0, |a: f64, b| a.max(b.abs())),
            t1 - t0,
            t2 - t1
        );
    }
    // refined
    for p in [3, 4, 5] {
        let mut s = Splits::default();
        for (i, j) in [(5, 5), (5, 6), (6, 5), (7, 7), (17, 10), (18, 10)] {
            s.split(Key { level: 0, i, j });
        }
        s.split(Key {
            level: 1,
            i: 11,
            j: 11,
        });
        let l = Lattice::new(&o, 0.1, p, &s).unwrap();
        let pair = assemble(&l, &Watch::quiet()).unwrap();
        let w = dense(&pair, 50);
        let e: Vec<f64> = w.iter().zip(&exact).map(|(a, b)| (a - b) / b).collect();
        println!(
            "refined p {p} n {} regions {} faces {} area {:.1e} first {:.1e} worst20 {:.1e} worst {:.1e}",
            pair.len(),
            l.regions.len(),
            l.faces.len(),
            l.area() - std::f64::consts::PI,
            e[0],
            e[..20]
                .iter()
                .cloned()
                .fold(0.0, |a: f64, b| a.max(b.abs())),
            e.iter().cloned().fold(0.0, |a: f64, b| a.max(b.abs()))
        );
    }
}
