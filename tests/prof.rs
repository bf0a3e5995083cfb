mod common;
use common::*;
use dotwright::lattice::*;
use dotwright::operators::*;
use dotwright::progress::Watch;
use std::time::Instant;
#[test]
fn prof() {
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
    let l = [
        (0., 0.),
        (1., 0.),
        (1., -1.),
        (-1., -1.),
        (-1., 1.),
        (0., 1.),
    ];
    for v in [&l[..], &g1[..]]
        .into_iter()
        .take(std::env::var("ONE").map_or(2, |_| 1))
    {
        let o = placed(v, 0.7, (0.1, 0.2));
        let d = Demand {
            wave_number: 11.0,
            accuracy: 1e-6,
            cell: None,
            degree: 5,
        };
        let mut best = [f64::INFINITY; 5];
        let mut info = String::new();
        for _ in 0..8 {
            let t = Instant::now();
            let p = Plan::new(&o, &d);
            best[0] = best[0].min(t.elapsed().as_secs_f64());
            let t = Instant::now();
            let lat = Lattice::new(&o, p.grid, 5, &p.splits).unwrap();
            best[1] = best[1].min(t.elapsed().as_secs_f64());
            let t = Instant::now();
            let a = assemble(&lat, &Watch::quiet()).unwrap();
            best[2] = best[2].min(t.elapsed().as_secs_f64());
            let t = Instant::now();
            let c = clouds(&lat.trace, &lat.regions, &p.corners, 5);
            best[3] = best[3].min(t.elapsed().as_secs_f64());
            let t = Instant::now();
            let b = border(&lat, p.corners.clone());
            best[4] = best[4].min(t.elapsed().as_secs_f64());
            info = format!(
                "n {} q {} clouds {} points {} near {}",
                a.len(),
                b.len(),
                c.len(),
                c.iter().map(|c| c.points.len()).sum::<usize>(),
                c.iter()
                    .filter(|c| c.side == 0)
                    .map(|c| c.points.len())
                    .sum::<usize>()
            );
        }
        println!(
            "{info} plan lattice assemble clouds border ms: {:?}",
            best.map(|b| (b * 1e5).round() / 100.0)
        );
    }
}
