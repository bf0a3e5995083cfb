//! x
use dotwright::geometry::*;
use std::time::Instant;
fn time<T>(name: &str, mut f: impl FnMut() -> T) {
    let _ = f();
    let t = Instant::now();
    let n = 20;
    for _ in 0..n {
        std::hint::black_box(f());
    }
    println!(
        "{name}: {:.3} ms",
        t.elapsed().as_secs_f64() * 1e3 / n as f64
    );
}
#[test]
fn bench() {
    // 100 pieces: a gear
    let v: Vec<Point> = (0..50)
        .map(|k| {
            Point::polar(std::f64::consts::TAU * k as f64 / 50.0)
                * (if k % 2 == 0 { 1.0 } else { 0.8 })
        })
        .collect();
    let gear = Outline::polygon(&v).unwrap();
    let round = gear.rounded(0.02).unwrap();
    println!("{} pieces", round.pieces().count());
    let other = round
        .transformed(&Similarity::turned(pt(0.1, 0.), 0.05).then(&Similarity::moved(pt(0.3, 0.1))));
    time("add 50+50 lines", || {
        gear.add(&gear.transformed(&Similarity::moved(pt(0.3, 0.1))))
            .unwrap()
    });
    time("add 100+100", || round.add(&other).unwrap());
    time("cut 100 disc", || {
        round
            .cut(&Outline::disc(pt(0.5, 0.), 0.5).unwrap())
            .unwrap()
    });
    time("grow 100", || round.grown(0.05).unwrap());
    time("shrink 100", || round.grown(-0.05).unwrap());
    time("round 50", || gear.rounded(0.02).unwrap());
    time("narrowest 100", || round.narrowest());
    time("narrowest gear 50", || gear.narrowest());
    time("symmetries 100", || round.symmetries());
    time("check 100", || round.check(1e-6).is_ok());
    println!("{:?}", round.symmetries());
    let blob: Vec<Point> = (0..300)
        .map(|k| {
            let a = std::f64::consts::TAU * k as f64 / 300.0;
            Point::polar(a) * (1.0 + 0.2 * (3.0 * a).sin() + 0.1 * (7.0 * a).cos())
        })
        .collect();
    let b = Outline::smooth_closed(&blob).unwrap();
    time("trace 300 cut disc", || {
        b.cut(&Outline::disc(pt(0.5, 0.), 0.5).unwrap()).unwrap()
    });
    time("trace 300 grow -0.05", || b.grown(-0.05).unwrap());
    time("trace narrowest", || b.narrowest());
    time("trace symmetries", || b.symmetries());
    time("area", || b.area());
    time("distance", || b.distance(pt(0.3, 0.2)));
    let l = Outline::polygon(&[
        pt(0., 0.),
        pt(2., 0.),
        pt(2., 1.),
        pt(1., 1.),
        pt(1., 2.),
        pt(0., 2.),
    ])
    .unwrap();
    time("L round", || l.rounded(0.1).unwrap());
    time("L sym", || l.symmetries());
    time("L narrowest", || l.narrowest());
    let many: Vec<Point> = (0..1_000_000)
        .map(|k| {
            let a = std::f64::consts::TAU * k as f64 / 1e6;
            Point::polar(a) * (1.0 + 0.2 * (3.0 * a).sin())
        })
        .collect();
    let t = Instant::now();
    let m = Outline::polygon(&many).unwrap();
    println!("million polygon {:?}", t.elapsed());
    println!("{:?}", m.area());
}
