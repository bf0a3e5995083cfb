//! dotwright turns the outline of a lateral nanostructure into its energy levels.
//!
//! The rooms, in the order the data flows; a room imports only from rooms before it:
//! `units → progress → geometry → intake → shape → lattice → operators → eigen → spectrum →
//! modes → figures → pictures → report → desk, cli`.

pub mod cli;
pub mod desk;
pub mod eigen;
pub mod geometry;
pub mod intake;
pub mod lattice;
pub mod modes;
pub mod operators;
pub mod pictures;
pub mod progress;
pub mod report;
pub mod shape;
pub mod spectrum;
pub mod units;
