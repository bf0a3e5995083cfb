//! Cells to bytes, with few of them: on a slow line every style change is felt.
//!
//! Two cells that look the same may be written differently: an upper half block in one pair of
//! colours is a lower half block in the exchanged pair, and a blank needs no text colour. What
//! changes least is written. (A full block for a coloured blank would save a little more, but in
//! many fonts it does not fill its cell.)

use ratatui::backend::{Backend, ClearType, WindowSize};
use ratatui::buffer::Cell;
use ratatui::crossterm::terminal::size;
use ratatui::layout::{Position, Size};
use ratatui::style::{Color, Modifier};
use std::fmt::Write as _;
use std::io::{Error, Result};
use unicode_width::UnicodeWidthStr;

/// The modifiers the desk uses, with their codes.
const MODIFIERS: [(Modifier, u8); 3] = [
    (Modifier::BOLD, 1),
    (Modifier::DIM, 2),
    (Modifier::REVERSED, 7),
];

/// A terminal as a string of what it is to receive.
#[derive(Debug, Default)]
pub struct Wire {
    /// Bytes not yet sent.
    pub text: String,
    pen: Pen,
    cursor: Option<(u16, u16)>,
}

/// The style the terminal writes with.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
struct Pen {
    text: Color,
    ground: Color,
    modifier: Modifier,
}

impl Wire {
    fn go_to(&mut self, x: u16, y: u16) {
        match self.cursor {
            Some((cx, cy)) if (cx, cy) == (x, y) => {}
            Some((cx, cy)) if cy == y && cx + 1 == x => self.text.push_str("\x1b[C"),
            Some((cx, cy)) if cy == y && cx < x => {
                put(&mut self.text, format_args!("\x1b[{}C", x - cx))
            }
            _ => put(&mut self.text, format_args!("\x1b[{};{}H", y + 1, x + 1)),
        }
    }

    fn cell(&mut self, cell: &Cell) {
        let wanted = Pen {
            text: cell.fg,
            ground: cell.bg,
            modifier: cell.modifier,
        };
        let (symbol, pen) = ways(cell.symbol(), wanted, self.pen)
            .into_iter()
            .flatten()
            .min_by_key(|(_, pen)| self.pen.cost(pen))
            .unwrap_or((cell.symbol(), wanted));
        self.style(pen);
        self.text.push_str(symbol);
    }

    fn style(&mut self, pen: Pen) {
        if pen == self.pen {
            return;
        }
        let mut codes = String::new();
        let mut now = self.pen;
        // a modifier is only taken off together with everything else
        if !pen.modifier.contains(now.modifier) {
            codes.push_str("0;");
            now = Pen::default();
        }
        for (modifier, code) in MODIFIERS {
            if pen.modifier.contains(modifier) && !now.modifier.contains(modifier) {
                put(&mut codes, format_args!("{code};"));
            }
        }
        if pen.text != now.text {
            colour(&mut codes, pen.text, 30);
        }
        if pen.ground != now.ground {
            colour(&mut codes, pen.ground, 40);
        }
        codes.pop();
        put(&mut self.text, format_args!("\x1b[{codes}m"));
        self.pen = pen;
    }

    fn rest(&mut self) {
        if self.pen != Pen::default() {
            self.text.push_str("\x1b[m");
            self.pen = Pen::default();
        }
    }
}

impl Pen {
    /// How much has to be written to get to another pen.
    fn cost(&self, to: &Self) -> usize {
        usize::from(self.text != to.text)
            + usize::from(self.ground != to.ground)
            + 2 * usize::from(self.modifier != to.modifier)
    }
}

/// The ways to write a symbol, the plain one first.
fn ways(symbol: &str, wanted: Pen, now: Pen) -> [Option<(&str, Pen)>; 2] {
    let same = Some((symbol, wanted));
    let coloured = wanted.ground != Color::Reset && wanted.modifier.is_empty();
    match symbol {
        "▀" | "▄" if coloured && wanted.text != Color::Reset => {
            let other = if symbol == "▀" { "▄" } else { "▀" };
            let exchanged = Pen {
                text: wanted.ground,
                ground: wanted.text,
                ..wanted
            };
            [same, Some((other, exchanged))]
        }
        " " if !wanted.modifier.contains(Modifier::REVERSED) => {
            let any_text = Pen {
                text: now.text,
                modifier: now.modifier & (Modifier::BOLD | Modifier::DIM),
                ..wanted
            };
            [Some((" ", any_text)), None]
        }
        _ => [same, None],
    }
}

