//! Where the plane falls on a block of character cells.

use crate::geometry::{Box2, Point};
use crate::modes::Raster;

/// A block of cells as a window on the plane. A cell is two dots wide and four high.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Sight {
    /// Columns of cells.
    pub columns: usize,
    /// Rows of cells.
    pub rows: usize,
    /// Upper left corner of the block.
    pub corner: Point,
    /// Width and height of a dot.
    pub dot: Point,
}

impl Sight {
    /// The block that shows `bounds` as large as it goes, centred; `aspect` is height over width
    /// of a cell. `None` when there is no room or nothing to show.
    pub fn fit(bounds: Box2, columns: usize, rows: usize, aspect: f64) -> Option<Self> {
        let size = bounds.size();
        let sound = size.x.is_finite() && size.y.is_finite() && size.x > 0.0 && size.y > 0.0;
        if columns < 2 || rows < 2 || !sound {
            return None;
        }
        let dot_aspect = aspect / 2.0;
        // the outermost points fall on the middle of the last dot but one: never cut, and never
        // between two dots, where a hair's breadth would decide
        let (w, h) = ((2 * columns - 3) as f64, (4 * rows - 3) as f64);
        let wide = (size.x / w).max(size.y / (h * dot_aspect));
        let dot = Point {
            x: wide,
            y: wide * dot_aspect,
        };
        let c = bounds.centre();
        Some(Self {
            columns,
            rows,
            corner: Point {
                x: c.x - dot.x * columns as f64,
                y: c.y + dot.y * (2 * rows) as f64,
            },
            dot,
        })
    }

    /// Dots across and down.
    pub fn dots(&self) -> (usize, usize) {
        (2 * self.columns, 4 * self.rows)
    }

    /// The dot centres as a raster.
    pub fn raster(&self) -> Raster {
        let (width, height) = self.dots();
        Raster {
            origin: Point {
                x: self.corner.x + 0.5 * self.dot.x,
                y: self.corner.y - (height as f64 - 0.5) * self.dot.y,
            },
            step: self.dot,
            width,
            height,
        }
    }

    /// Place of a point in dots from the upper left corner.
    pub fn place(&self, p: Point) -> (f64, f64) {
        (
            (p.x - self.corner.x) / self.dot.x,
            (self.corner.y - p.y) / self.dot.y,
        )
    }

    /// Width of a cell in length units.
    pub fn cell(&self) -> f64 {
        2.0 * self.dot.x
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn bounds(w: f64, h: f64) -> Box2 {
        let at = |x, y| Point { x, y };
        Box2 {
            lo: at(-3.0, 5.0),
            hi: at(-3.0 + w, 5.0 + h),
        }
    }

    #[test]
    fn everything_is_in_sight_and_true_to_scale() {
        for (w, h, c, r, a) in [
            (1.0, 1.0, 40, 20, 2.0),
            (9.0, 1.0, 40, 20, 2.0),
            (1.0, 7.0, 11, 30, 1.8),
        ] {
            let b = bounds(w, h);
            let s = Sight::fit(b, c, r, a).expect("there is room");
            for p in [b.lo, b.hi] {
                let (x, y) = s.place(p);
                let (n, m) = s.dots();
                assert!(x >= 0.99 && x <= n as f64 - 0.99, "{x}");
                assert!(y >= 0.99 && y <= m as f64 - 0.99, "{y}");
            }
            assert!((s.dot.y / s.dot.x - a / 2.0).abs() < 1e-12);
        }
        assert!(Sight::fit(bounds(0.0, 1.0), 40, 20, 2.0).is_none());
        assert!(Sight::fit(bounds(1.0, 1.0), 1, 20, 2.0).is_none());
    }

    #[test]
    fn raster_points_are_dot_centres() {
        let s = Sight::fit(bounds(2.0, 1.0), 10, 5, 2.0).expect("there is room");
        let r = s.raster();
        let (x, y) = s.place(r.origin);
        assert!((x - 0.5).abs() < 1e-9 && (y - 19.5).abs() < 1e-9);
    }
}
