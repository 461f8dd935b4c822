//! The conic on which a body is at an instant.
//!
//! A planet far out does not go around its star but around the star together with the planets inside its own
//! orbit; measured from the star alone its ellipse and period would swing with those planets. So, unless a centre is
//! named, the conic is taken about the barycentre of the primary and of what goes around inside; and it is that of the
//! body together with its own moons, whose tug would make the Earth's year waver by hours.

use super::{Ephemeris, State};
use crate::Vector3;
use crate::conic::{self, Elements};
use crate::initial::InitialState;
use crate::scenario::BodyId;

/// A body counts as inside when it is nearer to the primary than this share of the nearest that the outer one comes.
const INSIDE: f64 = 0.8;
/// A body counts as a moon when it is nearer to its planet than this share of the nearest that the planet comes to its star.
const MOON: f64 = 0.05;

/// A conic in space and time.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Osculating {
    /// The elements about the focus.
    pub elements: Elements,
    /// GM that belongs to them: of the body and of what it goes around, m³/s².
    pub gm_m3_s2: f64,
    /// The focus that the body goes around: barycentric position and velocity.
    pub focus: State,
}

impl Osculating {
    /// Period of a closed orbit, s.
    pub fn period_s(&self) -> Option<f64> {
        self.elements.period_s(self.gm_m3_s2)
    }
}

/// The conic of a body about another, or, with `about` none, about its primary and all that goes around inside.
///
/// `None` where there is no such conic: no primary, a straight fall, a centre without gravity, a body at rest on another.
///
/// # Source
/// The centre is that of Jacobi coordinates: C. D. Murray and S. F. Dermott, Solar System Dynamics (1999), 9.5.
pub fn osculating(
    ephemeris: &Ephemeris,
    initial: &InitialState,
    body: BodyId,
    about: Option<BodyId>,
    t_s: f64,
) -> Option<Osculating> {
    if ephemeris.at_rest(body, t_s).is_some() {
        return None;
    }
    let here = ephemeris.state(body, t_s)?;
    let own_gm = ephemeris.gm_m3_s2(body, t_s);
    let primary = about.or(initial.bodies.get(body.0)?.primary)?;
    let star = ephemeris.state(primary, t_s)?;
    let star_gm = ephemeris.gm_m3_s2(primary, t_s);
    let first = about_focus(here, own_gm, star, star_gm)?;
    if about.is_some() {
        return Some(first);
    }
    let nearest_m = first.elements.periapsis_m;
    let mut inside = Lump::of(star, star_gm);
    let mut outer = Lump::of(here, own_gm);
    for index in 0..ephemeris.bodies() {
        let other = BodyId(index);
        let gm = ephemeris.gm_m3_s2(other, t_s);
        if other == body || other == primary || gm <= 0.0 {
            continue;
        }
        let state = ephemeris.state(other, t_s)?;
        let is_moon = initial.bodies.get(index).is_some_and(|b| b.primary == Some(body));
        if is_moon && own_gm > 0.0 && (state.pos - here.pos).norm() < MOON * nearest_m {
            outer.add(state, gm);
        } else if (state.pos - star.pos).norm() < INSIDE * nearest_m {
            inside.add(state, gm);
        }
    }
    if inside.parts == 1 && outer.parts == 1 {
        return Some(first);
    }
    about_focus(outer.middle(), outer.gm, inside.middle(), inside.gm)
}

/// Bodies taken together.
struct Lump {
    gm: f64,
    pos: Vector3<f64>,
    vel: Vector3<f64>,
    parts: usize,
}

impl Lump {
    /// Of one body; a tracer counts for its place alone.
    fn of(state: State, gm: f64) -> Self {
        let weight = if gm > 0.0 { gm } else { 1.0 };
        Self { gm, pos: state.pos * weight, vel: state.vel * weight, parts: 1 }
    }

    fn add(&mut self, state: State, gm: f64) {
        self.gm += gm;
        self.pos += state.pos * gm;
        self.vel += state.vel * gm;
        self.parts += 1;
    }

    fn middle(&self) -> State {
        let weight = if self.gm > 0.0 { self.gm } else { 1.0 };
        State { pos: self.pos / weight, vel: self.vel / weight }
    }
}

fn about_focus(here: State, own_gm: f64, focus: State, focus_gm: f64) -> Option<Osculating> {
    let gm_m3_s2 = own_gm + focus_gm;
    let (pos, vel): (Vector3<f64>, Vector3<f64>) = (here.pos - focus.pos, here.vel - focus.vel);
    let elements = conic::elements_from_state(pos, vel, gm_m3_s2).ok()?;
    Some(Osculating { elements, gm_m3_s2, focus })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::show::Rehearsal;

    #[test]
    fn the_year_of_a_planet_does_not_waver_with_its_moon_nor_with_planets_inside() {
        let text = "format = 1\ntitle = \"T\"\ndate = \"2026-12-01\"\n\
            [[body]]\nreal = \"Sun\"\n[[body]]\nreal = \"Earth\"\n[[body]]\nreal = \"Neptune\"\n\
            [[beat]]\ntitle = \"B\"\nclock = { span = \"12 yr\", lasts = \"60 s\" }\nview = { centre = \"Sun\", span = \"3 au\" }\n";
        let show = Rehearsal::whole(text).expect("a show");
        let spread = |body: usize, from_s: f64, until_s: f64| {
            let periods = (0..100).map(|i| {
                let t_s = from_s + f64::from(i) / 100.0 * (until_s - from_s);
                let conic = osculating(&show.ephemeris, &show.initial, BodyId(body), None, t_s);
                conic.and_then(|c| c.period_s()).expect("a period")
            });
            let (least, most) = periods.fold((f64::MAX, 0.0f64), |(a, b), p| (a.min(p), b.max(p)));
            (most - least) / least
        };
        const YEAR_S: f64 = 365.25 * 86_400.0;
        // What is left is the pull of the other planets: for the Earth some 1e-5, for Neptune, next to Uranus, some 1e-3.
        // The Moon alone would make it 8e-4 (12.5 m/s in 29.8 km/s, three times), the Sun's own motion for Neptune 2e-2.
        assert!(spread(1, 0.0, YEAR_S) < 2e-4, "the Earth: {}", spread(1, 0.0, YEAR_S));
        assert!(spread(2, 0.0, 12.0 * YEAR_S) < 4e-3, "Neptune: {}", spread(2, 0.0, 12.0 * YEAR_S));
    }
}
