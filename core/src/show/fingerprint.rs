//! The proof that two laptops hold the same rehearsed show.

use super::Show;
use crate::ephemeris::{Outcome, Track};
use sha2::{Digest, Sha256};
use std::fmt;

/// Digest of a rehearsed show: of its text, its plan and every number of its ephemeris.
///
/// It reads as two groups of four letters and digits, "7K4Q M2D9", in the alphabet of D. Crockford's Base 32,
/// which leaves out I, L, O and U. These 40 bits tell a changed file or a differing machine; they are no seal
/// against someone who wants to deceive.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Fingerprint([u8; 32]);

const ALPHABET: &[u8; 32] = b"0123456789ABCDEFGHJKMNPQRSTVWXYZ";

impl Fingerprint {
    /// Of a show and the text that it was made from. How lines end in the text, and a byte-order mark, don't matter.
    pub fn of(text: &str, show: &Show) -> Self {
        let mut hash = Sha256::new();
        hash.update(b"fallaround 1\n");
        let text = text.strip_prefix('\u{feff}').unwrap_or(text).replace("\r\n", "\n");
        put_count(&mut hash, text.len());
        hash.update(text.as_bytes());
        put_count(&mut hash, show.plan.beats.len());
        for beat in &show.plan.beats {
            put(&mut hash, &[beat.show_s, beat.lasts_s, beat.from_s, beat.until_s, beat.pace]);
            if let Some(cue) = &beat.cue {
                put(&mut hash, &[cue.at_s, cue.model_s]);
            }
        }
        put(&mut hash, &[show.plan.covers_from_s, show.plan.covers_until_s]);
        put_track(&mut hash, show.ephemeris.forward(), show.ephemeris.bodies());
        put_track(&mut hash, show.ephemeris.backward(), show.ephemeris.bodies());
        put_count(&mut hash, show.ephemeris.contacts().len());
        for contact in show.ephemeris.contacts() {
            put_count(&mut hash, contact.body.0);
            put_count(&mut hash, contact.onto.0);
            let outcome = match contact.outcome {
                Outcome::Stopped => 0,
                Outcome::Bounced => 1,
                Outcome::Merged => 2,
            };
            put_count(&mut hash, outcome);
            put(&mut hash, &[contact.t_s, contact.speed_m_s, contact.onto_gm_m3_s2]);
        }
        put_count(&mut hash, show.ephemeris.releases().len());
        for release in show.ephemeris.releases() {
            put_count(&mut hash, release.body.0);
            put(&mut hash, &[release.t_s]);
        }
        for swarm in &show.swarms {
            let numbers = swarm.to_numbers();
            put_count(&mut hash, numbers.len());
            put(&mut hash, &numbers);
        }
        Self(hash.finalize().into())
    }

    /// All 256 bits, in hexadecimal digits.
    pub fn hex(&self) -> String {
        self.0.iter().map(|byte| format!("{byte:02x}")).collect()
    }
}

impl fmt::Display for Fingerprint {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let bits = self.0.iter().take(5).fold(0u64, |bits, byte| bits << 8 | u64::from(*byte));
        for group in 0..8u32 {
            if group == 4 {
                f.write_str(" ")?;
            }
            let five = bits >> (35 - 5 * group) & 31;
            let letter = ALPHABET
                .iter()
                .zip(0u64..)
                .find(|(_, value)| *value == five)
                .map_or('0', |(l, _)| char::from(*l));
            write!(f, "{letter}")?;
        }
        Ok(())
    }
}

fn put_track(hash: &mut Sha256, track: &Track, bodies: usize) {
    for body in 0..bodies {
        put_count(hash, track.pieces(body));
        for piece in (0..track.pieces(body)).filter_map(|index| track.piece(body, index)) {
            put(hash, &[piece.start_s, piece.step_s]);
            put(hash, piece.numbers);
        }
    }
    put(hash, &track.long_numbers());
}

fn put(hash: &mut Sha256, numbers: &[f64]) {
    for number in numbers {
        hash.update(number.to_bits().to_le_bytes());
    }
}

fn put_count(hash: &mut Sha256, count: usize) {
    // The same eight bytes where addresses have 32 bits.
    hash.update(u64::try_from(count).unwrap_or(u64::MAX).to_le_bytes());
}
