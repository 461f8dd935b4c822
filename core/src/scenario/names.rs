//! Names of bodies and swarms, and the word that somebody probably meant.

use super::model::{BodyId, SwarmId};
use crate::units::text::clip;

/// The names in a file, each kind by its order there; "" where one has no usable name.
#[derive(Debug, Default)]
pub(super) struct Names {
    /// Of the bodies.
    pub(super) bodies: Vec<String>,
    /// Which `[[body]]` of the file, from 0, is that of each body: swarms have theirs among them.
    pub(super) sections: Vec<usize>,
    /// Of the swarms.
    pub(super) swarms: Vec<String>,
}

impl Names {
    pub(super) fn find(&self, name: &str) -> Option<BodyId> {
        self.bodies.iter().position(|n| n == name && !n.is_empty()).map(BodyId)
    }

    pub(super) fn find_swarm(&self, name: &str) -> Option<SwarmId> {
        self.swarms.iter().position(|n| n == name && !n.is_empty()).map(SwarmId)
    }

    pub(super) fn name(&self, id: BodyId) -> &str {
        self.bodies.get(id.0).map_or("", String::as_str)
    }

    /// The body whose name a text starts with, and what follows. The longest name wins.
    pub(super) fn leading<'t>(&self, text: &'t str) -> Option<(BodyId, &'t str)> {
        let mut best: Option<(BodyId, &'t str)> = None;
        for (index, name) in self.bodies.iter().enumerate().filter(|(_, n)| !n.is_empty()) {
            let Some(rest) = text.strip_prefix(name.as_str()) else { continue };
            let ends = rest.is_empty() || rest.starts_with(char::is_whitespace);
            if ends && best.is_none_or(|(_, shortest)| rest.len() < shortest.len()) {
                best = Some((BodyId(index), rest));
            }
        }
        best
    }

    /// What is wrong, and what would be right, where somebody named a body that there isn't.
    pub(super) fn no_body(&self, wrong: &str) -> (String, String) {
        if self.find_swarm(wrong).is_some() {
            let remedy = "name a body; a swarm can only stand in a beat's cast".to_owned();
            return (format!("\"{}\" is a swarm, which is in no one place", clip(wrong)), remedy);
        }
        (format!("there is no body \"{}\"", clip(wrong)), remedy(wrong, "the bodies are", &[&self.bodies]))
    }

    /// The same, where a swarm would do as well.
    pub(super) fn no_one(&self, wrong: &str) -> (String, String) {
        let known = [self.bodies.as_slice(), &self.swarms];
        let (what, all) = match self.swarms.is_empty() {
            true => ("body", "the bodies are"),
            false => ("body or swarm", "the bodies and swarms are"),
        };
        (format!("there is no {what} \"{}\"", clip(wrong)), remedy(wrong, all, &known))
    }
}

/// The name that was probably meant, or all that there are.
fn remedy(wrong: &str, all: &str, names: &[&[String]]) -> String {
    let known: Vec<&str> =
        names.iter().flat_map(|n| n.iter()).map(String::as_str).filter(|n| !n.is_empty()).collect();
    if let Some(near) = nearest(wrong, known.iter().copied()) {
        return format!("perhaps \"{near}\"");
    }
    const SHOWN: usize = 12;
    match known.len() {
        0 => "the file names no body yet".to_owned(),
        1..=SHOWN => format!("{all}: {}", known.join(", ")),
        more => format!("{all}: {} and {} more", known[..SHOWN].join(", "), more - SHOWN),
    }
}

/// The candidate nearest to a word, when it is near: about one letter in three may differ.
pub(super) fn nearest<'c>(word: &str, candidates: impl Iterator<Item = &'c str>) -> Option<&'c str> {
    const LONGEST: usize = 60;
    let letters = word.chars().count();
    if letters > LONGEST {
        return None;
    }
    let allowed = (letters / 3).max(1);
    let word = word.to_lowercase();
    candidates
        .map(|c| (strsim::damerau_levenshtein(&word, &c.to_lowercase()), c))
        .filter(|(distance, _)| *distance <= allowed)
        .min_by_key(|(distance, _)| *distance)
        .map(|(_, c)| c)
}
