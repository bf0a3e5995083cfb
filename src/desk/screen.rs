//! Frames to the terminal: gathered in memory, written at once, as one synchronised update.

use ratatui::crossterm::queue;
use ratatui::crossterm::terminal::{BeginSynchronizedUpdate, EndSynchronizedUpdate};
use ratatui::prelude::{CrosstermBackend, Frame, Terminal};
use std::cell::RefCell;
use std::io::{Result, Stdout, Write, stdout};
use std::rc::Rc;

/// The terminal as the desk draws on it.
pub struct Screen {
    terminal: Terminal<CrosstermBackend<Gather>>,
    gathered: Rc<RefCell<Vec<u8>>>,
    out: Stdout,
}

/// Keeps bytes; a flush of the drawing library is no reason yet to write.
struct Gather(Rc<RefCell<Vec<u8>>>);

impl Write for Gather {
    fn write(&mut self, bytes: &[u8]) -> Result<usize> {
        self.0.borrow_mut().extend_from_slice(bytes);
        Ok(bytes.len())
    }

    fn flush(&mut self) -> Result<()> {
        Ok(())
    }
}

impl Screen {
    /// The whole terminal.
    pub fn open() -> Result<Self> {
        let gathered = Rc::new(RefCell::new(Vec::with_capacity(1 << 16)));
        let terminal = Terminal::new(CrosstermBackend::new(Gather(gathered.clone())))?;
        Ok(Self {
            terminal,
            gathered,
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

    /// Draws a frame: what changed goes out in one write.
    pub fn draw(&mut self, paint: impl FnOnce(&mut Frame<'_>)) -> Result<()> {
        queue!(Gather(self.gathered.clone()), BeginSynchronizedUpdate)?;
        let empty = self.gathered.borrow().len();
        self.terminal.draw(paint)?;
        let mut bytes = self.gathered.borrow_mut();
        // a frame without change still asks for a hidden cursor; that is not worth a line
        if bytes.len() > empty + b"\x1b[?25l".len() {
            queue!(bytes, EndSynchronizedUpdate)?;
            self.out.write_all(&bytes)?;
            self.out.flush()?;
        }
        bytes.clear();
        Ok(())
    }
}
