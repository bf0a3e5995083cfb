//! When a Lanczos run has what the window asks for.

use super::certificate::{self, End};
use super::lanczos::Estimate;

/// How far a search is.
pub(super) enum State {
    Done(End),
    /// Levels still to converge, at least.
    Wait(usize),
}

/// Judges the Ritz values of a search against the window.
pub(super) struct Judge {
    pub lower: f64,
    pub shift: f64,
    /// Levels between `lower` and `shift`, by inertia.
    pub inside: usize,
    pub want: usize,
    pub tolerance: f64,
    pub cluster: f64,
    /// Checks in a row in which only levels below the shift were missing, and how many.
    pub stalled: (usize, usize),
}

impl Judge {
    pub fn size(&self, value: f64) -> f64 {
        let span = if self.lower.is_finite() {
            self.shift - self.lower
        } else {
            self.shift
        };
        value.abs().max(1e-3 * span.abs())
    }

    pub fn good(&self, e: &Estimate) -> bool {
        e.error <= self.tolerance * self.size(e.value)
    }

    /// Converged Ritz values inside the window, contiguous above the shift, and the next one.
    pub fn list(&self, estimates: &[Estimate]) -> (Vec<Estimate>, usize, Option<f64>) {
        let below = estimates
            .iter()
            .filter(|e| e.value > self.lower && e.value < self.shift && self.good(e));
        let mut list: Vec<Estimate> = below.copied().collect();
        let low = list.len();
        let mut above = estimates.iter().filter(|e| e.value > self.shift);
        let next = loop {
            match above.next() {
                Some(e) if self.good(e) => list.push(*e),
                Some(e) => break Some(e.value - e.error),
                None => break None,
            }
        };
        (list, low, next)
    }

    pub fn state(&mut self, estimates: &[Estimate]) -> State {
        let (list, low, next) = self.list(estimates);
        let values: Vec<f64> = list.iter().map(|e| e.value).collect();
        let end = certificate::end(
            &values,
            next,
            self.want.min(values.len().max(1)),
            self.cluster,
        );
        let short = self.inside.saturating_sub(low);
        let enough = values.len() + short >= self.want;
        if enough && short > 0 && next.is_some() {
            self.stalled = if self.stalled.1 == low {
                (self.stalled.0 + 1, low)
            } else {
                (0, low)
            };
        }
        match end {
            Some(end) if enough && (short == 0 || self.stalled.0 >= 3) => State::Done(end),
            _ => State::Wait(self.want.saturating_sub(values.len()).max(short).max(1)),
        }
    }
}
