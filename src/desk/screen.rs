//! Frames to the terminal: what changed, written at once, as one synchronised update.

use super::wire::Wire;
use ratatui::{Frame, Terminal};
use std::io::{Result, Stdout, Write, stdout};

/// Begin and end of a synchronised update (private mode 2026); terminals that do not know it let
/// it pass.
const TOGETHER: (&str, &str) = ("\x1b[?2026h", "\x1b[?2026l");

/// The terminal as the desk draws on it.
pub struct Screen {
    terminal: Terminal<Wire>,
    out: Stdout,
}

impl Screen {
    /// The whole terminal.
    pub fn open() -> Result<Self> {
        Ok(Self {
            terminal: Terminal::new(Wire::default())?,
            out: stdout(),
        })
    }

    /// Columns and rows.
    pub fn size(&self) -> Result<(u16, u16)> {
        let s = self.terminal.size()?;
        Ok((s.width, s.height))
    }

    /// Forgets what is on the screen, so that the next frame is drawn in full.
    pub fn forget(&mut self) -> Result<()> {
        self.terminal.clear()
    }

    /// Draws a frame and sends it.
    pub fn draw(&mut self, paint: impl FnOnce(&mut Frame<'_>)) -> Result<()> {
        self.terminal.draw(paint)?;
        let text = std::mem::take(&mut self.terminal.backend_mut().text);
        if !text.is_empty() {
            let (begin, end) = TOGETHER;
            self.out
                .write_all([begin, &text, end].concat().as_bytes())?;
            self.out.flush()?;
        }
        Ok(())
    }
}
