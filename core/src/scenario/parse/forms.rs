//! The forms: how a body comes to be there.

use super::super::grammar;
use super::super::model::{Drop, Form, Kind, Orbit, OrbitNow, Placed, RealBody, Throw};
use super::super::names::{Names, nearest};
use super::super::reader::{Field, Reading};
use super::bodies::{Needs, Relation};
use crate::math::float;
use crate::units::{Angle, Length, Span, Speed, text::clip};
use std::f64::consts::FRAC_PI_2;

/// Reads the form behind one of the keys [`grammar::FORMS`].
pub(super) fn read(field: &Field<'_>, names: &Names) -> Option<(Form, Option<Relation>)> {
    match field.name() {
        "real" => real(field).map(|real| (Form::Real(real), None)),
        "orbit" => orbit(&field.table(&grammar::ORBIT)?, names).map(|(o, r)| (Form::Orbit(o), Some(r))),
        "place" => place(&field.table(&grammar::PLACE)?, names).map(|(p, r)| (Form::Place(p), r)),
        "throw" => throw(&field.table(&grammar::THROW)?, names).map(|(t, r)| (Form::Throw(t), Some(r))),
        _ => drop(&field.table(&grammar::DROP)?, names).map(|(d, r)| (Form::Drop(d), Some(r))),
    }
}

const REAL: [(RealBody, &str, Kind); 11] = [
    (RealBody::Sun, "Sun", Kind::Star),
    (RealBody::Mercury, "Mercury", Kind::Planet),
    (RealBody::Venus, "Venus", Kind::Planet),
    (RealBody::Earth, "Earth", Kind::Planet),
    (RealBody::Moon, "Moon", Kind::Moon),
    (RealBody::Mars, "Mars", Kind::Planet),
    (RealBody::Jupiter, "Jupiter", Kind::Planet),
    (RealBody::Saturn, "Saturn", Kind::Planet),
    (RealBody::Uranus, "Uranus", Kind::Planet),
    (RealBody::Neptune, "Neptune", Kind::Planet),
    (RealBody::Pluto, "Pluto", Kind::Planet),
];

/// The solar-system body of a name, whatever its capitals.
pub(super) fn real_body(name: &str) -> Option<RealBody> {
    REAL.iter().find(|(_, n, _)| n.eq_ignore_ascii_case(name.trim())).map(|(real, ..)| *real)
}

/// What a solar-system body is called.
pub(super) fn real_name(real: RealBody) -> &'static str {
    REAL.iter().find(|(r, ..)| *r == real).map_or("", |(_, name, _)| name)
}

/// What a solar-system body is drawn as.
pub(super) fn real_kind(real: RealBody) -> Kind {
    REAL.iter().find(|(r, ..)| *r == real).map_or(Kind::Planet, |(.., kind)| *kind)
}

fn real(field: &Field<'_>) -> Option<RealBody> {
    let name = field.text()?;
    let found = real_body(name);
    if found.is_none() {
        let all = || REAL.iter().map(|(_, n, _)| *n);
        let remedy = match nearest(name, all()) {
            Some(near) => format!("perhaps \"{near}\""),
            None => format!("the real bodies are: {}", all().collect::<Vec<_>>().join(", ")),
        };
        field.error(format!("no states of a real body \"{}\" are known", clip(name)), remedy);
    }
    found
}

fn related(table: &Reading<'_>, key: &str, names: &Names, needs: Needs) -> Option<Relation> {
    let field = table.need(key)?;
    let body = field.body(names)?;
    Some(Relation { body, needs, at: field.at })
}

fn place(table: &Reading<'_>, names: &Names) -> Option<(Placed, Option<Relation>)> {
    let relation = match table.get("about") {
        Some(_) => related(table, "about", names, Needs::Nothing).map(Some),
        None => Some(None),
    };
    let position = table.need("position").and_then(|f| f.three::<Length>());
    let velocity = match table.get("velocity") {
        Some(field) => field.three::<Speed>(),
        None => Some([Speed::default(); 3]),
    };
    let relation = relation?;
    let about = relation.as_ref().map(|r| r.body);
    Some((Placed { about, position: position?, velocity: velocity? }, relation))
}

fn throw(table: &Reading<'_>, names: &Names) -> Option<(Throw, Relation)> {
    let relation = related(table, "from", names, Needs::Surface);
    let height = match table.get("height") {
        Some(field) => field.not_negative(),
        None => Some(Length::default()),
    };
    let speed = table.need("speed").and_then(|f| f.not_negative());
    let elevation = table.quantity_or("elevation", Angle::default());
    let heading = table.quantity_or("heading", Angle::from_rad(FRAC_PI_2));
    let latitude = latitude(table);
    let longitude = table.quantity_or("longitude", Angle::default());
    let relation = relation?;
    let throw = Throw {
        from: relation.body,
        height: height?,
        speed: speed?,
        elevation: elevation?,
        heading: heading?,
        latitude: latitude?,
        longitude: longitude?,
    };
    Some((throw, relation))
}

