//! What is wanted, and what a flight misses of it.

use super::wording::{angle_text, length_text, speed_text, time_text};
use crate::ephemeris::osculating::osculating;
use crate::ephemeris::{Ephemeris, State, events};
use crate::initial::InitialState;
use crate::math::counts::number_from;
use crate::math::float::{asin, atan2};
use crate::scenario::{BodyId, EventKind, EventRef, Outcome, Want, Wanted};
use crate::units::{Angle, Length, Speed, number};
use std::f64::consts::PI;

/// An event nearer to the start than this is the start itself, s.
const START_S: f64 = 1e-3;

/// What is allowed of a time, s.
const TIME_S: f64 = 1.0;
/// What is allowed of a distance: a part of it, and at least so many metres.
const PART: f64 = 1e-6;
const LENGTH_M: f64 = 1.0;
/// What is allowed of a speed at least, m/s; else a part of it.
const SPEED_M_S: f64 = 1e-3;
/// What is allowed of an angle, rad: 0.04 arcsec.
const ANGLE_RAD: f64 = 2e-7;

/// By how much an outcome is missed.
#[derive(Debug, Clone, PartialEq)]
pub struct Miss {
    /// Of what: "distance at closest-approach of Pell to Brae".
    pub what: String,
    /// What is wanted, with its unit.
    pub wanted: String,
    /// What comes out, with its unit.
    pub got: String,
    /// How far off that is, with its unit.
    pub off: String,
    /// The difference by what is allowed; met within -1 to 1.
    pub share: f64,
    /// The difference by the size of what is wanted: what the search makes small. That of a distance has three parts, so
    /// that the search sees which way to go: the length alone is a cone, on whose slope steps zigzag.
    pub(super) residual: Vec<f64>,
}

impl Miss {
    /// Whether the outcome is met.
    pub fn is_met(&self) -> bool {
        self.share.abs() <= 1.0
    }
}

/// One body relative to another at the instant of which something is wanted.
#[derive(Debug, Clone)]
pub(super) struct Moment {
    pub(super) body: BodyId,
    pub(super) about: BodyId,
    pub(super) t_s: f64,
    /// Before what a contact does.
    pub(super) state: State,
    /// Of an event: what kind.
    pub(super) kind: Option<EventKind>,
    /// Whether a contact is wanted.
    pub(super) contact: bool,
    /// Whether it stands for an event that didn't come about.
    pub(super) missed: bool,
}

impl Moment {
    /// Whether a contact is wanted and comes about. Then nothing is missed by the distance that is compared where none does.
    pub(super) const fn touches(&self) -> bool {
        self.contact && !self.missed
    }
}

/// A flight as outcomes see it.
pub(super) struct View<'a> {
    pub(super) initial: &'a InitialState,
    pub(super) ephemeris: &'a Ephemeris,
    /// The size of the scene, m: by it distances are compared with times and angles.
    pub(super) scene_m: f64,
}

