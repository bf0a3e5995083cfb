//! The desk without a terminal: keystrokes in, screens and state out.
//!
//! Screens are compared with the texts in `tests/screens`; `BLESS=1` writes them anew.

mod bench;

use bench::{Desk, MONO, document, done, make_pair, rectangle, with_fixed_figures};
use dotwright::desk::{
    ACTIONS, Action, Colours, Glyphs, Job, Key, Overlay, Place, Scale, Show, State, View, key_table,
};
use dotwright::geometry::Outline;
use dotwright::progress::{Step, Watch};
use dotwright::spectrum::solve;
use std::time::Duration;

#[test]
fn the_first_screen() {
    Desk::open((80, 24)).shows("plate-80x24");
    Desk::open((60, 18)).shows("plate-60x18");
    Desk::open((200, 60)).shows("plate-200x60");
    Desk::open((59, 18)).shows("too-small");
}

#[test]
fn views_and_switches() {
    let mut desk = Desk::open((80, 24));
    desk.keys(&[Key::Right, Key::Up]).typed("dn");
    desk.shows("wave-80x24");
    desk.typed("?").shows("help-80x24");
    desk.keys(&[Key::Esc]).typed("s");
    desk.shows("sheet-80x24");
    desk.keys(&[Key::Down, Key::Enter]);
    assert_eq!(desk.state.view, View::Plate);
    desk.typed("4").shows("question-80x24");
}

#[test]
fn plain_terminals_get_plain_characters() {
    let mut d = document(rectangle(80., 50.));
    d.title = "Würfel – α²".into();
    for colours in [Colours::None, Colours::Sixteen, Colours::True] {
        let mut desk = Desk::new(d.clone(), (Glyphs::Plain, colours), (80, 24));
        for _ in 0..2 {
            desk.act(Action::Begin);
            for keys in ["", "d", "n", "?", "?s", "s5", "\u{1b}t"] {
                desk.typed(keys);
                assert!(desk.screen().is_ascii(), "{}", desk.screen());
            }
        }
    }
    let mut desk = Desk::new(
        document(rectangle(80., 50.)),
        (Glyphs::Plain, Colours::None),
        (80, 24),
    );
    desk.act(Action::Begin);
    desk.keys(&[Key::Right]).typed("d").shows("plain-80x24");
}

#[test]
fn half_blocks_fill_the_plate() {
    let d = document(rectangle(80., 50.));
    let mut desk = Desk::new(d, (Glyphs::HalfBlock, Colours::True), (120, 40));
    desk.act(Action::Begin);
    desk.shows("half-block-120x40");
    let before = desk.screen();
    desk.typed("b");
    assert_eq!(
        before,
        desk.screen(),
        "a light background changes colours only"
    );
}

#[test]
fn arrows_and_jumps_move_the_choice() {
    let mut desk = Desk::open((80, 24));
    let mut at = |keys: &[Key], want: usize| {
        desk.keys(keys);
        assert_eq!(desk.state.chosen, want, "{keys:?}");
    };
    at(&[Key::Left], 0);
    at(&[Key::Right, Key::Up], 2);
    at(&[Key::Down], 1);
    at(&[Key::PageUp], 6);
    at(&[Key::PageUp, Key::PageUp], 11);
    at(&[Key::PageDown], 6);
    at(&[Key::Home], 0);
    at(&[Key::End], 11);
    at(&[Key::Char('1'), Key::Char('0'), Key::Enter], 9);
    at(&[Key::Char('7'), Key::Esc], 9);
    at(&[Key::Char('1'), Key::Char('3'), Key::Enter], 9);
    assert!(
        desk.state
            .message
            .as_ref()
            .is_some_and(|m| m.alarm && m.text.contains("1 to 12"))
    );
    // energies are 1.25 + 0.75 k + 0.01 k²: the one closest to 4.5 is 4.41 at k = 4
    desk.typed("/4.5").keys(&[Key::Enter]);
    assert_eq!(desk.state.chosen, 4);
    desk.typed("7").keys(&[Key::Backspace, Key::Backspace]);
    assert_eq!(desk.state.overlay, None);
}

#[test]
fn the_temperature_is_asked_for_and_checked() {
    let mut desk = Desk::open((80, 24));
    desk.typed("t77K").keys(&[Key::Enter]);
    assert_eq!(desk.state.temperature, 77.0);
    assert!(desk.screen().contains("at 77 K"));
    for bad in ["t-3", "twarm", "t1e99", "tnan"] {
        desk.typed(bad).keys(&[Key::Enter]);
        assert_eq!(desk.state.temperature, 77.0);
        assert!(desk.screen().contains("is no temperature"));
    }
}

