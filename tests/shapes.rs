//! Every document of `shapes/` is solved, certified, and within the accuracy it asks for.
use dotwright::progress::Watch;
use dotwright::shape::Document;
use dotwright::spectrum::{Wanted, solve};

#[test]
fn every_shape_is_solved() {
    let folder = format!("{}/shapes", env!("CARGO_MANIFEST_DIR"));
    let mut count = 0;
    for entry in std::fs::read_dir(folder).expect("the folder is there") {
        let path = entry.expect("an entry").path();
        if path.extension().is_none_or(|e| e != "toml") {
            continue;
        }
        let name = path.display().to_string();
        let document = Document::read(&path).expect("a sound document");
        let shape = document.outline().expect("a sound outline");
        let asked = document.solve();
        let wanted = Wanted {
            count: asked.modes,
            accuracy: asked.accuracy,
            cell: asked.cell,
            degree: asked.degree,
            ..Wanted::default()
        };
        let s = solve(&shape.outline, document.kinetic(), &wanted, &Watch::quiet()).expect(&name);
        assert!(s.certificate.complete, "{name}");
        assert_eq!(s.levels.len(), asked.modes, "{name}");
        assert!(s.notes.is_empty(), "{name}: {:?}", s.notes);
        for l in &s.levels {
            assert!(
                l.error <= asked.accuracy * l.energy,
                "{name}, level {}",
                l.index
            );
        }
        count += 1;
    }
    assert!(count >= 10, "{count} shapes");
}
