//! The desk: plate, ladder and slip on a terminal, driven by keys.
//!
//! Enters: a [`Document`] and [`Settings`]. Leaves: nothing but what the person exports.
//! `update(&mut State, Action) -> Vec<Job>` is the only place where state changes, [`view`] is a
//! pure drawing of it, and one loop feeds both from keys, jobs and ticks. This is the only room
//! that knows a terminal.

mod actions;
mod capability;
mod document;
mod export;
mod foot;
mod guard;
mod head;
mod help;
mod jobs;
mod keys;
mod ladder;
mod layout;
mod listen;
mod notation;
mod paint;
mod plate;
mod portrait;
mod print;
mod round;
mod run;
mod screen;
mod sheet;
mod slip;
mod state;
mod update;
mod view;
mod wire;
mod workers;

pub use actions::{ACTIONS, Deed, Entry, Place, key_table};
pub use capability::{Background, Capability, Colours, Glyphs};
pub use document::{Document, Scale};
pub use jobs::{Action, Job};
pub use keys::Key;
pub use layout::SMALLEST;
pub use print::print_map;
pub use run::{DeskError, Rehearsal, Settings, run};
pub use state::{Message, Overlay, Question, Show, State, View};
pub use update::update;
pub use view::view;
pub use workers::perform;
