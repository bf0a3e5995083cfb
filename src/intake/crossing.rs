//! Whether closed polygons cross themselves or each other.

use crate::geometry::{Box2, Point, pt};

/// Two edges that meet where they should not, by number, and the place.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Crossing {
    /// Numbers of the edges; edge k starts at point k of all loops counted through.
    pub edges: [usize; 2],
    /// A point on both.
    pub at: Point,
}

/// The first place found where two edges of `loops` cross, touch or overlap, other than
/// neighbours at their common vertex.
///
/// A tree of boxes over the edges in their order: edges near in the list are near in the plane,
/// so that a curve of n edges takes about n log n steps.
pub fn crossing(loops: &[Vec<Point>]) -> Option<Crossing> {
    let mut edges = Vec::new();
    for points in loops {
        let first = edges.len();
        let n = points.len();
        for k in 0..n {
            edges.push(Edge {
                ends: [points[k], points[(k + 1) % n]],
                next: first + (k + 1) % n,
            });
        }
    }
    if edges.is_empty() {
        return None;
    }
    let tree = Tree::new(&edges);
    tree.within(&edges, 1)
}

struct Edge {
    ends: [Point; 2],
    next: usize,
}

impl Edge {
    fn bounds(&self) -> Box2 {
        let mut b = Box2::EMPTY;
        b.include(self.ends[0]);
        b.include(self.ends[1]);
        b
    }
}

/// A complete binary tree of boxes: node 1 is the root, leaves hold `LEAF` edges each.
struct Tree {
    boxes: Vec<Box2>,
    leaves: usize,
}

const LEAF: usize = 4;

impl Tree {
    fn new(edges: &[Edge]) -> Self {
        let leaves = edges.len().div_ceil(LEAF).next_power_of_two();
        let mut boxes = vec![Box2::EMPTY; 2 * leaves];
        for (k, e) in edges.iter().enumerate() {
            let b = &mut boxes[leaves + k / LEAF];
            let c = e.bounds();
            b.include(c.lo);
            b.include(c.hi);
        }
        for k in (1..leaves).rev() {
            let (b, c) = (boxes[2 * k], boxes[2 * k + 1]);
            // The corners of an empty box are at infinity and must not be included.
            boxes[k] = Box2 {
                lo: pt(b.lo.x.min(c.lo.x), b.lo.y.min(c.lo.y)),
                hi: pt(b.hi.x.max(c.hi.x), b.hi.y.max(c.hi.y)),
            };
        }
        Self { boxes, leaves }
    }

    fn edges_of(&self, leaf: usize, count: usize) -> std::ops::Range<usize> {
        let first = (leaf - self.leaves) * LEAF;
        first.min(count)..(first + LEAF).min(count)
    }

    fn within(&self, edges: &[Edge], node: usize) -> Option<Crossing> {
        if node >= self.leaves {
            let range = self.edges_of(node, edges.len());
            for a in range.clone() {
                for b in a + 1..range.end {
                    if let Some(c) = meet(edges, a, b) {
                        return Some(c);
                    }
                }
            }
            return None;
        }
        self.within(edges, 2 * node)
            .or_else(|| self.within(edges, 2 * node + 1))
            .or_else(|| self.between(edges, 2 * node, 2 * node + 1))
    }

    fn between(&self, edges: &[Edge], a: usize, b: usize) -> Option<Crossing> {
        if !overlap(&self.boxes[a], &self.boxes[b]) {
            return None;
        }
        if a >= self.leaves {
            // Both are leaves: nodes of equal depth are compared.
            let mut pairs = self
                .edges_of(a, edges.len())
                .flat_map(|i| self.edges_of(b, edges.len()).map(move |j| (i, j)));
            return pairs.find_map(|(i, j)| meet(edges, i, j));
        }
        for (i, j) in [(0, 0), (0, 1), (1, 0), (1, 1)] {
            if let Some(c) = self.between(edges, 2 * a + i, 2 * b + j) {
                return Some(c);
            }
        }
        None
    }
}

