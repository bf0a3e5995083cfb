//! Every document of `shapes/` is solved, certified, and within the accuracy it asks for.
use dotwright::progress::Watch;
use dotwright::shape::Document;
use dotwright::spectrum::{Model, Wanted, solve};

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
        let (model, _) = Model::of(&document).expect("a sound outline");
        let wanted = Wanted::of(&document);
        let s = solve(&model, &wanted, &Watch::quiet()).expect(&name);
        assert!(s.certificate.complete, "{name}");
        assert_eq!(s.levels.len(), wanted.count, "{name}");
        assert!(s.notes.is_empty(), "{name}: {:?}", s.notes);
        for l in &s.levels {
            assert!(
                l.error <= wanted.accuracy * l.energy,
                "{name}, level {}",
                l.index
            );
        }
        count += 1;
    }
    assert!(count >= 10, "{count} shapes");
}
