//! What the desk lies open on: an outline, and what is wanted of it.

use crate::spectrum::{Model, Wanted};

/// Units on screen.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Scale {
    /// nm and meV.
    Lab,
    /// Pure numbers, −Δu = E u.
    Reduced,
}

impl Scale {
    /// Unit of energy with a leading space, or nothing.
    pub fn energy(self) -> &'static str {
        match self {
            Self::Lab => " meV",
            Self::Reduced => "",
        }
    }

    /// Unit of length with a leading space, or nothing.
    pub fn length(self) -> &'static str {
        match self {
            Self::Lab => " nm",
            Self::Reduced => "",
        }
    }
}

/// A shape on the desk.
#[derive(Clone, Debug)]
pub struct Document {
    /// Title, for people.
    pub title: String,
    /// What is modelled, in a few words, for captions.
    pub about: String,
    /// What exported files are named after.
    pub stem: String,
    /// What is solved, in nm and meV or in pure numbers.
    pub model: Model,
    /// How many levels, how exact.
    pub wanted: Wanted,
    /// Units on screen.
    pub scale: Scale,
}
