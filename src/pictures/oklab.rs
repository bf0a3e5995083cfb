//! Oklab, the space in which the colour scales are laid out: equal distances look equal.
//!
//! B. Ottosson, "A perceptual color space for image processing" (2020): matrices M₁⁻¹ and M₂⁻¹
//! for linear sRGB; transfer curve of IEC 61966-2-1.

/// A colour by lightness 0…1, chroma and hue in degrees.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Lch {
    /// Lightness, 0 black to 1 white.
    pub lightness: f64,
    /// Chroma, 0 grey.
    pub chroma: f64,
    /// Hue in degrees.
    pub hue: f64,
}

/// Shorthand for [`Lch`].
pub const fn lch(lightness: f64, chroma: f64, hue: f64) -> Lch {
    Lch {
        lightness,
        chroma,
        hue,
    }
}

/// Rectangular coordinates: lightness, green–red, blue–yellow.
pub type Lab = [f64; 3];

/// An opaque sRGB colour of eight bits a channel.
pub type Rgb = [u8; 3];

impl Lch {
    /// In rectangular coordinates.
    pub fn lab(self) -> Lab {
        let (s, c) = self.hue.to_radians().sin_cos();
        [self.lightness, self.chroma * c, self.chroma * s]
    }

    /// As sRGB; channels outside the gamut are clipped.
    pub fn rgb(self) -> Rgb {
        to_rgb(self.lab())
    }
}

/// sRGB of an Oklab colour, each channel 0…1 when inside the gamut, not clipped.
pub fn to_srgb([l, a, b]: Lab) -> [f64; 3] {
    let cone = |x: f64| x * x * x;
    let long = cone(l + 0.396_337_777_4 * a + 0.215_803_757_3 * b);
    let medium = cone(l - 0.105_561_345_8 * a - 0.063_854_172_8 * b);
    let short = cone(l - 0.089_484_177_5 * a - 1.291_485_548_0 * b);
    [
        4.076_741_662_1 * long - 3.307_711_591_3 * medium + 0.230_969_929_2 * short,
        -1.268_438_004_6 * long + 2.609_757_401_1 * medium - 0.341_319_396_5 * short,
        -0.004_196_086_3 * long - 0.703_418_614_7 * medium + 1.707_614_701_0 * short,
    ]
    .map(encode)
}

/// Eight-bit sRGB of an Oklab colour; channels outside the gamut are clipped.
pub fn to_rgb(lab: Lab) -> Rgb {
    to_srgb(lab).map(|v| (v.clamp(0.0, 1.0) * 255.0).round() as u8)
}

/// Distance of two colours as the eye sees it; 0.02 is about one just visible step.
pub fn distance(p: Lab, q: Lab) -> f64 {
    let d = [0, 1, 2].map(|k| p[k] - q[k]);
    (d[0] * d[0] + d[1] * d[1] + d[2] * d[2]).sqrt()
}

fn encode(linear: f64) -> f64 {
    if linear <= 0.003_130_8 {
        12.92 * linear
    } else {
        1.055 * linear.powf(1.0 / 2.4) - 0.055
    }
}

#[cfg(test)]
pub mod back {
    //! The way back, by which the tests judge finished colours.
    use super::{Lab, Rgb};

    /// Oklab of an eight-bit sRGB colour.
    pub fn from_rgb(rgb: Rgb) -> Lab {
        let [r, g, b] = rgb.map(|v| decode(f64::from(v) / 255.0));
        let long = (0.412_221_470_8 * r + 0.536_332_536_3 * g + 0.051_445_992_9 * b).cbrt();
        let medium = (0.211_903_498_2 * r + 0.680_699_545_1 * g + 0.107_396_956_6 * b).cbrt();
        let short = (0.088_302_461_9 * r + 0.281_718_837_6 * g + 0.629_978_700_5 * b).cbrt();
        [
            0.210_454_255_3 * long + 0.793_617_785_0 * medium - 0.004_072_046_8 * short,
            1.977_998_495_1 * long - 2.428_592_205_0 * medium + 0.450_593_709_9 * short,
            0.025_904_037_1 * long + 0.782_771_766_2 * medium - 0.808_675_766_0 * short,
        ]
    }

    fn decode(v: f64) -> f64 {
        if v <= 0.040_45 {
            v / 12.92
        } else {
            ((v + 0.055) / 1.055).powf(2.4)
        }
    }
}

#[cfg(test)]
mod tests {
    use super::back::from_rgb;
    use super::*;

    #[test]
    fn white_is_white_and_every_colour_comes_back() {
        let white = from_rgb([255, 255, 255]);
        assert!(distance(white, [1.0, 0.0, 0.0]) < 1e-4, "{white:?}");
        for r in (0..=255).step_by(51) {
            for g in (0..=255).step_by(51) {
                for b in (0..=255).step_by(51) {
                    let rgb = [r as u8, g as u8, b as u8];
                    assert_eq!(to_rgb(from_rgb(rgb)), rgb);
                }
            }
        }
    }

    /// The table of the 2020 publication, from XYZ; sRGB red is known to three digits there.
    #[test]
    fn red_has_its_published_place() {
        let [l, a, b] = from_rgb([255, 0, 0]);
        assert!((l - 0.628).abs() < 1e-3 && (a - 0.225).abs() < 1e-3 && (b - 0.126).abs() < 1e-3);
    }
}