impl View<'_> {
    /// Adds what one want misses.
    ///
    /// # Errors
    /// Why there is nothing to compare.
    pub(super) fn compare(&self, want: &Want, misses: &mut Vec<Miss>) -> Result<(), String> {
        match want.of {
            Wanted::Event { event, until } => self.compare_event(want, event, until.s(), misses),
            Wanted::Instant { body, about, at } => {
                let about = about.or(self.primary(body));
                let of = match about {
                    Some(about) => format!("{} and {}", self.initial.name(body), self.initial.name(about)),
                    None => self.initial.name(body).to_owned(),
                };
                let state = self.relative(body, about, at.s())?;
                for outcome in &want.outcomes {
                    let allowed = allowed(want, *outcome);
                    let ratio = || self.period_s(body, at.s()).zip(self.period_s(about?, at.s()));
                    match *outcome {
                        Outcome::PeriodRatio(wanted) => {
                            let (a, b) = ratio().ok_or_else(|| format!("{of} have not both a period"))?;
                            misses.push(plain(format!("period-ratio of {of}"), a / b, wanted, allowed));
                        }
                        other => misses.extend(self.state_miss(other, allowed, &format!("of {of}"), state)),
                    }
                }
                Ok(())
            }
        }
    }

    fn compare_event(
        &self,
        want: &Want,
        event: EventRef,
        until_s: f64,
        misses: &mut Vec<Miss>,
    ) -> Result<(), String> {
        let of = event.said(|body| self.initial.name(body));
        if let [Outcome::Count(wanted)] = want.outcomes[..] {
            let allowed = allowed(want, Outcome::Count(wanted));
            let found = self.events(&event, until_s);
            misses.push(plain(
                format!("count of {of}"),
                number_from(found.len()),
                number_from(wanted),
                allowed,
            ));
            return Ok(());
        }
        let Some(moment) = self.moment(want)? else { return Ok(()) };
        let mut own = Vec::new();
        for outcome in &self.outcomes(want, &moment) {
            let allowed = allowed(want, *outcome);
            match *outcome {
                Outcome::At(at) => own.push(Miss {
                    what: format!("time of {of}"),
                    wanted: time_text(at.s()),
                    got: time_text(moment.t_s),
                    off: time_text((moment.t_s - at.s()).abs()),
                    share: (moment.t_s - at.s()) / allowed,
                    residual: vec![(moment.t_s - at.s()) / at.s()],
                }),
                other => own.extend(self.state_miss(other, allowed, &format!("at {of}"), moment.state)),
            }
        }
        if let (Some(miss), true) = (own.last_mut(), moment.touches()) {
            miss.residual.extend([0.0; 3]);
        }
        if !moment.missed {
            misses.append(&mut own);
            return Ok(());
        }
        // There is one miss: that of the event. How far off is told by the gap, or by the distance where one is compared.
        let distance = own.iter().find(|miss| miss.what.starts_with("distance"));
        let (off, share) = match distance.or(own.first()) {
            _ if moment.contact => {
                (length_text(moment.state.pos.norm() - self.reach_m(&moment)), f64::INFINITY)
            }
            Some(miss) => (miss.off.clone(), miss.share.abs().max(2.0)),
            None => return Ok(()),
        };
        misses.push(Miss {
            what: format!("no {of} within {}", time_text(until_s)),
            wanted: "one".to_owned(),
            got: "none".to_owned(),
            off,
            share,
            residual: own.iter().flat_map(|miss| miss.residual.iter().copied()).collect(),
        });
        Ok(())
    }

    /// The distance of centres at which two bodies touch, m.
    fn reach_m(&self, moment: &Moment) -> f64 {
        let radius_m = |body: BodyId| self.initial.bodies.get(body.0).map_or(0.0, |body| body.radius_m);
        radius_m(moment.body) + radius_m(moment.about)
    }

    /// What is compared at a moment: the outcomes wanted, and where a contact doesn't come about, the distance of the centres. (A search
    /// for the surface itself would end at paths that just don't touch it.)
    pub(super) fn outcomes(&self, want: &Want, moment: &Moment) -> Vec<Outcome> {
        let mut outcomes = want.outcomes.clone();
        if moment.missed && moment.contact {
            outcomes.push(Outcome::Distance(Length::from_m(0.0)));
        }
        outcomes
    }

    /// The events of a kind after the start.
    fn events(&self, event: &EventRef, until_s: f64) -> Vec<events::Event> {
        let mut found = events::find(self.ephemeris, self.initial, &event.into(), 0.0, until_s);
        found.retain(|e| e.t_s > START_S);
        found
    }

    /// The event of which something is wanted, if it comes about.
    fn meant(&self, want: &Want, event: &EventRef, until_s: f64) -> Option<events::Event> {
        let found = self.events(event, until_s);
        let at_s = want.outcomes.iter().find_map(|outcome| match outcome {
            Outcome::At(at) => Some(at.s()),
            _ => None,
        });
        let meant = match at_s {
            Some(at_s) if event.nth == 1 => {
                found.iter().min_by(|a, b| (a.t_s - at_s).abs().total_cmp(&(b.t_s - at_s).abs()))
            }
            _ => found.get(event.nth - 1),
        };
        meant.copied()
    }

    /// The instant of which something is wanted; `None` for a count, which is of none.
    ///
    /// Where an event doesn't come about, it is the one that turns into the event as paths come nearer to it: of a contact the nearest
    /// passage, of an apsis or a passage the end of the search, which it is still before.
    ///
    /// # Errors
    /// Why there is no such instant.
    pub(super) fn moment(&self, want: &Want) -> Result<Option<Moment>, String> {
        let primary = |body: BodyId| {
            self.primary(body).ok_or_else(|| format!("{} has no primary", self.initial.name(body)))
        };
        let (event, until_s) = match want.of {
            Wanted::Event { event, until } => (event, until.s()),
            Wanted::Instant { body, about, at } => {
                let about = about.map_or_else(|| primary(body), Ok)?;
                let state = self.relative(body, Some(about), at.s())?;
                let (t_s, kind) = (at.s(), None);
                return Ok(Some(Moment { body, about, t_s, state, kind, contact: false, missed: false }));
            }
        };
        if matches!(want.outcomes[..], [Outcome::Count(_)]) {
            return Ok(None);
        }
        let body = event.body;
        let contact = event.kind == EventKind::Contact;
        if let Some(meant) = self.meant(want, &event, until_s) {
            let about = event.other.or(meant.other).map_or_else(|| primary(body), Ok)?;
            let before_s = if contact { meant.t_s.next_down() } else { meant.t_s };
            let state = self.relative(body, Some(about), before_s)?;
            let (t_s, kind) = (meant.t_s, Some(event.kind));
            return Ok(Some(Moment { body, about, t_s, state, kind, contact, missed: false }));
        }
        let turns = matches!(
            event.kind,
            EventKind::Contact | EventKind::ClosestApproach | EventKind::Periapsis | EventKind::Apoapsis
        );
        if !turns || event.nth > 1 {
            let of = event.said(|body| self.initial.name(body));
            return Err(format!("no {of} within {}", time_text(until_s)));
        }
        let about = event.other.map_or_else(|| primary(body), Ok)?;
        let end = Moment {
            body,
            about,
            t_s: until_s,
            state: self.relative(body, Some(about), until_s)?,
            kind: None,
            contact,
            missed: true,
        };
        if !contact {
            return Ok(Some(end));
        }
        let passage = events::Query::new(EventKind::ClosestApproach, body, Some(about));
        let passages = events::find(self.ephemeris, self.initial, &passage, 0.0, until_s);
        let nearest = passages.iter().min_by(|a, b| a.value.total_cmp(&b.value));
        Ok(Some(match nearest.filter(|nearest| nearest.value < end.state.pos.norm()) {
            None => end,
            Some(nearest) => Moment {
                t_s: nearest.t_s,
                state: self.relative(body, Some(about), nearest.t_s)?,
                kind: Some(EventKind::ClosestApproach),
                ..end
            },
        }))
    }

    /// By how much an outcome of position and velocity is missed.
    fn state_miss(&self, outcome: Outcome, allowed: f64, of: &str, state: State) -> Option<Miss> {
        Some(match outcome {
            Outcome::Distance(wanted) => {
                let (got, wanted) = (state.pos.norm(), wanted.m());
                Miss {
                    what: format!("distance {of}"),
                    wanted: length_text(wanted),
                    got: length_text(got),
                    off: length_text((got - wanted).abs()),
                    share: (got - wanted) / allowed,
                    residual: (state.pos * ((got - wanted) / got / self.scene_m)).iter().copied().collect(),
                }
            }
            Outcome::Speed(wanted) => {
                let (got, wanted) = (state.vel.norm(), wanted.m_s());
                Miss {
                    what: format!("speed {of}"),
                    wanted: speed_text(wanted),
                    got: speed_text(got),
                    off: speed_text((got - wanted).abs()),
                    share: (got - wanted) / allowed,
                    residual: vec![(got - wanted) / speed_size(Speed::from_m_s(wanted))],
                }
            }
            Outcome::Longitude(wanted) => {
                angle_miss(format!("longitude {of}"), atan2(state.pos.y, state.pos.x), wanted, allowed)
            }
            Outcome::Latitude(wanted) => {
                let sine = (state.pos.z / state.pos.norm()).clamp(-1.0, 1.0);
                angle_miss(format!("latitude {of}"), asin(sine), wanted, allowed)
            }
            Outcome::At(_) | Outcome::PeriodRatio(_) | Outcome::Count(_) => return None,
        })
    }

    fn relative(&self, body: BodyId, about: Option<BodyId>, t_s: f64) -> Result<State, String> {
        let about = about.ok_or_else(|| format!("{} has no primary", self.initial.name(body)))?;
        let state = self.ephemeris.relative(body, about, t_s);
        state.ok_or_else(|| format!("{} is not known at that time", self.initial.name(body)))
    }

    fn period_s(&self, body: BodyId, t_s: f64) -> Option<f64> {
        osculating(self.ephemeris, self.initial, body, None, t_s)?.period_s()
    }

    fn primary(&self, body: BodyId) -> Option<BodyId> {
        self.initial.bodies.get(body.0)?.primary
    }
}

