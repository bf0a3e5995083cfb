//! Where the plane lies on the page, and the outline as a path on it.

use crate::geometry::{Box2, Outline, Piece, Point};
use tiny_skia::{FillRule, Mask, Path, PathBuilder, Transform};

/// How far a chord may leave its curve, in pixels: invisible under anti-aliasing.
const SAGITTA: f64 = 0.04;

/// A rectangle of the page, pixels; may be fractional.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Area {
    /// Left edge.
    pub left: f64,
    /// Upper edge.
    pub top: f64,
    /// Width.
    pub width: f64,
    /// Height.
    pub height: f64,
}

/// A map from the plane to the page: y points up there and down here.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct View {
    /// The box shown.
    pub bounds: Box2,
    /// Pixels to a unit of length.
    pub scale: f64,
    /// Pixel of the box's left edge.
    pub left: f64,
    /// Pixel of the box's upper edge.
    pub top: f64,
}

impl View {
    /// `bounds` as large as fits into `area`, in its middle.
    pub fn fit(bounds: Box2, area: Area) -> Self {
        let size = bounds.size();
        let scale = (area.width / size.x).min(area.height / size.y);
        Self {
            bounds,
            scale,
            left: area.left + (area.width - scale * size.x) / 2.0,
            top: area.top + (area.height - scale * size.y) / 2.0,
        }
    }

    /// The pixel of a point.
    pub fn pixel(&self, p: Point) -> (f64, f64) {
        (
            self.left + (p.x - self.bounds.lo.x) * self.scale,
            self.top + (self.bounds.hi.y - p.y) * self.scale,
        )
    }

    /// The point of a pixel.
    pub fn point(&self, x: f64, y: f64) -> Point {
        Point {
            x: self.bounds.lo.x + (x - self.left) / self.scale,
            y: self.bounds.hi.y - (y - self.top) / self.scale,
        }
    }

    /// The whole pixels the box touches, cut to a page of `width` by `height`: x from, x to,
    /// y from, y to.
    pub fn pixels(&self, width: u32, height: u32) -> (usize, usize, usize, usize) {
        let size = self.bounds.size() * self.scale;
        let lo = |v: f64| v.floor().max(0.0) as usize;
        let hi = |v: f64, end: u32| (v.ceil().max(0.0) as usize).min(end as usize);
        (
            lo(self.left),
            hi(self.left + size.x, width),
            lo(self.top),
            hi(self.top + size.y, height),
        )
    }

    /// The outline as a path; `None` when it has no loop.
    pub fn path(&self, outline: &Outline) -> Option<Path> {
        let mut builder = PathBuilder::new();
        for l in &outline.loops {
            let mut started = false;
            for piece in &l.pieces {
                let n = chords(piece, self.scale);
                for k in 0..n {
                    let (x, y) = self.pixel(piece.at(k as f64 / n as f64));
                    if started {
                        builder.line_to(x as f32, y as f32);
                    } else {
                        builder.move_to(x as f32, y as f32);
                        started = true;
                    }
                }
            }
            if started {
                builder.close();
            }
        }
        builder.finish()
    }
}

/// How much of each pixel of a rectangle of the page lies inside a path, 0 to 255, row by row from
/// the top; `start` and `size` are whole pixels.
pub fn coverage(path: &Path, start: (usize, usize), size: (usize, usize)) -> Option<Mask> {
    let mut mask = Mask::new(size.0 as u32, size.1 as u32)?;
    let shift = Transform::from_translate(-(start.0 as f32), -(start.1 as f32));
    mask.fill_path(path, FillRule::EvenOdd, true, shift);
    Some(mask)
}

/// Number of chords after which none leaves the piece by more than [`SAGITTA`]: the height of an
/// arc of length s and curvature κ over its chord is κs²/8.
fn chords(piece: &Piece, scale: f64) -> usize {
    if matches!(piece, Piece::Line { .. }) {
        return 1;
    }
    let worst = (0..=16)
        .map(|k| {
            let t = k as f64 / 16.0;
            let speed = piece.velocity(t).norm() * scale;
            speed * speed * piece.curvature(t).abs() / scale
        })
        .fold(0.0, f64::max);
    ((worst / (8.0 * SAGITTA)).sqrt().ceil() as usize).clamp(1, 4096)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn at(x: f64, y: f64) -> Point {
        Point { x, y }
    }

    #[test]
    fn a_box_is_fitted_and_stands_upright() {
        let bounds = Box2 {
            lo: at(-2.0, 1.0),
            hi: at(2.0, 3.0),
        };
        let area = Area {
            left: 10.0,
            top: 20.0,
            width: 100.0,
            height: 100.0,
        };
        let v = View::fit(bounds, area);
        assert_eq!(v.scale, 25.0);
        assert_eq!(v.pixel(at(-2.0, 3.0)), (10.0, 45.0));
        assert_eq!(v.pixel(at(2.0, 1.0)), (110.0, 95.0));
        assert_eq!(v.point(110.0, 95.0), at(2.0, 1.0));
    }

    #[test]
    fn the_disc_covers_its_area() {
        let disc = Outline::disc(at(5.0, 5.0), 5.0).expect("a disc");
        let view = View::fit(
            disc.bounds(),
            Area {
                left: 10.0,
                top: 10.0,
                width: 300.0,
                height: 300.0,
            },
        );
        let mask =
            coverage(&view.path(&disc).expect("a loop"), (5, 7), (310, 310)).expect("a page");
        let sum: f64 = mask.data().iter().map(|&c| f64::from(c) / 255.0).sum();
        let exact = std::f64::consts::PI * 150.0 * 150.0;
        // 940 edge pixels, each known to a sixteenth
        assert!((sum / exact - 1.0).abs() < 1e-3, "{sum} against {exact}");
    }
}
