//! How far a job is, whether somebody called it off, and how work is shared among threads. Knows
//! nothing of terminals.

mod crew;

pub use crew::shared;

use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};

/// A step of a long job: `done` of `of` units of `what`.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Step {
    /// Units finished.
    pub done: usize,
    /// Units in all.
    pub of: usize,
    /// What is being counted, in a few words ("levels", "cut cells").
    pub what: &'static str,
}

/// The job was called off before it ended.
#[derive(Clone, Copy, Debug, PartialEq, Eq, thiserror::Error)]
#[error("called off")]
pub struct Cancelled;

type Listener = dyn Fn(Step) + Send + Sync;

/// What a worker holds: a cancel flag to look at and somebody to report to.
#[derive(Clone, Default)]
pub struct Watch {
    cancel: Arc<AtomicBool>,
    listener: Option<Arc<Listener>>,
}

impl std::fmt::Debug for Watch {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.debug_struct("Watch")
            .field("cancelled", &self.is_cancelled())
            .finish()
    }
}

impl Watch {
    /// A watch that nobody listens to and nobody calls off.
    pub fn quiet() -> Self {
        Self::default()
    }

    /// A watch that hands every step to `listener`.
    pub fn listened(listener: impl Fn(Step) + Send + Sync + 'static) -> Self {
        Self {
            cancel: Arc::default(),
            listener: Some(Arc::new(listener)),
        }
    }

    /// Calls the job off; every clone of this watch sees it.
    pub fn cancel(&self) {
        self.cancel.store(true, Ordering::Relaxed);
    }

    /// Whether the job was called off.
    pub fn is_cancelled(&self) -> bool {
        self.cancel.load(Ordering::Relaxed)
    }

    /// Reports a step, and says whether to go on.
    ///
    /// # Errors
    /// [`Cancelled`] when the job was called off.
    pub fn step(&self, done: usize, of: usize, what: &'static str) -> Result<(), Cancelled> {
        if self.is_cancelled() {
            return Err(Cancelled);
        }
        if let Some(listener) = &self.listener {
            listener(Step { done, of, what });
        }
        Ok(())
    }
}
