//! Kicks that come to nothing, since what they kick rests on something.

use super::finding::{Finding, Topic, Weight};
use crate::ephemeris::Outcome;
use crate::scenario::ChangeKind;
use crate::show::Show;

/// Looks at every kick that is made in the show.
pub(super) fn check(show: &Show, findings: &mut Vec<Finding>) {
    let stated = &show.scenario.changes;
    let mut told = vec![false; stated.len()];
    for made in show.initial.changes.iter().filter(|made| made.t_s <= show.ephemeris.until_s()) {
        // Which one of the file it is; of those that are alike, any.
        let is_it = |(index, change): (usize, &crate::scenario::Change)| {
            change.body == made.body && change.what == made.what && !told.get(index).copied().unwrap_or(true)
        };
        let Some(index) = stated.iter().enumerate().position(is_it) else { continue };
        if let Some(told) = told.get_mut(index) {
            *told = true;
        }
        let (ChangeKind::Kick(_), Some(contact), Some(change)) =
            (made.what, show.ephemeris.at_rest(made.body, made.t_s), stated.get(index))
        else {
            continue;
        };
        let (body, onto) = (show.initial.name(made.body), show.initial.name(contact.onto));
        let (wrong, remedy) = match contact.outcome {
            Outcome::Merged => (
                format!(
                    "change {} kicks {body}, which is part of {onto} by then: nothing comes of it",
                    index + 1
                ),
                format!("kick {onto}, or kick {body} before they meet"),
            ),
            Outcome::Stopped | Outcome::Bounced => (
                format!(
                    "change {} kicks {body}, which lies on {onto} then, and doesn't lift it off",
                    index + 1
                ),
                format!("kick it away from {onto} (along = \"outwards\"), harder, or before it lands"),
            ),
        };
        findings.push(Finding {
            weight: Weight::Warning,
            topic: Topic::Motion,
            place: change.place,
            wrong,
            remedy,
        });
    }
}
