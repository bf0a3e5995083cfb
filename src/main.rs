//! The program: reads its arguments, does what they ask, maps the outcome to an exit code.

use dotwright::cli;
use std::process::ExitCode;

fn main() -> ExitCode {
    match cli::parse(std::env::args_os()).and_then(cli::dispatch) {
        Ok(()) => ExitCode::SUCCESS,
        Err(stop) => {
            stop.report();
            stop.code()
        }
    }
}
