//! Colours: one accent, one tone for what stands back, and the shades of the maps, the same as
//! in exported pictures, brought down to what the terminal has.

use super::capability::{Background, Colours};
use crate::pictures::Theme;
use ratatui::style::{Color, Modifier, Style};

/// Steps of a shade; few, so that neighbouring cells share a style and lines stay short.
pub const SHADES: usize = 16;

/// The painter's box for one terminal.
#[derive(Clone, Debug)]
pub struct Paint {
    colours: Colours,
    density: Vec<Color>,
    wave: Vec<Color>,
    light: bool,
}

type Rgb = [u8; 3];

impl Paint {
    /// Mixes the shades once.
    pub fn new(colours: Colours, background: Background) -> Self {
        let light = background == Background::Light;
        let down = |c: Rgb| match colours {
            Colours::True => Color::Rgb(c[0], c[1], c[2]),
            _ => Color::Indexed(nearest(c)),
        };
        let n = SHADES as i32;
        let part = |i: i32| f64::from(i) / f64::from(n);
        let theme = if light { Theme::Light } else { Theme::Dark };
        let palette = theme.palette();
        Self {
            colours,
            light,
            density: (0..=n).map(|i| down(palette.density.at(part(i)))).collect(),
            wave: (-n..=n)
                .map(|i| down(palette.wave.at(0.5 + 0.5 * part(i))))
                .collect(),
        }
    }

    /// Whether maps can be shaded by colour.
    pub fn shades(&self) -> bool {
        self.colours >= Colours::Palette
    }

    /// Whether there is any colour.
    pub fn coloured(&self) -> bool {
        self.colours >= Colours::Sixteen
    }

    /// The colour of a density step in `0..=SHADES`.
    pub fn density(&self, step: usize) -> Color {
        self.density[step.min(SHADES)]
    }

    /// The colour of a wave step in `-SHADES..=SHADES`.
    pub fn wave(&self, step: i32) -> Color {
        let n = SHADES as i32;
        self.wave[(step.clamp(-n, n) + n) as usize]
    }

    /// What is chosen.
    pub fn accent(&self) -> Style {
        let s = Style::new().add_modifier(Modifier::BOLD);
        match self.colours {
            Colours::None => s,
            Colours::Sixteen => s.fg(if self.light {
                Color::Red
            } else {
                Color::Yellow
            }),
            _ => s.fg(self.mix([246, 189, 96], [176, 84, 0])),
        }
    }

    /// What stands back.
    pub fn quiet(&self) -> Style {
        match self.colours {
            Colours::None | Colours::Sixteen => Style::new().add_modifier(Modifier::DIM),
            _ => Style::new().fg(self.mix([128, 134, 148], [110, 114, 126])),
        }
    }

    /// Outlines.
    pub fn outline(&self) -> Style {
        match self.colours {
            Colours::None | Colours::Sixteen => Style::new(),
            _ => Style::new().fg(self.mix([206, 212, 224], [40, 44, 56])),
        }
    }

    /// Nodal lines.
    pub fn node(&self) -> Style {
        match self.colours {
            Colours::None => Style::new().add_modifier(Modifier::DIM),
            Colours::Sixteen => Style::new().fg(Color::Green),
            _ => Style::new().fg(self.mix([150, 200, 170], [20, 110, 70])),
        }
    }

    /// Dots and letters of a lobe, where cells are not shaded by colour.
    pub fn lobe(&self, positive: bool) -> Style {
        match (self.colours, positive) {
            (Colours::None, true) => Style::new(),
            (Colours::None, false) => Style::new(),
            (Colours::Sixteen, true) => Style::new().fg(if self.light {
                Color::Red
            } else {
                Color::Yellow
            }),
            (Colours::Sixteen, false) => {
                Style::new().fg(if self.light { Color::Blue } else { Color::Cyan })
            }
            (_, true) => Style::new().fg(self.wave(SHADES as i32 * 3 / 4)),
            (_, false) => Style::new().fg(self.wave(-(SHADES as i32) * 3 / 4)),
        }
    }

    /// Something went wrong.
    pub fn alarm(&self) -> Style {
        let s = Style::new().add_modifier(Modifier::BOLD);
        match self.colours {
            Colours::None => s,
            Colours::Sixteen => s.fg(Color::Red),
            _ => s.fg(self.mix([255, 125, 110], [190, 30, 30])),
        }
    }

    fn mix(&self, dark: Rgb, light: Rgb) -> Color {
        let c = if self.light { light } else { dark };
        match self.colours {
            Colours::True => Color::Rgb(c[0], c[1], c[2]),
            _ => Color::Indexed(nearest(c)),
        }
    }
}

/// The entry of the fixed 256 palette (colour cube and grey ramp) closest to a colour.
fn nearest(c: Rgb) -> u8 {
    const CUBE: [u8; 6] = [0, 95, 135, 175, 215, 255];
    let far = |p: Rgb| {
        let d = |a: u8, b: u8| (f64::from(a) - f64::from(b)).powi(2);
        // weights near those of the eye's three receptors keep hues from tipping over
        3.0 * d(p[0], c[0]) + 5.0 * d(p[1], c[1]) + 2.0 * d(p[2], c[2])
    };
    let cube = (0..216u8).map(|i| {
        let at = |k: u8| CUBE[usize::from(k % 6)];
        (16 + i, [at(i / 36), at(i / 6), at(i)])
    });
    let grey = (0..24u8).map(|i| {
        let v = 8 + 10 * i;
        (232 + i, [v, v, v])
    });
    cube.chain(grey)
        .min_by(|a, b| far(a.1).total_cmp(&far(b.1)))
        .map_or(16, |hit| hit.0)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn shades_stay_apart_in_every_depth() {
        for colours in [Colours::Palette, Colours::True] {
            for background in [Background::Dark, Background::Light] {
                let paint = Paint::new(colours, background);
                // the palette has few dark greens and blues; every other step must still differ
                for i in 0..SHADES - 1 {
                    assert_ne!(paint.density(i), paint.density(i + 2), "{colours:?} {i}");
                }
                let n = SHADES as i32;
                for i in 4..=n {
                    assert_ne!(paint.wave(i), paint.wave(-i), "signs differ");
                }
            }
        }
    }

    #[test]
    fn palette_entries() {
        assert_eq!(nearest([0, 0, 0]), 16);
        assert_eq!(nearest([255, 255, 255]), 231);
        assert_eq!(nearest([128, 128, 128]), 244);
    }
}
