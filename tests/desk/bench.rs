//! A desk without a terminal, whose jobs are done at once.

use dotwright::desk::{
    Action, Background, Capability, Colours, Document, Glyphs, Job, Key, Scale, State, perform,
    update, view,
};
use dotwright::geometry::{Outline, Point};
use dotwright::progress::Watch;
use dotwright::spectrum::{Level, Model, Spectrum, Wanted};
use ratatui::Terminal;
use ratatui::backend::TestBackend;
use std::cell::RefCell;
use std::sync::Mutex;

pub fn rectangle(width: f64, height: f64) -> Outline {
    let at = |x, y| Point { x, y };
    Outline::polygon(&[at(0., 0.), at(width, 0.), at(width, height), at(0., height)])
        .expect("a rectangle")
}

pub fn document(outline: Outline) -> Document {
    Document {
        title: "Slab dot, variant 3".into(),
        about: "one electron, hard wall".into(),
        stem: "slab-dot".into(),
        model: Model::hard(outline, 38.099_821_2 / 0.067),
        wanted: Wanted {
            count: 12,
            ..Wanted::default()
        },
        scale: Scale::Lab,
    }
}

/// A terminal that can do this much.
pub fn terminal(glyphs: Glyphs, colours: Colours) -> Capability {
    Capability {
        glyphs,
        colours,
        background: Background::Dark,
        unicode: glyphs != Glyphs::Plain,
        screen: true,
    }
}

pub const MONO: (Glyphs, Colours) = (Glyphs::Braille, Colours::None);

/// A desk whose jobs are done at once, in order.
pub struct Desk {
    /// The state.
    pub state: State,
    size: (u16, u16),
    /// Jobs are kept here instead while this is set.
    pub held: Option<Vec<Job>>,
    _folder: tempfile::TempDir,
}

impl Desk {
    pub fn new(document: Document, (glyphs, colours): (Glyphs, Colours), size: (u16, u16)) -> Self {
        let folder = tempfile::tempdir().expect("a scratch folder");
        let state = State::new(document, terminal(glyphs, colours), folder.path().into());
        let mut desk = Self {
            state,
            size,
            held: None,
            _folder: folder,
        };
        desk.resize(size.0, size.1);
        desk
    }

    pub fn open(size: (u16, u16)) -> Self {
        let mut desk = Self::new(document(rectangle(80., 50.)), MONO, size);
        desk.act(Action::Begin);
        desk
    }

    pub fn act(&mut self, action: Action) {
        let mut todo = vec![action];
        while let Some(action) = todo.pop() {
            for job in update(&mut self.state, action) {
                if let Some(held) = &mut self.held {
                    held.push(job);
                    continue;
                }
                let said = done(job).into_iter().rev();
                todo.extend(said.map(with_fixed_figures));
            }
        }
    }

    pub fn resize(&mut self, columns: u16, rows: u16) {
        self.size = (columns, rows);
        self.act(Action::Resize {
            columns,
            rows,
            aspect: 2.0,
        });
    }

    pub fn keys(&mut self, keys: &[Key]) -> &mut Self {
        for k in keys {
            self.act(Action::Key(*k));
        }
        self
    }

    pub fn typed(&mut self, text: &str) -> &mut Self {
        for c in text.chars() {
            self.act(Action::Key(Key::Char(c)));
        }
        self
    }

    pub fn screen(&self) -> String {
        let mut t = Terminal::new(TestBackend::new(self.size.0, self.size.1)).expect("no terminal");
        t.draw(|frame| view(&self.state, frame)).expect("drawn");
        let buffer = t.backend().buffer();
        let mut out = String::new();
        for row in buffer.content.chunks(self.size.0.into()) {
            let line: String = row.iter().map(|c| c.symbol()).collect();
            out += line.trim_end();
            out.push('\n');
        }
        out
    }

    pub fn shows(&self, name: &str) {
        let path = format!("{}/tests/screens/{name}.txt", env!("CARGO_MANIFEST_DIR"));
        let got = self.screen();
        if std::env::var_os("BLESS").is_some() {
            std::fs::write(&path, &got).expect("the screens can be written");
        }
        let want = std::fs::read_to_string(&path).unwrap_or_default();
        assert!(
            got == want,
            "{name} has changed; now:\n{got}\nbefore:\n{want}"
        );
    }
}

/// What comes of a job; each outline is solved once for all tests.
pub fn done(job: Job) -> Vec<Action> {
    static SOLVED: Mutex<Vec<(Outline, Spectrum)>> = Mutex::new(Vec::new());
    let known = || SOLVED.lock().expect("no test fails while it looks here");
    let said = RefCell::new(Vec::new());
    if let Job::Solve {
        generation,
        document: d,
        ..
    } = &job
    {
        let hit = known()
            .iter()
            .find(|s| s.0 == d.model.outline)
            .map(|s| s.1.clone());
        if let Some(spectrum) = hit {
            return vec![Action::Solved {
                generation: *generation,
                result: Ok(Box::new(spectrum)),
            }];
        }
        let outline = d.model.outline.clone();
        perform(job, &Watch::quiet(), &|a| {
            if let Action::Solved { result: Ok(s), .. } = &a {
                known().push((outline.clone(), (**s).clone()));
            }
            said.borrow_mut().push(a);
        });
    } else {
        perform(job, &Watch::quiet(), &|a| said.borrow_mut().push(a));
    }
    said.into_inner()
}

/// Figures that do not depend on the solver, and modes with a sign that does not: positive where
/// they first rise, from the upper left. The rest of the modes stays the solver's own.
pub fn with_fixed_figures(mut action: Action) -> Action {
    if let Action::Taken { picture, .. } = &mut action {
        let exposure = &mut picture.exposure;
        let first = exposure
            .values
            .iter()
            .find(|v| v.abs() > 0.25 * exposure.peak);
        if first.is_some_and(|v| *v < 0.0) {
            exposure.values.iter_mut().for_each(|v| *v = -*v);
        }
    }
    let Action::Solved { generation, result } = action else {
        return action;
    };
    let result = result.map(|mut s| {
        fix(&mut s);
        s
    });
    Action::Solved { generation, result }
}

pub fn fix(s: &mut Spectrum) {
    for (k, level) in s.levels.iter_mut().enumerate() {
        let energy = 1.25 + 0.75 * k as f64 + 0.01 * (k * k) as f64;
        *level = Level {
            index: k + 1,
            energy,
            error: 3e-6,
            multiplicity: 1,
            residual: 1e-12,
            label: Some("x even, y odd".into()),
        };
    }
    s.certificate.shift = 11.0;
    s.certificate.below = s.levels.len();
    s.certificate.found = s.levels.len();
    s.certificate.complete = true;
    s.lattice.cell = 4.0;
    s.lattice.degree = 5;
    s.lattice.unknowns = 625;
    s.timings = Default::default();
    s.timings.solve = 12.5;
    s.notes.clear();
}

pub fn make_pair(s: &mut Spectrum, k: usize) {
    s.levels[k + 1].energy = s.levels[k].energy;
    s.levels[k].multiplicity = 2;
    s.levels[k + 1].multiplicity = 2;
}
