//! Colours: one accent, one tone for what stands back, and the shades of the maps, the same as
//! in exported pictures, brought down to what the terminal has.

use super::capability::{Background, Colours};
use crate::pictures::Theme;
use ratatui::style::{Color, Modifier, Style};

/// Steps of a shade on small plates: few, so that neighbouring cells share a style and a step to
/// the next mode stays short on a slow line. One cell there spans more than a step anyway.
const COARSE: usize = 10;
/// Steps on large plates, where fewer would be seen as terraces.
const FINE: usize = 20;
/// Plates of more cells than this are large.
const LARGE: usize = 1500;

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
    /// Mixes the shades for a plate of so many cells.
    pub fn new(colours: Colours, background: Background, cells: usize) -> Self {
        let steps = if cells > LARGE { FINE } else { COARSE };
        let light = background == Background::Light;
        let down = |c: Rgb| match colours {
            Colours::True => Color::Rgb(c[0], c[1], c[2]),
            _ => Color::Indexed(nearest(c)),
        };
        let n = steps as i32;
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

    /// The colour of a density in 0..=1.
    pub fn density(&self, tone: f64) -> Color {
        let last = self.density.len() - 1;
        self.density[((tone * last as f64).round().max(0.0) as usize).min(last)]
    }

    /// The colour of a wave in -1..=1.
    pub fn wave(&self, tone: f64) -> Color {
        let last = self.wave.len() - 1;
        let step = (0.5 * (tone + 1.0) * last as f64).round().max(0.0);
        self.wave[(step as usize).min(last)]
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
            (_, true) => Style::new().fg(self.wave(0.75)),
            (_, false) => Style::new().fg(self.wave(-0.75)),
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

/// The entry of the fixed 256 palette (colour cube and grey ramp) that looks closest to a colour.
fn nearest(c: Rgb) -> u8 {
    const CUBE: [u8; 6] = [0, 95, 135, 175, 215, 255];
    let cube = (0..216u8).map(|i| {
        let at = |k: u8| CUBE[usize::from(k % 6)];
        (16 + i, [at(i / 36), at(i / 6), at(i)])
    });
    let grey = (0..24u8).map(|i| (232 + i, [8 + 10 * i; 3]));
    let wanted = oklab(c);
    let far = |p: Rgb| {
        let [l, a, b] = oklab(p);
        // a step in lightness is seen less than a hue that tips over
        (l - wanted[0]).powi(2) + HUE * ((a - wanted[1]).powi(2) + (b - wanted[2]).powi(2))
    };
    const HUE: f64 = 3.0;
    cube.chain(grey)
        .min_by(|a, b| far(a.1).total_cmp(&far(b.1)))
        .map_or(16, |hit| hit.0)
}

/// Oklab coordinates of an sRGB colour (B. Ottosson, 2020).
fn oklab(c: Rgb) -> [f64; 3] {
    let [r, g, b] = c.map(|v| {
        let v = f64::from(v) / 255.0;
        if v <= 0.040_45 {
            v / 12.92
        } else {
            ((v + 0.055) / 1.055).powf(2.4)
        }
    });
    let l = (0.412_221_470_8 * r + 0.536_332_536_3 * g + 0.051_445_992_9 * b).cbrt();
    let m = (0.211_903_498_2 * r + 0.680_699_545_1 * g + 0.107_396_956_6 * b).cbrt();
    let s = (0.088_302_461_9 * r + 0.281_718_837_6 * g + 0.629_978_700_5 * b).cbrt();
    [
        0.210_454_255_3 * l + 0.793_617_785_0 * m - 0.004_072_046_8 * s,
        1.977_998_495_1 * l - 2.428_592_205_0 * m + 0.450_593_709_9 * s,
        0.025_904_037_1 * l + 0.782_771_766_2 * m - 0.808_675_766_0 * s,
    ]
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn shades_stay_apart_in_every_depth() {
        for colours in [Colours::Palette, Colours::True] {
            for background in [Background::Dark, Background::Light] {
                let paint = Paint::new(colours, background, 0);
                let step = 1.0 / COARSE as f64;
                // the palette has few dark greens and blues; every other step must still differ
                for i in 0..COARSE - 1 {
                    let t = i as f64 * step;
                    assert_ne!(
                        paint.density(t),
                        paint.density(t + 2.0 * step),
                        "{colours:?} {i}"
                    );
                }
                for i in 4..=COARSE {
                    let t = i as f64 * step;
                    assert_ne!(paint.wave(t), paint.wave(-t), "signs differ");
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
