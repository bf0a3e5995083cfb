//! From the words of a command to a checked shape and what is wanted of it.

use super::options::{Accuracy, Asked, Sizes};
use super::stop::Stop;
use crate::pictures;
use crate::shape::{self, Document, Host, Scale};
use crate::spectrum::{Model, Wanted};
use crate::units::{Dimension, Quantity};
use std::io::Read;
use std::path::Path;

/// A shape that is ready to be solved.
pub struct Opened {
    /// The document, with the changes of the command line.
    pub document: Document,
    /// What is solved.
    pub model: Model,
    /// Remarks on the outline.
    pub notes: Vec<String>,
    /// What was modelled, in a few words.
    pub about: String,
    /// What the document asks of the solver.
    pub wanted: Wanted,
}

impl Opened {
    /// Reads the document at `path` (`-`: standard input; absent: the built-in one) and makes its
    /// outline.
    ///
    /// # Errors
    /// All faults of the document.
    pub fn read(path: Option<&Path>, sizes: &Sizes) -> Result<Self, Stop> {
        let mut document = match path {
            None => shape::demo(),
            Some(p) if p == Path::new("-") => from_standard_input()?,
            Some(p) => Document::read(p)?,
        };
        if !sizes.set.is_empty() {
            let changes: Vec<(&str, &str)> = sizes
                .set
                .iter()
                .map(|(name, value)| (name.as_str(), value.as_str()))
                .collect();
            document = document.set_all(&changes)?;
        }
        let (model, notes) = Model::of(&document)?;
        Ok(Self {
            about: about(document.host()),
            model,
            notes,
            wanted: Wanted::of(&document),
            document,
        })
    }

    /// Lets the command line override what the document asks.
    ///
    /// # Errors
    /// An energy that cannot be read.
    pub fn ask(&mut self, asked: &Asked) -> Result<(), Stop> {
        if let Some(count) = asked.modes {
            self.wanted.count = count;
        }
        if let Some(text) = &asked.from {
            self.wanted.from = Some(self.energy("--from", text)?);
        }
        self.ask_accuracy(&asked.accuracy);
        Ok(())
    }

    /// The accuracy alone.
    pub fn ask_accuracy(&mut self, asked: &Accuracy) {
        if let Some(accuracy) = asked.accuracy {
            self.wanted.accuracy = accuracy;
        }
    }

    /// An energy in the units of the shape.
    ///
    /// # Errors
    /// Text that is no energy, or has a unit where the shape has none.
    pub fn energy(&self, option: &str, text: &str) -> Result<f64, Stop> {
        let refuse = |why: String| Stop::input(format!("{option} \"{text}\": {why}"));
        let value = match self.document.scale() {
            Scale::Lab => Quantity::of(text, Dimension::Energy).map_err(|e| refuse(e.to_string())),
            Scale::Reduced => Quantity::of(text, Dimension::Number).map_err(|_| {
                refuse("this shape is in reduced units, so take a number without a unit".into())
            }),
        }?;
        if value.is_finite() {
            Ok(value)
        } else {
            Err(refuse("take a finite energy".into()))
        }
    }

    /// What pictures are captioned with.
    pub fn caption(&self) -> pictures::Caption {
        let units = self.document.units();
        pictures::Caption {
            title: self.document.title().to_owned(),
            units: pictures::Units {
                energy: units.energy.to_owned(),
                length: units.length.to_owned(),
            },
            model: self.about.clone(),
        }
    }
}

fn from_standard_input() -> Result<Document, Stop> {
    let mut bytes = Vec::new();
    let most = shape::MOST_BYTES as u64 + 1;
    let read = std::io::stdin().lock().take(most).read_to_end(&mut bytes);
    read.map_err(|e| {
        Stop::Machine(anyhow::Error::new(e).context("standard input cannot be read"))
    })?;
    Ok(Document::parse_bytes(
        &bytes,
        "standard input",
        Path::new(""),
    )?)
}

/// `one electron, hard wall, GaAs (m = 0.067 mₑ)`.
fn about(host: Option<&Host>) -> String {
    match host {
        None => "one particle, hard wall, −Δψ = Eψ".to_owned(),
        Some(Host {
            name: Some(name),
            mass,
            ..
        }) => {
            format!("one electron, hard wall, {name} (m = {mass} mₑ)")
        }
        Some(Host { mass, .. }) => format!("one electron, hard wall, m = {mass} mₑ"),
    }
}
