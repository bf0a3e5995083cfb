//! One solve under a gauge, which Ctrl-C calls off.

use super::gauge::Gauge;
use super::open::Opened;
use super::stop::Stop;
use crate::spectrum::{self, Spectrum};
use signal_hook::consts::{SIGINT, SIGTERM};
use signal_hook::iterator::Signals;
use std::sync::Arc;
use std::sync::atomic::{AtomicI32, Ordering};

/// Levels and modes of an opened shape.
///
/// # Errors
/// Those of the solver; [`Stop::Signal`] when it was called off.
pub fn solve(opened: &Opened) -> Result<Spectrum, Stop> {
    let (gauge, watch) = Gauge::start();
    let caught = Arc::new(AtomicI32::new(0));
    let signals = Signals::new([SIGINT, SIGTERM]);
    // where signals cannot be caught they end the program, which is what they are for
    let handle = signals.ok().map(|mut signals| {
        let handle = signals.handle();
        let (watch, caught) = (watch.clone(), Arc::clone(&caught));
        std::thread::spawn(move || {
            for signal in signals.forever() {
                if caught.swap(signal, Ordering::SeqCst) != 0 {
                    // asked twice: do not wait for the solver's next look
                    let _ = signal_hook::low_level::emulate_default_handler(signal);
                }
                watch.cancel();
            }
        });
        handle
    });
    let kinetic = opened.document.kinetic();
    let solved = spectrum::solve(&opened.outline, kinetic, &opened.wanted, None, &watch);
    if let Some(handle) = handle {
        handle.close();
    }
    drop(gauge);
    match (solved, caught.load(Ordering::SeqCst)) {
        (_, signal) if signal != 0 => Err(Stop::Signal(signal)),
        (solved, _) => Ok(solved?),
    }
}