fn drop(table: &Reading<'_>, names: &Names) -> Option<(Drop, Relation)> {
    let relation = related(table, "onto", names, Needs::Surface);
    let height = table.need("height").and_then(|f| f.not_negative());
    let latitude = latitude(table);
    let longitude = table.quantity_or("longitude", Angle::default());
    let relation = relation?;
    let drop = Drop { onto: relation.body, height: height?, latitude: latitude?, longitude: longitude? };
    Some((drop, relation))
}

pub(super) fn latitude(table: &Reading<'_>) -> Option<Angle> {
    let field = table.get("latitude");
    let latitude: Angle = table.quantity_or("latitude", Angle::default())?;
    // A pole in degrees may come out a rounding beyond π/2.
    if latitude.rad().abs() <= FRAC_PI_2 * (1.0 + f64::EPSILON) {
        return Some(latitude);
    }
    if let Some(field) = field {
        field.error("latitude is beyond a pole", "it must be -90 deg to 90 deg");
    }
    None
}

fn orbit(table: &Reading<'_>, names: &Names) -> Option<(Orbit, Relation)> {
    let relation = related(table, "around", names, Needs::Gravity);
    let shape = shape(table);
    let inclination = table.quantity_or("inclination", Angle::default());
    let node = table.quantity_or("node", Angle::default());
    let argument = table.quantity_or("argument", Angle::default());
    let now = now(table, shape.as_ref().map(Shape::eccentricity));
    let (relation, shape) = (relation?, shape?);
    let orbit = Orbit {
        around: relation.body,
        periapsis: shape.periapsis,
        apoapsis: shape.apoapsis,
        semi_major: shape.semi_major,
        period: shape.period,
        eccentricity: shape.eccentricity,
        inclination: inclination?,
        node: node?,
        argument: argument?,
        now: now?,
    };
    Some((orbit, relation))
}

/// The five quantities that give an orbit its size and shape; two are stated.
#[derive(Debug, Clone, Copy)]
struct Shape {
    periapsis: Option<Length>,
    apoapsis: Option<Length>,
    semi_major: Option<Length>,
    period: Option<Span>,
    eccentricity: Option<f64>,
}

impl Shape {
    /// Eccentricity, as far as it follows without knowing any mass: `None` where a period is involved.
    fn eccentricity(&self) -> Option<f64> {
        let q = self.periapsis.map(Length::m);
        let far = self.apoapsis.map(Length::m);
        let a = self.semi_major.map(Length::m);
        match (self.eccentricity, q, far, a) {
            (Some(e), ..) => Some(e),
            (_, Some(q), Some(far), _) => Some((far - q) / (far + q)),
            (_, Some(q), _, Some(a)) => Some(1.0 - q / a),
            (_, _, Some(far), Some(a)) => Some(far / a - 1.0),
            _ => None,
        }
    }
}

const SHAPE_KEYS: [&str; 5] = ["periapsis", "apoapsis", "semi-major", "period", "eccentricity"];

fn shape(table: &Reading<'_>) -> Option<Shape> {
    let stated = table.stated(&SHAPE_KEYS);
    let has = |key: &str| stated.iter().any(|f| f.name() == key);
    let periapsis = table.positive("periapsis");
    let apoapsis = table.positive("apoapsis");
    let semi_major = table.get("semi-major").and_then(|f| f.quantity());
    let period = table.positive("period");
    let eccentricity = table.get("eccentricity").and_then(|f| {
        let e = f.number()?;
        if e >= 0.0 {
            return Some(e);
        }
        f.error(format!("eccentricity is {e}"), "it must be 0 or more; a circle has 0");
        None
    });
    match stated.as_slice() {
        [] => {
            table.error(
                "an orbit needs its size and shape",
                "state two of periapsis, apoapsis, semi-major, period and eccentricity",
            );
            return None;
        }
        [one] => {
            let remedy = match one.name() {
                "eccentricity" => "add periapsis, apoapsis, semi-major or period",
                _ => {
                    "add eccentricity = 0 for a circle, or another of periapsis, apoapsis, semi-major and period"
                }
            };
            table.error(format!("an orbit needs more than its {}", one.name()), remedy);
            return None;
        }
        [first, second] => {
            if has("semi-major") && has("period") {
                second.error(
                    format!("{} says the same as {}", second.name(), first.name()),
                    "state one of them, and eccentricity, periapsis or apoapsis beside it",
                );
                return None;
            }
        }
        [first, second, third, ..] => {
            table.report().error(
                &third.key_at,
                format!("an orbit has {} beside {} and {}", third.name(), first.name(), second.name()),
                "two of periapsis, apoapsis, semi-major, period and eccentricity say it all: leave the others out",
            );
            return None;
        }
    }
    let shape = Shape { periapsis, apoapsis, semi_major, period, eccentricity };
    let read = [
        periapsis.is_some(),
        apoapsis.is_some(),
        semi_major.is_some(),
        period.is_some(),
        eccentricity.is_some(),
    ];
    if read.into_iter().filter(|r| *r).count() < 2 {
        return None;
    }
    let last = stated.last()?;
    match contradiction(&shape) {
        None => Some(shape),
        Some((wrong, remedy)) => {
            last.error(wrong, remedy);
            None
        }
    }
}

