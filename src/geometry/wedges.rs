//! Where a boundary visits a vertex more than once, which edge follows which.
//!
//! Two squares that touch in a vertex are two loops; a hole that touches the outer edge from
//! within is one loop with it. Both come out right if every wedge of material at the vertex is
//! bounded by one outgoing edge and the incoming edge next to it counter-clockwise, and so does
//! the angle of every corner there.

use super::arrange::Arrangement;
use super::overlay::Step;
use std::collections::HashMap;
use std::f64::consts::TAU;

/// The contours put together anew by the rule above.
pub(super) fn loops(contours: Vec<Vec<Step>>, arrangement: &Arrangement) -> Vec<Vec<Step>> {
    let ends = |s: &Step| {
        let e = &arrangement.edges[s.0];
        if s.1 { (e.from, e.to) } else { (e.to, e.from) }
    };
    let mut visits: HashMap<usize, u32> = HashMap::new();
    for s in contours.iter().flatten() {
        *visits.entry(ends(s).0).or_default() += 1;
    }
    if visits.values().all(|v| *v == 1) {
        return contours;
    }
    // Indices into the flat list of steps.
    let steps: Vec<Step> = contours.into_iter().flatten().collect();
    let mut outgoing: HashMap<usize, Vec<usize>> = HashMap::new();
    for (k, s) in steps.iter().enumerate() {
        outgoing.entry(ends(s).0).or_default().push(k);
    }
    let mut taken = vec![false; steps.len()];
    let next: Vec<usize> = (0..steps.len())
        .map(|k| {
            let out = outgoing.get(&ends(&steps[k]).1).map_or(&[][..], |o| o);
            let best = match out {
                [only] => Some(*only),
                many => many.iter().copied().filter(|o| !taken[*o]).min_by(|a, b| {
                    let (x, y) = (
                        wedge(arrangement, &steps, k, *a),
                        wedge(arrangement, &steps, k, *b),
                    );
                    x.0.total_cmp(&y.0).then(x.1.total_cmp(&y.1))
                }),
            };
            let best = best.unwrap_or(k);
            taken[best] = true;
            best
        })
        .collect();
    let mut seen = vec![false; steps.len()];
    let mut out = Vec::new();
    for start in 0..steps.len() {
        let mut run = Vec::new();
        let mut k = start;
        while !seen[k] {
            seen[k] = true;
            run.push(steps[k]);
            k = next[k];
        }
        if !run.is_empty() {
            out.push(run);
        }
    }
    out
}

/// Angle from the outgoing step `o` counter-clockwise to the incoming step `i`, and, for edges
/// that leave the vertex in the same direction, the difference of their curvatures.
fn wedge(arrangement: &Arrangement, steps: &[Step], i: usize, o: usize) -> (f64, f64) {
    let (out, k_out) = arrangement.edges[steps[o].0].leaving(steps[o].1);
    let (inc, k_in) = arrangement.edges[steps[i].0].leaving(!steps[i].1);
    let bend = k_in - k_out;
    let angle = (inc - out).rem_euclid(TAU);
    // Rounded to steps that hide the roundoff of tangents, so that curvatures decide.
    let coarse = (angle / 1e-7).round() * 1e-7;
    if !(1e-7..=TAU - 2e-7).contains(&coarse) {
        return (if bend >= 0.0 { 0.0 } else { TAU }, bend);
    }
    (coarse, bend)
}
