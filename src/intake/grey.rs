//! A PNG file as a map of grey levels.

use super::IntakeError;
use png::{ColorType, DecodingError, Transformations};
use std::fs::File;
use std::io::BufReader;
use std::path::Path;

/// Pixels a picture may declare; the check comes before any of them is decoded.
pub const MOST_PIXELS: u64 = 64 << 20;

/// Least difference between the darkest and the brightest grey, of 65 535.
const LEAST_CONTRAST: u16 = 6553;

/// Grey levels, row by row from the top, spread to the full range of 16 bit.
#[derive(Clone, Debug, PartialEq)]
pub struct GreyMap {
    /// Columns.
    pub width: usize,
    /// Rows.
    pub height: usize,
    /// Levels; the darkest of the picture is 0, the brightest 65 535.
    pub levels: Vec<u16>,
}

impl GreyMap {
    /// Reads a PNG: grey, RGB or indexed, 1 to 16 bit, with or without transparency. Colours count
    /// by their mean, transparent counts as dark; a picture of one colour and varying transparency
    /// (a cut-out) counts by its opacity. Levels are then spread from darkest to brightest.
    ///
    /// # Errors
    /// Missing, not a PNG, truncated, beyond [`MOST_PIXELS`], or without contrast.
    pub fn read(path: &Path) -> Result<Self, IntakeError> {
        let file = File::open(path).map_err(|e| IntakeError::unreadable(path, &e))?;
        let damaged = |error: DecodingError| damaged(path, &error);
        let mut decoder =
            png::Decoder::new_with_limits(BufReader::new(file), png::Limits { bytes: 1 << 30 });
        decoder.set_transformations(Transformations::EXPAND);
        decoder.set_ignore_text_chunk(true);
        let (width, height) = decoder.read_header_info().map_err(damaged)?.size();
        if u64::from(width) * u64::from(height) > MOST_PIXELS {
            return Err(IntakeError::TooManyPixels {
                path: path.to_owned(),
                width,
                height,
            });
        }
        let mut reader = decoder.read_info().map_err(damaged)?;
        let size = reader.output_buffer_size().unwrap_or(usize::MAX);
        // Four channels of 16 bit are the most a checked picture can need.
        if size > 8 * MOST_PIXELS as usize {
            return Err(IntakeError::TooManyPixels {
                path: path.to_owned(),
                width,
                height,
            });
        }
        let mut bytes = vec![0; size];
        let frame = reader.next_frame(&mut bytes).map_err(damaged)?;
        bytes.truncate(frame.buffer_size());
        let wide = frame.bit_depth == png::BitDepth::Sixteen;
        let (colours, opacity) = match frame.color_type {
            ColorType::Grayscale => (1, false),
            ColorType::GrayscaleAlpha => (1, true),
            ColorType::Rgb | ColorType::Indexed => (3, false),
            ColorType::Rgba => (3, true),
        };
        let levels = greys(&bytes, wide, colours, opacity);
        Self::spread(width as usize, height as usize, levels).ok_or_else(|| IntakeError::OneGrey {
            path: path.to_owned(),
        })
    }

    /// A map from raw levels, spread to the full range; `None` when they hardly differ.
    fn spread(width: usize, height: usize, mut levels: Vec<u16>) -> Option<Self> {
        let (low, high) = levels
            .iter()
            .fold((u16::MAX, 0), |(l, h), &v| (v.min(l), v.max(h)));
        if levels.len() != width * height || high < low || high - low < LEAST_CONTRAST {
            return None;
        }
        let range = u64::from(high - low);
        for v in &mut levels {
            *v = ((u64::from(*v - low) * 65_535 + range / 2) / range) as u16;
        }
        Some(Self {
            width,
            height,
            levels,
        })
    }

    /// The same map with dark and bright exchanged.
    pub fn inverted(mut self) -> Self {
        for v in &mut self.levels {
            *v = u16::MAX - *v;
        }
        self
    }

    /// How many pixels are neither dark nor bright.
    pub fn between(&self) -> usize {
        self.levels
            .iter()
            .filter(|&&v| v > 3276 && v < 62_258)
            .count()
    }
}

/// One grey of 16 bit per pixel from interleaved channels.
fn greys(bytes: &[u8], wide: bool, colours: usize, opacity: bool) -> Vec<u16> {
    let channels = colours + usize::from(opacity);
    let value = |pixel: &[u8], c: usize| -> u32 {
        if wide {
            u32::from(pixel[2 * c]) << 8 | u32::from(pixel[2 * c + 1])
        } else {
            u32::from(pixel[c]) * 257
        }
    };
    let bytes_each = channels * if wide { 2 } else { 1 };
    let colour = |p: &[u8]| (0..colours).map(|c| value(p, c)).sum::<u32>() / colours as u32;
    let pixels = || bytes.chunks_exact(bytes_each);
    if !opacity {
        return pixels().map(|p| colour(p) as u16).collect();
    }
    let visible = || pixels().filter(|p| value(p, colours) > 0);
    let (low, high) = visible()
        .map(colour)
        .fold((u32::MAX, 0), |(l, h), v| (v.min(l), v.max(h)));
    let one_colour = high.saturating_sub(low) < u32::from(LEAST_CONTRAST);
    pixels()
        .map(|p| {
            let alpha = value(p, colours);
            if one_colour {
                alpha as u16
            } else {
                ((colour(p) * (alpha + 1)) >> 16) as u16
            }
        })
        .collect()
}

fn damaged(path: &Path, error: &DecodingError) -> IntakeError {
    let reason = match error {
        DecodingError::IoError(e) if e.kind() == std::io::ErrorKind::UnexpectedEof => {
            "the file ends before the picture does".to_owned()
        }
        DecodingError::IoError(e) => e.to_string(),
        DecodingError::Format(e) => e.to_string(),
        DecodingError::LimitsExceeded => "it needs more memory than a picture may".to_owned(),
        DecodingError::Parameter(e) => e.to_string(),
    };
    IntakeError::Damaged {
        path: path.to_owned(),
        reason,
    }
}
