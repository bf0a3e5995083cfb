//! The one place where the state changes.

use super::actions::{Deed, deed_of};
use super::answer::answer;
use super::capability::Background;
use super::document::Scale;
use super::jobs::{Action, Job};
use super::keys::Key;
use super::state::{Message, Overlay, Question, Running, Show, State, View};
use super::stock::{remount, taken, wanted_pictures};
use std::sync::Arc;

/// Takes in what happened; gives what is to be done.
pub fn update(state: &mut State, action: Action) -> Vec<Job> {
    match action {
        Action::Begin => vec![solve(state)],
        Action::Key(key) => press(state, key),
        Action::Resize {
            columns,
            rows,
            aspect,
        } => {
            state.size = (columns, rows);
            state.aspect = aspect.clamp(1.0, 4.0);
            state.repaint();
            remount(state);
            wanted_pictures(state)
        }
        Action::Tick(now) => {
            state.now = now;
            Vec::new()
        }
        Action::Step { generation, step } => {
            if generation == state.solving.generation
                && let Some(r) = &mut state.solving.running
            {
                if r.step.is_none_or(|s| s.what != step.what) {
                    r.stage = state.now;
                }
                r.step = Some(step);
            }
            Vec::new()
        }
        Action::Solved { generation, result } => solved(state, generation, result),
        Action::Taken {
            generation,
            mount,
            mode,
            picture,
        } => {
            taken(state, generation, &mount, mode, *picture);
            Vec::new()
        }
        Action::Measured {
            generation,
            mode,
            portrait,
        } => {
            if generation == state.solving.generation {
                state.portraits.insert(mode, portrait);
            }
            Vec::new()
        }
        Action::Exported(result) => {
            state.exporting = None;
            state.message = Some(match result {
                Ok(path) => Message::note(format!("written: {}", path.display())),
                Err(why) => Message::alarm(why),
            });
            Vec::new()
        }
        Action::Broken(why) => {
            state.solving.running = None;
            state.exporting = None;
            state.message = Some(Message::alarm(why));
            Vec::new()
        }
        Action::Leave => {
            state.quit = true;
            Vec::new()
        }
    }
}

fn solve(state: &mut State) -> Job {
    state.solving.generation += 1;
    state.solving.failure = None;
    state.solving.running = Some(Running {
        since: state.now,
        step: None,
        stage: state.now,
    });
    Job::Solve {
        generation: state.solving.generation,
        document: state.document.clone(),
    }
}

fn solved(
    state: &mut State,
    generation: u64,
    result: Result<Box<crate::spectrum::Spectrum>, String>,
) -> Vec<Job> {
    if generation != state.solving.generation {
        return Vec::new();
    }
    state.solving.running = None;
    match result {
        Ok(spectrum) => {
            state.pictures.clear();
            state.thumbs.clear();
            state.portraits.clear();
            state.last = None;
            state.chosen = state.chosen.min(spectrum.levels.len().saturating_sub(1));
            state.solving.spectrum = Some(Arc::new(*spectrum));
            wanted_pictures(state)
        }
        Err(why) => {
            state.message = Some(Message::alarm(why.clone()));
            state.solving.failure = Some(why);
            Vec::new()
        }
    }
}

fn press(state: &mut State, key: Key) -> Vec<Job> {
    state.message = None;
    let place = state.place();
    if let Some(deed) = deed_of(key, place) {
        return perform(state, deed);
    }
    match (&mut state.overlay, key) {
        (Some(Overlay::Question(_, text)), Key::Char(c))
            if text.len() < 24 && c.is_ascii_graphic() =>
        {
            text.push(c);
        }
        (Some(Overlay::Question(_, text)), Key::Backspace) => {
            let was_empty = text.pop().is_none();
            if was_empty {
                state.overlay = None;
            }
        }
        (None, Key::Char(c)) if c.is_ascii_digit() => {
            state.overlay = Some(Overlay::Question(Question::Level, c.to_string()));
        }
        _ => {}
    }
    Vec::new()
}

