//! Booleans on analytic pieces.
//!
//! The pieces are cut where they meet, exactly, before anything is flattened. The chords that
//! then go to `i_overlay` cross nowhere but at common vertices, so it decides only *which* edges
//! bound the result; where they run is never taken from its integer grid.

use super::arrange::Arrangement;
use super::error::GeometryError;
use super::outline::Loop;
use super::piece::Piece;
use super::point::{Point, pt};
use super::tidy::tidy;
use super::wedges;
use i_overlay::core::edge_data::{EdgeDataMerge, OverlayEdgeData};
use i_overlay::core::edge_overlay::{EdgeOverlay, InputEdge};
use i_overlay::core::overlay::ShapeType;
use i_overlay::i_float::int::point::IntPoint;
use i_overlay::segm::boolean::ShapeCountBoolean;

pub(super) use i_overlay::core::fill_rule::FillRule;
pub(super) use i_overlay::core::overlay_rule::OverlayRule;

/// Which side of a boolean a loop belongs to.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Side {
    Subject,
    Clip,
}

/// An edge of the arrangement and the number of a chord of it.
#[derive(Clone, Copy, Debug, PartialEq)]
struct Tag {
    edge: u32,
    chord: u32,
}

impl OverlayEdgeData for Tag {
    /// Chords of different edges that fell on each other.
    type Store = Vec<Tag>;

    fn merge(ctx: EdgeDataMerge<ShapeCountBoolean, Self>, clashes: &mut Vec<Self>) -> Self {
        if ctx.lhs_data != ctx.rhs_data {
            clashes.extend([ctx.lhs_data, ctx.rhs_data]);
        }
        ctx.lhs_data
    }
}

/// A directed edge of the result: its number, and whether it is run through forwards.
pub(super) type Step = (usize, bool);

/// Overlays closed loops of pieces and returns the loops of the result, material on the left.
///
/// With `crossing_within` loops of one side may cross themselves and each other; without, only
/// crossings between the sides are looked for.
pub(super) fn overlay(
    loops: &[(&[Piece], Side)],
    rule: OverlayRule,
    fill: FillRule,
    crossing_within: bool,
) -> Result<Vec<Loop>, GeometryError> {
    let arrangement = Arrangement::new(loops, crossing_within);
    if arrangement.edges.is_empty() {
        return Ok(Vec::new());
    }
    // Chords of two curves that touch may still cross each other: then again with finer ones.
    let mut problem = None;
    for (tolerance, matched) in [(1e-5, false), (1e-6, true), (1e-8, true)] {
        let chords = arrangement.chords(tolerance * arrangement.size, matched);
        match select(&arrangement, &chords, rule, fill) {
            Ok(contours) => {
                let loops = wedges::loops(contours, &arrangement);
                return Ok(loops
                    .iter()
                    .filter_map(|l| tidy(arrangement.pieces(l), arrangement.size))
                    .collect());
            }
            Err(at) => problem = Some(at),
        }
    }
    Err(GeometryError::Unresolved {
        at: problem.unwrap_or_default(),
    })
}

/// The edges that bound the result, as closed contours; an error where chords crossed that
/// should not have.
fn select(
    arrangement: &Arrangement,
    chords: &[Vec<Point>],
    rule: OverlayRule,
    fill: FillRule,
) -> Result<Vec<Vec<Step>>, Point> {
    let grid = Grid::new(arrangement);
    let lattice: Vec<Vec<IntPoint<i64>>> = chords
        .iter()
        .map(|c| c.iter().map(|p| grid.round(*p)).collect())
        .collect();
    let count = arrangement.uses.len() * 8;
    let mut engine: EdgeOverlay<i64, Tag> = EdgeOverlay::new(count);
    for u in &arrangement.uses {
        let shape = match u.side {
            Side::Subject => ShapeType::Subject,
            Side::Clip => ShapeType::Clip,
        };
        for (k, w) in lattice[u.edge].windows(2).enumerate() {
            let (a, b) = if u.forward {
                (w[0], w[1])
            } else {
                (w[1], w[0])
            };
            let data = Tag {
                edge: u.edge as u32,
                chord: k as u32,
            };
            engine.add_edge(InputEdge { a, b, data }, shape);
        }
    }
    let shapes = engine.build_vector_shapes(rule, fill);
    let clashes = engine.data_store();
    let mut out = Vec::new();
    for contour in shapes.iter().flatten() {
        let mut steps: Vec<(Step, u32)> = Vec::with_capacity(contour.len());
        for e in contour {
            let line = &lattice[e.data.edge as usize];
            let k = e.data.chord as usize;
            let forward = e.a == line[k] && e.b == line[k + 1];
            let backward = e.a == line[k + 1] && e.b == line[k];
            if !(forward || backward) || clashes.contains(&e.data) {
                return Err(grid.point(e.a));
            }
            steps.push(((e.data.edge as usize, forward), e.data.chord));
        }
        // Every edge is used whole: count its first chord once, check the others follow.
        let n = steps.len();
        let mut contour_steps = Vec::new();
        for (i, (step, chord)) in steps.iter().enumerate() {
            let last = lattice[step.0].len() as u32 - 2;
            let (first, next) = if step.1 {
                (0, chord + 1)
            } else {
                (last, chord.wrapping_sub(1))
            };
            if *chord == first {
                contour_steps.push(*step);
            }
            let done = if step.1 { *chord == last } else { *chord == 0 };
            if !done && steps[(i + 1) % n] != (*step, next) {
                return Err(grid.point(contour[i].b));
            }
        }
        out.push(contour_steps);
    }
    Ok(out)
}

/// The integer grid: 2⁵⁰ steps over the size, below the roundoff of the coordinates.
struct Grid {
    origin: Point,
    scale: f64,
}

impl Grid {
    fn new(arrangement: &Arrangement) -> Self {
        let power = (50.0 - arrangement.size.log2())
            .floor()
            .clamp(-900.0, 900.0);
        Self {
            origin: arrangement.centre,
            scale: power.exp2(),
        }
    }
    fn round(&self, p: Point) -> IntPoint<i64> {
        let q = (p - self.origin) * self.scale;
        IntPoint::new(q.x.round() as i64, q.y.round() as i64)
    }
    fn point(&self, p: IntPoint<i64>) -> Point {
        self.origin + pt(p.x as f64, p.y as f64) * (1.0 / self.scale)
    }
}
