//! Taking the terminal over, and giving it back however the desk ends.

use super::workers::WORKER;
use ratatui::crossterm::cursor::{Hide, Show};
use ratatui::crossterm::execute;
use ratatui::crossterm::style::ResetColor;
use ratatui::crossterm::terminal::{
    EndSynchronizedUpdate, EnterAlternateScreen, LeaveAlternateScreen, disable_raw_mode,
    enable_raw_mode,
};
use std::io::{Result, stdout};
use std::sync::Once;
use std::sync::atomic::{AtomicBool, Ordering};

/// Whether the terminal is in our hands.
static TAKEN: AtomicBool = AtomicBool::new(false);
static HOOK: Once = Once::new();

/// Holds the terminal; gives it back when dropped.
pub struct Guard;

impl Guard {
    /// Raw mode, alternate screen, no cursor.
    pub fn enter() -> Result<Self> {
        HOOK.call_once(hook);
        take()?;
        Ok(Self)
    }
}

impl Drop for Guard {
    fn drop(&mut self) {
        restore();
    }
}

/// Takes the terminal.
pub fn take() -> Result<()> {
    enable_raw_mode()?;
    TAKEN.store(true, Ordering::SeqCst);
    execute!(stdout(), EnterAlternateScreen, Hide)
}

/// Gives the terminal back, once; failures are past help and past telling.
pub fn restore() {
    if TAKEN.swap(false, Ordering::SeqCst) {
        let _ = execute!(
            stdout(),
            EndSynchronizedUpdate,
            ResetColor,
            LeaveAlternateScreen,
            Show
        );
        let _ = disable_raw_mode();
    }
}

/// A panic gives the terminal back before it is told; one in a worker is told on the screen.
fn hook() {
    let before = std::panic::take_hook();
    std::panic::set_hook(Box::new(move |info| {
        if std::thread::current().name() != Some(WORKER) {
            restore();
            before(info);
        }
    }));
}
