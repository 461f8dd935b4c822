//! What is wrong with a scenario, where, and what would be right.

use std::fmt;

/// A place in a text. Lines and columns count from 1; columns count characters.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default, PartialOrd, Ord)]
pub struct Place {
    /// Line, from 1.
    pub line: usize,
    /// Column in characters, from 1.
    pub column: usize,
}

/// How much a problem matters.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Severity {
    /// The scenario can't be shown.
    Error,
    /// The scenario can be shown; an author should look.
    Note,
}

/// One thing that is wrong with a scenario.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Problem {
    /// Where it stands in the text.
    pub place: Place,
    /// How much it matters.
    pub severity: Severity,
    /// What is wrong, as one sentence without a full stop.
    pub wrong: String,
    /// What would be right, as one sentence without a full stop.
    pub remedy: String,
}

impl Problem {
    /// An error at a place.
    pub fn error(place: Place, wrong: impl Into<String>, remedy: impl Into<String>) -> Self {
        Self { place, severity: Severity::Error, wrong: wrong.into(), remedy: remedy.into() }
    }
    /// A note at a place.
    pub fn note(place: Place, wrong: impl Into<String>, remedy: impl Into<String>) -> Self {
        Self { place, severity: Severity::Note, wrong: wrong.into(), remedy: remedy.into() }
    }
}

/// `line:column: wrong; remedy`, the tail of what the commands print after the file's name.
impl fmt::Display for Problem {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{}:{}: {}; {}", self.place.line, self.place.column, self.wrong, self.remedy)
    }
}
