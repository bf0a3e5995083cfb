//! Colour scales of our own making: smooth paths through Oklab, run through at constant speed.
//!
//! The path is the uniform cubic B-spline of a few knots. It stays in their convex hull and turns
//! no more often than they do, so that a scale whose knots grow in lightness grows everywhere.
//! Constant speed makes equal differences of the field look equal.

use super::oklab::{Lab, Lch, Rgb, distance, lch, to_rgb};

/// Entries of a finished scale: finer than the steps of eight-bit colour.
const ENTRIES: usize = 1024;
/// Straight pieces by which the length of a path is measured.
const PIECES: usize = 4096;

/// A finished scale.
#[derive(Clone, Debug, PartialEq)]
pub struct Scale {
    colours: Vec<Lab>,
    table: Vec<Rgb>,
}

impl Scale {
    /// The colour at `t`, 0 the start to 1 the end; beyond, and for NaN, the nearer end.
    pub fn at(&self, t: f64) -> Rgb {
        let last = self.table.len() - 1;
        self.table[(t.clamp(0.0, 1.0) * last as f64).round() as usize]
    }

    /// The entries in Oklab, evenly spaced from start to end.
    pub fn colours(&self) -> &[Lab] {
        &self.colours
    }

    fn of(colours: Vec<Lab>) -> Self {
        let table = colours.iter().map(|&c| to_rgb(c)).collect();
        Self { colours, table }
    }
}

/// A scale along one path.
pub fn sequential(knots: &[Lch]) -> Scale {
    let lab: Vec<Lab> = knots.iter().map(|k| k.lab()).collect();
    Scale::of(even(&path(&lab), ENTRIES))
}

/// A scale of two arms with the same lightness and chroma, from the end of the negative arm over
/// the shared first knot to the end of the positive one. Each arm's hue runs from the first to the
/// second angle of its pair, away from the middle.
pub fn diverging(knots: &[Lch], negative: (f64, f64), positive: (f64, f64)) -> Scale {
    let arm = |(near, far): (f64, f64)| {
        let last = (knots.len() - 1) as f64;
        let turned = |(k, knot): (usize, &Lch)| {
            let hue = near + (far - near) * k as f64 / last;
            let hue = if k == 0 { knot.hue } else { hue };
            lch(knot.lightness, knot.chroma, hue).lab()
        };
        let lab: Vec<Lab> = knots.iter().enumerate().map(turned).collect();
        path(&lab)
    };
    let (down, up) = (arm(negative), arm(positive));
    let half = ENTRIES / 2;
    let mut colours = even(&down, half + 1);
    colours.reverse();
    colours.extend_from_slice(&even(&up, half + 1)[1..]);
    Scale::of(colours)
}

/// Fine points of the B-spline of `knots`; the ends are knots of multiplicity three, and so met.
fn path(knots: &[Lab]) -> Vec<Lab> {
    let n = knots.len() as isize;
    let knot = |i: isize| knots[i.clamp(0, n - 1) as usize];
    let spans = n + 1;
    let point = |s: f64| {
        let k = (s.floor() as isize).min(spans - 1);
        let t = s - k as f64;
        let w = [
            (1.0 - t).powi(3) / 6.0,
            (3.0 * t.powi(3) - 6.0 * t * t + 4.0) / 6.0,
            (-3.0 * t.powi(3) + 3.0 * t * t + 3.0 * t + 1.0) / 6.0,
            t.powi(3) / 6.0,
        ];
        let mut out = [0.0; 3];
        for (j, w) in w.iter().enumerate() {
            let p = knot(k - 2 + j as isize);
            for c in 0..3 {
                out[c] += w * p[c];
            }
        }
        out
    };
    (0..=PIECES)
        .map(|i| point(spans as f64 * i as f64 / PIECES as f64))
        .collect()
}

