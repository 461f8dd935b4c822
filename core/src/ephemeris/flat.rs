//! An ephemeris as one flat array of numbers, to be handed from one thread to another.

use super::track::Track;
use super::{Contact, Ephemeris, Outcome, Release, Switch};
use crate::math::counts::{count_from, number_from, take};
use crate::scenario::BodyId;

/// Numbers before the GMs: how many bodies, contacts, switches and releases.
const HEADER: usize = 4;
/// Numbers of a contact.
const PER_CONTACT: usize = 6;
/// Numbers of a switch.
const PER_SWITCH: usize = 3;
/// Numbers of a release.
const PER_RELEASE: usize = 2;

/// Numbers that were sent don't fit together.
#[derive(Debug, Clone, Copy, PartialEq, Eq, thiserror::Error)]
#[error("these numbers are no part of an ephemeris")]
pub struct Malformed;

impl Ephemeris {
    /// All of it, bit for bit: how many bodies, contacts, switches and releases; GM of each body at time 0; the forward and then the
    /// backward track; six numbers for each contact, three for each switch, two for each release.
    ///
    /// A track: how many steps, its end, its two tolerances, and for each body how many pieces, all starts, all lengths, all polynomials.
    pub fn to_numbers(&self) -> Vec<f64> {
        let rows = PER_CONTACT * self.contacts.len()
            + PER_SWITCH * self.switches.len()
            + PER_RELEASE * self.releases.len();
        let count = HEADER + self.gms.len() + self.forward.written() + self.backward.written() + rows;
        let mut numbers = Vec::with_capacity(count);
        let counts = [self.gms.len(), self.contacts.len(), self.switches.len(), self.releases.len()];
        numbers.extend(counts.map(number_from));
        numbers.extend_from_slice(&self.gms);
        self.forward.write(&mut numbers);
        self.backward.write(&mut numbers);
        for contact in &self.contacts {
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
        for switch in &self.switches {
            let on = if switch.on { 1.0 } else { 0.0 };
            numbers.extend([switch.t_s, number_from(switch.body.0), on]);
        }
        for release in &self.releases {
            numbers.extend([release.t_s, number_from(release.body.0)]);
        }
        numbers
    }

    /// From numbers that [`Ephemeris::to_numbers`] wrote.
    ///
    /// # Errors
    /// [`Malformed`] when they don't fit together.
    pub fn from_numbers(numbers: &[f64]) -> Result<Self, Malformed> {
        read(numbers).ok_or(Malformed)
    }
}

fn read(mut rest: &[f64]) -> Option<Ephemeris> {
    let [bodies, contacts, switches, releases] = *take(&mut rest, HEADER)? else { return None };
    let bodies = count_from(bodies)?;
    let mut ephemeris = Ephemeris::new(take(&mut rest, bodies)?.to_vec());
    ephemeris.forward = Track::read(bodies, 1.0, &mut rest)?;
    ephemeris.backward = Track::read(bodies, -1.0, &mut rest)?;
    let body = |number: f64| count_from(number).filter(|&body| body < bodies).map(BodyId);
    for row in take(&mut rest, count_from(contacts)?.checked_mul(PER_CONTACT)?)?.chunks_exact(PER_CONTACT) {
        ephemeris.contacts.push(Contact {
            t_s: row[0],
            body: body(row[1])?,
            onto: body(row[2])?,
            outcome: match count_from(row[3])? {
                0 => Outcome::Stopped,
                1 => Outcome::Bounced,
                2 => Outcome::Merged,
                _ => return None,
            },
            speed_m_s: row[4],
            onto_gm_m3_s2: row[5],
        });
    }
    for row in take(&mut rest, count_from(switches)?.checked_mul(PER_SWITCH)?)?.chunks_exact(PER_SWITCH) {
        ephemeris.switches.push(Switch { t_s: row[0], body: body(row[1])?, on: row[2] > 0.0 });
    }
    for row in take(&mut rest, count_from(releases)?.checked_mul(PER_RELEASE)?)?.chunks_exact(PER_RELEASE) {
        ephemeris.releases.push(Release { t_s: row[0], body: body(row[1])? });
    }
    rest.is_empty().then_some(ephemeris)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::integrate::PER_BODY;

    fn numbers(bodies: usize, salt: f64) -> Vec<f64> {
        (0..bodies * PER_BODY).map(|i| number_from(i) * 0.1 + salt).collect()
    }

    fn grown() -> Ephemeris {
        let mut eph = Ephemeris::new(vec![1.0, 0.0]);
        eph.forward_mut().push(0.0, 2.0, &numbers(2, 0.25));
        eph.forward_mut().push(2.0, 3.0, &numbers(2, f64::NAN));
        eph.forward_mut().merge(1, 0, 2, &[0.5; PER_BODY]);
        eph.backward_mut().push(0.0, -1.0, &numbers(2, 1e300));
        eph.push_contact(Contact {
            t_s: 4.5,
            body: BodyId(1),
            onto: BodyId(0),
            outcome: Outcome::Merged,
            speed_m_s: 0.1,
            onto_gm_m3_s2: 1.0,
        });
        eph.switches.push(Switch { t_s: 2.5, body: BodyId(0), on: false });
        eph.releases.push(Release { t_s: 4.75, body: BodyId(1) });
        eph
    }

    fn bits(numbers: &[f64]) -> Vec<u64> {
        numbers.iter().map(|x| x.to_bits()).collect()
    }

    #[test]
    fn an_ephemeris_comes_back_bit_for_bit() {
        let eph = grown();
        let sent = eph.to_numbers();
        let copy = Ephemeris::from_numbers(&sent).unwrap();
        assert_eq!(bits(&copy.to_numbers()), bits(&sent));
        assert_eq!(copy.contacts(), eph.contacts());
        assert_eq!(copy.switches(), eph.switches());
        assert_eq!(copy.releases(), eph.releases());
        assert_eq!((copy.from_s(), copy.until_s()), (-1.0, 5.0));
        assert_eq!((copy.forward().len(), copy.forward().pieces(0), copy.forward().pieces(1)), (2, 2, 1));
        assert_eq!(copy.state(BodyId(1), -0.5), eph.state(BodyId(1), -0.5));
    }

    #[test]
    fn numbers_that_do_not_fit_together_are_refused() {
        let good = grown().to_numbers();
        for cut in [0, 2, HEADER, good.len() - 1] {
            assert_eq!(Ephemeris::from_numbers(&good[..cut]), Err(Malformed), "cut at {cut}");
        }
        for (at, wrong) in [(0, -1.0), (0, 3.0), (1, f64::NAN), (2, 0.5), (3, 2.0), (6, 1e10), (10, 1e9)] {
            let mut numbers = good.clone();
            numbers[at] = wrong;
            assert_eq!(Ephemeris::from_numbers(&numbers), Err(Malformed), "{wrong} at {at}");
        }
    }
}
