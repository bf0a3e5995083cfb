//! The loop: keys, jobs and ticks come in on one channel; frames go out.

use super::capability::{Capability, Glyphs};
use super::document::Document;
use super::guard::{self, Guard};
use super::jobs::{Action, Job};
use super::listen::{listen_to_keys, listen_to_signals, resize};
use super::screen::Screen;
use super::state::State;
use super::update::update;
use super::view::view;
use super::workers::Workers;
use crate::progress::Watch;
use signal_hook::consts::SIGTSTP;
use std::io::IsTerminal;
use std::path::PathBuf;
use std::sync::mpsc::{RecvTimeoutError, channel};
use std::thread;
use std::time::{Duration, Instant};

/// Between two looks at the clock while something runs.
const BEAT: Duration = Duration::from_millis(100);
/// Between two looks at the clock while nothing runs.
const REST: Duration = Duration::from_secs(3600);

/// Names a [`Rehearsal`] to a desk that is started as a program of its own.
const REHEARSE: &str = "DOTWRIGHT_REHEARSE";

/// What the person chose on the command line.
#[derive(Clone, Debug, Default)]
pub struct Settings {
    /// Characters; absent: judged from the terminal.
    pub glyphs: Option<Glyphs>,
    /// Kelvin, for the kT bar; absent: 4.2.
    pub temperature: Option<f64>,
    /// Where pictures go; empty: the current folder.
    pub folder: PathBuf,
    /// Something to go wrong, for tests.
    pub rehearsal: Option<Rehearsal>,
}

/// A mishap staged for tests of the terminal.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Rehearsal {
    /// Drawing panics once the levels are there.
    PanicInView,
    /// The solver panics.
    PanicInWorker,
    /// The solver takes its time, in steps of ten milliseconds.
    SlowSolve(usize),
}

impl Rehearsal {
    /// Of a word: `view`, `worker`, or a number of steps.
    pub fn named(word: &str) -> Option<Self> {
        match word {
            "view" => Some(Self::PanicInView),
            "worker" => Some(Self::PanicInWorker),
            n => n.parse().ok().map(Self::SlowSolve),
        }
    }

    /// What happens before a solve.
    ///
    /// # Panics
    /// For [`Rehearsal::PanicInWorker`].
    pub(super) fn before_solve(self, watch: &Watch) {
        match self {
            Self::PanicInView => {}
            Self::PanicInWorker => panic!("staged in the worker"),
            Self::SlowSolve(steps) => {
                for k in 0..steps {
                    if watch.step(k, steps, "levels").is_err() {
                        return;
                    }
                    thread::sleep(Duration::from_millis(10));
                }
            }
        }
    }
}

/// Why the desk could not be opened or went down.
#[derive(Debug, thiserror::Error)]
pub enum DeskError {
    /// Output does not go to a terminal.
    #[error("the desk needs a terminal; without one, use `levels` and `map`")]
    NoTerminal,
    /// The terminal cannot place its cursor.
    #[error("this terminal (TERM=dumb or unset) cannot show the desk; use `levels` and `map`")]
    NoScreen,
    /// The terminal failed.
    #[error("the terminal failed: {0}")]
    Terminal(#[from] std::io::Error),
}

/// Opens the desk on a shape and stays until the person leaves.
///
/// # Errors
/// See [`DeskError`]. The terminal is given back in every case.
pub fn run(document: Document, settings: Settings) -> Result<(), DeskError> {
    if !std::io::stdout().is_terminal() {
        return Err(DeskError::NoTerminal);
    }
    let capability = Capability::of_environment();
    if !capability.screen {
        return Err(DeskError::NoScreen);
    }
    let mut state = State::new(document, capability, settings.folder.clone());
    if let Some(glyphs) = settings.glyphs {
        state.glyphs = glyphs;
    }
    if let Some(t) = settings.temperature {
        state.temperature = t;
    }
    let guard = Guard::enter()?;
    let staged = || {
        std::env::var(REHEARSE)
            .ok()
            .and_then(|w| Rehearsal::named(&w))
    };
    let done = stay(&mut state, settings.rehearsal.or_else(staged));
    drop(guard);
    Ok(done?)
}

fn stay(state: &mut State, rehearsal: Option<Rehearsal>) -> std::io::Result<()> {
    let (sender, actions) = channel();
    let mut workers = Workers::start(&sender, rehearsal)?;
    listen_to_keys(sender.clone())?;
    let signals = listen_to_signals(sender.clone())?;
    let mut screen = Screen::open()?;
    let start = Instant::now();
    let mut waiting = vec![Action::Begin];
    let mut drawn: Option<Instant> = None;
    loop {
        let changed = waiting.iter().any(|a| !matches!(a, Action::Step { .. }));
        let mut jobs = update(state, Action::Tick(start.elapsed()));
        let size = screen.size()?;
        if size != state.size {
            jobs.extend(update(state, resize(size)));
        }
        for action in waiting.drain(..) {
            jobs.extend(update(state, action));
        }
        for job in jobs {
            match job {
                Job::Redraw => screen.forget()?,
                Job::Suspend => {
                    sleep_until_woken()?;
                    screen.forget()?;
                }
                job => workers.give(job, &sender),
            }
        }
        if state.quit {
            break;
        }
        if changed || drawn.is_none_or(|d| d.elapsed() >= BEAT) {
            let staged = rehearsal == Some(Rehearsal::PanicInView) && state.count() > 0;
            screen.draw(|frame| {
                assert!(!staged, "staged in the view");
                view(state, frame);
            })?;
            drawn = Some(Instant::now());
        }
        match actions.recv_timeout(if state.busy() { BEAT } else { REST }) {
            Ok(first) => waiting.push(first),
            Err(RecvTimeoutError::Timeout) => {}
            Err(RecvTimeoutError::Disconnected) => break,
        }
        // a slow line makes frames fewer, never late: all that came meanwhile counts at once
        waiting.extend(actions.try_iter());
    }
    workers.stop();
    signals.close();
    Ok(())
}

fn sleep_until_woken() -> std::io::Result<()> {
    guard::restore();
    signal_hook::low_level::emulate_default_handler(SIGTSTP)?;
    guard::take()
}
