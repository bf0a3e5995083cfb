//! Standard output, and notes on standard error.

use super::stop::Stop;
use std::io::{self, Write};

/// Writes data to standard output.
///
/// # Errors
/// [`Stop::Closed`] when the reader has gone, [`Stop::Machine`] when the disk refuses.
pub fn print(data: &[u8]) -> Result<(), Stop> {
    let mut out = io::stdout().lock();
    let done = out.write_all(data).and_then(|()| out.flush());
    done.map_err(|error| match error.kind() {
        io::ErrorKind::BrokenPipe => Stop::Closed,
        _ => Stop::Machine(anyhow::Error::new(error).context("standard output cannot be written")),
    })
}

/// Says something beside the data, on standard error; a lost note is no failure.
pub fn note(text: &str) {
    let _ = writeln!(io::stderr(), "dotwright: {text}");
}
