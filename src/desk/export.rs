//! Pictures written from the desk: a name that is free, and the writing.

use super::document::Document;
use super::state::Show;
use crate::pictures::{self, Nodes};
use crate::spectrum::Spectrum;
use std::path::{Path, PathBuf};

/// The name a map is written under: shape, level, and a number when that exists already.
/// Nothing is ever written over.
pub fn free_name(folder: &Path, stem: &str, level: usize, what: &str) -> PathBuf {
    let clean: String = stem
        .chars()
        .map(|c| {
            if c.is_alphanumeric() || c == '-' || c == '_' {
                c
            } else {
                '-'
            }
        })
        .take(80)
        .collect();
    let clean = if clean.trim_matches('-').is_empty() {
        "map".into()
    } else {
        clean
    };
    let base = format!("{clean}-{level}-{what}");
    let first = folder.join(format!("{base}.png"));
    if !first.exists() {
        return first;
    }
    (2..)
        .map(|k| folder.join(format!("{base}-{k}.png")))
        .find(|p| !p.exists())
        .unwrap_or(first)
}

/// Writes the map of one mode, as for a report, and gives its name.
pub fn write_map(
    document: &Document,
    spectrum: &Spectrum,
    mode: usize,
    (show, nodes): (Show, bool),
    folder: &Path,
) -> Result<PathBuf, String> {
    let level = spectrum.levels.get(mode).ok_or("there is no such level")?;
    let show = match show {
        Show::Density => pictures::Show::Density,
        Show::Wave => pictures::Show::Wave,
    };
    let look = pictures::Look {
        show,
        nodes: if nodes { Nodes::Drawn } else { Nodes::Left },
        ..pictures::Look::default()
    };
    let units = pictures::Units {
        energy: document.scale.energy().trim().into(),
        length: document.scale.length().trim().into(),
    };
    let caption = pictures::Caption {
        title: document.title.clone(),
        units,
        model: document.about.clone(),
    };
    let picture = pictures::map(&spectrum.modes, mode, level, &caption, &look);
    let path = free_name(folder, &document.stem, level.index, show.name());
    let written = picture.and_then(|p| p.save(&path));
    written.map(|()| path).map_err(|e| e.to_string())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn nothing_is_written_over() {
        let folder = tempfile::tempdir().expect("a scratch folder");
        let name = |s: &str| {
            let p = free_name(folder.path(), s, 3, "wave");
            p.file_name()
                .expect("a name")
                .to_string_lossy()
                .into_owned()
        };
        assert_eq!(name("two lobe/7"), "two-lobe-7-3-wave.png");
        std::fs::write(folder.path().join("two-lobe-7-3-wave.png"), "x").expect("writable");
        assert_eq!(name("two lobe/7"), "two-lobe-7-3-wave-2.png");
        assert_eq!(name("../.."), "map-3-wave.png");
    }
}
