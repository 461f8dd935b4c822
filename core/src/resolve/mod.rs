//! From what a scenario states to where every body is and how it moves at the start.
//!
//! Each body is placed after the body that its form names; then the solar-system bodies that the file leaves out join
//! as unseen companions where one of its own is `real`; last, all is moved so that the centre of mass of the massive
//! bodies rests at the origin.

pub use crate::initial::{
    Atmosphere, Drag, Forces, InitialBody, InitialState, InitialSwarm, Oblate, TimedChange,
};

use crate::Vector3;
use crate::air::Air;
use crate::ephemeris::State;
use crate::scenario::{self, Body, BodyId, ChangeTime, Form, Place, Problem, RealBody, Scenario, Severity};
use crate::units::Length;

mod draws;
mod forms;
mod order;
pub mod real;
mod shape;
mod sow;
#[cfg(test)]
mod sow_tests;
#[cfg(test)]
mod tests;

use real::{RealError, facts};
use shape::Fault;

/// Where every body of a scenario is and how it moves at the start, and which forces act.
///
/// Distances of a form are from centre to centre; heights are of a body's own centre above the surface. GM in an orbit is
/// that of both bodies together. The coordinates of a `place` without `about` have their origin at the barycentre of the
/// solar system where a body is `real`, and anywhere where none is. Changes that wait for a beat or an event are left out: a
/// rehearsal finds when they are made.
///
/// # Errors
/// Every problem of the bodies at once, each at the place of its `[[body]]`.
pub fn resolve(scenario: &Scenario) -> Result<InitialState, Vec<Problem>> {
    resolve_among(scenario, &Solar::of(scenario))
}

/// The solar system at the date of a scenario, where one of its bodies is `real`. It is integrated to that date, which takes longer
/// than all the rest of resolving; so where one scenario is resolved many times, with other numbers but the same date, it is made
/// once, for [`resolve_among`].
#[derive(Debug, Clone, PartialEq)]
pub struct Solar(Option<Result<[State; 11], RealError>>);

impl Solar {
    /// At the date of a scenario.
    pub fn of(scenario: &Scenario) -> Self {
        let any_real = scenario.bodies.iter().any(|body| real_of(body).is_some());
        Self(scenario.date.filter(|_| any_real).map(real::states))
    }
}

/// As [`resolve`], with the solar system known.
///
/// # Errors
/// As [`resolve`].
pub fn resolve_among(scenario: &Scenario, solar: &Solar) -> Result<InitialState, Vec<Problem>> {
    let bodies = &scenario.bodies;
    let mut problems = Vec::new();
    let solar = solar_states(scenario, solar, &mut problems);
    let states = place_all(bodies, solar, &mut problems);
    let mut initial: Vec<InitialBody> = bodies
        .iter()
        .zip(&states)
        .map(|(body, state)| InitialBody {
            name: body.name.clone(),
            gm_m3_s2: gm(body),
            radius_m: radius(body),
            surface: body.surface,
            primary: order::anchor(&body.form),
            pos: state.map_or_else(Vector3::zeros, |s| s.pos),
            vel: state.map_or_else(Vector3::zeros, |s| s.vel),
        })
        .collect();
    let mut reals: Vec<Option<RealBody>> = bodies.iter().map(real_of).collect();
    if let Some(solar) = solar
        && scenario.physics.companions != Some(false)
    {
        for (&body, state) in real::ALL.iter().zip(solar) {
            if !reals.contains(&Some(body)) {
                initial.push(companion(body, state));
                reals.push(Some(body));
            }
        }
    }
    for (index, real) in reals.iter().enumerate() {
        let primary = match real {
            None | Some(RealBody::Sun) => continue,
            Some(RealBody::Moon) => RealBody::Earth,
            Some(_) => RealBody::Sun,
        };
        initial[index].primary = reals.iter().position(|r| *r == Some(primary)).map(BodyId);
    }
    if problems.is_empty() && scenario.physics.softening.is_none() {
        find_shared_places(&initial, bodies, &mut problems);
    }
    let mut swarms = Vec::new();
    // Of bodies that are nowhere, what goes around them is no further problem.
    if problems.is_empty() {
        for swarm in &scenario.swarms {
            match sow::sow(swarm, &initial, scenario.physics.drag != Some(false)) {
                Ok(sown) => swarms.push(sown),
                Err(Fault { wrong, remedy }) => {
                    problems.push(Problem::error(swarm.place, format!("{}: {wrong}", swarm.name), remedy));
                }
            }
        }
    }
    if problems.iter().any(|p| p.severity == Severity::Error) {
        problems.sort_by_key(|problem| problem.place);
        return Err(problems);
    }
    let forces = forces(scenario, &initial, &reals);
    to_barycentre(&mut initial);
    let stated = vec![None; scenario.changes.len()];
    let changes = timed(scenario, &stated);
    Ok(InitialState { bodies: initial, listed: bodies.len(), forces, changes, swarms })
}