fn overlap(a: &Box2, b: &Box2) -> bool {
    a.lo.x <= b.hi.x && b.lo.x <= a.hi.x && a.lo.y <= b.hi.y && b.lo.y <= a.hi.y
}

fn meet(edges: &[Edge], i: usize, j: usize) -> Option<Crossing> {
    let (e, f) = (&edges[i], &edges[j]);
    if !overlap(&e.bounds(), &f.bounds()) {
        return None;
    }
    let ([a, b], [c, d]) = (e.ends, f.ends);
    let found = |at| Some(Crossing { edges: [i, j], at });
    let (forward, backward) = (e.next == j, f.next == i);
    if forward || backward {
        if forward && backward {
            return found(a); // two edges there and back
        }
        // Neighbours share a vertex; they overlap only when the one runs back along the other.
        let (p, q) = if forward {
            (b - a, d - c)
        } else {
            (d - c, b - a)
        };
        let back = p.cross(q) == 0.0 && p.dot(q) < 0.0;
        return if back {
            found(if forward { b } else { a })
        } else {
            None
        };
    }
    let side = |p: Point, q: Point, r: Point| (q - p).cross(r - p);
    let (s, t) = (side(a, b, c), side(a, b, d));
    let (u, v) = (side(c, d, a), side(c, d, b));
    if s * t < 0.0 && u * v < 0.0 {
        return found(a + (b - a) * (u / (u - v)));
    }
    let on = |p: Point, q: Point, r: Point, area: f64| area == 0.0 && (r - p).dot(r - q) <= 0.0;
    [
        (on(a, b, c, s), c),
        (on(a, b, d, t), d),
        (on(c, d, a, u), a),
        (on(c, d, b, v), b),
    ]
    .into_iter()
    .find(|t| t.0)
    .and_then(|t| found(t.1))
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    #[test]
    fn a_bow_tie_crosses_and_a_star_polygon_of_many_points_does_not() {
        let tie = vec![pt(0., 0.), pt(2., 2.), pt(2., 0.), pt(0., 2.)];
        let c = crossing(&[tie]).unwrap();
        assert_eq!((c.edges, c.at), ([0, 2], pt(1.0, 1.0)));
        let star: Vec<Point> = (0..20_000)
            .map(|k| {
                let r = if k % 2 == 0 { 1.0 } else { 2.0 };
                Point::polar(f64::from(k) * std::f64::consts::TAU / 2e4) * r
            })
            .collect();
        assert_eq!(crossing(&[star]), None);
    }

    #[test]
    fn touching_and_folding_back_count() {
        let touch = vec![pt(0., 0.), pt(4., 0.), pt(4., 2.), pt(2., 0.), pt(0., 2.)];
        assert!(crossing(&[touch]).is_some());
        let fold = vec![pt(0., 0.), pt(4., 0.), pt(2., 0.), pt(2., 3.)];
        assert!(crossing(&[fold]).is_some());
        let a = vec![pt(0., 0.), pt(1., 0.), pt(0., 1.)];
        let b: Vec<Point> = a.iter().map(|&p| p + pt(0.5, 0.1)).collect();
        assert!(crossing(&[a, b]).is_some());
    }

    proptest! {
        /// The tree against all pairs.
        #[test]
        fn the_tree_misses_nothing(points in prop::collection::vec((0i32..12, 0i32..12), 3..14)) {
            let p: Vec<Point> = points.iter().map(|&(x, y)| pt(f64::from(x), f64::from(y))).collect();
            let n = p.len();
            let edges: Vec<Edge> = (0..n)
                .map(|k| Edge { ends: [p[k], p[(k + 1) % n]], next: (k + 1) % n })
                .collect();
            let slow = (0..n).any(|i| (i + 1..n).any(|j| meet(&edges, i, j).is_some()));
            prop_assert_eq!(crossing(&[p]).is_some(), slow);
        }
    }
}