fn perform(state: &mut State, deed: Deed) -> Vec<Job> {
    let page = state.tiles().map_or((1, 1), |t| (t.across, t.page()));
    match deed {
        Deed::Lower => step(state, -1),
        Deed::Higher => step(state, 1),
        Deed::FiveLower => step(state, -5),
        Deed::FiveHigher => step(state, 5),
        Deed::RowUp => step(state, -(page.0 as isize)),
        Deed::RowDown => step(state, page.0 as isize),
        Deed::PageBack => step(state, -(page.1 as isize)),
        Deed::PageOn => step(state, page.1 as isize),
        Deed::First => step(state, isize::MIN / 2),
        Deed::Last => step(state, isize::MAX / 2),
        Deed::GoTo => ask(state, Question::Level),
        Deed::Temperature => {
            if state.document.scale == Scale::Reduced {
                state.message = Some(Message::note("a shape without units has no temperature"));
                return Vec::new();
            }
            ask(state, Question::Temperature)
        }
        Deed::Show => {
            state.show = match state.show {
                Show::Density => Show::Wave,
                Show::Wave => Show::Density,
            };
            Vec::new()
        }
        Deed::Nodes => {
            state.nodes = !state.nodes;
            Vec::new()
        }
        Deed::Sheet => {
            state.view = match state.view {
                View::Plate => View::Sheet,
                View::Sheet => View::Plate,
            };
            wanted_pictures(state)
        }
        Deed::Open => {
            state.view = View::Plate;
            wanted_pictures(state)
        }
        Deed::Export => export(state),
        Deed::Glyphs => {
            next_glyphs(state);
            Vec::new()
        }
        Deed::Background => {
            state.background = match state.background {
                Background::Dark => Background::Light,
                Background::Light => Background::Dark,
            };
            state.repaint();
            Vec::new()
        }
        Deed::Redraw => vec![Job::Redraw],
        Deed::Suspend => vec![Job::Suspend],
        Deed::Help => {
            state.overlay = Some(Overlay::Help(0));
            Vec::new()
        }
        Deed::ScrollUp | Deed::ScrollDown => {
            let most = super::help::most_scroll(state);
            if let Some(Overlay::Help(line)) = &mut state.overlay {
                *line = match deed {
                    Deed::ScrollUp => line.saturating_sub(1),
                    _ => (*line + 1).min(most),
                };
            }
            Vec::new()
        }
        Deed::Back => {
            if state.overlay.take().is_none() {
                state.view = View::Plate;
            }
            wanted_pictures(state)
        }
        Deed::Accept => answer(state),
        Deed::Quit => {
            state.quit = true;
            Vec::new()
        }
    }
}

fn step(state: &mut State, by: isize) -> Vec<Job> {
    let Some(last) = state.count().checked_sub(1) else {
        return Vec::new();
    };
    state.chosen = state.chosen.saturating_add_signed(by).min(last);
    wanted_pictures(state)
}

fn ask(state: &mut State, question: Question) -> Vec<Job> {
    state.overlay = Some(Overlay::Question(question, String::new()));
    Vec::new()
}

fn next_glyphs(state: &mut State) {
    let choices = state.capability.choices();
    if choices.len() < 2 {
        state.message = Some(Message::note(
            "this terminal and locale have plain characters only",
        ));
        return;
    }
    let at = choices.iter().position(|g| *g == state.glyphs);
    state.glyphs = choices[at.map_or(0, |k| (k + 1) % choices.len())];
}

fn export(state: &mut State) -> Vec<Job> {
    let Some(spectrum) = state.solving.spectrum.clone() else {
        state.message = Some(Message::note("there is no map yet"));
        return Vec::new();
    };
    if state.exporting.is_some() {
        state.message = Some(Message::note("a picture is being written; one moment"));
        return Vec::new();
    }
    state.exporting = Some(state.now);
    vec![Job::Export {
        document: state.document.clone(),
        spectrum,
        mode: state.chosen,
        show: state.show,
        nodes: state.nodes,
        folder: state.folder.clone(),
    }]
}
