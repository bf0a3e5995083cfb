//! A finished picture: PNG with text in it, written whole or not at all.

use super::PictureError;
use std::fs::{self, File};
use std::io::{self, Write};
use std::path::{Path, PathBuf};
use tiny_skia::Pixmap;

/// Pixels per metre at 300 dots per inch: a map of 1200 pixels is 10 cm wide on paper.
const DENSITY: u32 = 11_811;

/// A picture and what is said about it inside the file.
#[derive(Clone, Debug)]
pub struct Picture {
    pub(super) page: Pixmap,
    pub(super) text: Vec<(&'static str, String)>,
}

impl Picture {
    /// Width and height in pixels.
    pub fn size(&self) -> (u32, u32) {
        (self.page.width(), self.page.height())
    }

    /// The sRGB pixels, row by row from the top.
    pub fn rgb(&self) -> Vec<u8> {
        let opaque = |p: &[u8]| [p[0], p[1], p[2]];
        self.page.data().chunks_exact(4).flat_map(opaque).collect()
    }

    /// Keywords and texts that stand in the file.
    pub fn text(&self) -> &[(&'static str, String)] {
        &self.text
    }

    /// The file's bytes.
    ///
    /// # Errors
    /// [`PictureError::Encode`].
    pub fn png(&self) -> Result<Vec<u8>, PictureError> {
        let mut bytes = Vec::new();
        let mut encoder = png::Encoder::new(&mut bytes, self.page.width(), self.page.height());
        encoder.set_color(png::ColorType::Rgb);
        encoder.set_depth(png::BitDepth::Eight);
        // on smooth maps one filter does as well as choosing among five, in four fifths of the time
        encoder.set_filter(png::Filter::Up);
        encoder.set_source_srgb(png::SrgbRenderingIntent::Perceptual);
        encoder.set_pixel_dims(Some(png::PixelDimensions {
            xppu: DENSITY,
            yppu: DENSITY,
            unit: png::Unit::Meter,
        }));
        for (keyword, text) in &self.text {
            // tEXt holds Latin-1 only; iTXt holds everything
            if text.is_ascii() {
                encoder.add_text_chunk((*keyword).to_owned(), text.clone())?;
            } else {
                encoder.add_itxt_chunk((*keyword).to_owned(), text.clone())?;
            }
        }
        let mut writer = encoder.write_header()?;
        writer.write_image_data(&self.rgb())?;
        writer.finish()?;
        Ok(bytes)
    }

    /// Writes the file at `path`: beside it first, then renamed, so that a failure leaves whatever
    /// was there before.
    ///
    /// # Errors
    /// [`PictureError::Encode`] or [`PictureError::Write`].
    pub fn save(&self, path: &Path) -> Result<(), PictureError> {
        let bytes = self.png()?;
        write_whole(path, &bytes).map_err(|cause| PictureError::Write {
            path: path.to_owned(),
            cause,
        })
    }
}

/// Writes `bytes` beside `path` and renames. A link keeps pointing to its file; a pipe or a device
/// is written straight.
pub fn write_whole(path: &Path, bytes: &[u8]) -> io::Result<()> {
    let target = fs::canonicalize(path).unwrap_or_else(|_| path.to_owned());
    if let Ok(there) = fs::metadata(&target) {
        if there.is_dir() {
            return Err(io::Error::from(io::ErrorKind::IsADirectory));
        }
        if !there.is_file() {
            return File::options().write(true).open(&target)?.write_all(bytes);
        }
    }
    let folder = match target.parent() {
        Some(p) if !p.as_os_str().is_empty() => p.to_owned(),
        _ => PathBuf::from("."),
    };
    let mut builder = tempfile::Builder::new();
    builder.prefix(".dotwright-").suffix(".part");
    #[cfg(unix)]
    let mode = {
        use std::os::unix::fs::PermissionsExt;
        // as any new file: what the umask leaves
        fs::Permissions::from_mode(0o666)
    };
    #[cfg(unix)]
    builder.permissions(mode);
    let mut part = builder.tempfile_in(folder).map_err(bare)?;
    part.write_all(bytes)?;
    part.as_file().sync_all()?;
    part.persist(&target).map_err(|e| e.error)?;
    Ok(())
}

/// The system's error without the name of the part file, which is nobody's concern.
fn bare(error: io::Error) -> io::Error {
    let inner = error
        .get_ref()
        .and_then(|e| e.source())
        .and_then(|e| e.downcast_ref::<io::Error>())
        .and_then(io::Error::raw_os_error);
    inner.map_or(error, io::Error::from_raw_os_error)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn small() -> Picture {
        let mut page = Pixmap::new(3, 2).expect("a small page");
        page.fill(tiny_skia::Color::from_rgba8(10, 20, 30, 255));
        Picture {
            page,
            text: vec![("Title", "Dot µ".into()), ("Level", "3".into())],
        }
    }

    #[test]
    fn the_file_says_what_it_shows() {
        let bytes = small().png().expect("a picture");
        let mut reader = png::Decoder::new(io::Cursor::new(&bytes))
            .read_info()
            .expect("a PNG");
        let mut pixels = vec![0; 18];
        reader.next_frame(&mut pixels).expect("pixels");
        assert_eq!(pixels[..3], [10, 20, 30]);
        let info = reader.info();
        assert_eq!(info.uncompressed_latin1_text[0].text, "3");
        assert_eq!(info.utf8_text[0].get_text().expect("text"), "Dot µ");
    }

    #[test]
    fn a_failure_leaves_what_was_there() {
        let folder = tempfile::tempdir().expect("a folder");
        let path = folder.path().join("m.png");
        small().save(&path).expect("written");
        let before = fs::read(&path).expect("there");
        assert!(small().save(&folder.path().join("none/m.png")).is_err());
        assert!(small().save(folder.path()).is_err());
        small().save(&path).expect("written over");
        assert_eq!(fs::read(&path).expect("there"), before);
        assert_eq!(fs::read_dir(folder.path()).expect("listed").count(), 1);
    }
}
