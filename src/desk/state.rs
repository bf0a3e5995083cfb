//! All the desk knows, and questions about it that cost nothing.

use super::actions::Place;
use super::capability::{Background, Capability, Glyphs};
use super::document::Document;
use super::layout::{Layout, Tiles, divide};
use super::paint::Paint;
use super::plate::{Exposure, Look, Sight, Strokes, inside};
use super::portrait::Portrait;
use crate::geometry::{Box2, Point};
use crate::progress::Step;
use crate::spectrum::Spectrum;
use std::collections::HashMap;
use std::ops::Range;
use std::path::PathBuf;
use std::sync::Arc;
use std::time::Duration;

/// What of a mode is drawn.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Show {
    /// |ψ|².
    Density,
    /// ψ with its sign.
    Wave,
}

/// Which view lies open.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum View {
    /// Plate, ladder and slip.
    Plate,
    /// Many small plates.
    Sheet,
}

/// What lies over the view.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Overlay {
    /// The help page, scrolled by so many lines.
    Help(usize),
    /// A question on the bottom line, with what was typed so far.
    Question(Question, String),
}

/// What is being asked.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Question {
    /// A level number or an energy.
    Level,
    /// A temperature in kelvin.
    Temperature,
}

/// A line for the person.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Message {
    /// The words.
    pub text: String,
    /// Whether something went wrong.
    pub alarm: bool,
}

impl Message {
    /// Something to know.
    pub fn note(text: impl Into<String>) -> Self {
        Self {
            text: text.into(),
            alarm: false,
        }
    }

    /// Something that went wrong.
    pub fn alarm(text: impl Into<String>) -> Self {
        Self {
            text: text.into(),
            alarm: true,
        }
    }
}

/// An outline laid on cells of one size: shared by all modes drawn at that size.
#[derive(Debug)]
pub struct Mount {
    /// Where the plane falls.
    pub sight: Sight,
    /// Which dots are inside, from the upper left.
    pub within: Vec<bool>,
    /// The outline.
    pub outline: Strokes,
}

/// One mode on a mount.
#[derive(Debug)]
pub struct Picture {
    /// Values.
    pub exposure: Exposure,
    /// Nodal lines.
    pub nodes: Strokes,
}

/// A job under way.
#[derive(Clone, Copy, Debug)]
pub struct Running {
    /// When it began.
    pub since: Duration,
    /// How far its present stage is.
    pub step: Option<Step>,
    /// When that stage began.
    pub stage: Duration,
}

/// What is known of the levels.
#[derive(Debug, Default)]
pub struct Solving {
    /// Number of the newest solve; results of others are dropped.
    pub generation: u64,
    /// The solve under way.
    pub running: Option<Running>,
    /// The newest result.
    pub spectrum: Option<Arc<Spectrum>>,
    /// Why there is none.
    pub failure: Option<String>,
}

/// The whole state of the desk.
#[derive(Debug)]
pub struct State {
    /// The shape.
    pub document: Arc<Document>,
    /// Its outline as closed polylines.
    pub lines: Arc<Vec<Vec<Point>>>,
    /// Box around it.
    pub bounds: Box2,
    /// Its area.
    pub area: f64,
    /// What the terminal can.
    pub capability: Capability,
    /// The characters in use.
    pub glyphs: Glyphs,
    /// The shades in use.
    pub background: Background,
    /// The colours in use.
    pub paint: Paint,
    /// What is drawn.
    pub show: Show,
    /// Whether nodal lines are drawn.
    pub nodes: bool,
    /// Kelvin.
    pub temperature: f64,
    /// Where pictures go.
    pub folder: PathBuf,
    /// Screen size in cells.
    pub size: (u16, u16),
    /// Height over width of a cell.
    pub aspect: f64,
    /// The open view.
    pub view: View,
    /// What lies over it.
    pub overlay: Option<Overlay>,
    /// A line for the person.
    pub message: Option<Message>,
    /// Index of the chosen level, from 0.
    pub chosen: usize,
    /// The levels.
    pub solving: Solving,
    /// Since when a picture is being written.
    pub exporting: Option<Duration>,
    /// The mount of the plate.
    pub mount: Option<Arc<Mount>>,
    /// The mount of the sheet's plates.
    pub small: Option<Arc<Mount>>,
    /// Modes on the plate's mount.
    pub pictures: HashMap<usize, Arc<Picture>>,
    /// Modes on the sheet's mount.
    pub thumbs: HashMap<usize, Arc<Picture>>,
    /// The picture on the plate until the chosen one is there.
    pub last: Option<Arc<Picture>>,
    /// Figures by mode.
    pub portraits: HashMap<usize, Option<Portrait>>,
    /// Time since the start.
    pub now: Duration,
    /// Whether to leave.
    pub quit: bool,
}

