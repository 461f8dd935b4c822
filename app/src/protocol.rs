//! What page and worker say to each other.
//!
//! Messages are JSON; an ephemeris travels beside its message as one transferred buffer of numbers. Every
//! message about a rehearsal carries its `run`: answers for an older run are dropped.

use crate::drawing::Drawing;
use fallaround_core::scenario::{Problem, Severity};
use serde::{Deserialize, Serialize};

/// Changes whenever a message does. A page and a worker of different builds refuse each other.
pub const PROTOCOL: u32 = 1;

/// From the page.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(tag = "type", rename_all = "snake_case", deny_unknown_fields)]
pub enum ToWorker {
    /// Make a show of this text; it takes the place of any other rehearsal.
    Rehearse {
        /// Number of this rehearsal.
        run: u32,
        /// The scenario.
        text: String,
    },
    /// Give that rehearsal up.
    Stop {
        /// Number of the rehearsal.
        run: u32,
    },
    /// Say what this text is about, and make a small picture of it when nothing else is to be done.
    Card {
        /// Number of this request.
        run: u32,
        /// The scenario.
        text: String,
    },
}

/// From the worker.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(tag = "type", rename_all = "snake_case", deny_unknown_fields)]
pub enum FromWorker {
    /// It can hear.
    Ready {
        /// [`PROTOCOL`] of its build.
        protocol: u32,
    },
    /// How far a rehearsal has come.
    Progress {
        /// Of which rehearsal.
        run: u32,
        /// 0 to 1.
        fraction: f64,
        /// What is being worked out.
        what: String,
    },
    /// The text can't be shown.
    Failed {
        /// Of which rehearsal.
        run: u32,
        /// Everything that is wrong.
        problems: Vec<Fault>,
    },
    /// The show is ready; its ephemeris comes beside this message.
    Rehearsed {
        /// Of which rehearsal.
        run: u32,
        /// The fingerprint, as people read it.
        fingerprint: String,
    },
    /// What a text is about.
    Card {
        /// Of which request.
        run: u32,
        /// The facts.
        facts: Facts,
    },
    /// The small picture of a text.
    Picture {
        /// Of which request.
        run: u32,
        /// The picture.
        drawing: Drawing,
    },
}

/// What the start page lists of a show.
#[derive(Debug, Clone, PartialEq, Default, Serialize, Deserialize)]
pub struct Facts {
    /// Its title.
    pub title: String,
    /// One line about it.
    pub summary: String,
    /// For whom it is.
    pub audience: String,
    /// Planned length, seconds.
    pub lasts_s: f64,
}

/// One thing that is wrong with a text.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Fault {
    /// Line, from 1; 0: nowhere in particular.
    pub line: usize,
    /// Column in characters, from 1.
    pub column: usize,
    /// What is wrong.
    pub wrong: String,
    /// What would be right.
    pub remedy: String,
}

impl Fault {
    /// The errors among problems, in the order of the text. Notes don't keep a show from running.
    pub fn errors(problems: &[Problem]) -> Vec<Self> {
        let mut faults: Vec<Self> =
            problems.iter().filter(|p| p.severity == Severity::Error).map(Self::from).collect();
        faults.sort_by_key(|f| (f.line, f.column));
        faults
    }
}

impl From<&Problem> for Fault {
    fn from(problem: &Problem) -> Self {
        Self {
            line: problem.place.line,
            column: problem.place.column,
            wrong: problem.wrong.clone(),
            remedy: problem.remedy.clone(),
        }
    }
}

/// A message that couldn't be written or read.
#[derive(Debug)]
pub struct ProtocolError(String);

impl std::fmt::Display for ProtocolError {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        write!(f, "page and worker don't understand each other: {}", self.0)
    }
}

impl std::error::Error for ProtocolError {}

/// A message as text.
///
/// # Errors
/// When it holds a number that JSON has no form for.
pub fn encode<T: Serialize>(message: &T) -> Result<String, ProtocolError> {
    serde_json::to_string(message).map_err(|error| ProtocolError(error.to_string()))
}

/// A message from its text.
///
/// # Errors
/// When the text isn't a message of this build.
pub fn decode<'a, T: Deserialize<'a>>(text: &'a str) -> Result<T, ProtocolError> {
    serde_json::from_str(text).map_err(|error| ProtocolError(error.to_string()))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn messages_read_back_to_themselves() {
        let sent = ToWorker::Rehearse { run: 7, text: "title = \"<b>Fenn</b>\"\n".into() };
        assert_eq!(decode::<ToWorker>(&encode(&sent).unwrap()).unwrap(), sent);
        let answer = FromWorker::Progress { run: 7, fraction: 0.1 + 0.2, what: "the paths".into() };
        assert_eq!(decode::<FromWorker>(&encode(&answer).unwrap()).unwrap(), answer);
    }

    #[test]
    fn strange_messages_are_refused() {
        assert!(decode::<ToWorker>(r#"{"type":"rehearse","run":1,"text":"","extra":2}"#).is_err());
        assert!(decode::<ToWorker>(r#"{"type":"dance"}"#).is_err());
        assert!(decode::<ToWorker>("").is_err());
    }
}
