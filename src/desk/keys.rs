//! Keys as the desk knows them, apart from any terminal library.

/// One key press.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Key {
    /// A printable character.
    Char(char),
    /// A character with the control key.
    Ctrl(char),
    /// Arrow to the left.
    Left,
    /// Arrow to the right.
    Right,
    /// Arrow up.
    Up,
    /// Arrow down.
    Down,
    /// Page up.
    PageUp,
    /// Page down.
    PageDown,
    /// Home.
    Home,
    /// End.
    End,
    /// Enter.
    Enter,
    /// Escape.
    Esc,
    /// Backspace.
    Backspace,
}

impl Key {
    /// What is written for the key on screen; `ascii` keeps to seven bits.
    pub fn label(self, ascii: bool) -> String {
        match self {
            Self::Char(' ') => "Space".into(),
            Self::Char(c) => c.to_string(),
            Self::Ctrl(c) => format!("Ctrl-{}", c.to_ascii_uppercase()),
            Self::Left => if ascii { "Left" } else { "←" }.into(),
            Self::Right => if ascii { "Right" } else { "→" }.into(),
            Self::Up => if ascii { "Up" } else { "↑" }.into(),
            Self::Down => if ascii { "Down" } else { "↓" }.into(),
            Self::PageUp => "PgUp".into(),
            Self::PageDown => "PgDn".into(),
            Self::Home => "Home".into(),
            Self::End => "End".into(),
            Self::Enter => "Enter".into(),
            Self::Esc => "Esc".into(),
            Self::Backspace => "Backspace".into(),
        }
    }
}
