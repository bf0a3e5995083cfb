//! What the terminal can show, judged from the environment; nothing is asked of the terminal.

/// The characters maps are drawn with.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Glyphs {
    /// Seven-bit characters only, on the whole screen.
    Plain,
    /// Two coloured halves a cell.
    HalfBlock,
    /// Eight dots a cell.
    Braille,
}

impl Glyphs {
    /// All of them, with their names on the command line.
    pub const NAMES: [(&'static str, Self); 3] = [
        ("plain", Self::Plain),
        ("half-block", Self::HalfBlock),
        ("braille", Self::Braille),
    ];

    /// The set of this name.
    pub fn named(name: &str) -> Option<Self> {
        Self::NAMES.iter().find(|n| n.0 == name).map(|n| n.1)
    }
}

/// The colours the terminal knows.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Colours {
    /// None; bold and dim at most.
    None,
    /// The sixteen of the terminal's own palette.
    Sixteen,
    /// The fixed palette of 256.
    Palette,
    /// 24 bits.
    True,
}

/// What the shades fade into.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Background {
    /// Light text on dark.
    Dark,
    /// Dark text on light.
    Light,
}

/// What a terminal can do.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Capability {
    /// The best set of characters.
    pub glyphs: Glyphs,
    /// The colours.
    pub colours: Colours,
    /// The background, where the environment tells; dark otherwise.
    pub background: Background,
    /// Whether the locale has more than seven bits.
    pub unicode: bool,
    /// Whether the cursor can be placed at all.
    pub screen: bool,
}

impl Capability {
    /// Of this process's environment.
    pub fn of_environment() -> Self {
        Self::detect(|name| std::env::var(name).ok())
    }

    /// Of an environment given by name. The locale is the first of LC_ALL, LC_CTYPE and LANG that
    /// is set and not empty, as POSIX has it.
    pub fn detect(variable: impl Fn(&str) -> Option<String>) -> Self {
        let get = |name: &str| variable(name).filter(|v| !v.is_empty());
        let term = get("TERM").unwrap_or_else(|| "dumb".into());
        let locale = get("LC_ALL")
            .or_else(|| get("LC_CTYPE"))
            .or_else(|| get("LANG"))
            .unwrap_or_default()
            .to_ascii_lowercase();
        let screen = term != "dumb";
        let unicode = screen && (locale.contains("utf-8") || locale.contains("utf8"));
        let colours = colours(&term, get("COLORTERM"), get("NO_COLOR").is_some());
        // the console of a bare Linux machine is UTF-8 but its fonts have no braille
        let glyphs = if !unicode || term == "linux" {
            Glyphs::Plain
        } else if colours >= Colours::Palette {
            Glyphs::HalfBlock
        } else {
            Glyphs::Braille
        };
        Self {
            glyphs,
            colours,
            background: background(get("COLORFGBG")),
            unicode,
            screen,
        }
    }

    /// The sets of characters this terminal can show, best first.
    pub fn choices(&self) -> Vec<Glyphs> {
        let mut all = Vec::new();
        if self.unicode && self.colours >= Colours::Palette {
            all.push(Glyphs::HalfBlock);
        }
        if self.unicode {
            all.push(Glyphs::Braille);
        }
        all.push(Glyphs::Plain);
        all
    }
}

fn colours(term: &str, colorterm: Option<String>, refused: bool) -> Colours {
    let wide = term.contains("256color");
    if refused || term == "dumb" || term.starts_with("vt") {
        Colours::None
    } else if term.ends_with("-direct") {
        Colours::True
    } else if matches!(colorterm.as_deref(), Some("truecolor" | "24bit"))
        && !term.starts_with("screen")
    {
        // screen passes the variable through from the terminal outside but not the colours
        Colours::True
    } else if wide {
        Colours::Palette
    } else {
        Colours::Sixteen
    }
}

fn background(hint: Option<String>) -> Background {
    // "15;0": text colour; background colour, of the sixteen
    let last = hint.and_then(|h| h.rsplit(';').next().and_then(|b| b.parse::<u8>().ok()));
    match last {
        Some(7 | 15) => Background::Light,
        _ => Background::Dark,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn with(pairs: &[(&str, &str)]) -> Capability {
        Capability::detect(|n| {
            let hit = pairs.iter().find(|p| p.0 == n);
            hit.map(|p| p.1.to_string())
        })
    }

    #[test]
    fn the_environment_decides() {
        let c = with(&[("TERM", "xterm-256color"), ("LANG", "en_GB.UTF-8")]);
        assert_eq!((c.glyphs, c.colours), (Glyphs::HalfBlock, Colours::Palette));
        let c = with(&[
            ("TERM", "xterm-256color"),
            ("LANG", "en_GB.UTF-8"),
            ("COLORTERM", "truecolor"),
        ]);
        assert_eq!(c.colours, Colours::True);
        let c = with(&[
            ("TERM", "xterm-256color"),
            ("LANG", "en_GB.UTF-8"),
            ("NO_COLOR", "1"),
        ]);
        assert_eq!((c.glyphs, c.colours), (Glyphs::Braille, Colours::None));
        let c = with(&[("TERM", "xterm"), ("LANG", "en_GB.UTF-8"), ("LC_ALL", "C")]);
        assert_eq!((c.glyphs, c.colours), (Glyphs::Plain, Colours::Sixteen));
        assert!(!c.unicode && c.screen);
        assert!(!with(&[("TERM", "dumb"), ("LANG", "en_GB.UTF-8")]).screen);
        assert!(!with(&[]).screen);
        let c = with(&[("TERM", "screen-256color"), ("COLORTERM", "truecolor")]);
        assert_eq!(c.colours, Colours::Palette);
        assert_eq!(
            with(&[("TERM", "xterm"), ("COLORFGBG", "0;15")]).background,
            Background::Light
        );
    }
}
