//! Light and dark: page, ink, and the colour scale of each quantity.

use super::oklab::{Rgb, lch};
use super::scale::{Scale, diverging, sequential};

/// What the picture is drawn on.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Theme {
    /// White paper: reports, print.
    #[default]
    Light,
    /// A dark page: slides, screens.
    Dark,
}

/// The colours of a theme.
#[derive(Clone, Debug)]
pub struct Palette {
    /// The page, and the colour of a field that is zero.
    pub page: Rgb,
    /// Titles and the outline.
    pub ink: Rgb,
    /// Secondary text and ticks.
    pub muted: Rgb,
    /// Nodal lines.
    pub node: Rgb,
    /// 0 to the peak density.
    pub density: Scale,
    /// −peak to +peak of the wave; zero is the page.
    pub wave: Scale,
}

impl Theme {
    /// All themes, with their names on the command line.
    pub const NAMES: [(&'static str, Self); 2] = [("light", Self::Light), ("dark", Self::Dark)];

    /// The colours.
    pub fn palette(self) -> Palette {
        match self {
            Self::Light => Palette {
                page: lch(1.0, 0.0, 0.0).rgb(),
                ink: lch(0.26, 0.015, 265.0).rgb(),
                muted: lch(0.50, 0.015, 265.0).rgb(),
                node: lch(0.62, 0.01, 265.0).rgb(),
                density: sequential(&[
                    lch(1.0, 0.0, 150.0),
                    lch(0.95, 0.03, 150.0),
                    lch(0.84, 0.095, 156.0),
                    lch(0.68, 0.108, 176.0),
                    lch(0.50, 0.09, 218.0),
                    lch(0.34, 0.09, 258.0),
                    lch(0.22, 0.07, 282.0),
                ]),
                wave: diverging(
                    &[
                        lch(1.0, 0.0, 0.0),
                        lch(0.92, 0.045, 0.0),
                        lch(0.78, 0.10, 0.0),
                        lch(0.62, 0.135, 0.0),
                        lch(0.47, 0.12, 0.0),
                        lch(0.36, 0.09, 0.0),
                    ],
                    (238.0, 262.0),
                    (72.0, 40.0),
                ),
            },
            Self::Dark => Palette {
                page: lch(0.19, 0.018, 275.0).rgb(),
                ink: lch(0.94, 0.008, 275.0).rgb(),
                muted: lch(0.70, 0.012, 275.0).rgb(),
                node: lch(0.56, 0.012, 275.0).rgb(),
                density: sequential(&[
                    lch(0.19, 0.018, 275.0),
                    lch(0.26, 0.06, 268.0),
                    lch(0.40, 0.08, 240.0),
                    lch(0.58, 0.095, 192.0),
                    lch(0.76, 0.13, 162.0),
                    lch(0.91, 0.12, 135.0),
                    lch(0.98, 0.05, 115.0),
                ]),
                wave: diverging(
                    &[
                        lch(0.19, 0.018, 275.0),
                        lch(0.30, 0.055, 0.0),
                        lch(0.46, 0.085, 0.0),
                        lch(0.64, 0.105, 0.0),
                        lch(0.80, 0.095, 0.0),
                        lch(0.91, 0.06, 0.0),
                    ],
                    (252.0, 220.0),
                    (45.0, 75.0),
                ),
            },
        }
    }
}
