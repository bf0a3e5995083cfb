//! What is wrong with a document, and where: rendered with the line and a caret under the word.

use std::fmt;
use std::ops::Range;
use std::sync::Arc;
use unicode_width::UnicodeWidthChar;

/// One thing that is wrong.
#[derive(Clone, Debug, PartialEq)]
pub struct Fault {
    /// The bytes of the text it concerns; `None` when it concerns no place.
    pub span: Option<Range<usize>>,
    /// What is wrong.
    pub what: String,
    /// What would be right.
    pub remedy: String,
}

/// All faults of one document, in the order of the text.
///
/// `Display` gives plain text, one block per fault: `file:line:column: what; remedy`, the line of
/// the source, and a caret under the word.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub struct ShapeErrors {
    /// The name of the file, as it is shown.
    pub file: String,
    /// The text the spans refer to.
    pub text: Arc<str>,
    /// At least one fault.
    pub faults: Vec<Fault>,
}

/// Faults shown in full; a file of garbage has thousands.
const SHOWN: usize = 40;
/// Columns of a source line that are shown.
const WIDTH: usize = 96;

impl ShapeErrors {
    pub(super) fn new(file: &str, text: &Arc<str>, mut faults: Vec<Fault>) -> Self {
        faults.sort_by_key(|f| f.span.as_ref().map_or(0, |s| s.start));
        faults.dedup();
        Self {
            file: file.to_owned(),
            text: Arc::clone(text),
            faults,
        }
    }

    /// One fault without a place.
    pub(super) fn whole(file: &str, what: String, remedy: &str) -> Self {
        let fault = Fault {
            span: None,
            what,
            remedy: remedy.to_owned(),
        };
        Self::new(file, &Arc::from(""), vec![fault])
    }

    /// Line and column of a fault, from 1, the column in characters.
    pub fn place(&self, fault: &Fault) -> Option<(usize, usize)> {
        let start = floor_boundary(&self.text, fault.span.as_ref()?.start);
        let before = &self.text[..start];
        let line_start = before.rfind('\n').map_or(0, |k| k + 1);
        let line = before.bytes().filter(|&b| b == b'\n').count() + 1;
        Some((line, before[line_start..].chars().count() + 1))
    }
}

impl fmt::Display for ShapeErrors {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        for (k, fault) in self.faults.iter().take(SHOWN).enumerate() {
            if k > 0 {
                writeln!(f)?;
            }
            let join = if fault.remedy.is_empty() { "" } else { "; " };
            match self.place(fault) {
                None => write!(f, "{}: {}{join}{}", self.file, fault.what, fault.remedy)?,
                Some((line, column)) => {
                    let head = format!("{}:{line}:{column}", self.file);
                    writeln!(f, "{head}: {}{join}{}", fault.what, fault.remedy)?;
                    self.excerpt(f, fault, line)?;
                }
            }
        }
        if self.faults.len() > SHOWN {
            write!(f, "\n… and {} more", self.faults.len() - SHOWN)?;
        }
        Ok(())
    }
}

impl ShapeErrors {
    /// The source line and the caret line.
    fn excerpt(&self, f: &mut fmt::Formatter<'_>, fault: &Fault, line: usize) -> fmt::Result {
        let Some(span) = &fault.span else {
            return Ok(());
        };
        let start = floor_boundary(&self.text, span.start);
        let line_start = self.text[..start].rfind('\n').map_or(0, |k| k + 1);
        let line_end = self.text[start..]
            .find('\n')
            .map_or(self.text.len(), |k| start + k);
        let end = floor_boundary(&self.text, span.end).clamp(start, line_end);
        let (before, word) = (&self.text[line_start..start], &self.text[start..end]);
        // A word far to the right of a long line brings its surroundings along.
        let mut skipped = before;
        let keep = WIDTH / 2;
        while columns(skipped) > keep {
            let cut = columns(skipped) - keep;
            skipped = &skipped[skipped
                .char_indices()
                .nth(cut)
                .map_or(skipped.len(), |c| c.0)..];
        }
        let lead = if skipped.len() < before.len() {
            "…"
        } else {
            ""
        };
        let mut shown = format!("{lead}{}", printable(skipped));
        let indent = columns(&shown);
        let rest = printable(self.text[start..line_end].trim_end_matches('\r'));
        let mut used = indent;
        for c in rest.chars() {
            used += c.width().unwrap_or(0);
            if used > WIDTH {
                shown.push('…');
                break;
            }
            shown.push(c);
        }
        let carets = columns(&printable(word)).clamp(1, WIDTH.saturating_sub(indent).max(1));
        let number = line.to_string();
        writeln!(f, "  {number} | {}", shown.trim_end())?;
        let gutter = " ".repeat(number.len());
        write!(
            f,
            "  {gutter} | {}{}",
            " ".repeat(indent),
            "^".repeat(carets)
        )
    }
}

/// Terminal columns of a text.
fn columns(text: &str) -> usize {
    text.chars().map(|c| c.width().unwrap_or(0)).sum()
}

/// The text with tabs as one space and control characters made visible.
fn printable(text: &str) -> String {
    text.chars()
        .map(|c| match c {
            '\t' => ' ',
            c if c.is_control() => '\u{fffd}',
            c => c,
        })
        .collect()
}

fn floor_boundary(text: &str, mut at: usize) -> usize {
    at = at.min(text.len());
    while !text.is_char_boundary(at) {
        at -= 1;
    }
    at
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_caret_stands_under_the_word() {
        let text: Arc<str> = Arc::from("scale = \"lab\"\n\tgröße = 3 # ja\n");
        let start = text.find("größe").expect("the word is in the text");
        let errors = ShapeErrors::new(
            "a.toml",
            &text,
            vec![Fault {
                span: Some(start..start + "größe".len()),
                what: "\"größe\" is no key".into(),
                remedy: "did you mean size?".into(),
            }],
        );
        assert_eq!(
            errors.to_string(),
            "a.toml:2:2: \"größe\" is no key; did you mean size?\n  2 |  größe = 3 # ja\n    |  ^^^^^"
        );
    }

    #[test]
    fn long_lines_are_cut_around_the_word() {
        let text: Arc<str> = Arc::from(format!("{}bad{}", "x".repeat(5000), "y".repeat(5000)));
        let fault = Fault {
            span: Some(5000..5003),
            what: "w".into(),
            remedy: String::new(),
        };
        let shown = ShapeErrors::new("f", &text, vec![fault]).to_string();
        let lines: Vec<&str> = shown.lines().collect();
        assert!(lines[1].chars().count() < 110);
        let at = lines[2].find('^').expect("a caret");
        let word: String = lines[1].chars().skip(at).take(3).collect();
        assert_eq!(word, "bad");
    }
}
