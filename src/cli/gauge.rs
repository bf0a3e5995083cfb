//! A gauge on standard error, for jobs that take longer than a blink.

use crate::desk::Capability;
use crate::progress::{Step, Watch};
use crate::units::duration;
use std::io::{self, IsTerminal, Write};
use std::sync::{Arc, Mutex};
use std::time::{Duration, Instant};

/// A job shorter than this shows no gauge.
const PATIENCE: Duration = Duration::from_millis(500);
/// Between two drawings.
const BEAT: Duration = Duration::from_millis(100);
/// Characters of the bar.
const BAR: usize = 24;

/// Draws progress while it lives; wipes the line when it goes.
pub struct Gauge {
    drawn: Arc<Mutex<Drawn>>,
}

struct Drawn {
    start: Instant,
    stage: (&'static str, Instant),
    last: Option<Instant>,
}

impl Gauge {
    /// A gauge and the watch that drives it; the gauge stays dark when standard error is no
    /// terminal, or one that cannot wipe a line.
    pub fn start() -> (Self, Watch) {
        let now = Instant::now();
        let drawn = Arc::new(Mutex::new(Drawn {
            start: now,
            stage: ("", now),
            last: None,
        }));
        let watch = if io::stderr().is_terminal() && Capability::of_environment().screen {
            let shared = Arc::clone(&drawn);
            Watch::listened(move |step| {
                // a thread that died while drawing leaves a gauge that is only decoration
                if let Ok(mut drawn) = shared.lock() {
                    drawn.show(step, Instant::now());
                }
            })
        } else {
            Watch::quiet()
        };
        (Self { drawn }, watch)
    }

    /// Clears the line, drawn or not, where standard error is a terminal.
    pub fn wipe() {
        if io::stderr().is_terminal() {
            let _ = write!(io::stderr(), "\r\x1b[K");
        }
    }
}

impl Drawn {
    fn show(&mut self, step: Step, now: Instant) {
        if self.stage.0 != step.what {
            self.stage = (step.what, now);
        }
        let early = now - self.start < PATIENCE;
        let fresh = self.last.is_some_and(|l| now - l < BEAT);
        if early || fresh {
            return;
        }
        self.last = Some(now);
        let line = line(step, now - self.stage.1);
        let _ = write!(io::stderr(), "\r\x1b[K{line}");
    }
}

impl Drop for Gauge {
    fn drop(&mut self) {
        if self.drawn.lock().is_ok_and(|d| d.last.is_some()) {
            Self::wipe();
        }
    }
}

/// `[######------] 12 of 20 levels, 1.3 s left`.
fn line(step: Step, spent: Duration) -> String {
    let part = (step.done as f64 / step.of.max(1) as f64).clamp(0.0, 1.0);
    let full = (part * BAR as f64) as usize;
    let bar = "#".repeat(full) + &"-".repeat(BAR - full);
    let mut text = format!("[{bar}] {} of {} {}", step.done, step.of, step.what);
    // an early guess is a wrong guess
    if part > 0.05 && spent > PATIENCE / 2 {
        let left = spent.as_secs_f64() * (1.0 - part) / part;
        text += &format!(", {} left", duration(left));
    }
    text
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_line_counts_and_guesses() {
        let step = |done, of| Step {
            done,
            of,
            what: "levels",
        };
        assert_eq!(
            line(step(12, 24), Duration::from_secs(3)),
            "[############------------] 12 of 24 levels, 3.00 s left"
        );
        assert_eq!(
            line(step(0, 0), Duration::ZERO),
            "[------------------------] 0 of 0 levels"
        );
    }
}
