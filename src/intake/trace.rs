//! Contours of a grey map at sub-pixel precision.

use super::grey::GreyMap;
use crate::geometry::{Point, pt};

/// A closed contour, inside to the left, in pixels from the lower left corner of the picture.
pub type Contour = Vec<Point>;

/// Most points all contours together may have.
const MOST_POINTS: usize = 4_000_000;

/// The contours of `map` at `level` (0 darkest, 1 brightest); what is brighter is inside.
///
/// Marching squares on the pixel corners, each the mean of the four pixels that meet there: the
/// profile of an edge over such means is linear across its middle, so that linear interpolation
/// finds a straight edge of an area-weighted mask exactly along the axes (interpolating between
/// pixel centres is off by up to 0.09 pixel). Outside the picture is dark. A saddle joins the
/// sides its mean belongs to. `None` when the contours have too many points to be an outline.
pub fn contours(map: &GreyMap, level: f64) -> Option<Vec<Contour>> {
    let field = Field::new(map, level);
    let (columns, rows) = (map.width as i64 + 2, map.height as i64 + 3);
    let mut seen = vec![false; (columns * rows) as usize];
    let mut out = Vec::new();
    let mut points = 0;
    for k in -1..=map.height as i64 + 1 {
        for i in -1..=map.width as i64 {
            let (left, right) = (field.inside(i, k), field.inside(i + 1, k));
            let place = |i: i64, k: i64| ((k + 1) * columns + i + 1) as usize;
            if left == right || seen[place(i, k)] {
                continue;
            }
            let start = if left {
                Step {
                    left: (i, k),
                    way: (0, 1),
                }
            } else {
                Step {
                    left: (i + 1, k),
                    way: (0, -1),
                }
            };
            let mut contour = Vec::new();
            let mut step = start;
            loop {
                let right = step.right();
                if step.way.0 == 0 {
                    seen[place(step.left.0.min(right.0), right.1)] = true;
                }
                let p = field.crossing(step.left, right);
                if contour.last() != Some(&p) {
                    contour.push(p);
                }
                step = field.next(step);
                if step == start {
                    break;
                }
            }
            points += contour.len();
            if points > MOST_POINTS {
                return None;
            }
            if contour.first() == contour.last() {
                contour.pop();
            }
            if contour.len() >= 3 {
                out.push(contour);
            }
        }
    }
    Some(out)
}

/// The signed area of a closed polygon, positive when it runs counter-clockwise.
pub fn area(contour: &[Point]) -> f64 {
    let n = contour.len();
    // Relative to the first point: coordinates may be large beside the loop.
    let o = contour.first().copied().unwrap_or_default();
    (0..n)
        .map(|i| (contour[i] - o).cross(contour[(i + 1) % n] - o))
        .sum::<f64>()
        / 2.0
}

/// Crossing the edge between two nodes: the inner node to the left, the way ahead.
#[derive(Clone, Copy, PartialEq)]
struct Step {
    left: (i64, i64),
    way: (i64, i64),
}

impl Step {
    fn right(self) -> (i64, i64) {
        (self.left.0 + self.way.1, self.left.1 - self.way.0)
    }
}

/// The means at pixel corners; node (i, k) sits at x = i, y = k.
struct Field<'a> {
    map: &'a GreyMap,
    /// The level, in sums of four pixels.
    level: f64,
}

impl<'a> Field<'a> {
    fn new(map: &'a GreyMap, level: f64) -> Self {
        Self {
            map,
            level: level * 4.0 * 65_535.0,
        }
    }

    fn sum(&self, i: i64, k: i64) -> f64 {
        let (w, h) = (self.map.width as i64, self.map.height as i64);
        let pixel = |x: i64, y: i64| {
            if x < 0 || y < 0 || x >= w || y >= h {
                0
            } else {
                u32::from(self.map.levels[((h - 1 - y) * w + x) as usize])
            }
        };
        f64::from(pixel(i - 1, k - 1) + pixel(i, k - 1) + pixel(i - 1, k) + pixel(i, k))
    }