/// What two stated quantities say against each other.
fn contradiction(shape: &Shape) -> Option<(&'static str, &'static str)> {
    let q = shape.periapsis.map(Length::m);
    let far = shape.apoapsis.map(Length::m);
    let a = shape.semi_major.map(Length::m);
    if a.is_some_and(|a| a == 0.0) {
        return Some((
            "semi-major is 0",
            "write the length of half the longest axis; negative for a hyperbola",
        ));
    }
    if let (Some(q), Some(far)) = (q, far)
        && far < q
    {
        return Some(("apoapsis is nearer than periapsis", "exchange the two"));
    }
    if let (Some(q), Some(a)) = (q, a)
        && a > 0.0
        && q > a
    {
        return Some((
            "periapsis is farther than semi-major",
            "periapsis is at most semi-major on a closed orbit",
        ));
    }
    if let (Some(far), Some(a)) = (far, a)
        && !(far >= a && far < 2.0 * a)
    {
        return Some(("apoapsis doesn't fit semi-major", "apoapsis is once to twice semi-major"));
    }
    let e = shape.eccentricity?;
    if e >= 1.0 && far.is_some() {
        return Some(("an open orbit has no apoapsis", "state periapsis, or an eccentricity below 1"));
    }
    if e >= 1.0 && shape.period.is_some() {
        return Some(("an open orbit has no period", "state periapsis, or an eccentricity below 1"));
    }
    #[expect(clippy::float_cmp, reason = "a parabola has exactly 1")]
    if e == 1.0 && a.is_some() {
        return Some(("a parabola has no semi-major axis", "state periapsis"));
    }
    if e > 1.0 && a.is_some_and(|a| a > 0.0) {
        return Some(("semi-major of a hyperbola is negative", "write a minus, or state periapsis"));
    }
    if e < 1.0 && a.is_some_and(|a| a < 0.0) {
        return Some((
            "semi-major of a closed orbit is positive",
            "leave the minus out, or state an eccentricity above 1",
        ));
    }
    None
}

const NOW_KEYS: [&str; 4] = ["anomaly", "mean-anomaly", "before-periapsis", "after-periapsis"];

/// Where on the orbit. `eccentricity`: `None` when the shape is wrong, `Some(None)` when it depends on a mass.
fn now(table: &Reading<'_>, eccentricity: Option<Option<f64>>) -> Option<OrbitNow> {
    let stated = table.stated(&NOW_KEYS);
    if let [first, second, ..] = stated.as_slice() {
        table.report().error(
            &second.key_at,
            format!("an orbit has both {} and {}", first.name(), second.name()),
            "say in one way where on the orbit the body is",
        );
    }
    let Some(field) = stated.first() else { return Some(OrbitNow::AfterPeriapsis(Span::default())) };
    let e = eccentricity.flatten().unwrap_or(0.0);
    match field.name() {
        "anomaly" => {
            let anomaly: Angle = field.quantity()?;
            // An open orbit never gets to where its radius would be infinite.
            if e >= 1.0 && 1.0 + e * float::cos(anomaly.rad()) <= 0.0 {
                field.error(
                    "an orbit as open as this never gets to that anomaly",
                    "state one nearer to periapsis, or a time from periapsis",
                );
                return None;
            }
            Some(OrbitNow::Anomaly(anomaly))
        }
        "mean-anomaly" => {
            let anomaly = field.quantity()?;
            if e >= 1.0 {
                field.error("an open orbit has no mean anomaly", "state anomaly, or a time from periapsis");
                return None;
            }
            Some(OrbitNow::MeanAnomaly(anomaly))
        }
        "before-periapsis" => {
            field.quantity::<Span>().map(|t| OrbitNow::AfterPeriapsis(Span::from_s(-t.s())))
        }
        _ => field.quantity().map(OrbitNow::AfterPeriapsis),
    }
}