/// How far off an outcome may be, SI: as stated, or so little that nobody sees it.
fn allowed(want: &Want, outcome: Outcome) -> f64 {
    want.within.unwrap_or(match outcome {
        Outcome::At(_) => TIME_S,
        Outcome::Distance(wanted) => (PART * wanted.m()).max(LENGTH_M),
        Outcome::Speed(wanted) => (PART * wanted.m_s()).max(SPEED_M_S),
        Outcome::Longitude(_) | Outcome::Latitude(_) => ANGLE_RAD,
        Outcome::PeriodRatio(wanted) => PART * wanted,
        // Half an event: whole numbers are met or not.
        Outcome::Count(_) => 0.5,
    })
}

/// By what differences of a speed are divided to be compared with others, m/s.
pub(super) fn speed_size(wanted: Speed) -> f64 {
    wanted.m_s().max(SPEED_M_S / PART)
}

fn angle_miss(what: String, got_rad: f64, wanted: Angle, allowed: f64) -> Miss {
    // The shorter way round.
    let off = (got_rad - wanted.rad() + PI).rem_euclid(2.0 * PI) - PI;
    Miss {
        what,
        wanted: angle_text(wanted.rad()),
        got: angle_text(wanted.rad() + off),
        off: angle_text(off.abs()),
        share: off / allowed,
        residual: vec![off],
    }
}

/// A miss of numbers without unit.
fn plain(what: String, got: f64, wanted: f64, allowed: f64) -> Miss {
    Miss {
        what,
        wanted: number::shortest(wanted),
        got: number::with_digits(got, 8),
        off: number::with_digits((got - wanted).abs(), 3),
        share: (got - wanted) / allowed,
        residual: vec![(got - wanted) / wanted.max(1.0)],
    }
}
