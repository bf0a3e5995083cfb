//! Pieces cut where they meet: vertices, and edges between them.

use super::meet::{meet, meeting_boxes};
use super::overlay::Side;
use super::piece::Piece;
use super::point::{Box2, Point};
use std::collections::HashMap;

/// A stretch of a source piece between two vertices.
#[derive(Clone, Debug)]
pub(super) struct Edge {
    /// Vertex it starts from.
    pub from: usize,
    /// Vertex it ends in.
    pub to: usize,
    source: usize,
    range: (f64, f64),
    piece: Piece,
}

impl Edge {
    /// Direction and curvature of the edge as seen when it is left from one end: the start if
    /// `forward`, else the end.
    pub fn leaving(&self, forward: bool) -> (f64, f64) {
        if forward {
            (self.piece.tangent(0.0).angle(), self.piece.curvature(0.0))
        } else {
            (
                (-self.piece.tangent(1.0)).angle(),
                -self.piece.curvature(1.0),
            )
        }
    }
}

/// One appearance of an edge in a loop: edges that coincide are kept once and used twice.
#[derive(Clone, Copy, Debug)]
pub(super) struct Use {
    pub edge: usize,
    pub forward: bool,
    pub side: Side,
}

/// Loops cut at all their common points.
pub(super) struct Arrangement {
    pub edges: Vec<Edge>,
    pub uses: Vec<Use>,
    /// Diagonal of the box around everything.
    pub size: f64,
    /// Centre of that box.
    pub centre: Point,
    sources: Vec<Piece>,
    vertices: Vec<Point>,
}

impl Arrangement {
    pub fn new(loops: &[(&[Piece], Side)], crossing_within: bool) -> Self {
        let sources: Vec<(Piece, Side)> = loops
            .iter()
            .flat_map(|(l, side)| l.iter().map(|p| (p.clone(), *side)))
            .collect();
        let boxes: Vec<Box2> = sources.iter().map(|(p, _)| p.bounds()).collect();
        let mut all = Box2::EMPTY;
        for b in &boxes {
            all.include(b.lo);
            all.include(b.hi);
        }
        let size = all.diagonal();
        let far = [all.lo.x, all.lo.y, all.hi.x, all.hi.y]
            .iter()
            .fold(0.0, |m: f64, v| m.max(v.abs()));
        // What counts as the same place: a few thousand roundings of a size, a few of a coordinate.
        let eps = (1e-12 * size).max(8.0 * f64::EPSILON * far);

        let mut vertices = Vertices::new(eps);
        let mut cuts: Vec<Vec<(f64, usize)>> = sources
            .iter()
            .map(|(p, _)| {
                vec![
                    (0.0, vertices.weld(p.start())),
                    (1.0, vertices.weld(p.end())),
                ]
            })
            .collect();
        let wide: Vec<Box2> = boxes.iter().map(|b| b.widened(eps)).collect();
        for (i, j) in meeting_boxes(&wide) {
            if !crossing_within && sources[i].1 == sources[j].1 {
                continue;
            }
            for (t, s) in meet(&sources[i].0, &sources[j].0, eps) {
                let v = contact_vertex(&sources[i].0, t, &sources[j].0, s, &mut vertices);
                cuts[i].push((t, v));
                cuts[j].push((s, v));
            }
        }
        let mut out = Self {
            edges: Vec::new(),
            uses: Vec::new(),
            size,
            centre: all.centre(),
            sources: sources.iter().map(|(p, _)| p.clone()).collect(),
            vertices: vertices.points,
        };
        out.cut(&mut cuts, &sources, eps);
        out
    }

    fn cut(&mut self, cuts: &mut [Vec<(f64, usize)>], sources: &[(Piece, Side)], eps: f64) {
        let mut known: HashMap<(usize, usize), Vec<usize>> = HashMap::new();
        for (source, list) in cuts.iter_mut().enumerate() {
            list.sort_by(|a, b| a.0.total_cmp(&b.0).then(a.1.cmp(&b.1)));
            let (whole, side) = &sources[source];
            for w in list.windows(2) {
                let ((t0, from), (t1, to)) = (w[0], w[1]);
                if t1 <= t0 {
                    continue;
                }
                let piece = self.trimmed(whole, (t0, t1), from, to);
                let middle = piece.at(0.5);
                let back = t1 - t0 < 1e-6 || (middle - self.vertices[from]).norm() <= 10.0 * eps;
                if from == to && back {
                    continue;
                }
                let twins = known.entry((from.min(to), from.max(to))).or_default();
                let twin = twins.iter().copied().find(|e| {
                    // The third point tells apart curves that cross in the middle.
                    self.edges[*e].piece.nearest(middle).1 <= 10.0 * eps
                        && self.edges[*e].piece.nearest(piece.at(0.3)).1 <= 10.0 * eps
                });
                let (edge, forward) = match twin {
                    Some(e) => {
                        let same = if from == to {
                            let t = self.edges[e].piece.nearest(middle).0;
                            self.edges[e].piece.tangent(t).dot(piece.tangent(0.5)) > 0.0
                        } else {
                            self.edges[e].from == from
                        };
                        (e, same)
                    }
                    None => {
                        twins.push(self.edges.len());
                        self.edges.push(Edge {
                            from,
                            to,
                            source,
                            range: (t0, t1),
                            piece,
                        });
                        (self.edges.len() - 1, true)
                    }
                };
                self.uses.push(Use {
                    edge,
                    forward,
                    side: *side,
                });
            }
        }
    }

