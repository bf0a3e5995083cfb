//! What is solved: an outline and the physics within it.

use crate::geometry::Outline;
use crate::shape::{Document, ShapeErrors};

/// An outline with what governs the electron in it.
#[derive(Clone, Debug, PartialEq)]
pub struct Model {
    /// Where the electron is, hard walls all around.
    pub outline: Outline,
    /// ħ²/2m in energy × length²; 1 for reduced shapes.
    pub kinetic: f64,
}

impl Model {
    /// Hard walls and nothing else.
    pub fn hard(outline: Outline, kinetic: f64) -> Self {
        Self { outline, kinetic }
    }

    /// What a shape document describes, and remarks on its outline.
    ///
    /// # Errors
    /// An outline that cannot be made.
    pub fn of(document: &Document) -> Result<(Self, Vec<String>), ShapeErrors> {
        let made = document.outline()?;
        Ok((Self::hard(made.outline, document.kinetic()), made.notes))
    }
}
