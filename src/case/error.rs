//! Mistakes in a case file, each with its place, and how they are shown.

use std::collections::HashMap;
use std::fmt::{self, Write as _};
use std::ops::Range;

use unicode_width::UnicodeWidthStr;

use super::parse::is_unprintable;

/// Mistakes of one cause that are shown; the others are counted.
const TOLD: usize = 20;

/// Most characters of a line that are drawn.
const LINE: usize = 160;

/// The cause of a mistake.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum Cause {
    /// The file cannot be read.
    File,
    /// Not TOML.
    Syntax,
    /// A key that does not exist.
    UnknownKey,
    /// A key or value that this version does not have yet.
    NotYet,
    /// A key that must be there is not.
    Missing,
    /// A value of the wrong kind (text where a number belongs, ...).
    Kind,
    /// A number without a unit, or with a unit that does not exist.
    Unit,
    /// A unit of another dimension.
    Dimension,
    /// A number outside its range, or not finite.
    Range,
    /// A word that is not one of those possible here.
    UnknownWord,
    /// Keys that contradict each other.
    Conflict,
    /// A name used twice.
    Name,
    /// Shapes that cannot be: outside the section, overlapping, ...
    Shape,
    /// A section that has no steady answer.
    NoWayOut,
}

/// One mistake (or one warning) in a case file.
#[derive(Debug, Clone, PartialEq)]
pub struct CaseError {
    cause: Cause,
    span: Option<Range<usize>>,
    place: String,
    message: String,
    hint: Option<String>,
}

impl CaseError {
    /// A mistake at a byte range of the text; `place` names the table, such as `block "core"`.
    pub fn new(cause: Cause, place: &str, message: impl Into<String>) -> Self {
        CaseError { cause, span: None, place: place.into(), message: message.into(), hint: None }
    }

    /// With the byte range it is about.
    #[must_use]
    pub fn at(mut self, span: Range<usize>) -> Self {
        self.span = Some(span);
        self
    }

    /// With what to do about it.
    #[must_use]
    pub fn hint(mut self, hint: impl Into<String>) -> Self {
        self.hint = Some(hint.into());
        self
    }

    /// The cause.
    pub fn cause(&self) -> Cause {
        self.cause
    }

    /// Byte range in the text.
    pub fn span(&self) -> Option<Range<usize>> {
        self.span.clone()
    }

    /// What is wrong, in one sentence, with the table it is in.
    pub fn message(&self) -> String {
        if self.place.is_empty() {
            self.message.clone()
        } else {
            format!("{}: {}", self.place, self.message)
        }
    }

    /// Draws the mistake: file, line, message, the line itself and a mark under the place.
    pub fn draw(&self, file: &str, text: &str) -> String {
        let mut out = String::new();
        let drawn = self.draw_into(&mut out, file, text);
        debug_assert!(drawn.is_ok());
        out
    }

    fn draw_into(&self, out: &mut String, file: &str, text: &str) -> fmt::Result {
        match self.span.as_ref().map(|s| Spot::find(text, s)) {
            None => writeln!(out, "{file}: {}", visible(&self.message()))?,
            Some(spot) => {
                writeln!(out, "{file}:{}: {}", spot.line, visible(&self.message()))?;
                let label = spot.line.to_string();
                writeln!(out, "  {label} | {}", spot.text)?;
                let blank = " ".repeat(label.len());
                writeln!(out, "  {blank} | {}{}", " ".repeat(spot.before), "^".repeat(spot.width))?;
            }
        }
        if let Some(hint) = &self.hint {
            writeln!(out, "  {}", visible(hint))?;
        }
        Ok(())
    }
}

/// A text from the file that cannot move the cursor: control characters are replaced.
fn visible(text: &str) -> String {
    text.chars().map(|c| if is_unprintable(c) { '\u{FFFD}' } else { c }).collect()
}

/// Where a byte range lies on the screen.
struct Spot {
    line: usize,
    text: String,
    before: usize,
    width: usize,
}