#[test]
fn maps_are_exported_under_free_names() {
    let mut desk = Desk::open((80, 24));
    desk.keys(&[Key::Right]).typed("e");
    assert!(
        desk.screen().contains("slab-dot-2-density.png"),
        "{}",
        desk.screen()
    );
    desk.typed("ede");
    let folder = desk.state.folder.clone();
    for name in ["2-density", "2-density-2", "2-wave"] {
        let bytes = std::fs::read(folder.join(format!("slab-dot-{name}.png")));
        assert!(bytes.expect("the picture is there").starts_with(b"\x89PNG"));
    }
    desk.state.folder = folder.join("no such folder");
    desk.typed("e");
    assert!(desk.state.message.as_ref().is_some_and(|m| m.alarm));
    assert_eq!(desk.state.exporting, None);
}

#[test]
fn every_entry_of_the_table_does_something() {
    for entry in ACTIONS {
        for &place in entry.places {
            for &key in entry.keys {
                let mut desk = Desk::open((80, 24));
                desk.typed("5").keys(&[Key::Enter]);
                match place {
                    Place::Plate => {}
                    Place::Sheet => {
                        desk.typed("s");
                    }
                    Place::Help => {
                        desk.resize(60, 18);
                        desk.typed("?").keys(&[Key::Down]);
                    }
                    Place::Question => {
                        desk.typed("7");
                    }
                }
                assert_eq!(desk.state.place(), place);
                let summary = |s: &State| {
                    format!(
                        "{:?}",
                        (
                            (s.chosen, s.view, s.overlay.clone(), s.message.clone()),
                            (s.show, s.nodes, s.glyphs, s.background, s.quit),
                        )
                    )
                };
                let before = summary(&desk.state);
                desk.held = Some(Vec::new());
                desk.keys(&[key]);
                let jobs = desk.held.as_ref().map_or(0, Vec::len);
                assert!(
                    jobs > 0 || summary(&desk.state) != before,
                    "{} by {key:?} at {place:?}",
                    entry.name
                );
            }
        }
    }
}

#[test]
fn keys_work_while_the_solver_does() {
    let mut desk = Desk::new(document(rectangle(80., 50.)), MONO, (80, 24));
    desk.held = Some(Vec::new());
    desk.act(Action::Begin);
    desk.act(Action::Tick(Duration::from_millis(300)));
    assert!(!desk.screen().contains('%'), "no gauge for what is quick");
    let step = Step {
        done: 3,
        of: 12,
        what: "levels",
    };
    desk.act(Action::Step {
        generation: 1,
        step,
    });
    desk.act(Action::Tick(Duration::from_millis(2000)));
    desk.shows("solving-80x24");
    desk.typed("d?");
    assert_eq!(desk.state.show, Show::Wave);
    assert_eq!(desk.state.overlay, Some(Overlay::Help(0)));
    desk.keys(&[Key::Esc, Key::Right]);
    desk.resize(100, 30);
    desk.typed("e");
    assert!(desk.screen().contains("no map yet"));
    let job = desk.held.take().expect("jobs were held").remove(0);
    perform_solve(&mut desk, job);
    assert_eq!(desk.state.count(), 12);
    assert!(desk.screen().contains("none missing"));
}

fn perform_solve(desk: &mut Desk, job: Job) {
    for action in done(job) {
        desk.act(with_fixed_figures(action));
    }
}

#[test]
fn results_of_an_old_solve_are_dropped() {
    let mut desk = Desk::open((80, 24));
    let failed = |generation| Action::Solved {
        generation,
        result: Err("too late".into()),
    };
    desk.act(failed(0));
    assert_eq!(desk.state.solving.failure, None);
    desk.held = Some(Vec::new());
    desk.act(Action::Begin);
    desk.act(failed(1));
    assert!(desk.state.solving.running.is_some());
    desk.act(failed(2));
    assert!(desk.screen().contains("too late"));
}

#[test]
fn a_fault_of_a_worker_is_told_and_survived() {
    let mut desk = Desk::open((80, 24));
    desk.held = Some(Vec::new());
    desk.act(Action::Begin);
    desk.act(Action::Broken("a fault in dotwright: out of luck".into()));
    assert!(desk.screen().contains("out of luck"));
    desk.keys(&[Key::Right]);
    assert_eq!(desk.state.chosen, 1);
    assert!(
        !desk.screen().contains("out of luck"),
        "a key clears the message"
    );
}