/// The changes of a scenario whose time is known, in the order of time: from the file, or for those that wait for a beat or an event from
/// `found_s`, which has a place for each change of the file (seconds from the scenario's start).
pub fn timed(scenario: &Scenario, found_s: &[Option<f64>]) -> Vec<TimedChange> {
    let known = scenario.changes.iter().zip(found_s).filter_map(|(change, found_s)| {
        let t_s = match change.at {
            ChangeTime::Time(at) => at.s(),
            ChangeTime::Beat { .. } | ChangeTime::Event { .. } => (*found_s)?,
        };
        Some(TimedChange { t_s, body: change.body, what: change.what })
    });
    let mut changes: Vec<TimedChange> = known.collect();
    // Those of the same instant keep the order of the file.
    changes.sort_by(|a, b| a.t_s.total_cmp(&b.t_s));
    changes
}

/// GM of a body: as stated, else the real one's own, else none.
fn gm(body: &Body) -> f64 {
    match (body.gm, real_of(body)) {
        (Some(gm), _) => gm.m3_s2(),
        (None, Some(real)) => facts(real).gm_m3_s2,
        (None, None) => 0.0,
    }
}

/// Radius of a body: as stated, else the real one's own, else that of a point.
fn radius(body: &Body) -> f64 {
    match (body.radius, real_of(body)) {
        (Some(radius), _) => radius.m(),
        (None, Some(real)) => facts(real).radius_m,
        (None, None) => 0.0,
    }
}

fn real_of(body: &Body) -> Option<RealBody> {
    match body.form {
        Form::Real(real) => Some(real),
        _ => None,
    }
}

/// The whole solar system at the scenario's date, where a body is `real`.
fn solar_states<'a>(
    scenario: &Scenario,
    solar: &'a Solar,
    problems: &mut Vec<Problem>,
) -> Option<&'a [State; 11]> {
    let first = scenario.bodies.iter().find(|body| real_of(body).is_some())?;
    let Some(solar) = &solar.0 else {
        problems.push(Problem::error(
            first.place,
            format!("{} is real, and the scenario has no date", first.name),
            "write date = \"2031-03-05T20:00:00Z\", or another day, at the top of the file",
        ));
        return None;
    };
    match solar {
        Ok(states) => Some(states),
        Err(error) => {
            let remedy = match error {
                RealError::OutOfRange => "choose a date from 1900-01-01 to 2100-01-01",
                _ => "choose another date",
            };
            let wrong = format!("{} can't be placed on that date: {error}", first.name);
            problems.push(Problem::error(first.place, wrong, remedy));
            None
        }
    }
}

