//! Modes as people meet them: parities, angular numbers, signs, nodal domains.
mod common;
use dotwright::geometry::{Outline, Similarity, pt};
use dotwright::progress::Watch;
use dotwright::spectrum::{Model, Spectrum, Wanted, solve};

fn levels(o: &Outline, count: usize) -> Spectrum {
    let wanted = Wanted {
        count,
        ..Wanted::default()
    };
    solve(&Model::hard(o.clone(), 1.0), &wanted, &Watch::quiet()).expect("levels")
}

fn labels(s: &Spectrum) -> Vec<&str> {
    s.levels
        .iter()
        .map(|l| l.label.as_deref().unwrap_or("-"))
        .collect()
}

#[test]
fn a_disc_has_angular_numbers() {
    let s = levels(&Outline::disc(pt(0.2, 0.1), 1.0).expect("a disc"), 10);
    // order of the Bessel zeros (Abramowitz & Stegun 1964, table 9.5)
    let want = [
        "m=0", "m=1 cos", "m=1 sin", "m=2 cos", "m=2 sin", "m=0", "m=3 cos", "m=3 sin", "m=1 cos",
        "m=1 sin",
    ];
    assert_eq!(labels(&s), want);
    // n radial parts times 2m sectors
    let domains: Vec<usize> = (0..10).map(|k| s.modes.nodal_domains(k)).collect();
    assert_eq!(domains, [1, 2, 2, 4, 4, 2, 6, 6, 4, 4]);
}

#[test]
fn a_square_has_parities_and_its_pairs_are_told_apart() {
    let o = Outline::rectangle(pt(0.0, 0.0), pt(1.0, 1.0)).expect("a square");
    let s = levels(&o, 6);
    // (1,1); (1,2) and (2,1); (2,2); (1,3) and (3,1): odd n is even about the middle
    let want = [
        "x even, y even",
        "x even, y odd",
        "x odd, y even",
        "x odd, y odd",
        "x even, y even",
        "x even, y even",
    ];
    let mut got = labels(&s);
    // even about y comes first within the pair; which of the two that is, is the rule's choice
    got[1..3].sort_unstable();
    assert_eq!(got, want);
    // the adapted member is the product of sines itself, up to sign
    let x_odd = s
        .levels
        .iter()
        .position(|l| l.label.as_deref() == Some("x odd, y even"));
    let k = x_odd.expect("one of the pair");
    for p in [pt(0.31, 0.4), pt(0.77, 0.62), pt(0.5, 0.5)] {
        use std::f64::consts::PI;
        let exact = 2.0 * (2.0 * PI * p.x).sin() * (PI * p.y).sin();
        let d = (s.modes.value(k, p).abs() - exact.abs()).abs();
        // a level errs by the square of what its mode errs; no mode of the square exceeds 2
        let most = 2.0 * (s.levels[k].error / s.levels[k].energy).sqrt();
        assert!(d < most, "{d:.1e}, at most {most:.1e}");
    }
}

#[test]
fn signs_and_bases_do_not_depend_on_the_lattice() {
    let o = Outline::rectangle(pt(0.0, 0.0), pt(1.0, 1.0)).expect("a square");
    let coarse = levels(&o, 4);
    let wanted = Wanted {
        count: 4,
        cell: Some(0.05),
        ..Wanted::default()
    };
    let fine = solve(&Model::hard(o.clone(), 1.0), &wanted, &Watch::quiet()).expect("levels");
    for k in 0..4 {
        for p in [pt(0.21, 0.34), pt(0.68, 0.27), pt(0.43, 0.81)] {
            let (a, b) = (coarse.modes.value(k, p), fine.modes.value(k, p));
            assert!((a - b).abs() < 1e-5, "mode {k}: {a} {b}");
        }
    }
}

#[test]
fn a_triangle_splits_its_pair_about_one_axis_and_a_skew_outline_has_no_labels() {
    let triangle = Outline::polygon(&[pt(0., 0.), pt(1., 0.), pt(0.5, 0.75_f64.sqrt())]);
    let s = levels(&triangle.expect("a triangle"), 3);
    let l = labels(&s);
    assert!(l[1].starts_with("even") && l[2].starts_with("odd"), "{l:?}");
    let skew = Outline::polygon(&[pt(0., 0.), pt(1., 0.), pt(1.3, 0.9), pt(0.2, 0.6)]);
    let s = levels(&skew.expect("a quadrangle"), 3);
    assert_eq!(labels(&s), ["-", "-", "-"]);
}

#[test]
fn tilted_axes_are_named() {
    let o = Outline::ellipse(pt(0.0, 0.0), pt(1.0, 0.6), 0.5).expect("an ellipse");
    let s = levels(&o.transformed(&Similarity::moved(pt(3.0, 1.0))), 2);
    assert!(
        labels(&s)[0].starts_with("u even, v even (u at "),
        "{:?}",
        labels(&s)
    );
}