#[test]
fn degenerate_levels_and_open_counts_are_shown() {
    let mut desk = Desk::new(document(rectangle(80., 50.)), MONO, (80, 24));
    desk.held = Some(Vec::new());
    desk.act(Action::Begin);
    let job = desk.held.take().expect("jobs were held").remove(0);
    for action in done(job) {
        let action = match with_fixed_figures(action) {
            Action::Solved { generation, result } => Action::Solved {
                generation,
                result: result.map(|mut s| {
                    make_pair(&mut s, 1);
                    s.certificate.found -= 1;
                    s.certificate.complete = false;
                    s.levels[11].error = 0.6;
                    s.notes.push("a corner could not be treated".into());
                    s
                }),
            },
            other => other,
        };
        desk.act(action);
    }
    desk.keys(&[Key::Right, Key::Right]);
    desk.shows("pair-80x24");
    let screen = desk.screen();
    assert!(screen.contains("count not proven") && screen.contains("12 counted below"));
}

#[test]
fn shapes_without_units_have_no_kelvin() {
    let mut d = document(rectangle(1.0, 2.0));
    d.scale = Scale::Reduced;
    d.model.kinetic = 1.0;
    let mut desk = Desk::new(d, MONO, (80, 24));
    desk.act(Action::Begin);
    let screen = desk.screen();
    for word in ["meV", "nm", "GHz", "kT "] {
        let body: Vec<&str> = screen.lines().take(22).collect();
        assert!(!body.join("\n").contains(word), "{word}\n{screen}");
    }
    desk.typed("t");
    assert_eq!(desk.state.overlay, None);
}

#[test]
fn odd_shapes_and_sizes_are_drawn() {
    for (w, h) in [(1e-9, 1e-9), (1e9, 1.0), (1.0, 1e7), (3.0, 2.0)] {
        for size in [(60, 18), (80, 24), (61, 90), (20, 3), (1, 1)] {
            for glyphs in [Glyphs::Plain, Glyphs::Braille, Glyphs::HalfBlock] {
                let d = document(rectangle(w, h));
                let mut desk = Desk::new(d, (glyphs, Colours::Palette), size);
                desk.act(Action::Begin);
                desk.typed("dn");
                desk.screen();
                desk.typed("s");
                desk.screen();
            }
        }
    }
    let mut desk = Desk::new(document(Outline::default()), MONO, (80, 24));
    desk.screen();
    desk.typed("sdn?");
    desk.screen();
}

#[test]
fn no_sequence_of_keys_and_sizes_breaks_it() {
    let all: Vec<Key> = ACTIONS
        .iter()
        .flat_map(|e| e.keys.iter().copied())
        .filter(|k| !matches!(k, Key::Char('q') | Key::Ctrl('c') | Key::Char('e')))
        .chain("0123456789.-".chars().map(Key::Char))
        .collect();
    let mut desk = Desk::open((80, 24));
    let mut seed = 0x2545_f491_4f6c_dd1d_u64;
    let mut next = |n: usize| {
        seed ^= seed << 13;
        seed ^= seed >> 7;
        seed ^= seed << 17;
        (seed >> 33) as usize % n
    };
    for _ in 0..600 {
        if next(20) == 0 {
            desk.resize(1 + next(140) as u16, 1 + next(50) as u16);
        } else {
            desk.keys(&[all[next(all.len())]]);
        }
        desk.screen();
    }
    assert!(!desk.state.quit);
}

#[test]
fn the_key_table_names_every_key() {
    let table = key_table();
    for e in ACTIONS {
        assert!(table.contains(e.text));
    }
}

#[test]
fn a_map_in_characters_for_a_run_without_terminal() {
    let d = document(rectangle(80., 50.));
    let watch = Watch::quiet();
    let found = solve(&d.model, &d.wanted, &watch);
    let found = found.expect("a rectangle has levels");
    let map = dotwright::desk::print_map(&d, &found, 1, Glyphs::Plain, (40, 14));
    assert!(map.is_ascii());
    assert!(
        map.lines().count() == 14 && map.lines().all(|l| l.len() <= 40),
        "{map}"
    );
    assert!(
        map.contains('@') && map.contains(" nm") && map.contains("most"),
        "{map}"
    );
    let dots = dotwright::desk::print_map(&d, &found, 1, Glyphs::HalfBlock, (40, 14));
    assert!(dots.contains('⣿') && !dots.contains('▀'));
    assert_eq!(
        dotwright::desk::print_map(&d, &found, 99, Glyphs::Plain, (40, 14)),
        ""
    );
}
