//! The shape that is opened when none is named.

use super::document::Document;
use std::path::Path;

/// The built-in shape: an asymmetric two-lobe dot.
pub fn demo() -> Document {
    Document::parse(
        include_str!("../../shapes/two-lobe.toml"),
        "two-lobe.toml (built in)",
        Path::new("shapes"),
    )
    .expect("the built-in document is read by a test of its own")
}
