//! One solve under a gauge, which Ctrl-C calls off.

use super::gauge::Gauge;
use super::open::Opened;
use super::stop::Stop;
use crate::progress::Watch;
use crate::spectrum::{self, Spectrum};
use signal_hook::consts::{SIGINT, SIGTERM};
use signal_hook::iterator::Signals;
use std::sync::Arc;
use std::sync::atomic::{AtomicI32, Ordering};
use std::sync::mpsc::{Receiver, RecvTimeoutError, channel};
use std::time::Duration;

/// How long the solver may take to notice that it was called off.
const GRACE: Duration = Duration::from_millis(300);

/// Levels and modes of an opened shape.
///
/// # Errors
/// Those of the solver; [`Stop::Signal`] when it was called off.
pub fn solve(opened: &Opened) -> Result<Spectrum, Stop> {
    let (gauge, watch) = Gauge::start();
    let caught = Arc::new(AtomicI32::new(0));
    let (running, ended) = channel();
    // where signals cannot be caught they end the program, which is what they are for
    let handle = Signals::new([SIGINT, SIGTERM]).ok().map(|signals| {
        let handle = signals.handle();
        let (watch, caught) = (watch.clone(), Arc::clone(&caught));
        std::thread::spawn(move || stand_by(signals, &watch, &caught, &ended));
        handle
    });
    let solved = spectrum::solve(&opened.model, &opened.wanted, &watch);
    drop::<std::sync::mpsc::Sender<()>>(running);
    if let Some(handle) = handle {
        handle.close();
    }
    drop(gauge);
    match (solved, caught.load(Ordering::SeqCst)) {
        (_, signal) if signal != 0 => Err(Stop::Signal(signal)),
        (solved, _) => Ok(solved?),
    }
}

/// Calls the solve off at the first signal. A solver in the middle of a long step is not waited
/// for: a solve writes nothing, so the program may end under it.
fn stand_by(mut signals: Signals, watch: &Watch, caught: &AtomicI32, ended: &Receiver<()>) {
    if let Some(signal) = signals.forever().next() {
        caught.store(signal, Ordering::SeqCst);
        watch.cancel();
        if ended.recv_timeout(GRACE) == Err(RecvTimeoutError::Timeout) {
            Gauge::wipe();
            let stop = Stop::Signal(signal);
            stop.report();
            std::process::exit(stop.number());
        }
    }
}
