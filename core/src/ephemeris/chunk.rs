//! Parts of an ephemeris as one flat array of numbers, to be handed from one thread to another.

use super::track::Track;
use super::{Contact, Ephemeris, Outcome, PER_BODY, Switch};
use crate::scenario::BodyId;

/// How far an ephemeris had grown: what a chunk starts from.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub struct Mark {
    forward: usize,
    backward: usize,
    contacts: usize,
    switches: usize,
}

/// What an ephemeris has grown by since a [`Mark`], bit for bit.
///
/// The numbers: how many bodies; forward steps, backward steps, contacts and switches of the mark; how many of each follow; GM of each
/// body at time 0; of the forward and then the backward steps all starts, all lengths, all polynomials; six numbers for each
/// contact, three for each switch.
#[derive(Debug, Clone, PartialEq)]
pub struct Chunk {
    numbers: Vec<f64>,
}

/// Numbers before the GMs.
const HEADER: usize = 9;
/// Numbers of a contact.
const PER_CONTACT: usize = 6;
/// Numbers of a switch.
const PER_SWITCH: usize = 3;

/// Numbers are not a chunk, or not the one that comes next.
#[derive(Debug, Clone, Copy, PartialEq, Eq, thiserror::Error)]
pub enum ChunkError {
    /// Not the numbers of a chunk.
    #[error("these numbers are no part of an ephemeris")]
    Malformed,
    /// A part of another ephemeris, or one before it is missing.
    #[error("this part of an ephemeris doesn't follow what is there")]
    OutOfOrder,
}

impl Chunk {
    /// Its numbers, to be sent.
    pub fn into_numbers(self) -> Vec<f64> {
        self.numbers
    }

    /// From numbers that were sent.
    ///
    /// # Errors
    /// [`ChunkError::Malformed`] when they don't fit together.
    pub fn from_numbers(numbers: Vec<f64>) -> Result<Self, ChunkError> {
        let chunk = Self { numbers };
        chunk.sections().ok_or(ChunkError::Malformed)?;
        Ok(chunk)
    }

    /// Counts of the header, and the parts that follow it.
    fn sections(&self) -> Option<Sections<'_>> {
        let mut counts = [0; HEADER];
        for (count, &number) in counts.iter_mut().zip(self.numbers.get(..HEADER)?) {
            *count = count_from(number)?;
        }
        let [bodies, mark @ .., forward, backward, contacts, switches] = counts;
        let [from_forward, from_backward, from_contacts, from_switches] = mark;
        let width = bodies.checked_mul(PER_BODY)?.checked_add(2)?;
        let mut rest = &self.numbers[HEADER..];
        let mut take = |count: Option<usize>| {
            let (part, tail) = rest.split_at_checked(count?)?;
            rest = tail;
            Some(part)
        };
        let sections = Sections {
            mark: Mark {
                forward: from_forward,
                backward: from_backward,
                contacts: from_contacts,
                switches: from_switches,
            },
            forward_steps: forward,
            backward_steps: backward,
            gms: take(Some(bodies))?,
            forward: take(forward.checked_mul(width))?,
            backward: take(backward.checked_mul(width))?,
            contacts: take(contacts.checked_mul(PER_CONTACT))?,
            switches: take(switches.checked_mul(PER_SWITCH))?,
        };
        rest.is_empty().then_some(sections)
    }
}

struct Sections<'a> {
    mark: Mark,
    forward_steps: usize,
    backward_steps: usize,
    gms: &'a [f64],
    forward: &'a [f64],
    backward: &'a [f64],
    contacts: &'a [f64],
    switches: &'a [f64],
}

impl Ephemeris {
    /// How far it has grown.
    pub fn mark(&self) -> Mark {
        Mark {
            forward: self.forward.len(),
            backward: self.backward.len(),
            contacts: self.contacts.len(),
            switches: self.switches.len(),
        }
    }

    /// What it has grown by since a mark of its own; [`Mark::default`] for all of it.
    pub fn chunk_since(&self, mark: Mark) -> Chunk {
        let contacts = self.contacts.get(mark.contacts..).unwrap_or_default();
        let switches = self.switches.get(mark.switches..).unwrap_or_default();
        let steps = |track: &Track, from: usize| track.len().saturating_sub(from);
        let counts = [
            self.bodies(),
            mark.forward,
            mark.backward,
            mark.contacts,
            mark.switches,
            steps(&self.forward, mark.forward),
            steps(&self.backward, mark.backward),
            contacts.len(),
            switches.len(),
        ];
        let mut numbers: Vec<f64> = counts.iter().map(|&count| number_from(count)).collect();
        numbers.extend_from_slice(&self.gms);
        self.forward.write_since(mark.forward, &mut numbers);
        self.backward.write_since(mark.backward, &mut numbers);
        for contact in contacts {
            numbers.extend([
                contact.t_s,
                number_from(contact.body.0),
                number_from(contact.onto.0),
                match contact.outcome {
                    Outcome::Stopped => 0.0,
                    Outcome::Bounced => 1.0,
                    Outcome::Merged => 2.0,
                },
                contact.speed_m_s,
                contact.onto_gm_m3_s2,
            ]);
        }
        for switch in switches {
            let on = if switch.on { 1.0 } else { 0.0 };
            numbers.extend([switch.t_s, number_from(switch.body.0), on]);
        }
        Chunk { numbers }
    }

