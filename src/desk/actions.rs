//! The one table of what keys do. Key handling, the bottom line, the help page and the README's
//! key list are all read from [`ACTIONS`]; nothing else knows a key.

use super::keys::Key;

/// What the person can ask for by a key.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Deed {
    /// The level below the chosen one.
    Lower,
    /// The level above the chosen one.
    Higher,
    /// Five levels down.
    FiveLower,
    /// Five levels up.
    FiveHigher,
    /// The lowest level.
    First,
    /// The highest level found.
    Last,
    /// One row up on the sheet.
    RowUp,
    /// One row down on the sheet.
    RowDown,
    /// One page back on the sheet.
    PageBack,
    /// One page on on the sheet.
    PageOn,
    /// Ask for a number or an energy to jump to.
    GoTo,
    /// Switch between density and signed wave.
    Show,
    /// Switch nodal lines.
    Nodes,
    /// Open or close the sheet of small plates.
    Sheet,
    /// Close the sheet on the marked plate.
    Open,
    /// Ask for the temperature of the kT bar.
    Temperature,
    /// Write the present map as a picture.
    Export,
    /// Next set of characters.
    Glyphs,
    /// Switch between scales for dark and for light backgrounds.
    Background,
    /// Draw the screen anew.
    Redraw,
    /// Put the program to sleep.
    Suspend,
    /// Show the help page.
    Help,
    /// Help, a line up.
    ScrollUp,
    /// Help, a line down.
    ScrollDown,
    /// One step back.
    Back,
    /// Answer a question.
    Accept,
    /// Leave.
    Quit,
}

/// Where a key works.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Place {
    /// Plate, ladder and slip.
    Plate,
    /// The sheet of small plates.
    Sheet,
    /// The help page.
    Help,
    /// A question on the bottom line.
    Question,
}

/// One line of the table.
#[derive(Clone, Copy, Debug)]
pub struct Entry {
    /// What is done.
    pub deed: Deed,
    /// Its name, for lists and for finding it by typing.
    pub name: &'static str,
    /// The keys, the usual one first.
    pub keys: &'static [Key],
    /// One line of help.
    pub text: &'static str,
    /// The word on the bottom line; empty: not shown there. Neighbours with the same word share
    /// one place.
    pub hint: &'static str,
    /// Where it works.
    pub places: &'static [Place],
}

use Key::{Char, Ctrl};
const PLATE: &[Place] = &[Place::Plate];
const SHEET: &[Place] = &[Place::Sheet];
const VIEWS: &[Place] = &[Place::Plate, Place::Sheet];
const ASIDE: &[Place] = &[Place::Sheet, Place::Help, Place::Question];

macro_rules! entry {
    ($deed:ident, $name:literal, $keys:expr, $hint:literal, $places:expr, $text:literal) => {
        Entry {
            deed: Deed::$deed,
            name: $name,
            keys: &$keys,
            text: $text,
            hint: $hint,
            places: $places,
        }
    };
}