/// States of all bodies in the file's coordinates; `None` where a problem stands in the way.
fn place_all(
    bodies: &[Body],
    solar: Option<&[State; 11]>,
    problems: &mut Vec<Problem>,
) -> Vec<Option<State>> {
    let anchors: Vec<_> = bodies.iter().map(|body| order::anchor(&body.form)).collect();
    let (order, circles) = order::order(&anchors);
    let mut states: Vec<Option<State>> = vec![None; bodies.len()];
    for circle in &circles {
        problems.push(circle_problem(circle, bodies));
    }
    for index in order {
        if circles.iter().any(|circle| circle.contains(&index)) {
            continue;
        }
        let body = &bodies[index];
        let base = match anchors[index] {
            None => State { pos: Vector3::zeros(), vel: Vector3::zeros() },
            // What its anchor lacks is a problem of the anchor alone.
            Some(anchor) => match states.get(anchor.0).copied().flatten() {
                Some(state) => state,
                None => continue,
            },
        };
        let anchor = anchors[index].and_then(|anchor| bodies.get(anchor.0));
        match relative_state(body, anchor, solar) {
            Ok(Some(state)) => {
                let state = State { pos: base.pos + state.pos, vel: base.vel + state.vel };
                if state.pos.norm().is_finite() && state.vel.norm().is_finite() {
                    states[index] = Some(state);
                } else {
                    problems.push(Problem::error(
                        body.place,
                        format!("{} is too far away, or too fast, to be computed", body.name),
                        "state smaller numbers",
                    ));
                }
            }
            Ok(None) => {}
            Err(Fault { wrong, remedy }) => {
                problems.push(Problem::error(body.place, format!("{}: {wrong}", body.name), remedy));
            }
        }
    }
    states
}

/// State of a body relative to the body that its form names. `None` for a real one without states.
fn relative_state(
    body: &Body,
    anchor: Option<&Body>,
    solar: Option<&[State; 11]>,
) -> Result<Option<State>, Fault> {
    let onto_surface = |verb: &str| match anchor {
        Some(anchor) if radius(anchor) > 0.0 => Ok(radius(anchor)),
        other => Err(Fault {
            wrong: format!(
                "it {verb} {}, which has no radius and so no surface",
                other.map_or("a body", |a| a.name.as_str())
            ),
            remedy: "give that body a radius, or place this one with place".to_owned(),
        }),
    };
    match &body.form {
        Form::Origin => Ok(Some(State { pos: Vector3::zeros(), vel: Vector3::zeros() })),
        Form::Real(real) => {
            let index = real::ALL.iter().position(|r| r == real);
            Ok(index.zip(solar).map(|(index, solar)| solar[index]))
        }
        Form::Place(placed) => Ok(Some(forms::placed(placed))),
        Form::Orbit(orbit) => match anchor {
            Some(anchor) if gm(anchor) > 0.0 => forms::on_orbit(orbit, gm(anchor) + gm(body)).map(Some),
            other => Err(Fault {
                wrong: format!(
                    "it orbits {}, which has no mass and so no gravity",
                    other.map_or("a body", |a| a.name.as_str())
                ),
                remedy: "give that body a mass or gm".to_owned(),
            }),
        },
        Form::Throw(throw) => forms::thrown(throw, onto_surface("is thrown from")?).map(Some),
        Form::Drop(drop) => forms::dropped(drop, onto_surface("is let go above")?).map(Some),
    }
}

fn circle_problem(circle: &[usize], bodies: &[Body]) -> Problem {
    let names: Vec<&str> = circle.iter().map(|&index| bodies[index].name.as_str()).collect();
    let place = circle.first().map_or_else(Place::default, |&index| bodies[index].place);
    match names.as_slice() {
        [name] => Problem::error(place, format!("{name} is placed relative to itself"), "name another body"),
        _ => Problem::error(
            place,
            format!("{} wait for one another: each is placed relative to the next", names.join(", ")),
            "place one of them relative to another body, or at the origin",
        ),
    }
}

