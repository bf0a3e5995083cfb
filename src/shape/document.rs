//! A checked shape document: its text, and what it means.

use super::build::{self, ShapeOutline, Traces};
use super::edit;
use super::expression::Expression;
use super::fault::ShapeErrors;
use super::model::{Finish, Host, Scale, Solve, Step};
use super::read::{self, Model};
use super::sizes::Size;
use crate::units::constants::KINETIC;
use crate::units::{Dimension, Quantity};
use std::fs::File;
use std::io::Read;
use std::path::{Path, PathBuf};
use std::sync::Arc;

/// Bytes a document may have.
pub const MOST_BYTES: usize = 4 << 20;

/// A shape document that has been read without fault.
///
/// The text is kept as it was written; edits change single values in it and leave comments,
/// spacing and order alone. A clone is cheap, and serves as a step of an undo list.
#[derive(Clone, Debug)]
pub struct Document {
    file: String,
    folder: PathBuf,
    text: Arc<str>,
    model: Arc<Model>,
    traces: Traces,
}

/// The labels of the units a document speaks in; empty for reduced shapes.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Labels {
    /// Of energies: "meV".
    pub energy: &'static str,
    /// Of lengths: "nm".
    pub length: &'static str,
}

impl Document {
    /// Reads the document at `path`; pictures and point lists are looked for in its folder.
    ///
    /// # Errors
    /// An unreadable file, and everything [`Document::parse`] refuses.
    pub fn read(path: &Path) -> Result<Self, ShapeErrors> {
        let file = path.display().to_string();
        let fail = |error: std::io::Error| {
            let (what, remedy) = match error.kind() {
                std::io::ErrorKind::NotFound => {
                    ("there is no such file".to_owned(), "check the path")
                }
                std::io::ErrorKind::PermissionDenied => (
                    "no permission to read it".to_owned(),
                    "check its owner and mode",
                ),
                std::io::ErrorKind::IsADirectory => {
                    ("this is a folder".to_owned(), "name a shape document in it")
                }
                _ => (error.to_string(), ""),
            };
            ShapeErrors::whole(&file, what, remedy)
        };
        if path.is_dir() {
            return Err(fail(std::io::ErrorKind::IsADirectory.into()));
        }
        let mut bytes = Vec::new();
        File::open(path)
            .and_then(|f| f.take(MOST_BYTES as u64 + 1).read_to_end(&mut bytes))
            .map_err(fail)?;
        let folder = path.parent().unwrap_or(Path::new("")).to_owned();
        Self::parse_bytes(&bytes, &file, &folder)
    }

    /// Reads bytes that should be a document.
    ///
    /// # Errors
    /// Bytes that are no UTF-8, and everything [`Document::parse`] refuses.
    pub fn parse_bytes(bytes: &[u8], file: &str, folder: &Path) -> Result<Self, ShapeErrors> {
        if bytes.len() > MOST_BYTES {
            return Err(too_large(file));
        }
        match std::str::from_utf8(bytes) {
            Ok(text) => Self::parse(text, file, folder),
            Err(error) => {
                let line = bytes[..error.valid_up_to()]
                    .iter()
                    .filter(|&&b| b == b'\n')
                    .count()
                    + 1;
                let what = format!("this is not text in UTF-8 (line {line})");
                Err(ShapeErrors::whole(
                    file,
                    what,
                    "a shape document is a TOML text; pictures are named in it with add = \"picture\"",
                ))
            }
        }
    }

    /// Reads a text; `file` is what messages call it, `folder` where its pictures and point
    /// lists are.
    ///
    /// # Errors
    /// All faults of the text, each with its line and word.
    pub fn parse(text: &str, file: &str, folder: &Path) -> Result<Self, ShapeErrors> {
        if text.len() > MOST_BYTES {
            return Err(too_large(file));
        }
        Self::checked(Arc::from(text), file, folder, Traces::default())
    }

    fn checked(
        text: Arc<str>,
        file: &str,
        folder: &Path,
        traces: Traces,
    ) -> Result<Self, ShapeErrors> {
        match read::read(&text) {
            Ok(model) => Ok(Self {
                file: file.to_owned(),
                folder: folder.to_owned(),
                text,
                model: Arc::new(model),
                traces,
            }),
            Err(faults) => Err(ShapeErrors::new(file, &text, faults)),
        }
    }

    /// The text, as it would be saved.
    pub fn text(&self) -> &str {
        &self.text
    }

    /// What messages call the file.
    pub fn file(&self) -> &str {
        &self.file
    }

    /// The folder pictures and point lists are looked for in.
    pub fn folder(&self) -> &Path {
        &self.folder
    }

    /// The title; the name of the file when it has none.
    pub fn title(&self) -> &str {
        let stem = || Path::new(&self.file).file_stem().and_then(|s| s.to_str());
        self.model
            .title
            .as_deref()
            .or_else(stem)
            .unwrap_or("untitled")
    }

