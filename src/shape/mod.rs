//! Shape documents: TOML in, a checked outline and what is asked of it out.
//!
//! Enters: text, and through `intake` pictures and point lists. Leaves: a [`Document`] with its
//! sizes, its outline and its solver settings; edits that keep comments. This room knows no
//! lattices and no energies.
//!
//! What a document may hold, beyond the kinds of figures and their sizes:
//!
//! - Every number may be an expression over `[sizes]` (angles in degrees) or a quantity, `"45 nm"`.
//! - A step is placed in this order: `mirror` (`"x"`, `"y"` or the angle of the mirror line, which
//!   runs through the origin), `turn` (about the `centre` of the figure, or the middle of its box),
//!   `move`, `repeat = { count, turn, about, move }` (turned about the origin). `about = [x, y]`
//!   gives `mirror` and `turn` another fixed point.
//! - `[finish]` rounds first, as the mask is drawn, and then grows, as the process prints it.
//! - `picture` puts the lower left corner of its PNG at the origin; `level` is a grey between the
//!   darkest (0) and the brightest (1) of the picture, `inside` is `"bright"` or `"dark"`, `smooth`
//!   the distance the fitted outline may keep from the traced edge. `points` takes `smooth` too,
//!   and is an exact polygon without it.

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