/// Every key of the desk.
#[rustfmt::skip]
pub const ACTIONS: &[Entry] = &[
    entry!(Lower, "lower", [Key::Left, Key::Down, Char('h'), Char('j')], "level", PLATE, "go to the level below"),
    entry!(Higher, "higher", [Key::Right, Key::Up, Char('l'), Char('k')], "level", PLATE, "go to the level above"),
    entry!(Lower, "plate before", [Key::Left, Char('h')], "plate", SHEET, "mark the plate before"),
    entry!(Higher, "plate after", [Key::Right, Char('l')], "plate", SHEET, "mark the plate after"),
    entry!(RowUp, "row up", [Key::Up, Char('k')], "plate", SHEET, "mark the plate above"),
    entry!(RowDown, "row down", [Key::Down, Char('j')], "plate", SHEET, "mark the plate underneath"),
    entry!(FiveLower, "five lower", [Key::PageDown], "", PLATE, "go five levels down"),
    entry!(FiveHigher, "five higher", [Key::PageUp], "", PLATE, "go five levels up"),
    entry!(PageBack, "page back", [Key::PageUp], "page", SHEET, "go one page back"),
    entry!(PageOn, "page on", [Key::PageDown], "page", SHEET, "go one page on"),
    entry!(First, "first", [Key::Home], "", VIEWS, "go to the lowest level"),
    entry!(Last, "last", [Key::End], "", VIEWS, "go to the highest level found"),
    entry!(GoTo, "go to", [Char('/')], "", VIEWS, "go to a level by number, or to an energy; digits alone start it too"),
    entry!(Show, "density or wave", [Char('d')], "wave", VIEWS, "switch between density and signed wave"),
    entry!(Nodes, "nodal lines", [Char('n')], "nodes", VIEWS, "show or hide nodal lines"),
    entry!(Open, "open", [Key::Enter], "open", SHEET, "open the marked plate"),
    entry!(Sheet, "sheet", [Char('s')], "sheet", VIEWS, "many small plates at once, and back"),
    entry!(Temperature, "temperature", [Char('t')], "kT", PLATE, "set the temperature of the kT bar"),
    entry!(Export, "export", [Char('e')], "export", VIEWS, "write the chosen map as a PNG picture"),
    entry!(Glyphs, "characters", [Char('g')], "", VIEWS, "draw with other characters"),
    entry!(Background, "background", [Char('b')], "", VIEWS, "shades for a dark or a light background"),
    entry!(Redraw, "redraw", [Ctrl('l')], "", VIEWS, "draw the screen anew"),
    entry!(Suspend, "suspend", [Ctrl('z')], "", VIEWS, "put the program to sleep; fg wakes it"),
    entry!(Accept, "accept", [Key::Enter], "go", &[Place::Question], "take the answer"),
    entry!(ScrollUp, "scroll up", [Key::Up, Key::PageUp, Char('k')], "scroll", &[Place::Help], "see earlier lines of this page"),
    entry!(ScrollDown, "scroll down", [Key::Down, Key::PageDown, Char('j')], "scroll", &[Place::Help], "see later lines of this page"),
    entry!(Back, "back", [Key::Esc], "back", ASIDE, "one step back"),
    entry!(Help, "help", [Char('?')], "help", VIEWS, "all keys"),
    entry!(Quit, "quit", [Char('q')], "quit", VIEWS, "leave"),
    entry!(Quit, "leave at once", [Ctrl('c')], "", &[Place::Plate, Place::Sheet, Place::Help, Place::Question], "leave from anywhere"),
    entry!(Back, "close", [Char('q'), Char('?'), Key::Enter], "", &[Place::Help], "close the help page"),
];

/// What `key` does at `place`.
pub fn deed_of(key: Key, place: Place) -> Option<Deed> {
    ACTIONS
        .iter()
        .find(|e| e.places.contains(&place) && e.keys.contains(&key))
        .map(|e| e.deed)
}

/// The table as Markdown, for the README.
pub fn key_table() -> String {
    let mut out = String::from("| keys | does | where |\n|---|---|---|\n");
    for e in ACTIONS {
        let keys: Vec<_> = e
            .keys
            .iter()
            .map(|k| format!("`{}`", k.label(false)))
            .collect();
        let places: Vec<_> = e.places.iter().map(|p| p.name()).collect();
        out += &format!(
            "| {} | {} | {} |\n",
            keys.join(" "),
            e.text,
            places.join(", ")
        );
    }
    out
}

impl Place {
    /// The word for it.
    pub fn name(self) -> &'static str {
        match self {
            Self::Plate => "plate",
            Self::Sheet => "sheet",
            Self::Help => "help",
            Self::Question => "question",
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn no_key_means_two_things_in_one_place() {
        for place in [Place::Plate, Place::Sheet, Place::Help, Place::Question] {
            let mut seen: Vec<Key> = Vec::new();
            for e in ACTIONS.iter().filter(|e| e.places.contains(&place)) {
                for k in e.keys {
                    assert!(!seen.contains(k), "{k:?} twice at {}", place.name());
                    seen.push(*k);
                }
            }
        }
    }

    #[test]
    fn every_entry_is_complete() {
        for e in ACTIONS {
            assert!(!e.name.is_empty() && !e.text.is_empty());
            assert!(!e.keys.is_empty() && !e.places.is_empty());
            assert!(e.text.len() <= 70, "{} too long for a help line", e.name);
        }
    }
}