fn companion(body: RealBody, state: &State) -> InitialBody {
    let facts = facts(body);
    InitialBody {
        name: facts.name.to_owned(),
        gm_m3_s2: facts.gm_m3_s2,
        radius_m: facts.radius_m,
        surface: scenario::Surface::Stop,
        primary: None,
        pos: state.pos,
        vel: state.vel,
    }
}

/// Two bodies at one point attract each other without bound where one of them has mass.
fn find_shared_places(initial: &[InitialBody], bodies: &[Body], problems: &mut Vec<Problem>) {
    for (j, b) in initial.iter().enumerate() {
        for a in &initial[..j] {
            let apart = (a.pos - b.pos).norm();
            // Closer than the rounding of their places is the same place.
            let rounding = 4.0 * f64::EPSILON * a.pos.norm().max(b.pos.norm());
            if apart <= rounding && (a.gm_m3_s2 > 0.0 || b.gm_m3_s2 > 0.0) {
                let place = bodies.get(j).map_or_else(Place::default, |body| body.place);
                problems.push(Problem::error(
                    place,
                    format!("{} and {} are at the same place", a.name, b.name),
                    "state where one of them is: orbit, place, throw, drop or another real body",
                ));
            }
        }
    }
}

/// The forces beyond Newton's: those that real bodies bring along, unless `[physics]` says otherwise. Oblateness is the
/// Earth's alone.
fn forces(scenario: &Scenario, initial: &[InitialBody], reals: &[Option<RealBody>]) -> Forces {
    let find = |real: RealBody| reals.iter().position(|r| *r == Some(real)).map(BodyId);
    let any_real = reals.iter().any(Option::is_some);
    let relativity = scenario.physics.relativity.unwrap_or(any_real);
    let oblate = match (scenario.physics.oblateness, find(RealBody::Earth), scenario.date) {
        (Some(false), ..) | (_, None, _) | (_, _, None) => Vec::new(),
        (_, Some(earth), Some(date)) => vec![real::earth_bulge(earth, date)],
    };
    let (mut atmospheres, mut drags) = (Vec::new(), Vec::new());
    if scenario.physics.drag != Some(false) {
        for (index, (body, start)) in scenario.bodies.iter().zip(initial).enumerate() {
            let air = body.atmosphere.as_ref().and_then(air);
            atmospheres.extend(air.map(|air| Atmosphere {
                body: BodyId(index),
                radius_m: start.radius_m,
                air,
            }));
            drags.extend(body.drag.map(|drag| Drag {
                body: BodyId(index),
                area_m2_kg: drag.coefficient * drag.area_per_mass.m2_kg(),
            }));
        }
    }
    let softening_m = scenario.physics.softening.map_or(0.0, Length::m);
    Forces { relativity, oblate, atmospheres, drags, softening_m }
}

/// The air that a body states; `None` for a table that is none, which parsing has told.
fn air(stated: &scenario::Atmosphere) -> Option<Air> {
    match stated {
        scenario::Atmosphere::Earth => Some(Air::standard()),
        scenario::Atmosphere::Exponential { surface_density, scale_height } => {
            Some(Air::exponential(surface_density.kg_m3(), scale_height.m()))
        }
        scenario::Atmosphere::Table(rows) => {
            let (heights, densities): (Vec<f64>, Vec<f64>) =
                rows.iter().map(|(height, density)| (height.m(), density.kg_m3())).unzip();
            Air::table(&heights, &densities)
        }
    }
}

/// Moves everything so that the centre of mass of the massive bodies is at rest at the origin.
fn to_barycentre(initial: &mut [InitialBody]) {
    let (mut gm, mut pos, mut vel) = (0.0, Vector3::zeros(), Vector3::zeros());
    for body in initial.iter() {
        gm += body.gm_m3_s2;
        pos += body.pos * body.gm_m3_s2;
        vel += body.vel * body.gm_m3_s2;
    }
    if gm > 0.0 {
        for body in initial {
            body.pos -= pos / gm;
            body.vel -= vel / gm;
        }
    }
}
