//! Free numbers set in a scenario that has been read: for what needs many starts and no text.

use crate::scenario::{Body, Form, Free, OrbitNow, Scenario};
use crate::units::{Angle, Gm, Length, Span, Speed};

/// Sets a free number, SI. A number that the body's form doesn't have changes nothing.
pub(super) fn put(scenario: &mut Scenario, free: &Free, si: f64) {
    let Some(body) = scenario.bodies.get_mut(free.body.0) else { return };
    let [first, rest @ ..] = free.keys.as_slice() else { return };
    match (*first, &mut body.form) {
        ("mass", _) => body.gm = Some(Gm::from_m3_s2(si)),
        ("orbit" | "place" | "throw" | "drop", _) => put_in_form(body, rest, si),
        _ => {}
    }
}

fn put_in_form(body: &mut Body, keys: &[&str], si: f64) {
    match (&mut body.form, keys) {
        (Form::Orbit(orbit), ["periapsis"]) => orbit.periapsis = Some(Length::from_m(si)),
        (Form::Orbit(orbit), ["apoapsis"]) => orbit.apoapsis = Some(Length::from_m(si)),
        (Form::Orbit(orbit), ["semi-major"]) => orbit.semi_major = Some(Length::from_m(si)),
        (Form::Orbit(orbit), ["period"]) => orbit.period = Some(Span::from_s(si)),
        (Form::Orbit(orbit), ["eccentricity"]) => orbit.eccentricity = Some(si),
        (Form::Orbit(orbit), ["inclination"]) => orbit.inclination = Angle::from_rad(si),
        (Form::Orbit(orbit), ["node"]) => orbit.node = Angle::from_rad(si),
        (Form::Orbit(orbit), ["argument"]) => orbit.argument = Angle::from_rad(si),
        (Form::Orbit(orbit), ["anomaly"]) => orbit.now = OrbitNow::Anomaly(Angle::from_rad(si)),
        (Form::Orbit(orbit), ["mean-anomaly"]) => orbit.now = OrbitNow::MeanAnomaly(Angle::from_rad(si)),
        (Form::Orbit(orbit), ["before-periapsis"]) => {
            orbit.now = OrbitNow::AfterPeriapsis(Span::from_s(-si));
        }
        (Form::Orbit(orbit), ["after-periapsis"]) => orbit.now = OrbitNow::AfterPeriapsis(Span::from_s(si)),
        (Form::Place(placed), ["position", axis]) => {
            if let Some(slot) = axis.parse().ok().and_then(|axis: usize| placed.position.get_mut(axis)) {
                *slot = Length::from_m(si);
            }
        }
        (Form::Place(placed), ["velocity", axis]) => {
            if let Some(slot) = axis.parse().ok().and_then(|axis: usize| placed.velocity.get_mut(axis)) {
                *slot = Speed::from_m_s(si);
            }
        }
        (Form::Throw(throw), ["height"]) => throw.height = Length::from_m(si),
        (Form::Throw(throw), ["speed"]) => throw.speed = Speed::from_m_s(si),
        (Form::Throw(throw), ["elevation"]) => throw.elevation = Angle::from_rad(si),
        (Form::Throw(throw), ["heading"]) => throw.heading = Angle::from_rad(si),
        (Form::Throw(throw), ["latitude"]) => throw.latitude = Angle::from_rad(si),
        (Form::Throw(throw), ["longitude"]) => throw.longitude = Angle::from_rad(si),
        (Form::Drop(drop), ["height"]) => drop.height = Length::from_m(si),
        (Form::Drop(drop), ["latitude"]) => drop.latitude = Angle::from_rad(si),
        (Form::Drop(drop), ["longitude"]) => drop.longitude = Angle::from_rad(si),
        _ => {}
    }
}

#[cfg(test)]
mod tests {
    use super::super::trial::Trial;
    use super::*;
    use crate::resolve::Solar;
    use crate::scenario::edit::Document;
    use crate::scenario::{Aim, BodyId, Measure, Place, QUANTITIES};

    #[test]
    fn what_is_put_is_what_the_text_would_have_said() {
        for (name, keys, measure) in QUANTITIES {
            let form = match keys {
                ["orbit", key @ ("apoapsis" | "semi-major")] => {
                    format!("orbit = {{ around = \"Orla\", {key} = \"1 au\", eccentricity = 0.3 }}")
                }
                ["orbit", "period"] => {
                    "orbit = { around = \"Orla\", period = \"1 yr\", eccentricity = 0.3 }".to_owned()
                }
                ["place", ..] => "place = { about = \"Orla\", position = [\"1 km\", \"2 km\", \"3 km\"], velocity = [\"1 km/s\", \"2 km/s\", \"3 km/s\"] }".to_owned(),
                ["throw", ..] => "throw = { from = \"Orla\", speed = \"1 km/s\" }".to_owned(),
                ["drop", ..] => "drop = { onto = \"Orla\", height = \"1 km\" }".to_owned(),
                _ => "orbit = { around = \"Orla\", periapsis = \"1 au\", eccentricity = 0.3 }".to_owned(),
            };
            let text = format!(
                "format = 1\ntitle = \"T\"\n[[body]]\nname = \"Orla\"\nmass = \"1 Sun mass\"\nradius = \"7e5 km\"\n[[body]]\nname = \"Pell\"\n{form}\n"
            );
            let document = Document::parse(&text).unwrap();
            let mut scenario = document.scenario().scenario.unwrap();
            let (unit, from, to) = match measure {
                Measure::Length => ("m", 2e11, 3e11),
                Measure::Speed => ("m/s", 2e3, 5e3),
                Measure::Angle => ("rad", 0.2, 0.3),
                Measure::Span => ("s", 2e7, 3e7),
                Measure::Mass => ("kg", 2e14, 3e14),
                Measure::Number => ("", 0.2, 0.4),
            };
            let unit = unit.to_owned();
            let free = Free { body: BodyId(1), section: 1, keys: keys.to_vec(), measure, from, to, unit };
            let aim = Aim { want: Vec::new(), free: vec![free], place: Place::default() };
            let solar = Solar::of(&scenario);
            let trial = Trial { document: &document, aim: &aim, solar: &solar, scene_m: 1.0 };
            let written = trial.written(&[1.0], None).unwrap().scenario().scenario.unwrap();
            assert_ne!(written.bodies[1], scenario.bodies[1], "{name}");
            put(&mut scenario, &aim.free[0], to);
            // Through text, the last digits of a mass are those of the constant of gravity.
            if measure == Measure::Mass {
                let [put, said] = [&scenario, &written].map(|s| s.bodies[1].gm.unwrap().m3_s2());
                assert!((put - said).abs() < 1e-14 * said, "put {put}, said {said}");
            } else {
                assert_eq!(written.bodies[1], scenario.bodies[1], "{name}");
            }
        }
    }
}
