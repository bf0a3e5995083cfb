//! Every command and option, once: help, manual pages and completions are made from these.

use super::stop::Stop;
use crate::desk::Glyphs;
use crate::pictures::{Look, Show, Theme};
use clap::builder::{PossibleValuesParser, TypedValueParser};
use clap::{Args, CommandFactory, FromArgMatches, Parser, Subcommand, ValueEnum};
use std::ffi::OsString;
use std::path::PathBuf;

/// Commands of the plan that this version does not have.
const LATER: [&str; 7] = [
    "transitions",
    "sensitivity",
    "sweep",
    "tolerance",
    "aim",
    "report",
    "intake",
];
/// The most levels that may be asked for.
const MOST_LEVELS: usize = 100_000;

const EXAMPLES: &str = "\
Examples:
  dotwright                                     look through the built-in shape
  dotwright dot.toml                            look through a shape of yours
  dotwright levels dot.toml                     its levels, with errors, as a table
  dotwright levels dot.toml --set neck=20       the same with one size changed
  dotwright map dot.toml --mode 3 -o m.png      a picture of the third level
  dotwright check dot.toml                      what the shape is, without solving

A shape document is a TOML file; `-` reads it from standard input.
Exit codes: 0 done, 1 could not (solver, disk), 2 bad input.";

/// From the outline of a lateral nanostructure to its energy levels, with error bars and the proof
/// that none is missing.
///
/// Without a command, dotwright opens a shape on the screen, to be looked through level by level
/// (press ? there for the keys); where there is no terminal it prints the level table and a map of
/// the lowest level.
#[derive(Debug, Parser)]
#[command(name = "dotwright", version, max_term_width = 100, after_help = EXAMPLES)]
#[command(args_conflicts_with_subcommands = true)]
pub struct Cli {
    /// What to do.
    #[command(subcommand)]
    pub(super) command: Option<Command>,
    /// What to open without a command.
    #[command(flatten)]
    pub(super) start: Start,
}

/// The commands.
#[derive(Debug, Subcommand)]
pub(super) enum Command {
    /// Print the energy levels of a shape
    #[command(after_help = LEVELS)]
    Levels(Levels),
    /// Draw one level as a picture (PNG)
    #[command(after_help = MAP)]
    Map(Map),
    /// Draw many levels on one picture (PNG)
    #[command(after_help = SHEET)]
    Sheet(Sheet),
    /// Read and judge a shape without solving
    #[command(after_help = CHECK)]
    Check(Check),
    /// List the built-in materials with their sources
    Materials(Materials),
    /// Write manual pages and shell completions into a folder
    #[command(after_help = GENERATE)]
    Generate(Generate),
}

const LEVELS: &str = "\
Examples:
  dotwright levels dot.toml
  dotwright levels dot.toml --modes 50 --accuracy 1e-8
  dotwright levels dot.toml --from \"3 meV\" --modes 10
  dotwright levels dot.toml --set neck=20 --format csv > levels.csv

An energy is printed with its error in brackets, in units of the last digit:
9.63972(3) lies between 9.63969 and 9.63975.";
const MAP: &str = "\
Examples:
  dotwright map dot.toml --mode 3 -o m.png
  dotwright map dot.toml --mode 3 --show wave --theme dark --width 2400 -o slide.png
  ssh node dotwright map dot.toml --mode 1 -o - > here.png";
const SHEET: &str = "\
Examples:
  dotwright sheet dot.toml -o all.png
  dotwright sheet dot.toml --modes 48 --show wave -o all.png";
const CHECK: &str = "\
Example:
  dotwright check dot.toml --below \"20 meV\"";
const GENERATE: &str = "\
Examples:
  dotwright generate share
  man -l share/man/dotwright-levels.1
  source share/completions/dotwright.bash";

/// What to open.
#[derive(Debug, Args)]
pub(super) struct Start {
    /// The shape document to open; `-` is standard input [default: a built-in shape]
    pub shape: Option<PathBuf>,
    #[command(flatten)]
    pub sizes: Sizes,
    #[command(flatten)]
    pub asked: Asked,
    /// Characters that maps on the screen are drawn with [default: judged from the terminal]
    #[arg(long, value_name = "SET", value_parser = named(&Glyphs::NAMES))]
    pub glyphs: Option<Glyphs>,
    /// Further words, which are refused
    #[arg(hide = true)]
    pub rest: Vec<OsString>,
}

