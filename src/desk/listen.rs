//! What comes from outside: keys, changes of the screen, signals.

use super::jobs::Action;
use super::keys::Key;
use ratatui::crossterm::event::{self, Event, KeyCode, KeyEvent, KeyEventKind, KeyModifiers};
use ratatui::crossterm::terminal::window_size;
use signal_hook::consts::{SIGCONT, SIGHUP, SIGINT, SIGTERM};
use signal_hook::iterator::{Handle, Signals};
use std::io::Result;
use std::sync::mpsc::Sender;
use std::thread;

/// Starts the thread that reads keys; it ends with the terminal or with the desk.
pub fn listen_to_keys(out: Sender<Action>) -> Result<()> {
    let read = move || {
        loop {
            let (actions, last) = match event::read() {
                Ok(event) => (actions(event), false),
                Err(_) => (vec![Action::Leave], true),
            };
            for action in actions {
                if out.send(action).is_err() {
                    return;
                }
            }
            if last {
                return;
            }
        }
    };
    thread::Builder::new()
        .name("desk keys".into())
        .spawn(read)?;
    Ok(())
}

fn actions(event: Event) -> Vec<Action> {
    match event {
        Event::Key(k) if k.kind != KeyEventKind::Release => {
            // over a slow line Esc and the key after it arrive as one, looking like Alt
            let escape = k.modifiers.contains(KeyModifiers::ALT).then_some(Key::Esc);
            escape.into_iter().chain(key(k)).map(Action::Key).collect()
        }
        Event::Resize(columns, rows) => vec![resize((columns, rows))],
        _ => Vec::new(),
    }
}

fn key(event: KeyEvent) -> Option<Key> {
    let control = event.modifiers.contains(KeyModifiers::CONTROL);
    Some(match event.code {
        KeyCode::Char(c) if control => Key::Ctrl(c.to_ascii_lowercase()),
        KeyCode::Char(c) => Key::Char(c),
        KeyCode::Left => Key::Left,
        KeyCode::Right => Key::Right,
        KeyCode::Up => Key::Up,
        KeyCode::Down => Key::Down,
        KeyCode::PageUp => Key::PageUp,
        KeyCode::PageDown => Key::PageDown,
        KeyCode::Home => Key::Home,
        KeyCode::End => Key::End,
        KeyCode::Enter => Key::Enter,
        KeyCode::Esc => Key::Esc,
        KeyCode::Backspace => Key::Backspace,
        _ => return None,
    })
}

/// The action for a screen of this size; terminals that know their size in pixels tell the
/// proportions of a cell, others are taken to have cells twice as high as wide.
pub fn resize((columns, rows): (u16, u16)) -> Action {
    let aspect = window_size()
        .ok()
        .filter(|w| w.width > 0 && w.height > 0 && w.columns > 0 && w.rows > 0)
        .map_or(2.0, |w| {
            let across = f64::from(w.width) / f64::from(w.columns);
            f64::from(w.height) / f64::from(w.rows) / across
        });
    Action::Resize {
        columns,
        rows,
        aspect,
    }
}

/// Starts the thread that hears signals; closing the handle ends it.
pub fn listen_to_signals(out: Sender<Action>) -> Result<Handle> {
    let mut signals = Signals::new([SIGTERM, SIGINT, SIGHUP, SIGCONT])?;
    let handle = signals.handle();
    let hear = move || {
        for signal in signals.forever() {
            let action = match signal {
                SIGCONT => Action::Key(Key::Ctrl('l')),
                _ => Action::Leave,
            };
            if out.send(action).is_err() {
                return;
            }
        }
    };
    thread::Builder::new()
        .name("desk signals".into())
        .spawn(hear)?;
    Ok(handle)
}