    /// Part of a piece, its ends put exactly on their vertices where the kind of piece allows.
    fn trimmed(&self, whole: &Piece, (t0, t1): (f64, f64), from: usize, to: usize) -> Piece {
        let part = if (t0, t1) == (0.0, 1.0) {
            whole.clone()
        } else {
            whole.part(t0, t1)
        };
        match part {
            Piece::Line { .. } => Piece::line(self.vertices[from], self.vertices[to]),
            Piece::Bezier {
                points: [_, b, c, _],
            } => Piece::Bezier {
                points: [self.vertices[from], b, c, self.vertices[to]],
            },
            other => other,
        }
    }

    /// Points of every edge, ends included, whose chords stay within `tolerance`. `matched` adds
    /// to curves that run close together the projections of each other's points, so that their
    /// chords keep the order of the curves.
    pub fn chords(&self, tolerance: f64, matched: bool) -> Vec<Vec<Point>> {
        let mut ts: Vec<Vec<f64>> = self
            .edges
            .iter()
            .map(|e| {
                let mut t = e.piece.flatten(tolerance);
                if !matches!(e.piece, Piece::Line { .. }) && t.len() < 5 {
                    t = (0..=4).map(|k| f64::from(k) / 4.0).collect();
                }
                t
            })
            .collect();
        if matched {
            self.match_chords(&mut ts, tolerance);
        }
        self.edges
            .iter()
            .zip(&ts)
            .map(|(e, t)| {
                let mut line: Vec<Point> = t.iter().map(|t| e.piece.at(*t)).collect();
                let last = line.len() - 1;
                line[0] = self.vertices[e.from];
                line[last] = self.vertices[e.to];
                line
            })
            .collect()
    }

    fn match_chords(&self, ts: &mut [Vec<f64>], tolerance: f64) {
        let near = 8.0 * tolerance;
        let boxes: Vec<Box2> = self
            .edges
            .iter()
            .map(|e| e.piece.bounds().widened(near))
            .collect();
        let before = ts.to_vec();
        for (i, j) in meeting_boxes(&boxes) {
            for (from, to) in [(i, j), (j, i)] {
                let (a, b) = (&self.edges[from].piece, &self.edges[to].piece);
                for t in &before[from] {
                    let p = a.at(*t);
                    if !boxes[to].holds(p) {
                        continue;
                    }
                    let (s, d) = b.nearest(p);
                    if d <= near && s > 1e-9 && s < 1.0 - 1e-9 {
                        ts[to].push(s);
                    }
                }
            }
        }
        for t in ts {
            t.sort_by(f64::total_cmp);
            t.dedup_by(|a, b| *a - *b < 1e-10);
            // The end must survive the removal of near duplicates.
            if let Some(last) = t.last_mut() {
                *last = 1.0;
            }
        }
    }

    /// The pieces of a closed run of directed edges, stretches of one source joined again.
    pub fn pieces(&self, steps: &[(usize, bool)]) -> Vec<Piece> {
        let mut out: Vec<Piece> = Vec::with_capacity(steps.len());
        let mut open: Option<Stretch> = None;
        let mut close = |o: Stretch| {
            let (source, range, forward, from, to) = o;
            let (from, to) = if forward { (from, to) } else { (to, from) };
            let piece = self.trimmed(&self.sources[source], range, from, to);
            out.push(if forward { piece } else { piece.reversed() });
        };
        for (e, forward) in steps {
            let edge = &self.edges[*e];
            let (from, to) = if *forward {
                (edge.from, edge.to)
            } else {
                (edge.to, edge.from)
            };
            if let Some((source, range, f, _, end)) = open.as_mut() {
                let joins = if *forward {
                    range.1 == edge.range.0
                } else {
                    range.0 == edge.range.1
                };
                if *source == edge.source && f == forward && joins {
                    if *forward {
                        range.1 = edge.range.1;
                    } else {
                        range.0 = edge.range.0;
                    }
                    *end = to;
                    continue;
                }
            }
            if let Some(o) = open.take() {
                close(o);
            }
            open = Some((edge.source, edge.range, *forward, from, to));
        }
        if let Some(o) = open {
            close(o);
        }
        out
    }
}

/// A stretch being put together: source, range, direction, the vertices it runs between.
type Stretch = (usize, (f64, f64), bool, usize, usize);

/// The vertex of a contact: an end point if one is involved, else the point on the curve whose
/// ends cannot be moved.
fn contact_vertex(a: &Piece, t: f64, b: &Piece, s: f64, vertices: &mut Vertices) -> usize {
    let is_end = |t: f64| t == 0.0 || t == 1.0;
    let on_b = !is_end(t) && (is_end(s) || matches!(a, Piece::Line { .. }));
    vertices.weld(if on_b { b.at(s) } else { a.at(t) })
}

/// Points, those nearer than `eps` taken as one.
struct Vertices {
    points: Vec<Point>,
    eps: f64,
    cells: HashMap<(i64, i64), Vec<usize>>,
}

impl Vertices {
    fn new(eps: f64) -> Self {
        Self {
            points: Vec::new(),
            eps,
            cells: HashMap::new(),
        }
    }

    fn weld(&mut self, p: Point) -> usize {
        let cell = |v: f64| (v / (4.0 * self.eps)).floor() as i64;
        let lo = (cell(p.x - self.eps), cell(p.y - self.eps));
        let hi = (cell(p.x + self.eps), cell(p.y + self.eps));
        for x in lo.0..=hi.0 {
            for y in lo.1..=hi.1 {
                for k in self.cells.get(&(x, y)).into_iter().flatten() {
                    if (self.points[*k] - p).norm() <= self.eps {
                        return *k;
                    }
                }
            }
        }
        let home = (cell(p.x), cell(p.y));
        self.points.push(p);
        self.cells
            .entry(home)
            .or_default()
            .push(self.points.len() - 1);
        self.points.len() - 1
    }
}
