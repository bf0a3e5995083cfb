//! Colours: one accent, one tone for what stands back, and the shades of the maps, brought down
//! to what the terminal has.

use super::capability::{Background, Colours};
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

type Rgb = (u8, u8, u8);

impl Paint {
    /// Mixes the shades once.
    pub fn new(colours: Colours, background: Background) -> Self {
        let light = background == Background::Light;
        let down = |c: Rgb| match colours {
            Colours::True => Color::Rgb(c.0, c.1, c.2),
            _ => Color::Indexed(nearest(c)),
        };
        let n = SHADES as i32;
        Self {
            colours,
            light,
            density: (0..=n)
                .map(|i| down(density(i as f64 / n as f64, light)))
                .collect(),
            wave: (-n..=n)
                .map(|i| down(wave(i as f64 / n as f64, light)))
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
            _ => s.fg(self.mix((246, 189, 96), (176, 84, 0))),
        }
    }

    /// What stands back.
    pub fn quiet(&self) -> Style {
        match self.colours {
            Colours::None | Colours::Sixteen => Style::new().add_modifier(Modifier::DIM),
            _ => Style::new().fg(self.mix((128, 134, 148), (110, 114, 126))),
        }
    }

    /// Outlines.
    pub fn outline(&self) -> Style {
        match self.colours {
            Colours::None | Colours::Sixteen => Style::new(),
            _ => Style::new().fg(self.mix((206, 212, 224), (40, 44, 56))),
        }
    }

    /// Nodal lines.
    pub fn node(&self) -> Style {
        match self.colours {
            Colours::None => Style::new().add_modifier(Modifier::DIM),
            Colours::Sixteen => Style::new().fg(Color::Green),
            _ => Style::new().fg(self.mix((150, 200, 170), (20, 110, 70))),
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
            _ => s.fg(self.mix((255, 125, 110), (190, 30, 30))),
        }
    }

    fn mix(&self, dark: Rgb, light: Rgb) -> Color {
        let c = if self.light { light } else { dark };
        match self.colours {
            Colours::True => Color::Rgb(c.0, c.1, c.2),
            _ => Color::Indexed(nearest(c)),
        }
    }
}

/// Density scale: lightness runs evenly, hue from deep blue over green to pale yellow; turned
/// round in lightness on a light background.
fn density(t: f64, light: bool) -> Rgb {
    let l = if light {
        0.97 - 0.67 * t
    } else {
        0.20 + 0.76 * t
    };
    let turn = if light { 1.0 - t } else { t };
    let hue = 268.0 - 170.0 * turn;
    let chroma = 0.035
        + 0.10 * (std::f64::consts::PI * t.powf(0.8)).sin().max(0.0)
        + if light { 0.05 * t } else { 0.03 * t };
    oklch(l, chroma, hue)
}

/// Wave scale: nothing at zero, blue below and amber above, of equal lightness.
fn wave(t: f64, light: bool) -> Rgb {
    let a = t.abs();
    let l = if light {
        0.97 - 0.47 * a
    } else {
        0.20 + 0.60 * a
    };
    let hue = if t < 0.0 { 248.0 } else { 62.0 };
    oklch(l, 0.012 + 0.135 * a, hue)
}

/// sRGB of a colour in Oklab (B. Ottosson, 2020) given by lightness, chroma and hue in degrees;
/// chroma is lowered until the colour exists.
fn oklch(l: f64, chroma: f64, hue: f64) -> Rgb {
    let (s, c) = hue.to_radians().sin_cos();
    let mut k = chroma;
    loop {
        let linear = linear_rgb(l, k * c, k * s);
        let fits = linear.iter().all(|v| (-1e-4..=1.0001).contains(v));
        if fits || k < 1e-3 {
            let [r, g, b] = linear.map(gamma);
            return (r, g, b);
        }
        k *= 0.97;
    }
}

fn linear_rgb(l: f64, a: f64, b: f64) -> [f64; 3] {
    let p = (l + 0.396_337_777_4 * a + 0.215_803_757_3 * b).powi(3);
    let q = (l - 0.105_561_345_8 * a - 0.063_854_172_8 * b).powi(3);
    let r = (l - 0.089_484_177_5 * a - 1.291_485_548_0 * b).powi(3);
    [
        4.076_741_662_1 * p - 3.307_711_591_3 * q + 0.230_969_929_2 * r,
        -1.268_438_004_6 * p + 2.609_757_401_1 * q - 0.341_319_396_5 * r,
        -0.004_196_086_3 * p - 0.703_418_614_7 * q + 1.707_614_701_0 * r,
    ]
}

fn gamma(x: f64) -> u8 {
    let x = x.clamp(0.0, 1.0);
    let y = if x <= 0.003_130_8 {
        12.92 * x
    } else {
        1.055 * x.powf(1.0 / 2.4) - 0.055
    };
    (y * 255.0).round() as u8
}

/// The entry of the fixed 256 palette (colour cube and grey ramp) closest to a colour.
fn nearest(c: Rgb) -> u8 {
    const CUBE: [u8; 6] = [0, 95, 135, 175, 215, 255];
    let far = |p: Rgb| {
        let d = |a: u8, b: u8| (f64::from(a) - f64::from(b)).powi(2);
        // weights near those of the eye's three receptors keep hues from tipping over
        3.0 * d(p.0, c.0) + 5.0 * d(p.1, c.1) + 2.0 * d(p.2, c.2)
    };
    let cube = (0..216u8).map(|i| {
        let at = |k: u8| CUBE[usize::from(k % 6)];
        (16 + i, (at(i / 36), at(i / 6), at(i)))
    });
    let grey = (0..24u8).map(|i| {
        let v = 8 + 10 * i;
        (232 + i, (v, v, v))
    });
    cube.chain(grey)
        .min_by(|a, b| far(a.1).total_cmp(&far(b.1)))
        .map_or(16, |hit| hit.0)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn luma(c: Rgb) -> f64 {
        0.3 * f64::from(c.0) + 0.59 * f64::from(c.1) + 0.11 * f64::from(c.2)
    }

    #[test]
    fn shades_rise_and_meet() {
        for i in 0..SHADES {
            let (t, u) = (i as f64 / SHADES as f64, (i + 1) as f64 / SHADES as f64);
            assert!(luma(density(t, false)) < luma(density(u, false)));
            assert!(luma(density(t, true)) > luma(density(u, true)));
            assert!(luma(wave(-t, false)) < luma(wave(-u, false)));
        }
        let (a, b) = (luma(wave(-1.0, false)), luma(wave(1.0, false)));
        assert!((a - b).abs() < 25.0, "signs weigh the same: {a} {b}");
    }

    #[test]
    fn palette_entries() {
        assert_eq!(nearest((0, 0, 0)), 16);
        assert_eq!(nearest((255, 255, 255)), 231);
        assert_eq!(nearest((128, 128, 128)), 244);
    }
}