impl Spot {
    fn find(text: &str, span: &Range<usize>) -> Spot {
        let floor = |mut at: usize| {
            at = at.min(text.len());
            while !text.is_char_boundary(at) {
                at -= 1;
            }
            at
        };
        let (start, end) = (floor(span.start), floor(span.end.max(span.start)));
        let line_start = text[..start].rfind('\n').map_or(0, |n| n + 1);
        let line_end = text[start..].find('\n').map_or(text.len(), |n| start + n);
        let line = text[..start].matches('\n').count() + 1;
        let shown = |part: &str| visible(&part.trim_end_matches('\r').replace('\t', "    "));
        // Of a very long line, what stands around the place.
        let head: Vec<char> = shown(&text[line_start..start]).chars().collect();
        let cut = if head.len() > LINE / 2 { head.len() - LINE / 4 } else { 0 };
        let whole = shown(&text[line_start..line_end]);
        let mut drawn: String = whole.chars().skip(cut).take(LINE).collect();
        let mut before = head[cut..].iter().collect::<String>().width();
        let room = drawn.width().saturating_sub(before);
        if cut > 0 {
            drawn.insert(0, '…');
            before += 1;
        }
        if whole.chars().count() > cut + LINE {
            drawn.push('…');
        }
        let marked = shown(&text[start..end.min(line_end).max(start)]).width();
        Spot { line, text: drawn, before, width: marked.min(room).max(1) }
    }
}

/// All mistakes of a case file, in the order of the file.
#[derive(Debug, Clone, PartialEq)]
pub struct CaseErrors {
    file: String,
    text: String,
    errors: Vec<CaseError>,
}

impl CaseErrors {
    /// Collects mistakes of a file; sorts them by place.
    pub(crate) fn new(file: &str, text: &str, mut errors: Vec<CaseError>) -> Self {
        errors.sort_by_key(|e| e.span.as_ref().map_or(usize::MAX, |s| s.start));
        CaseErrors { file: file.to_string(), text: text.to_string(), errors }
    }

    /// The mistakes.
    pub fn errors(&self) -> &[CaseError] {
        &self.errors
    }
}

impl fmt::Display for CaseErrors {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let mut told: HashMap<Cause, usize> = HashMap::new();
        for error in &self.errors {
            let count = told.entry(error.cause).or_default();
            *count += 1;
            if *count <= TOLD {
                writeln!(f, "{}", error.draw(&self.file, &self.text))?;
            }
        }
        match told.values().map(|count| count.saturating_sub(TOLD)).sum() {
            0_usize => {}
            more => writeln!(f, "and {more} more of the same kinds\n")?,
        }
        match self.errors.len() {
            1 => write!(f, "1 mistake in {}; nothing was written", self.file),
            n => write!(f, "{n} mistakes in {}; nothing was written", self.file),
        }
    }
}

impl std::error::Error for CaseErrors {}

/// The nearest of some words: fewest edits, at most a third of the word (but one at least).
pub(crate) fn nearest<'w>(
    typed: &str,
    words: impl IntoIterator<Item = &'w str>,
) -> Option<&'w str> {
    let typed = typed.trim().to_lowercase();
    let (edits, word) = words
        .into_iter()
        .map(|word| {
            let lower = word.to_lowercase();
            let within = typed.len() > 2 && (lower.contains(&typed) || typed.contains(&lower));
            let edits = strsim::damerau_levenshtein(&lower, &typed);
            (if within { edits.min(1 + edits / 8) } else { edits }, word)
        })
        .min_by_key(|(edits, _)| *edits)?;
    (edits <= (word.chars().count().max(typed.chars().count()) / 3).max(1)).then_some(word)
}

/// Words joined as in a sentence: `a, b or c`.
pub(crate) fn one_of(words: &[&str]) -> String {
    let mut out = String::new();
    for (n, word) in words.iter().enumerate() {
        let joint = match n {
            0 => "",
            n if n + 1 == words.len() => " or ",
            _ => ", ",
        };
        let added = write!(out, "{joint}{word}");
        debug_assert!(added.is_ok());
    }
    out
}
