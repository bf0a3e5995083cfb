//! `check`: what a shape is, judged without solving.

use super::open::Opened;
use super::options::Check;
use super::output::print;
use super::stop::Stop;

/// Prints the judgement.
///
/// # Errors
/// Faults of the shape, of the output.
pub fn check(asked: &Check) -> Result<(), Stop> {
    let opened = Opened::read(Some(&asked.shape), &asked.sizes)?;
    let mut page = format!("{}\n", opened.document.title());
    if let Some(text) = &asked.below {
        page += &format!("{}\n", opened.energy("--below", text)?);
    }
    print(page.as_bytes())
}
