//! What is asked of the solver, and what it hands back.

use sprs::CsMat;

/// K x = λ M x, Hermitian, M positive definite.
#[derive(Debug, Clone, Copy)]
pub struct Problem<'a, T> {
    /// K, by rows, both triangles stored; best scaled to unit diagonal.
    pub stiffness: &'a CsMat<T>,
    /// M, by rows, both triangles stored.
    pub mass: &'a CsMat<T>,
    /// A coordinate for each unknown: only the order of elimination depends on it.
    pub places: &'a [[f64; 2]],
    /// This many unknowns at the end have dense rows (corner functions); they are eliminated last.
    pub tail: usize,
}

/// Which levels.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Window {
    /// The lowest so many.
    Lowest(usize),
    /// The first `count` at or above `value` (less a billionth, for rounding).
    From {
        /// Where the window begins.
        value: f64,
        /// Number of levels.
        count: usize,
    },
}

impl Window {
    /// Number of levels asked for.
    pub fn count(&self) -> usize {
        match *self {
            Self::Lowest(count) | Self::From { count, .. } => count,
        }
    }
}

/// How to solve.
#[derive(Debug, Clone, Copy)]
pub struct Settings<'a, T> {
    /// Which levels.
    pub window: Window,
    /// Largest relative residual of a level, in [1e-12, 1e-2]. The level's own error is about its
    /// square over the relative distance to the next level.
    pub tolerance: f64,
    /// Levels nearer to each other than this, relative, are not separated by a window's end.
    pub cluster: f64,
    /// Vectors near the modes wanted (of the problem before an edit, say), any number.
    pub start: Option<&'a [Vec<T>]>,
    /// Expected value of the last level, from Weyl's law or from the levels before an edit.
    pub guess: Option<f64>,
    /// Bytes that may be used.
    pub memory: u64,
}

impl<T> Settings<'_, T> {
    /// Default settings for a window: tolerance 1e-7, no hints, three quarters of the memory.
    pub fn new(window: Window) -> Self {
        Self {
            window,
            tolerance: 1e-7,
            cluster: 1e-5,
            start: None,
            guess: None,
            memory: machine_memory() / 4 * 3,
        }
    }
}

/// The memory of this machine in bytes; 8 GB where it cannot be told.
pub fn machine_memory() -> u64 {
    let text = std::fs::read_to_string("/proc/meminfo").unwrap_or_default();
    text.lines()
        .find_map(|line| line.strip_prefix("MemTotal:"))
        .and_then(|rest| {
            rest.trim()
                .trim_end_matches("kB")
                .trim()
                .parse::<u64>()
                .ok()
        })
        .map_or(8_000_000_000, |kb| kb * 1024)
}

/// The count that proves a window whole: by Sylvester's law of inertia, the negative pivots of
/// K − σM are the levels below σ.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Count {
    /// σ, in the gap above the last level found.
    pub shift: f64,
    /// Levels below σ, all from the lowest, by inertia.
    pub below: usize,
    /// The same by what was found (with those below the window's begin, by inertia there).
    pub found: usize,
    /// Both agree, at the end of every slice, and every inertia passed its test solve.
    pub complete: bool,
    /// Worst backward error of the test solves.
    pub backward: f64,
}

/// What a solve took.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct Effort {
    /// Right-hand sides solved for.
    pub solves: usize,
    /// Numeric factorisations.
    pub factorisations: usize,
    /// Numbers in a factor.
    pub factor_length: usize,
    /// Estimated peak memory in bytes.
    pub memory: u64,
    /// Milliseconds of order and symbolic analysis (zero when a plan was reused).
    pub plan_ms: f64,
    /// Milliseconds of numeric factorisation.
    pub factor_ms: f64,
    /// Milliseconds of everything else.
    pub solve_ms: f64,
}

/// Levels with their vectors.
#[derive(Debug, Clone)]
pub struct Found<T> {
    /// Levels, ascending, once per copy.
    pub values: Vec<f64>,
    /// Their vectors, xᴴMx = 1; M-orthogonal to rounding within a slice (128 levels at most), to
    /// the tolerance across slices.
    pub vectors: Vec<Vec<T>>,
    /// ‖Kx − λMx‖ in the norm of diag(M)⁻¹, over |λ|.
    pub residuals: Vec<f64>,
    /// Number of the first level, counted from 1 at the bottom of the spectrum.
    pub first_index: usize,
    /// Certified levels just beyond the last one asked for, up to the gap of the count: the rest
    /// of a group that the window's end cuts.
    pub beyond: Vec<f64>,
    /// The level after those, above the shift of the count: a lower estimate, not certified.
    pub next: Option<f64>,
    /// The proof.
    pub count: Count,
    /// The cost.
    pub effort: Effort,
}
