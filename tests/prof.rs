mod common;
use dotwright::geometry::*;
use dotwright::lattice::*;
use dotwright::operators::*;
#[test]
fn prof() {
    let disc = |x: f64, r: f64| Outline::disc(pt(x, 0.0), r).unwrap();
    let rect = |x: f64, y: f64, w: f64, h: f64| Outline::rectangle(pt(x, y), pt(w, h)).unwrap();
    let d = Demand { wave_number: 8.0, accuracy: 1e-6, cell: None, degree: 5, round: 0 };
    let cases: Vec<(&str, Outline)> = vec![
        ("two discs", disc(0.0, 1.0).add(&disc(1.2, 1.0)).unwrap()),
        ("lens", disc(0.0, 1.0).keep(&disc(1.2, 1.0)).unwrap()),
        ("cut disc", disc(0.0, 1.0).keep(&rect(-0.8, -2.0, 4.0, 4.0)).unwrap()),
        ("sector", Outline::sector(pt(0.0, 0.0), 1.0, 0.785, 5.5).unwrap()),
        ("sector cut", Outline::sector(pt(0.0, 0.0), 1.0, 0.785, 5.5).unwrap().keep(&rect(-0.85, -2.0, 4.0, 4.0)).unwrap()),
        ("sector hole", Outline::sector(pt(0.0, 0.0), 1.0, 0.785, 5.5).unwrap().cut(&disc(-0.5, 0.1)).unwrap()),
        ("disc bite", disc(0.0, 1.0).cut(&disc(1.2, 0.5)).unwrap()),
    ];
    for (name, o) in cases {
        let p = Plan::new(&o, &d);
        let lat = Lattice::new(&o, p.grid, 5, &p.splits).unwrap();
        for c in &p.corners {
            let b = border(&lat, vec![c.clone()]);
            println!("{name}: h {:.3} corner {:?} angle {:.1} radius/h {:.1} functions {} asym {:.1e}", p.grid.h, c.at, c.angle.to_degrees(), c.radius / p.grid.h, b.len(), b.asymmetry);
        }
        let b = border(&lat, p.corners.clone());
        println!("{name}: all asym {:.1e}", b.asymmetry);
    }
}
