mod common;
use dotwright::geometry::*;
use dotwright::progress::Watch;
use dotwright::spectrum::*;
#[test]
fn prof() {
    let o = Outline::disc(pt(0.0, 0.0), 1.0).expect("a disc");
    for (count, a) in [(50, 1e-6), (20, 1e-6), (20, 1e-4)] {
        let mut best: Option<(f64, Timings, usize)> = None;
        for _ in 0..12 {
            let t = std::time::Instant::now();
            let s = solve(
                &o,
                1.0,
                &Wanted {
                    count,
                    accuracy: a,
                    ..Default::default()
                },
                None,
                &Watch::quiet(),
            )
            .unwrap();
            let t = t.elapsed().as_secs_f64() * 1e3;
            if best.as_ref().is_none_or(|b| t < b.0) {
                best = Some((t, s.timings.clone(), s.lattice.unknowns));
            }
        }
        println!("{count} {a} {best:?}");
    }
}
