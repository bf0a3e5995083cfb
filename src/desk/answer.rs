//! What becomes of an answer typed on the bottom line.

use super::jobs::Job;
use super::state::{Message, Overlay, Question, State};
use super::stock::wanted_pictures;

/// Takes the answer to the open question.
pub fn answer(state: &mut State) -> Vec<Job> {
    let Some(Overlay::Question(question, text)) = state.overlay.take() else {
        return Vec::new();
    };
    let text = text.trim();
    if text.is_empty() {
        return Vec::new();
    }
    match question {
        Question::Temperature => match text.trim_end_matches(['K', 'k']).parse::<f64>() {
            Ok(t) if t.is_finite() && (0.0..=1e4).contains(&t) => state.temperature = t,
            _ => {
                state.message = Some(Message::alarm(format!(
                    "\"{text}\" is no temperature; a number of kelvin from 0 to 10000 is, like 4.2"
                )));
            }
        },
        Question::Level => return go_to(state, text),
    }
    Vec::new()
}

fn go_to(state: &mut State, text: &str) -> Vec<Job> {
    let Some(spectrum) = state.solving.spectrum.clone() else {
        state.message = Some(Message::note("there are no levels yet"));
        return Vec::new();
    };
    let levels = &spectrum.levels;
    let target = if text.contains('.') {
        text.parse::<f64>()
            .ok()
            .filter(|e| e.is_finite())
            .and_then(|e| {
                let far = |k: &usize| (levels[*k].energy - e).abs();
                (0..levels.len()).min_by(|a, b| far(a).total_cmp(&far(b)))
            })
    } else {
        let number = text.parse::<usize>().ok();
        number.and_then(|n| levels.iter().position(|l| l.index == n))
    };
    match target {
        Some(k) => {
            state.chosen = k;
            wanted_pictures(state)
        }
        None => {
            let (a, b) = (
                levels.first().map_or(0, |l| l.index),
                levels.last().map_or(0, |l| l.index),
            );
            state.message = Some(Message::alarm(format!(
                "no level \"{text}\": numbers run from {a} to {b}; with a point it is an energy"
            )));
            Vec::new()
        }
    }
}
