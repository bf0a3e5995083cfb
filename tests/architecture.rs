//! Data flows one way: a room uses only rooms before it.
use std::fs;
use std::path::{Path, PathBuf};

const ROOMS: [&str; 13] = [
    "units",
    "progress",
    "geometry",
    "intake",
    "shape",
    "lattice",
    "operators",
    "eigen",
    "spectrum",
    "modes",
    "pictures",
    "report",
    "desk",
];

fn files(folder: &Path, out: &mut Vec<PathBuf>) {
    for entry in fs::read_dir(folder).expect("a folder") {
        let path = entry.expect("an entry").path();
        if path.is_dir() {
            files(&path, out);
        } else if path.extension().is_some_and(|e| e == "rs") {
            out.push(path);
        }
    }
}

/// Code before the unit tests of a file, which may build what they need from anywhere.
fn code(path: &Path) -> String {
    let text = fs::read_to_string(path).expect("a file");
    text.split("#[cfg(test)]")
        .next()
        .unwrap_or_default()
        .to_string()
}

#[test]
fn imports_point_only_backwards() {
    let src = Path::new(env!("CARGO_MANIFEST_DIR")).join("src");
    let place = |room: &str| ROOMS.iter().position(|r| *r == room);
    let mut wrong = Vec::new();
    for (k, room) in ROOMS.iter().enumerate() {
        let mut list = Vec::new();
        files(&src.join(room), &mut list);
        assert!(!list.is_empty(), "{room} is empty");
        for file in list {
            for part in code(&file).split("crate::").skip(1) {
                let name: String = part
                    .chars()
                    .take_while(|c| c.is_alphanumeric() || *c == '_')
                    .collect();
                // spectrum hands out the modes, which hold functions and know no solves
                let handed = *room == "spectrum" && name == "modes";
                if place(&name).is_some_and(|n| n > k) && !handed {
                    wrong.push(format!("{} uses {name}", file.display()));
                }
            }
        }
    }
    assert!(wrong.is_empty(), "{wrong:#?}");
}

#[test]
fn libraries_stay_in_their_rooms() {
    let src = Path::new(env!("CARGO_MANIFEST_DIR")).join("src");
    let mut list = Vec::new();
    files(&src, &mut list);
    for file in list {
        let at = file
            .strip_prefix(&src)
            .expect("below src")
            .display()
            .to_string();
        let text = code(&file);
        if text.contains("faer::") {
            assert!(at.starts_with("eigen/"), "faer in {at}");
        }
        if text.contains("faer::sparse") {
            assert_eq!(at, "eigen/factor.rs", "sparse faer");
        }
        if text.contains("ratatui::") || text.contains("crossterm::") {
            assert!(at.starts_with("desk/"), "a terminal in {at}");
        }
    }
}
