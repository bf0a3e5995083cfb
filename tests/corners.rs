mod common;
use common::*;
use dotwright::geometry::{Outline, Piece};
use dotwright::lattice::{CornerSpace, Lattice, Splits, is_singular};
use dotwright::operators::{Pair, assemble, border};
use dotwright::progress::Watch;
use faer::prelude::*;
use faer::{Mat, Side};

fn tailed(pair: &Pair, b: &dotwright::operators::Border) -> (Mat<f64>, Mat<f64>, usize) {
    let (n, q) = (pair.len(), b.len());
    let (mut k, mut m) = (Mat::<f64>::zeros(n, n), Mat::<f64>::zeros(n, n));
    for i in 0..n {
        for e in pair.starts[i]..pair.starts[i + 1] {
            k[(i, pair.columns[e])] = pair.stiffness[e];
            m[(i, pair.columns[e])] = pair.mass[e];
        }
    }
    let d: Vec<f64> = (0..q)
        .map(|i| 1.0 / b.own_stiffness[i * q + i].sqrt())
        .collect();
    let kk = Mat::from_fn(n, q, |i, f| b.stiffness[f][i] * d[f]);
    let mm = Mat::from_fn(n, q, |i, f| b.mass[f][i] * d[f]);
    let s = Mat::from_fn(q, q, |i, j| b.own_stiffness[i * q + j] * d[i] * d[j]);
    let ms = Mat::from_fn(q, q, |i, j| b.own_mass[i * q + j] * d[i] * d[j]);
    let llt = k.llt(Side::Lower).unwrap();
    let mut x = llt.solve(&kk);
    let r = &kk - &k * &x;
    x = &x + llt.solve(&r);
    let s2 = &s - kk.transpose() * &x;
    let s2 = Mat::from_fn(q, q, |i, j| 0.5 * (s2[(i, j)] + s2[(j, i)]));
    let e = s2.self_adjoint_eigen(Side::Lower).unwrap();
    let vals: Vec<f64> = e.S().column_vector().iter().copied().collect();
    let keep: Vec<usize> = (0..q).filter(|&i| vals[i] > 1e-9).collect();
    let t = Mat::from_fn(q, keep.len(), |i, j| {
        e.U()[(i, keep[j])] / vals[keep[j]].sqrt()
    });
    let mx = &m * &x;
    let m2 = (&mm - &mx) * &t;
    let ms2 = t.transpose()
        * (&ms - x.transpose() * &mm - mm.transpose() * &x + x.transpose() * &mx)
        * &t;
    let qq = keep.len();
    let big_k = Mat::from_fn(n + qq, n + qq, |i, j| {
        if i < n && j < n {
            k[(i, j)]
        } else if i == j {
            1.0
        } else {
            0.0
        }
    });
    let big_m = Mat::from_fn(n + qq, n + qq, |i, j| match (i < n, j < n) {
        (true, true) => m[(i, j)],
        (true, false) => m2[(i, j - n)],
        (false, true) => m2[(j, i - n)],
        _ => ms2[(i - n, j - n)],
    });
    (big_k, big_m, qq)
}

fn levels(k: Mat<f64>, m: Mat<f64>, count: usize) -> Vec<f64> {
    let n = k.nrows();
    let mut pair = Pair {
        starts: vec![0],
        columns: vec![],
        stiffness: vec![],
        mass: vec![],
    };
    for i in 0..n {
        for j in 0..n {
            pair.columns.push(j);
            pair.stiffness.push(k[(i, j)]);
            pair.mass.push(m[(i, j)]);
        }
        pair.starts.push(pair.columns.len());
    }
    dense(&pair, count)
}

fn corner_spaces(o: &Outline, rho: f64, most: f64) -> Vec<CornerSpace> {
    let n: Vec<usize> = o.loops.iter().map(|l| l.pieces.len()).collect();
    o.corners(1e-9)
        .iter()
        .filter(|c| is_singular(c.angle) || c.curvatures != [0.0; 2])
        .map(|c| {
            let first: usize = n[..c.place.0].iter().sum();
            let len = n[c.place.0];
            CornerSpace::new(
                c,
                rho,
                most,
                [
                    (first + c.place.1) as u32,
                    (first + (c.place.1 + len - 1) % len) as u32,
                ],
            )
        })
        .collect()
}

#[test]
fn polygons() {
    let l = [
        (0., 0.),
        (1., 0.),
        (1., -1.),
        (-1., -1.),
        (-1., 1.),
        (0., 1.),
    ];
    let g1 = [
        (0., 0.),
        (0., 1.),
        (2., 3.),
        (2., 2.),
        (3., 2.),
        (2., 1.),
        (1., 1.),
        (1., 0.),
    ];
    let mut rng = Stream(1);
    for (name, v, table, h, p) in [
        ("L", &l[..], "lshape.csv", 0.113, 5),
        ("L", &l[..], "lshape.csv", 0.08, 5),
        ("L", &l[..], "lshape.csv", 0.08, 6),
        ("gww", &g1[..], "isospectral_1.csv", 0.11, 5),
        ("gww", &g1[..], "isospectral_1.csv", 0.15, 6),
    ] {
        let exact = column(table, "lambda");
        for _ in 0..2 {
            let o = placed(v, rng.within(0.0, 6.28), (rng.next(), rng.next()));
            let t0 = std::time::Instant::now();
            let lat = Lattice::new(&o, h, p, &Splits::default()).unwrap();
            let pair = assemble(&lat, &Watch::quiet()).unwrap();
            let t1 = std::time::Instant::now();
            let b = border(&lat, corner_spaces(&o, 12.0 * h, p as f64 + 0.01));
            let t2 = std::time::Instant::now();
            let (k, m, q) = tailed(&pair, &b);
            let w = levels(k, m, exact.len());
            let e: Vec<f64> = w.iter().zip(&exact).map(|(a, b)| (a - b) / b).collect();
            println!(
                "{name} p {p} h {h} n {} + {} ({q}) asym {:.1e} first {:.1e} worst20 {:.1e} worst {:.1e} assemble {:?} border {:?} pts {}",
                pair.len(),
                b.len(),
                b.asymmetry,
                e[0],
                e[..20].iter().fold(0.0f64, |a, b| a.max(b.abs())),
                e.iter().fold(0.0f64, |a, b| a.max(b.abs())),
                t1 - t0,
                t2 - t1,
                b.sampled
                    .iter()
                    .map(|s| s.cloud.points.len())
                    .sum::<usize>()
            );
        }
    }
    let _ = |p: &Piece| curved(p);
}
