//! Names of bodies, and the word that somebody probably meant.

use super::model::BodyId;

/// The names of the bodies, by their order in the file; "" where a body has no usable one.
#[derive(Debug, Default)]
pub(super) struct Names(pub(super) Vec<String>);

impl Names {
    pub(super) fn find(&self, name: &str) -> Option<BodyId> {
        self.0.iter().position(|n| n == name && !n.is_empty()).map(BodyId)
    }

    pub(super) fn name(&self, id: BodyId) -> &str {
        self.0.get(id.0).map_or("", String::as_str)
    }

    /// The body whose name a text starts with, and what follows. The longest name wins.
    pub(super) fn leading<'t>(&self, text: &'t str) -> Option<(BodyId, &'t str)> {
        let mut best: Option<(BodyId, &'t str)> = None;
        for (index, name) in self.0.iter().enumerate().filter(|(_, n)| !n.is_empty()) {
            let Some(rest) = text.strip_prefix(name.as_str()) else { continue };
            let ends = rest.is_empty() || rest.starts_with(char::is_whitespace);
            if ends && best.is_none_or(|(_, shortest)| rest.len() < shortest.len()) {
                best = Some((BodyId(index), rest));
            }
        }
        best
    }

    /// What to say to somebody who named a body that there isn't.
    pub(super) fn remedy(&self, wrong: &str) -> String {
        let known: Vec<&str> = self.0.iter().map(String::as_str).filter(|n| !n.is_empty()).collect();
        if let Some(near) = nearest(wrong, known.iter().copied()) {
            return format!("perhaps \"{near}\"");
        }
        const SHOWN: usize = 12;
        match known.len() {
            0 => "the file names no body yet".to_owned(),
            1..=SHOWN => format!("the bodies are: {}", known.join(", ")),
            more => format!("the bodies are: {} and {} more", known[..SHOWN].join(", "), more - SHOWN),
        }
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