/// Changes to a document.
#[derive(Debug, Args)]
pub(super) struct Sizes {
    /// Change a named size, or any key, before anything else: neck=20, field.B=2,
    /// outline.1.radius="45 nm"; may be given several times
    #[arg(long = "set", value_name = "SIZE=VALUE", value_parser = assignment)]
    pub set: Vec<(String, String)>,
}

/// Which levels.
#[derive(Debug, Args)]
pub(super) struct Asked {
    /// How many levels [default: as the document says, else 20]
    #[arg(long, value_name = "N", value_parser = count, allow_negative_numbers = true)]
    pub modes: Option<usize>,
    /// Begin with the first level above this energy, "3 meV"; a bare number is in meV
    #[arg(long, value_name = "E", allow_negative_numbers = true)]
    pub from: Option<String>,
    #[command(flatten)]
    pub accuracy: Accuracy,
}

/// How exact.
#[derive(Debug, Args)]
pub(super) struct Accuracy {
    /// Relative accuracy of each level, between 1e-10 and 0.1 [default: as the document says,
    /// else 1e-6]
    #[arg(long, value_name = "A", value_parser = accuracy, allow_negative_numbers = true)]
    pub accuracy: Option<f64>,
}

/// `levels`.
#[derive(Debug, Args)]
pub(super) struct Levels {
    /// The shape document; `-` is standard input
    pub shape: PathBuf,
    #[command(flatten)]
    pub asked: Asked,
    #[command(flatten)]
    pub sizes: Sizes,
    /// How the table is written
    #[arg(long, value_enum, default_value_t = Format::Text)]
    pub format: Format,
}

/// `map`.
#[derive(Debug, Args)]
pub(super) struct Map {
    /// The shape document; `-` is standard input
    pub shape: PathBuf,
    /// Number of the level, counted from 1
    #[arg(long, value_name = "N", value_parser = count, allow_negative_numbers = true)]
    pub mode: usize,
    #[command(flatten)]
    pub drawing: Drawing,
    #[command(flatten)]
    pub accuracy: Accuracy,
    #[command(flatten)]
    pub sizes: Sizes,
}

/// `sheet`.
#[derive(Debug, Args)]
pub(super) struct Sheet {
    /// The shape document; `-` is standard input
    pub shape: PathBuf,
    #[command(flatten)]
    pub drawing: Drawing,
    #[command(flatten)]
    pub asked: Asked,
    #[command(flatten)]
    pub sizes: Sizes,
}

/// How a picture is drawn.
#[derive(Debug, Args)]
pub(super) struct Drawing {
    /// The picture to write, a PNG; `-` is standard output
    #[arg(short, long, value_name = "FILE")]
    pub output: PathBuf,
    /// density |ψ|², or the wave ψ with its sign (phase: once there are magnetic fields)
    #[arg(long, value_enum, default_value_t = Shown::Density)]
    pub show: Shown,
    /// Width of the picture in pixels, 200 to 12000
    #[arg(long, value_name = "PX", default_value_t = 1200, value_parser = width,
          allow_negative_numbers = true)]
    pub width: u32,
    /// The page: light for paper, dark for slides
    #[arg(long, default_value = "light", value_parser = named(&Theme::NAMES))]
    pub theme: Theme,
}

/// `check`.
#[derive(Debug, Args)]
pub(super) struct Check {
    /// The shape document; `-` is standard input
    pub shape: PathBuf,
    /// Estimate how many levels lie below this energy [default: where the levels asked for end]
    #[arg(long, value_name = "E")]
    pub below: Option<String>,
    #[command(flatten)]
    pub sizes: Sizes,
}

/// `materials`.
#[derive(Debug, Args)]
pub(super) struct Materials {
    /// How the table is written
    #[arg(long, value_enum, default_value_t = Format::Text)]
    pub format: Format,
}

/// `generate`.
#[derive(Debug, Args)]
pub(super) struct Generate {
    /// The folder; made when it is not there
    pub folder: PathBuf,
}

/// How a table is written.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub(super) enum Format {
    /// Aligned columns for people
    Text,
    /// Comma-separated values with a header line
    Csv,
    /// One JSON object with stable keys
    Json,
}