    fn inside(&self, i: i64, k: i64) -> bool {
        self.sum(i, k) > self.level
    }

    fn crossing(&self, left: (i64, i64), right: (i64, i64)) -> Point {
        let (a, b) = (self.sum(right.0, right.1), self.sum(left.0, left.1));
        let t = (self.level - a) / (b - a);
        let at = |r: i64, l: i64| r as f64 + t * (l - r) as f64;
        pt(at(right.0, left.0), at(right.1, left.1))
    }

    /// The next edge of the contour, in the cell ahead.
    fn next(&self, step: Step) -> Step {
        let (dx, dy) = step.way;
        let (left, right) = (step.left, step.right());
        let ahead_left = (left.0 + dx, left.1 + dy);
        let ahead_right = (right.0 + dx, right.1 + dy);
        let is = |n: (i64, i64)| self.inside(n.0, n.1);
        let turn_left = Step {
            left,
            way: (-dy, dx),
        };
        let turn_right = Step {
            left: ahead_right,
            way: (dy, -dx),
        };
        match (is(ahead_left), is(ahead_right)) {
            (true, false) => Step {
                left: ahead_left,
                way: step.way,
            },
            (false, false) => turn_left,
            (true, true) => turn_right,
            (false, true) => {
                let of = |n: (i64, i64)| self.sum(n.0, n.1);
                let mean = (of(left) + of(right) + of(ahead_left) + of(ahead_right)) / 4.0;
                if mean > self.level {
                    turn_right
                } else {
                    turn_left
                }
            }
        }
    }
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;

    fn map(rows: &[&str]) -> GreyMap {
        let levels = rows
            .iter()
            .flat_map(|r| r.bytes().map(|b| if b == b'#' { 65_535 } else { 0 }))
            .collect();
        GreyMap {
            width: rows[0].len(),
            height: rows.len(),
            levels,
        }
    }

    #[test]
    fn a_block_is_traced_counter_clockwise_along_its_pixels() {
        let c = contours(
            &map(&["......", ".####.", ".####.", ".####.", "......"]),
            0.5,
        )
        .unwrap();
        assert_eq!(c.len(), 1);
        // Twelve pixels; the means cut a triangle of half a pixel off each corner.
        assert_eq!(area(&c[0]), 10.0);
        let lowest = c[0].iter().fold(9.0f64, |m, p| m.min(p.y));
        assert_eq!(lowest, 1.0);
    }

    #[test]
    fn a_picture_full_to_its_border_is_closed_at_the_border() {
        let mut m = map(&["####", "####", "####"]);
        m.levels[0] = 0;
        let c = contours(&m, 0.5).unwrap();
        assert_eq!(c.len(), 1);
        let x = c[0]
            .iter()
            .fold((9.0f64, -9.0f64), |m, p| (m.0.min(p.x), m.1.max(p.x)));
        assert_eq!(x, (0.0, 4.0));
        assert_eq!(contours(&m, 0.2).unwrap().len(), 1);
    }

    #[test]
    fn a_hole_runs_clockwise() {
        let c = contours(
            &map(&[
                "#######", "#######", "##...##", "##...##", "##...##", "#######", "#######",
            ]),
            0.5,
        )
        .unwrap();
        let mut areas: Vec<f64> = c.iter().map(|c| area(c).signum()).collect();
        areas.sort_by(f64::total_cmp);
        assert_eq!(areas, [-1.0, 1.0]);
    }

    #[test]
    fn a_saddle_is_decided_by_its_mean() {
        // Two blocks that touch at a corner; the means there are 1/2, below any level above it.
        let m = map(&["###...", "###...", "###...", "...###", "...###", "...###"]);
        assert_eq!(contours(&m, 0.6).unwrap().len(), 2);
        assert_eq!(contours(&m, 0.4).unwrap().len(), 1);
    }
}
