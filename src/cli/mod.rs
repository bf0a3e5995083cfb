//! The command line: words in, data on standard output, an exit code.
//!
//! Enters: arguments. Leaves: tables, pictures, messages. Standard output carries data only;
//! progress and notes go to standard error. Exit codes: 0 done, 1 could not, 2 bad input,
//! 128 + n stopped by signal n. A reader that closes the pipe early is content, so that is 0.

mod check;
mod gauge;
mod generate;
mod levels;
mod materials;
mod open;
mod options;
mod output;
mod paint;
mod solve;
mod start;
mod stop;

pub use options::{Cli, parse};
pub use stop::Stop;

use options::Command;

/// Does what was asked.
///
/// # Errors
/// [`Stop`], with its exit code and its message.
pub fn dispatch(cli: Cli) -> Result<(), Stop> {
    match cli.command {
        None => start::start(&cli.start),
        Some(Command::Levels(asked)) => levels::levels(&asked),
        Some(Command::Map(asked)) => paint::map(&asked),
        Some(Command::Sheet(asked)) => paint::sheet(&asked),
        Some(Command::Check(asked)) => check::check(&asked),
        Some(Command::Materials(asked)) => materials::materials(&asked),
        Some(Command::Generate(asked)) => generate::generate(&asked),
    }
}
