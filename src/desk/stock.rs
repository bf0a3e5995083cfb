//! The stock of pictures: what the view needs, what is there, what is still to be made.

use super::jobs::Job;
use super::state::{Mount, Picture, State, View};
use std::sync::Arc;

/// Pictures kept per mount are worth at most this many dots, some 64 MB.
const KEPT_DOTS: usize = 12_000_000;

/// Lays the outline anew after a change of size.
pub fn remount(state: &mut State) {
    let layout = state.layout();
    let large = layout.and_then(|l| state.mount(l.plate.width, l.plate.height));
    let small = state.tiles().and_then(|t| state.mount(t.width, t.height));
    if large.as_ref().map(|m| m.sight) != state.mount.as_ref().map(|m| m.sight) {
        state.mount = large.map(Arc::new);
        state.pictures.clear();
        state.last = None;
    }
    if small.as_ref().map(|m| m.sight) != state.small.as_ref().map(|m| m.sight) {
        state.small = small.map(Arc::new);
        state.thumbs.clear();
    }
}

/// Puts a picture that was made into the stock.
pub fn taken(
    state: &mut State,
    generation: u64,
    mount: &Arc<Mount>,
    mode: usize,
    picture: Picture,
) {
    if generation != state.solving.generation {
        return;
    }
    let same = |m: &Option<Arc<Mount>>| m.as_ref().is_some_and(|m| Arc::ptr_eq(m, mount));
    let picture = Arc::new(picture);
    if same(&state.mount) {
        if mode == state.chosen {
            state.last = Some(picture.clone());
        }
        let dots = mount.within.len().max(1);
        if (state.pictures.len() + 1) * dots > KEPT_DOTS {
            state.pictures.clear();
        }
        state.pictures.insert(mode, picture);
    } else if same(&state.small) {
        let dots = mount.within.len().max(1);
        if (state.thumbs.len() + 1) * dots > KEPT_DOTS {
            state.thumbs.clear();
        }
        state.thumbs.insert(mode, picture);
    }
}

/// The job for what the view needs and does not have: the chosen mode first, then its neighbours,
/// so that a step finds its picture ready.
pub fn wanted_pictures(state: &mut State) -> Vec<Job> {
    let Some(spectrum) = state.solving.spectrum.clone() else {
        return Vec::new();
    };
    let count = spectrum.levels.len();
    let (mount, modes): (_, Vec<usize>) = match state.view {
        View::Plate => {
            if let Some(p) = state.pictures.get(&state.chosen) {
                state.last = Some(p.clone());
            }
            let near = [
                Some(state.chosen),
                state.chosen.checked_add(1),
                state.chosen.checked_sub(1),
            ];
            let near = near.into_iter().flatten().filter(|m| *m < count);
            let missing = near.filter(|m| !state.pictures.contains_key(m));
            (state.mount.clone(), missing.collect())
        }
        View::Sheet => {
            let page = state.tiles().map_or(1, |t| t.page());
            let first = state.chosen / page * page;
            let shown = first..(first + page).min(count);
            let missing = shown.filter(|m| !state.thumbs.contains_key(m));
            (state.small.clone(), missing.collect())
        }
    };
    let measure = if state.chosen < count && !state.portraits.contains_key(&state.chosen) {
        vec![state.chosen]
    } else {
        Vec::new()
    };
    match mount {
        Some(mount) if !(modes.is_empty() && measure.is_empty()) => vec![Job::Take {
            generation: state.solving.generation,
            spectrum,
            lines: state.lines.clone(),
            mount,
            modes,
            measure,
        }],
        _ => Vec::new(),
    }
}
