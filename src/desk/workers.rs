//! Threads that do the jobs: one slot a kind, a new job replacing the one under way.

use super::export::write_map;
use super::jobs::{Action, Job};
use super::plate::{Exposure, Strokes};
use super::portrait::portrait;
use super::run::Rehearsal;
use super::state::Picture;
use crate::progress::Watch;
use crate::spectrum::{SpectrumError, solve};
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::sync::mpsc::{Receiver, Sender, channel};
use std::thread;

/// Threads of this name may panic without taking the terminal down.
pub const WORKER: &str = "desk worker";

/// The slots.
pub struct Workers {
    solve: Slot,
    take: Slot,
    export: Slot,
}

struct Slot {
    sender: Sender<(Job, Watch)>,
    watch: Watch,
}

impl Workers {
    /// Starts the threads; what they find out goes to `out`.
    pub fn start(out: &Sender<Action>, rehearsal: Option<Rehearsal>) -> std::io::Result<Self> {
        let slot = || Slot::start(out.clone(), rehearsal);
        Ok(Self {
            solve: slot()?,
            take: slot()?,
            export: slot()?,
        })
    }

    /// Hands a job to its slot.
    pub fn give(&mut self, job: Job, out: &Sender<Action>) {
        match &job {
            Job::Solve { generation, .. } => {
                let (generation, out) = (*generation, out.clone());
                let watch = Watch::listened(move |step| {
                    // nobody listens any more: the desk is closed
                    let _ = out.send(Action::Step { generation, step });
                });
                self.solve.give(job, watch);
            }
            Job::Take { .. } => self.take.give(job, Watch::quiet()),
            Job::Export { .. } => self.export.give(job, Watch::quiet()),
            Job::Redraw | Job::Suspend => {}
        }
    }

    /// Calls everything off. Threads end by themselves once their slot is dropped.
    pub fn stop(&self) {
        for slot in [&self.solve, &self.take] {
            slot.watch.cancel();
        }
    }
}

impl Slot {
    fn start(out: Sender<Action>, rehearsal: Option<Rehearsal>) -> std::io::Result<Self> {
        let (sender, receiver) = channel();
        thread::Builder::new()
            .name(WORKER.into())
            .spawn(move || work(&receiver, &out, rehearsal))?;
        Ok(Self {
            sender,
            watch: Watch::quiet(),
        })
    }

    fn give(&mut self, job: Job, watch: Watch) {
        self.watch.cancel();
        self.watch = watch.clone();
        // the thread catches panics and lives as long as the sender
        let _ = self.sender.send((job, watch));
    }
}

fn work(jobs: &Receiver<(Job, Watch)>, out: &Sender<Action>, rehearsal: Option<Rehearsal>) {
    while let Ok(mut next) = jobs.recv() {
        while let Ok(newer) = jobs.try_recv() {
            next = newer;
        }
        let (job, watch) = next;
        let say = |action| {
            let _ = out.send(action);
        };
        let done = catch_unwind(AssertUnwindSafe(|| {
            if let (Some(r), Job::Solve { .. }) = (rehearsal, &job) {
                r.before_solve(&watch);
            }
            perform(job, &watch, &say);
        }));
        if let Err(panic) = done {
            let words = panic
                .downcast_ref::<String>()
                .map(String::as_str)
                .or_else(|| panic.downcast_ref::<&str>().copied())
                .unwrap_or("no reason given");
            say(Action::Broken(format!("a fault in dotwright: {words}")));
        }
    }
}

/// Does one job and says what comes of it; returns early when called off.
pub fn perform(job: Job, watch: &Watch, say: &dyn Fn(Action)) {
    match job {
        Job::Solve {
            generation,
            document: d,
        } => {
            let found = solve(&d.model, &d.wanted, watch);
            let result = match found {
                Ok(spectrum) => Ok(Box::new(spectrum)),
                Err(SpectrumError::Cancelled(_)) => return,
                Err(e) => Err(e.to_string()),
            };
            say(Action::Solved { generation, result });
        }
        Job::Take {
            generation,
            spectrum,
            lines,
            mount,
            modes,
            measure,
        } => {
            let mut measure = measure.into_iter();
            for (k, mode) in modes.into_iter().enumerate() {
                if watch.is_cancelled() {
                    return;
                }
                let exposure = Exposure::take(&spectrum.modes, mode, &mount.sight);
                let nodes = Strokes::nodes(&exposure, &mount.within, &mount.sight);
                say(Action::Taken {
                    generation,
                    mount: mount.clone(),
                    mode,
                    picture: Box::new(Picture { exposure, nodes }),
                });
                // the figures of the chosen mode come before the pictures of its neighbours
                if k == 0 {
                    measure_all(&mut measure, generation, &spectrum, &lines, watch, say);
                }
            }
            measure_all(&mut measure, generation, &spectrum, &lines, watch, say);
        }
        Job::Export {
            document,
            spectrum,
            mode,
            show,
            nodes,
            folder,
        } => {
            let written = write_map(&document, &spectrum, mode, (show, nodes), &folder);
            say(Action::Exported(written));
        }
        Job::Redraw | Job::Suspend => {}
    }
}

fn measure_all(
    modes: &mut dyn Iterator<Item = usize>,
    generation: u64,
    spectrum: &crate::spectrum::Spectrum,
    lines: &[Vec<crate::geometry::Point>],
    watch: &Watch,
    say: &dyn Fn(Action),
) {
    for mode in modes {
        if watch.is_cancelled() {
            return;
        }
        let portrait = portrait(&spectrum.modes, mode, lines);
        say(Action::Measured {
            generation,
            mode,
            portrait,
        });
    }
}