impl State {
    /// A desk with a shape on it and nothing solved yet.
    pub fn new(document: Document, capability: Capability, folder: PathBuf) -> Self {
        let bounds = document.model.outline.bounds();
        let lines = super::plate::flatten(&document.model.outline);
        Self {
            area: document.model.outline.area(),
            lines: Arc::new(lines),
            bounds,
            document: Arc::new(document),
            glyphs: capability.glyphs,
            background: capability.background,
            paint: Paint::new(capability.colours, capability.background, 0),
            capability,
            show: Show::Density,
            nodes: false,
            temperature: 4.2,
            folder,
            size: (0, 0),
            aspect: 2.0,
            view: View::Plate,
            overlay: None,
            message: None,
            chosen: 0,
            solving: Solving::default(),
            exporting: None,
            mount: None,
            small: None,
            pictures: HashMap::new(),
            thumbs: HashMap::new(),
            last: None,
            portraits: HashMap::new(),
            now: Duration::ZERO,
            quit: false,
        }
    }

    /// Whether only seven-bit characters may be written.
    pub fn ascii(&self) -> bool {
        self.glyphs == Glyphs::Plain
    }

    /// Where keys go.
    pub fn place(&self) -> Place {
        match (&self.overlay, self.view) {
            (Some(Overlay::Help(_)), _) => Place::Help,
            (Some(Overlay::Question(..)), _) => Place::Question,
            (None, View::Plate) => Place::Plate,
            (None, View::Sheet) => Place::Sheet,
        }
    }

    /// How maps are drawn.
    pub fn look(&self) -> Look<'_> {
        Look {
            glyphs: self.glyphs,
            paint: &self.paint,
            show: self.show,
        }
    }

    /// Parts of the screen.
    pub fn layout(&self) -> Option<Layout> {
        divide(self.size.0, self.size.1)
    }

    /// Tiles of the sheet.
    pub fn tiles(&self) -> Option<Tiles> {
        let size = self.bounds.size();
        let proportion = self.aspect * size.x / size.y;
        self.layout().map(|l| Tiles::arrange(l.body, proportion))
    }

    /// Number of levels.
    pub fn count(&self) -> usize {
        self.solving.spectrum.as_ref().map_or(0, |s| s.levels.len())
    }

    /// The picture for the plate: of the chosen mode, or the last one while that is on its way.
    pub fn picture(&self) -> Option<&Arc<Picture>> {
        self.pictures.get(&self.chosen).or(self.last.as_ref())
    }

    /// The levels that coincide with level `k`, as a range of indices.
    pub fn group(&self, k: usize) -> Range<usize> {
        let levels = self
            .solving
            .spectrum
            .as_ref()
            .map_or(&[][..], |s| &s.levels);
        groups(levels.iter().map(|l| l.multiplicity))
            .into_iter()
            .find(|g| g.contains(&k))
            .unwrap_or(k..k + 1)
    }

    /// Whether something runs that a gauge may have to show.
    pub fn busy(&self) -> bool {
        self.solving.running.is_some() || self.exporting.is_some()
    }

    /// Mixes the shades anew, after a change of background or of size.
    pub fn repaint(&mut self) {
        let cells = self.layout().map_or(0, |l| l.plate.area() as usize);
        self.paint = Paint::new(self.capability.colours, self.background, cells);
    }

    /// Lays the outline on a block of cells.
    pub fn mount(&self, columns: u16, rows: u16) -> Option<Mount> {
        Mount::new(
            &self.lines,
            self.bounds,
            (columns.into(), rows.into()),
            self.aspect,
        )
    }
}

impl Mount {
    /// Lays closed polylines on `cells` (columns, rows); `None` where they do not fit.
    pub fn new(
        lines: &[Vec<Point>],
        bounds: Box2,
        cells: (usize, usize),
        aspect: f64,
    ) -> Option<Self> {
        let sight = Sight::fit(bounds, cells.0, cells.1, aspect)?;
        let raster = sight.raster();
        let from_below = inside(lines, &raster);
        let rows = from_below.chunks(raster.width).rev();
        Some(Self {
            within: rows.flatten().copied().collect(),
            outline: Strokes::outline(lines, &sight),
            sight,
        })
    }
}

/// Runs of coinciding levels, from their multiplicities in order.
pub fn groups(multiplicities: impl Iterator<Item = usize>) -> Vec<Range<usize>> {
    let mut out: Vec<Range<usize>> = Vec::new();
    let mut open = 0;
    for (k, m) in multiplicities.enumerate() {
        match out.last_mut() {
            Some(g) if open > 0 => {
                g.end = k + 1;
                open -= 1;
            }
            _ => {
                out.push(k..k + 1);
                open = m.max(1) - 1;
            }
        }
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn degenerate_levels_stay_together() {
        let got = groups([1, 2, 2, 1, 3, 3, 3].into_iter());
        assert_eq!(got, vec![0..1, 1..3, 3..4, 4..7]);
    }
}