    /// Lab or reduced units.
    pub fn scale(&self) -> Scale {
        self.model.scale
    }

    /// The labels of the units.
    pub fn units(&self) -> Labels {
        match self.scale() {
            Scale::Lab => Labels {
                energy: "meV",
                length: "nm",
            },
            Scale::Reduced => Labels {
                energy: "",
                length: "",
            },
        }
    }

    /// ħ²/2m in meV nm²; 1 for reduced shapes.
    pub fn kinetic(&self) -> f64 {
        self.model.host.as_ref().map_or(1.0, |h| KINETIC / h.mass)
    }

    /// The host material; `None` for reduced shapes.
    pub fn host(&self) -> Option<&Host> {
        self.model.host.as_ref()
    }

    /// The named sizes, in the order of the text.
    pub fn sizes(&self) -> &[Size] {
        &self.model.sizes
    }

    /// The steps of the outline.
    pub fn steps(&self) -> &[Step] {
        &self.model.steps
    }

    /// Rounding and growing.
    pub fn finish(&self) -> Finish {
        self.model.finish
    }

    /// What is asked of the solver.
    pub fn solve(&self) -> Solve {
        self.model.solve
    }

    /// The outline, made step by step, then rounded, then grown.
    ///
    /// # Errors
    /// Unreadable files, figures that cross themselves, steps and finishes that leave nothing;
    /// each names its step and line.
    pub fn outline(&self) -> Result<ShapeOutline, ShapeErrors> {
        let mut made = build::outline(&self.model, &self.folder, &self.traces)
            .map_err(|faults| ShapeErrors::new(&self.file, &self.text, faults))?;
        made.notes.splice(0..0, self.model.notes.iter().cloned());
        Ok(made)
    }

    /// The same document with one value changed: a size by its name (`neck`), any key by its path
    /// (`solve.accuracy`, `finish.grow`, `outline.2.radius`, `outline.1.points.3.x`; steps and
    /// list entries count from 1). `value` is written as in the document, text without quotes:
    /// `20`, `2*radius`, `45 nm`, `[10, 0]`, `GaAs`.
    ///
    /// # Errors
    /// Paths that lead nowhere, with the nearest that do, and faults of the changed text.
    pub fn set(&self, path: &str, value: &str) -> Result<Self, ShapeErrors> {
        self.set_all(&[(path, value)])
    }

    /// [`Document::set`] for several values at once, checked together.
    ///
    /// # Errors
    /// As [`Document::set`].
    pub fn set_all(&self, changes: &[(&str, &str)]) -> Result<Self, ShapeErrors> {
        let text = edit::apply(&self.text, changes)
            .map_err(|(what, remedy)| ShapeErrors::whole(&self.file, what, &remedy))?;
        if text.len() > MOST_BYTES {
            return Err(too_large(&self.file));
        }
        Self::checked(
            Arc::from(text),
            &self.file,
            &self.folder,
            self.traces.clone(),
        )
        .map_err(|mut e| {
            let list: Vec<String> = changes.iter().map(|(p, v)| format!("{p} = {v}")).collect();
            e.file = format!("{} (with {})", self.file, list.join(", "));
            e
        })
    }

    /// What is written at a path of [`Document::set`], without quotes.
    pub fn get(&self, path: &str) -> Option<String> {
        edit::written(&self.text, path)
    }

    /// The value of an expression or quantity over the sizes of this document.
    ///
    /// # Errors
    /// A message for the person who typed it.
    pub fn evaluate(&self, text: &str) -> Result<f64, String> {
        if let Ok(quantity) = text.parse::<Quantity>()
            && quantity.dimension != Dimension::Number
        {
            return Ok(quantity.value);
        }
        let value_of = |name: &str| {
            self.sizes()
                .iter()
                .find(|s| s.name == name)
                .map(|s| s.value)
        };
        let expression =
            Expression::parse(text).map_err(|s| format!("{}; {}", s.what, s.remedy))?;
        if let Some((_, name)) = expression.names.iter().find(|n| value_of(&n.1).is_none()) {
            let known: Vec<&str> = self.sizes().iter().map(|s| s.name.as_str()).collect();
            let remedy = super::near::remedy(name, &known, "this document has no sizes");
            return Err(format!("there is no size `{name}`; {remedy}"));
        }
        match expression.value(&value_of) {
            Ok(Some(value)) => Ok(value),
            Ok(None) => Err(format!("\"{text}\" has no value")),
            Err(s) => Err(format!("{}; {}", s.what, s.remedy)),
        }
    }
}

fn too_large(file: &str) -> ShapeErrors {
    ShapeErrors::whole(
        file,
        format!("a document of more than {} MB", MOST_BYTES >> 20),
        "keep long point lists in a file of their own, with add = \"points\"",
    )
}
