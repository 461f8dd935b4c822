//! In which order bodies have to be placed: each after the body that its form names.

use crate::scenario::{BodyId, Form};

/// The body relative to which a form is meant.
pub(super) fn anchor(form: &Form) -> Option<BodyId> {
    match form {
        Form::Origin | Form::Real(_) => None,
        Form::Orbit(orbit) => Some(orbit.around),
        Form::Place(placed) => placed.about,
        Form::Throw(throw) => Some(throw.from),
        Form::Drop(drop) => Some(drop.onto),
    }
}

/// Every body after its anchor, and the circles of bodies that wait for one another, each from its first body on.
pub(super) fn order(anchors: &[Option<BodyId>]) -> (Vec<usize>, Vec<Vec<usize>>) {
    #[derive(Clone, Copy, PartialEq)]
    enum Mark {
        New,
        Open,
        Done,
    }
    let mut marks = vec![Mark::New; anchors.len()];
    let (mut order, mut circles) = (Vec::new(), Vec::new());
    for first in 0..anchors.len() {
        // The chain of anchors up to one that is placed, or to one of its own members.
        let mut chain = Vec::new();
        let mut next = Some(first);
        while let Some(body) = next {
            match marks.get(body) {
                Some(Mark::New) => {
                    marks[body] = Mark::Open;
                    chain.push(body);
                    next = anchors[body].map(|anchor| anchor.0);
                }
                Some(Mark::Open) => {
                    let from = chain.iter().position(|&b| b == body).unwrap_or(0);
                    circles.push(chain[from..].to_vec());
                    next = None;
                }
                _ => next = None,
            }
        }
        for body in chain.into_iter().rev() {
            marks[body] = Mark::Done;
            order.push(body);
        }
    }
    (order, circles)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn ids(anchors: &[Option<usize>]) -> Vec<Option<BodyId>> {
        anchors.iter().map(|a| a.map(BodyId)).collect()
    }

    #[test]
    fn anchors_come_first() {
        assert_eq!(order(&ids(&[Some(2), None, Some(1)])), (vec![1, 2, 0], vec![]));
    }

    #[test]
    fn circles_are_found_once_each() {
        let (order, circles) = order(&ids(&[Some(1), Some(2), Some(1), Some(3), None]));
        assert_eq!(circles, vec![vec![1, 2], vec![3]]);
        assert_eq!(order.len(), 5);
    }
}