/// Writes to a string, which cannot fail.
fn put(text: &mut String, what: std::fmt::Arguments<'_>) {
    let _ = text.write_fmt(what);
}

fn colour(codes: &mut String, colour: Color, base: u8) {
    let palette = |codes: &mut String, n: u8| match n {
        0..8 => put(codes, format_args!("{};", base + n)),
        8..16 => put(codes, format_args!("{};", base + 52 + n)),
        _ => put(codes, format_args!("{};5;{n};", base + 8)),
    };
    match colour {
        Color::Reset => put(codes, format_args!("{};", base + 9)),
        Color::Indexed(n) => palette(codes, n),
        Color::Rgb(r, g, b) => put(codes, format_args!("{};2;{r};{g};{b};", base + 8)),
        Color::Black => palette(codes, 0),
        Color::Red => palette(codes, 1),
        Color::Green => palette(codes, 2),
        Color::Yellow => palette(codes, 3),
        Color::Blue => palette(codes, 4),
        Color::Magenta => palette(codes, 5),
        Color::Cyan => palette(codes, 6),
        Color::Gray => palette(codes, 7),
        Color::DarkGray => palette(codes, 8),
        Color::LightRed => palette(codes, 9),
        Color::LightGreen => palette(codes, 10),
        Color::LightYellow => palette(codes, 11),
        Color::LightBlue => palette(codes, 12),
        Color::LightMagenta => palette(codes, 13),
        Color::LightCyan => palette(codes, 14),
        Color::White => palette(codes, 15),
    }
}

impl Backend for Wire {
    type Error = Error;

    fn draw<'a, I>(&mut self, content: I) -> Result<()>
    where
        I: Iterator<Item = (u16, u16, &'a Cell)>,
    {
        for (x, y, cell) in content {
            self.go_to(x, y);
            self.cell(cell);
            let wide = cell.symbol().width().max(1) as u16;
            self.cursor = Some((x + wide, y));
        }
        self.rest();
        // at the right edge terminals differ on where the cursor stands
        self.cursor = None;
        Ok(())
    }

    fn hide_cursor(&mut self) -> Result<()> {
        Ok(())
    }

    fn show_cursor(&mut self) -> Result<()> {
        Ok(())
    }

    fn get_cursor_position(&mut self) -> Result<Position> {
        Ok(Position::ORIGIN)
    }

    fn set_cursor_position<P: Into<Position>>(&mut self, _: P) -> Result<()> {
        Ok(())
    }

    fn clear(&mut self) -> Result<()> {
        self.rest();
        self.text.push_str("\x1b[2J");
        self.cursor = None;
        Ok(())
    }

    fn clear_region(&mut self, _: ClearType) -> Result<()> {
        self.clear()
    }

    fn size(&self) -> Result<Size> {
        let (width, height) = size()?;
        Ok(Size { width, height })
    }

    fn window_size(&mut self) -> Result<WindowSize> {
        Ok(WindowSize {
            columns_rows: self.size()?,
            pixels: Size::default(),
        })
    }

    fn flush(&mut self) -> Result<()> {
        Ok(())
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use ratatui::style::Style;

    fn sent(cells: &[(&'static str, Style)]) -> String {
        let cells: Vec<Cell> = cells
            .iter()
            .map(|(symbol, style)| {
                let mut c = Cell::new(symbol);
                c.set_style(*style);
                c
            })
            .collect();
        let mut wire = Wire::default();
        let placed = cells.iter().enumerate().map(|(k, c)| (k as u16, 0, c));
        wire.draw(placed).expect("strings take everything");
        wire.text
    }

    #[test]
    fn what_looks_the_same_is_written_the_shorter_way() {
        let style = |text, ground| {
            Style::new()
                .fg(Color::Indexed(text))
                .bg(Color::Indexed(ground))
        };
        let got = sent(&[
            ("▀", style(100, 101)),
            ("▀", style(101, 100)),
            (" ", Style::new().bg(Color::Indexed(100))),
            ("▀", style(100, 102)),
        ]);
        let want = "\x1b[1;1H\x1b[38;5;100;48;5;101m▀▄\x1b[48;5;100m \x1b[48;5;102m▀\x1b[m";
        assert_eq!(got, want);
    }

    #[test]
    fn modifiers_are_put_on_and_taken_off() {
        let bold = Style::new().add_modifier(Modifier::BOLD).fg(Color::Yellow);
        let got = sent(&[("a", bold), ("b", Style::new()), ("c", Style::new())]);
        assert_eq!(got, "\x1b[1;1H\x1b[1;33ma\x1b[0mbc");
    }
}
