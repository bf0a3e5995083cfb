//! Orders of convergence on the disc (levels: squared Bessel zeros, Abramowitz & Stegun 1964, 9.5).
mod common;
use common::column;
use dotwright::geometry::{Outline, pt};
use dotwright::progress::Watch;
use dotwright::spectrum::{Model, Wanted, bars, solve};

/// The lowest 20 levels on four lattices; the computed value itself, without the correction by η²,
/// which would hide the order. A level's error falls like h^2p.
#[test]
fn orders_are_twice_the_degree() {
    let exact = column("disc_dirichlet.csv", "lambda");
    let disc = Outline::disc(pt(0.0, 0.0), 1.0).expect("a disc");
    println!("degree   cell: worst relative error of 20 levels, order from first to last");
    for (degree, cells) in [
        (2, [0.10, 0.0707, 0.05, 0.0354]),
        (3, [0.12, 0.0849, 0.06, 0.0424]),
        (4, [0.16, 0.1131, 0.08, 0.0566]),
        (5, [0.20, 0.1414, 0.10, 0.0707]),
    ] {
        let errors = cells.map(|cell| {
            let wanted = Wanted {
                count: 20,
                cell: Some(cell),
                degree: Some(degree),
                ..Wanted::default()
            };
            let s =
                solve(&Model::hard(disc.clone(), 1.0), &wanted, &Watch::quiet()).expect("levels");
            let raw = s.levels.iter().map(|l| {
                let eta2 = (l.error - bars::FLOOR * l.energy).max(0.0) / bars::SPREAD;
                l.energy + bars::SHIFT * eta2
            });
            raw.zip(&exact)
                .map(|(v, e)| (v - e).abs() / e)
                .fold(0.0, f64::max)
        });
        let order = (errors[0] / errors[3]).ln() / (cells[0] / cells[3]).ln();
        println!("{degree}   {cells:?}: {errors:?}, order {order:.1}");
        // placement of the wall in the cells scatters the constant by about two over the range
        // of 2.8 in h: 0.7 in the order
        let expected = 2.0 * degree as f64;
        assert!(order > expected - 0.7, "degree {degree}: order {order:.2}");
        assert!(
            errors.is_sorted_by(|a, b| a > b),
            "degree {degree}: {errors:?}"
        );
    }
}