/// `count` points of a path at equal distances along it, ends included.
fn even(path: &[Lab], count: usize) -> Vec<Lab> {
    let mut run = vec![0.0];
    for k in 1..path.len() {
        run.push(run[k - 1] + distance(path[k - 1], path[k]));
    }
    let total = run[run.len() - 1];
    let mut k = 0;
    (0..count)
        .map(|i| {
            let s = total * i as f64 / (count - 1) as f64;
            while k + 2 < run.len() && run[k + 1] < s {
                k += 1;
            }
            let length = run[k + 1] - run[k];
            let t = if length > 0.0 {
                (s - run[k]) / length
            } else {
                0.0
            };
            [0, 1, 2].map(|c| path[k][c] + t.clamp(0.0, 1.0) * (path[k + 1][c] - path[k][c]))
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::super::oklab::back::from_rgb;
    use super::super::oklab::to_srgb;
    use super::super::theme::Theme;
    use super::*;

    fn every_scale() -> Vec<(String, Scale)> {
        let mut all = Vec::new();
        for (name, theme) in Theme::NAMES {
            let p = theme.palette();
            all.push((format!("{name} density"), p.density));
            all.push((format!("{name} wave"), p.wave));
        }
        all
    }

    /// Relative luminance Y of a colour (IEC 61966-2-1): what a grey print keeps.
    fn luminance(rgb: Rgb) -> f64 {
        let lin = rgb.map(|v| {
            let v = f64::from(v) / 255.0;
            if v <= 0.040_45 {
                v / 12.92
            } else {
                ((v + 0.055) / 1.055).powf(2.4)
            }
        });
        0.2126 * lin[0] + 0.7152 * lin[1] + 0.0722 * lin[2]
    }

    #[test]
    fn no_colour_leaves_the_gamut() {
        for (name, scale) in every_scale() {
            for (k, &c) in scale.colours().iter().enumerate() {
                for v in to_srgb(c) {
                    assert!((-0.004..1.004).contains(&v), "{name} at {k}: {v}");
                }
            }
        }
    }

    #[test]
    fn steps_look_equal() {
        for (name, scale) in every_scale() {
            let c = scale.colours();
            let step: Vec<f64> = c.windows(2).map(|w| distance(w[0], w[1])).collect();
            let (lo, hi) = step
                .iter()
                .fold((f64::MAX, 0.0f64), |(lo, hi), &s| (lo.min(s), hi.max(s)));
            // the two arms of a wave differ a little in how much their hue turns
            assert!(hi / lo < 1.12, "{name}: {lo} to {hi}");
        }
    }

    #[test]
    fn density_is_monotone_in_lightness_and_in_grey() {
        for (name, theme) in Theme::NAMES {
            let scale = theme.palette().density;
            let sign = if theme == Theme::Light { -1.0 } else { 1.0 };
            for w in scale.colours().windows(2) {
                assert!(sign * (w[1][0] - w[0][0]) > 0.0, "{name}");
            }
            let grey: Vec<f64> = (0..=64)
                .map(|k| luminance(scale.at(k as f64 / 64.0)))
                .collect();
            assert!(
                grey.windows(2).all(|w| sign * (w[1] - w[0]) > 0.0),
                "{name}: {grey:?}"
            );
            let range = (scale.colours()[0][0] - scale.colours()[ENTRIES - 1][0]).abs();
            assert!(range > 0.7, "{name}: a range of {range} in lightness");
        }
    }

    #[test]
    fn the_wave_is_symmetric_about_the_page() {
        for (name, theme) in Theme::NAMES {
            let palette = theme.palette();
            let c = palette.wave.colours();
            let n = c.len();
            for k in 0..n / 2 {
                let (a, b) = (c[k], c[n - 1 - k]);
                assert!(
                    (a[0] - b[0]).abs() < 0.012,
                    "{name}: {} against {}",
                    a[0],
                    b[0]
                );
            }
            assert_eq!(palette.wave.at(0.5), palette.page, "{name}");
            assert_eq!(palette.density.at(0.0), palette.page, "{name}");
        }
    }

    /// Simulated dichromacy: F. Viénot, H. Brettel & J. D. Mollon, Color Res. Appl. 24, 243 (1999),
    /// eqs. for protanopes and deuteranopes in linear sRGB.
    #[test]
    fn signs_stay_apart_for_the_colour_blind() {
        let simulate = |m: [[f64; 3]; 3], rgb: Rgb| -> Rgb {
            let lin = rgb.map(|v| (f64::from(v) / 255.0).powf(2.2));
            m.map(|row| {
                let v: f64 = row.iter().zip(lin).map(|(a, b)| a * b).sum();
                (v.clamp(0.0, 1.0).powf(1.0 / 2.2) * 255.0).round() as u8
            })
        };
        let protan = [
            [0.112_38, 0.887_62, 0.0],
            [0.112_38, 0.887_62, 0.0],
            [0.004_01, -0.004_01, 1.0],
        ];
        let deutan = [
            [0.292_75, 0.707_25, 0.0],
            [0.292_75, 0.707_25, 0.0],
            [-0.022_34, 0.022_34, 1.0],
        ];
        for (name, theme) in Theme::NAMES {
            let wave = theme.palette().wave;
            for m in [protan, deutan] {
                for t in [0.25, 0.4] {
                    let (a, b) = (wave.at(0.5 - t), wave.at(0.5 + t));
                    let d = distance(from_rgb(simulate(m, a)), from_rgb(simulate(m, b)));
                    assert!(d > 0.1, "{name} at ±{t}: {d}");
                }
            }
        }
    }
}
