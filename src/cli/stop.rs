//! Why a run ended early, what it says, and its exit code.

use crate::pictures::PictureError;
use crate::shape::ShapeErrors;
use crate::spectrum::SpectrumError;
use std::io::{self, Write};
use std::process::ExitCode;

/// Why a run ended before it was done.
#[derive(Debug)]
pub enum Stop {
    /// Help, the version, or arguments that make no sense.
    Words(Box<clap::Error>),
    /// Something that was given is wrong: exit code 2.
    Input(anyhow::Error),
    /// The machine could not: exit code 1.
    Machine(anyhow::Error),
    /// A signal, by its number.
    Signal(i32),
    /// The reader of our output has gone: as good as done.
    Closed,
}

impl Stop {
    /// A fault of the input.
    pub fn input(message: impl Into<String>) -> Self {
        Self::Input(anyhow::Error::msg(message.into()))
    }

    /// Says why on standard error; help and version go to standard output.
    pub fn report(&self) {
        // there is nobody to tell when standard error itself fails
        match self {
            Self::Words(error) => {
                let _ = error.print();
            }
            Self::Input(error) | Self::Machine(error) => {
                let _ = writeln!(io::stderr(), "dotwright: {error:#}");
            }
            Self::Signal(_) => {
                let _ = writeln!(io::stderr(), "dotwright: called off, nothing was written");
            }
            Self::Closed => {}
        }
    }

    /// The exit code.
    pub fn code(&self) -> ExitCode {
        ExitCode::from(self.number() as u8)
    }

    /// The exit code as a number, 0 to 255.
    pub(super) fn number(&self) -> i32 {
        match self {
            Self::Closed => 0,
            Self::Words(error) if !error.use_stderr() => 0,
            Self::Machine(_) => 1,
            Self::Words(_) | Self::Input(_) => 2,
            Self::Signal(n) => (128 + n).clamp(128, 255),
        }
    }
}

impl From<ShapeErrors> for Stop {
    fn from(errors: ShapeErrors) -> Self {
        Self::Input(errors.into())
    }
}

impl From<SpectrumError> for Stop {
    fn from(error: SpectrumError) -> Self {
        match error {
            SpectrumError::TooMuch(_) => Self::Input(error.into()),
            SpectrumError::Cancelled(_) => Self::Signal(signal_hook::consts::SIGINT),
            SpectrumError::Numerical(_) => Self::Machine(error.into()),
        }
    }
}

impl From<PictureError> for Stop {
    fn from(error: PictureError) -> Self {
        match error {
            PictureError::NoSuchMode { .. } | PictureError::Width(_) | PictureError::Empty => {
                Self::Input(error.into())
            }
            PictureError::Encode(_) | PictureError::Write { .. } => Self::Machine(error.into()),
        }
    }
}
