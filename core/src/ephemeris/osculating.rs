//! The conic on which a body is at an instant.
//!
//! A planet far out does not go around its star but around the star together with the planets inside its own
//! orbit; measured from the star alone its ellipse and period would swing with those planets. So, unless a centre is
//! named, the conic is taken about the barycentre of the primary and of what goes around inside.

use super::{Ephemeris, State};
use crate::Vector3;
use crate::conic::{self, Elements};
use crate::initial::InitialState;
use crate::scenario::BodyId;

/// A body counts as inside when it is nearer to the primary than this share of the nearest that the outer one comes.
const INSIDE: f64 = 0.8;

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
    let reach_m = INSIDE * first.elements.periapsis_m;
    let (mut gm, mut pos, mut vel) = (star_gm, star.pos * star_gm, star.vel * star_gm);
    for index in 0..ephemeris.bodies() {
        let inner = BodyId(index);
        let inner_gm = ephemeris.gm_m3_s2(inner, t_s);
        if inner == body || inner == primary || inner_gm <= 0.0 {
            continue;
        }
        let state = ephemeris.state(inner, t_s)?;
        if (state.pos - star.pos).norm() < reach_m {
            gm += inner_gm;
            pos += state.pos * inner_gm;
            vel += state.vel * inner_gm;
        }
    }
    if gm <= star_gm {
        return Some(first);
    }
    about_focus(here, own_gm, State { pos: pos / gm, vel: vel / gm }, gm)
}

fn about_focus(here: State, own_gm: f64, focus: State, focus_gm: f64) -> Option<Osculating> {
    let gm_m3_s2 = own_gm + focus_gm;
    let (pos, vel): (Vector3<f64>, Vector3<f64>) = (here.pos - focus.pos, here.vel - focus.vel);
    let elements = conic::elements_from_state(pos, vel, gm_m3_s2).ok()?;
    Some(Osculating { elements, gm_m3_s2, focus })
}
