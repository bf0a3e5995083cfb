//! Shape documents: TOML in, a checked outline and what is asked of it out.
//!
//! Enters: text, and through `intake` pictures and point lists. Leaves: a [`Document`] with its
//! sizes, its outline and its solver settings; edits that keep comments. This room knows no
//! lattices and no energies.

mod arithmetic;
mod build;
mod demo;
mod document;
mod edit;
mod expression;
mod fault;
mod figure;
mod kinds;
mod materials;
mod model;
mod near;
mod placing;
mod read;
mod reader;
mod sizes;
mod steps;
mod values;

pub use build::ShapeOutline;
pub use demo::demo;
pub use document::{Document, Labels, MOST_BYTES};
pub use fault::{Fault, ShapeErrors};
pub use materials::{MATERIALS, Material, material};
pub use model::{Figure, Finish, Host, Operation, Placement, Repeat, Scale, Solve, Step};
pub use sizes::Size;