    /// Adds a chunk that follows what is there. An ephemeris without bodies takes them over from the first chunk.
    ///
    /// # Errors
    /// [`ChunkError`]; the ephemeris is then as before.
    pub fn append(&mut self, chunk: &Chunk) -> Result<(), ChunkError> {
        let parts = chunk.sections().ok_or(ChunkError::Malformed)?;
        if self.bodies() == 0 && self.mark() == Mark::default() {
            *self = Self::new(parts.gms.to_vec());
        }
        let same = |a: &[f64], b: &[f64]| a.iter().map(|x| x.to_bits()).eq(b.iter().map(|x| x.to_bits()));
        if parts.mark != self.mark() || !same(parts.gms, &self.gms) {
            return Err(ChunkError::OutOfOrder);
        }
        let body = |number: f64| {
            count_from(number).filter(|&body| body < parts.gms.len()).map(BodyId).ok_or(ChunkError::Malformed)
        };
        let mut switches = Vec::new();
        for row in parts.switches.chunks_exact(PER_SWITCH) {
            switches.push(Switch { t_s: row[0], body: body(row[1])?, on: row[2] > 0.0 });
        }
        let mut contacts = Vec::new();
        for row in parts.contacts.chunks_exact(PER_CONTACT) {
            contacts.push(Contact {
                t_s: row[0],
                body: body(row[1])?,
                onto: body(row[2])?,
                outcome: match count_from(row[3]) {
                    Some(0) => Outcome::Stopped,
                    Some(1) => Outcome::Bounced,
                    Some(2) => Outcome::Merged,
                    _ => return Err(ChunkError::Malformed),
                },
                speed_m_s: row[4],
                onto_gm_m3_s2: row[5],
            });
        }
        self.forward.read(parts.forward_steps, parts.forward);
        self.backward.read(parts.backward_steps, parts.backward);
        self.contacts.extend(contacts);
        self.switches.extend(switches);
        Ok(())
    }
}

/// Counts stay far below 2⁵³, where f64 is exact.
#[expect(clippy::cast_precision_loss, reason = "counts of things in memory are exact in f64")]
fn number_from(count: usize) -> f64 {
    count as f64
}

#[expect(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "checked to be a whole number that fits"
)]
fn count_from(number: f64) -> Option<usize> {
    (number >= 0.0 && number <= f64::from(u32::MAX) && number.fract() == 0.0).then_some(number as usize)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn numbers(bodies: usize, salt: f64) -> Vec<f64> {
        (0..bodies * PER_BODY).map(|i| number_from(i) * 0.1 + salt).collect()
    }

    fn grown() -> (Ephemeris, Mark) {
        let mut eph = Ephemeris::new(vec![1.0, 0.0]);
        eph.forward_mut().push(0.0, 2.0, &numbers(2, 0.25));
        let mark = eph.mark();
        eph.forward_mut().push(2.0, 3.0, &numbers(2, f64::NAN));
        eph.backward_mut().push(0.0, -1.0, &numbers(2, 1e300));
        eph.push_contact(Contact {
            t_s: 4.5,
            body: BodyId(1),
            onto: BodyId(0),
            outcome: Outcome::Merged,
            speed_m_s: 0.1,
            onto_gm_m3_s2: 1.0,
        });
        eph.push_switch(Switch { t_s: 2.5, body: BodyId(0), on: false });
        (eph, mark)
    }

    fn bits(eph: &Ephemeris) -> Vec<u64> {
        eph.chunk_since(Mark::default()).into_numbers().iter().map(|x| x.to_bits()).collect()
    }

    #[test]
    fn chunks_put_together_are_the_same_bits() {
        let (eph, mark) = grown();
        let mut early = Ephemeris::new(vec![1.0, 0.0]);
        early.forward_mut().push(0.0, 2.0, &numbers(2, 0.25));
        let mut copy = Ephemeris::default();
        copy.append(&early.chunk_since(Mark::default())).unwrap();
        let sent = Chunk::from_numbers(eph.chunk_since(mark).into_numbers()).unwrap();
        copy.append(&sent).unwrap();
        assert_eq!(bits(&copy), bits(&eph));
        assert_eq!(copy.contacts(), eph.contacts());
        assert_eq!(copy.switches(), eph.switches());
        assert_eq!(copy.append(&sent), Err(ChunkError::OutOfOrder));
        assert_eq!(bits(&copy), bits(&eph), "a refused chunk leaves no trace");
    }

    #[test]
    fn numbers_that_do_not_fit_together_are_refused() {
        let (eph, _) = grown();
        let good = eph.chunk_since(Mark::default()).into_numbers();
        for cut in [0, 3, HEADER, good.len() - 1] {
            assert_eq!(Chunk::from_numbers(good[..cut].to_vec()), Err(ChunkError::Malformed), "cut at {cut}");
        }
        for (at, wrong) in [(0, -1.0), (5, f64::NAN), (5, 1e9), (8, 0.5)] {
            let mut numbers = good.clone();
            numbers[at] = wrong;
            assert_eq!(Chunk::from_numbers(numbers), Err(ChunkError::Malformed), "{wrong} at {at}");
        }
    }
}