/// What a picture shows.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub(super) enum Shown {
    /// |ψ|²
    Density,
    /// ψ with its sign
    Wave,
    /// The phase of ψ, once there are magnetic fields
    #[value(hide = true)]
    Phase,
}

impl Drawing {
    /// The look, where this version can draw it.
    ///
    /// # Errors
    /// A phase, which real waves do not have.
    pub fn look(&self) -> Result<Look, Stop> {
        let show = match self.show {
            Shown::Density => Show::Density,
            Shown::Wave => Show::Wave,
            Shown::Phase => {
                return Err(Stop::input(
                    "without a magnetic field a wave has a sign but no phase, and fields come in \
                     a later version; take --show wave",
                ));
            }
        };
        Ok(Look {
            width: self.width,
            theme: self.theme,
            show,
            ..Look::default()
        })
    }
}

/// Reads the arguments.
///
/// # Errors
/// [`Stop`] for help, the version, and arguments that make no sense.
pub fn parse(words: impl IntoIterator<Item = OsString>) -> Result<Cli, Stop> {
    let later = |name: &'static str| {
        let anything = clap::Arg::new("rest")
            .num_args(0..)
            .trailing_var_arg(true)
            .allow_hyphen_values(true);
        clap::Command::new(name)
            .hide(true)
            .disable_help_flag(true)
            .arg(anything)
    };
    let refuse = |e| Stop::Words(Box::new(e));
    let command = Cli::command().subcommands(LATER.map(later));
    let matches = command.try_get_matches_from(words).map_err(refuse)?;
    if let Some(name) = matches.subcommand_name().filter(|n| LATER.contains(n)) {
        return Err(Stop::input(format!(
            "`{name}` comes in a later version; this one has levels, map, sheet, check, materials \
             and generate"
        )));
    }
    Cli::from_arg_matches(&matches).map_err(refuse)
}

/// A parser that takes one of a list of names.
fn named<T: Copy + Send + Sync + 'static>(
    names: &'static [(&'static str, T)],
) -> impl TypedValueParser<Value = T> {
    PossibleValuesParser::new(names.iter().map(|n| n.0)).try_map(move |given| {
        let found = names.iter().find(|n| n.0 == given).map(|n| n.1);
        found.ok_or_else(|| format!("`{given}` is not one of the names"))
    })
}

fn count(text: &str) -> Result<usize, String> {
    match text.trim().parse::<usize>() {
        Ok(n) if (1..=MOST_LEVELS).contains(&n) => Ok(n),
        _ => Err(format!("take a whole number from 1 to {MOST_LEVELS}")),
    }
}

fn width(text: &str) -> Result<u32, String> {
    match text.trim().parse::<u32>() {
        Ok(n) if Look::WIDTHS.contains(&n) => Ok(n),
        _ => Err("take a whole number of pixels from 200 to 12000".to_owned()),
    }
}

fn accuracy(text: &str) -> Result<f64, String> {
    match text.trim().parse::<f64>() {
        Ok(a) if a > 1e-10 && a < 1e-1 => Ok(a),
        _ => Err("take a number between 1e-10 and 0.1, such as 1e-6".to_owned()),
    }
}

fn assignment(text: &str) -> Result<(String, String), String> {
    match text.split_once('=') {
        Some((name, value)) if !name.trim().is_empty() && !value.trim().is_empty() => {
            Ok((name.trim().to_owned(), value.trim().to_owned()))
        }
        _ => Err("write a name, an equals sign and a value, such as neck=20".to_owned()),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_definitions_are_sound() {
        Cli::command().debug_assert();
    }

    #[test]
    fn numbers_out_of_range_say_what_would_be_right() {
        assert!(count("0").is_err() && count("1e3").is_err() && count("-1").is_err());
        assert_eq!(count("20"), Ok(20));
        assert!(accuracy("0").is_err() && accuracy("nan").is_err() && accuracy("0.1").is_err());
        assert_eq!(accuracy("1e-6"), Ok(1e-6));
        assert!(width("199").is_err() && width("12001").is_err());
        assert_eq!(
            assignment("a = 2*b = 3"),
            Ok(("a".into(), "2*b = 3".into()))
        );
        assert!(assignment("=3").is_err() && assignment("neck").is_err());
    }
}
