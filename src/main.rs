//! Thin stand-in until the command line stands.
use dotwright::desk::{Document, Glyphs, Rehearsal, Scale, Settings, run};
use dotwright::geometry::{Outline, Point};
use dotwright::spectrum::Wanted;

fn main() {
    let p = |x: f64, y: f64| Point { x, y };
    let outline = match std::env::args().nth(1).as_deref() {
        Some("disc") => Outline::disc(p(0.0, 0.0), 40.0),
        Some("long") => Outline::polygon(&[p(0., 0.), p(200., 0.), p(200., 40.), p(0., 40.)]),
        _ => Outline::polygon(&[
            p(0., 0.),
            p(110., 0.),
            p(110., 40.),
            p(50., 48.),
            p(50., 90.),
            p(0., 90.),
        ]),
    };
    let document = Document {
        title: "Elbow dot, variant 7".into(),
        stem: "elbow-dot".into(),
        outline,
        kinetic: 38.0998212 / 0.067,
        wanted: Wanted::default(),
        scale: Scale::Lab,
    };
    let settings = Settings {
        glyphs: std::env::args().nth(2).and_then(|n| Glyphs::named(&n)),
        rehearsal: std::env::var("DOTWRIGHT_REHEARSE")
            .ok()
            .and_then(|w| Rehearsal::named(&w)),
        ..Settings::default()
    };
    if let Err(e) = run(document, settings) {
        eprintln!("{e}");
        std::process::exit(1);
    }
}
