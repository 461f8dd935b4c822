//! The beats that were left lately, so that the picture can move on from the view that it shows.

/// Show time after which a beat that was left has no part in the picture any more, seconds: the time of a move from
/// one view to the next.
pub const VIEW_MOVE_S: f64 = 1.2;

/// More beats than this are not left within that time by hand.
const MOST: usize = 16;

/// A beat left sooner than this, seconds, has moved the picture by a few thousandths of its way.
const UNSEEN_S: f64 = 0.03;

/// A beat that was left, as it was on show.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Left {
    /// The beat.
    pub beat: usize,
    /// Show time since it was left, seconds.
    pub since_s: f64,
    /// Model time at which its sectors started.
    pub beat_from_s: f64,
    /// Model time at which its trails started.
    pub run_from_s: f64,
}

/// The beats left within [`VIEW_MOVE_S`], the one left longest ago first. Each was left for the one after it, the last
/// one for the beat on show.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Lately {
    left: [Left; MOST],
    len: usize,
}

impl Lately {
    /// The beats, the one left longest ago first.
    pub fn as_slice(&self) -> &[Left] {
        &self.left[..self.len]
    }

    /// A beat is left now.
    pub fn leave(&mut self, beat: usize, beat_from_s: f64, run_from_s: f64) {
        let newest = self.as_slice().last().map_or(f64::INFINITY, |l| l.since_s);
        if newest < UNSEEN_S {
            // The beat that is left now was never looked at: the one before it is left for the next one.
            return;
        }
        if self.len == MOST {
            // With so many moves begun since, next to nothing of the first view is left in the picture.
            self.left.copy_within(1.., 0);
            self.len -= 1;
        }
        self.left[self.len] = Left { beat, since_s: 0.0, beat_from_s, run_from_s };
        self.len += 1;
    }

    /// Lets show time pass, seconds.
    pub fn advance(&mut self, elapsed_s: f64) {
        for left in &mut self.left[..self.len] {
            left.since_s += elapsed_s;
        }
        let over = self.as_slice().iter().take_while(|l| l.since_s >= VIEW_MOVE_S).count();
        self.left.copy_within(over..self.len, 0);
        self.len -= over;
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn beats_are_forgotten_once_the_picture_has_moved_on() {
        let mut lately = Lately::default();
        lately.leave(3, 0.0, 0.0);
        lately.advance(1.0);
        lately.leave(4, 0.0, 0.0);
        lately.advance(0.15);
        assert_eq!(lately.as_slice().iter().map(|l| l.beat).collect::<Vec<_>>(), [3, 4]);
        lately.advance(0.1);
        assert_eq!(lately.as_slice().iter().map(|l| l.beat).collect::<Vec<_>>(), [4]);
        lately.advance(5.0);
        assert!(lately.as_slice().is_empty());
    }

    #[test]
    fn what_nobody_saw_and_what_is_all_but_gone_is_dropped() {
        let mut lately = Lately::default();
        for beat in 0..20 {
            lately.leave(beat, 0.0, 0.0);
            lately.advance(0.05);
        }
        lately.leave(20, 0.0, 0.0);
        lately.advance(0.02);
        lately.leave(21, 0.0, 0.0);
        let beats: Vec<usize> = lately.as_slice().iter().map(|l| l.beat).collect();
        assert_eq!((beats.len(), beats[0], beats[MOST - 1]), (MOST, 5, 20));
    }
}
