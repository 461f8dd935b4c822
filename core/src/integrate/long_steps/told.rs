//! Long steps in whole sentences: what they are, what they leave out, and why they can't be made.

use super::super::wisdom_holman::{NEAR_HILL_RADII, STEPS_PER_PERIAPSIS, Trouble};
use super::{Choice, Members};
use crate::constants::{ARCSEC_RAD, C_M_S, DAY_S, YEAR_S};
use crate::initial::InitialState;
use crate::units::number::grouped;

/// What to tell about long steps of a scenario over so many seconds, in whole sentences.
pub fn describe(initial: &InitialState, choice: &Choice, span_s: f64) -> Vec<String> {
    let name = initial.bodies.get(choice.centre).map_or("", |body| body.name.as_str());
    let mut sentences = vec![format!(
        "Long steps of {} about {name} (Wisdom-Holman with corrector): the energy stays within {:.0e} of itself, and places within {} as seen from {name} after {}.",
        time(choice.step_s),
        choice.energy_error,
        angle(choice.angle_error_rad(span_s)),
        time(span_s.abs()),
    )];
    let members = Members::at_start(initial);
    for &(moon, host) in &members.united {
        sentences.push(format!(
            "{} and {}, which is not shown, go as one.",
            initial.bodies[host].name, initial.bodies[moon].name
        ));
    }
    if let Some(centre) = members.bodies.iter().position(|body| *body == choice.centre) {
        sentences.extend(
            left_out(initial, &members, centre)
                .into_iter()
                .map(|LeftOut { what, share }| format!("{what} is left out: some {share:.0e} of the pull.")),
        );
    }
    sentences
}

/// A force that long steps leave out.
pub(super) struct LeftOut {
    /// What it is, as the start of a sentence.
    pub(super) what: String,
    /// How much of the pull it is, near the nearest body.
    pub(super) share: f64,
}

/// The forces that are left out.
pub(super) fn left_out(initial: &InitialState, members: &Members, centre: usize) -> Vec<LeftOut> {
    let mut found = Vec::new();
    let name = |place: usize| initial.bodies[members.bodies[place]].name.as_str();
    let nearest = |to: usize| {
        let others = (0..members.bodies.len()).filter(|&other| other != to);
        others.map(|other| (members.pos_of(other) - members.pos_of(to)).norm()).fold(f64::INFINITY, f64::min)
    };
    for oblate in &initial.forces.oblate {
        let Some(place) = members.bodies.iter().position(|body| *body == oblate.body.0) else { continue };
        let flat = oblate.radius_m / nearest(place);
        found.push(LeftOut {
            what: format!("The bulge of {}", name(place)),
            share: 1.5 * oblate.j2 * flat * flat,
        });
    }
    if initial.forces.relativity {
        let heaviest = (0..members.gms.len())
            .filter(|&place| place != centre)
            .map(|place| members.gms[place])
            .fold(0.0, f64::max);
        found.push(LeftOut {
            what: format!("Relativity but for that of {}", name(centre)),
            share: heaviest / (C_M_S * C_M_S * nearest(centre)),
        });
    }
    found
}

/// Why they can't be made, from what stopped them.
pub(super) fn tell(initial: &InitialState, members: &Members, centre: usize, trouble: Trouble) -> String {
    let name = |place: usize| initial.bodies[members.bodies[place]].name.as_str();
    match trouble {
        Trouble::Near { bodies: [a, b] } => format!(
            "{} and {} come within {NEAR_HILL_RADII:.0} Hill radii of each other, too near for long steps.",
            name(a),
            name(b)
        ),
        Trouble::Steep { body } => format!(
            "{} comes so near to {} that fewer than {STEPS_PER_PERIAPSIS:.0} long steps would go round there.",
            name(body),
            name(centre)
        ),
        Trouble::Lost { body } => format!("{} falls into {}.", name(body), name(centre)),
    }
}

/// A time for people.
pub fn time(t_s: f64) -> String {
    if t_s >= 2.0 * YEAR_S {
        format!("{} yr", grouped((t_s / YEAR_S).round()))
    } else if t_s >= DAY_S {
        format!("{:.2} d", t_s / DAY_S)
    } else {
        format!("{t_s:.0} s")
    }
}

fn angle(rad: f64) -> String {
    let arcsec = rad / ARCSEC_RAD;
    if arcsec < 0.1 {
        format!("{arcsec:.0e} arcsec")
    } else if arcsec < 100.0 {
        format!("{arcsec:.1} arcsec")
    } else if arcsec < 6_000.0 {
        format!("{:.1} arcmin", arcsec / 60.0)
    } else if arcsec < 360_000.0 {
        format!("{:.1} deg", arcsec / 3600.0)
    } else {
        "nothing (they are lost)".to_owned()
    }
}
