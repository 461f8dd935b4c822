//! Size and shape of an orbit from whichever two quantities an author states.

use crate::constants::AU_M;
use crate::math::float::cbrt;
use crate::scenario::Orbit;
use crate::units::number::with_digits;
use crate::units::{Length, Span};
use std::f64::consts::TAU;

/// What is wrong with a pair of quantities, and what would be right.
pub(super) struct Fault {
    pub(super) wrong: String,
    pub(super) remedy: String,
}

fn fault<T>(wrong: impl Into<String>, remedy: impl Into<String>) -> Result<T, Fault> {
    Err(Fault { wrong: wrong.into(), remedy: remedy.into() })
}

/// Distance at periapsis (m) and eccentricity from the two quantities stated. `gm_m3_s2` is that of both bodies together.
pub(super) fn periapsis_and_eccentricity(orbit: &Orbit, gm_m3_s2: f64) -> Result<(f64, f64), Fault> {
    let periapsis = positive("periapsis", orbit.periapsis)?;
    let apoapsis = positive("apoapsis", orbit.apoapsis)?;
    let period = match orbit.period {
        Some(period) if period.s() <= 0.0 => {
            return fault(
                format!("a period of {} is not above 0", period.to_text()),
                "state how long one turn takes",
            );
        }
        other => other,
    };
    let semi_major = orbit.semi_major;
    if let Some(a) = semi_major
        && a.m() == 0.0
    {
        return fault("the semi-major axis is 0", "state half the length of the orbit");
    }
    let eccentricity = orbit.eccentricity;
    if let Some(e) = eccentricity
        && !(e >= 0.0 && e.is_finite())
    {
        return fault(format!("an eccentricity of {e} is below 0"), "0 is a circle, 1 a parabola");
    }
    match (periapsis, apoapsis, semi_major, period, eccentricity) {
        (Some(q), Some(far), None, None, None) => between(q.m(), far.m()),
        (Some(q), None, None, None, Some(e)) => Ok((q.m(), e)),
        (Some(q), None, Some(a), None, None) => from_axis(q, a, "semi-major axis", a.to_text()),
        (Some(q), None, None, Some(period), None) => {
            let a = Length::from_m(axis(period, gm_m3_s2));
            let how = format!("{}, which a period of {} gives", rounded(a), period.to_text());
            from_axis(q, a, "semi-major axis", how)
        }
        (None, Some(far), Some(a), None, None) => from_far(far, a, a.to_text()),
        (None, Some(far), None, Some(period), None) => {
            let a = Length::from_m(axis(period, gm_m3_s2));
            from_far(far, a, format!("{}, which a period of {} gives", rounded(a), period.to_text()))
        }
        (None, Some(far), None, None, Some(e)) => {
            closed(e, "apoapsis")?;
            Ok((far.m() * (1.0 - e) / (1.0 + e), e))
        }
        (None, None, Some(a), None, Some(e)) => from_axis_and_eccentricity(a, e),
        (None, None, None, Some(period), Some(e)) => {
            closed(e, "period")?;
            Ok((axis(period, gm_m3_s2) * (1.0 - e), e))
        }
        (None, None, Some(_), Some(_), None) => fault(
            "semi-major axis and period say the same thing, and leave the shape open",
            "state one of them with periapsis, apoapsis or eccentricity",
        ),
        _ => fault(
            "the shape of the orbit needs exactly two quantities, one of them a size",
            "state two of periapsis, apoapsis, semi-major, period and eccentricity",
        ),
    }
}

/// A length that has to be above 0.
fn positive(what: &str, length: Option<Length>) -> Result<Option<Length>, Fault> {
    match length {
        Some(length) if length.m() <= 0.0 => fault(
            format!("{what} is {}, which is not above 0", length.to_text()),
            "state a distance from centre to centre",
        ),
        other => Ok(other),
    }
}

/// A length that nobody stated, to six digits, in au or km.
fn rounded(length: Length) -> String {
    if length.m() < 0.01 * AU_M {
        format!("{} km", with_digits(length.m() / 1e3, 6))
    } else {
        format!("{} au", with_digits(length.m() / AU_M, 6))
    }
}

/// Semi-major axis from a period, m (Kepler's third law).
fn axis(period: Span, gm_m3_s2: f64) -> f64 {
    let n = period.s() / TAU;
    cbrt(gm_m3_s2 * n * n)
}

fn closed(e: f64, what: &str) -> Result<(), Fault> {
    if e < 1.0 {
        return Ok(());
    }
    fault(
        format!("an orbit of eccentricity {e} is open and has no {what}"),
        "state periapsis and eccentricity, or an eccentricity below 1",
    )
}

fn between(q: f64, far: f64) -> Result<(f64, f64), Fault> {
    if far < q {
        return fault(
            format!(
                "apoapsis ({}) is nearer than periapsis ({})",
                Length::from_m(far).to_text(),
                Length::from_m(q).to_text()
            ),
            "periapsis is the nearest point of the orbit, apoapsis the farthest",
        );
    }
    Ok((q, (far - q) / (far + q)))
}

/// From periapsis and semi-major axis, stated or following from a period.
fn from_axis(q: Length, a: Length, what: &str, how: String) -> Result<(f64, f64), Fault> {
    if a.m() > 0.0 && q.m() > a.m() {
        return fault(
            format!("periapsis ({}) is farther than the {what} ({how})", q.to_text()),
            "periapsis is at most the semi-major axis; make it smaller, or the orbit larger",
        );
    }
    Ok((q.m(), (a.m() - q.m()) / a.m()))
}

/// From apoapsis and semi-major axis, stated or following from a period.
fn from_far(far: Length, a: Length, how: String) -> Result<(f64, f64), Fault> {
    if a.m() < 0.0 {
        return fault(
            format!("a semi-major axis of {how} belongs to a hyperbola, which has no apoapsis"),
            "state periapsis instead of apoapsis",
        );
    }
    let q = 2.0 * a.m() - far.m();
    if far.m() < a.m() || q <= 0.0 {
        return fault(
            format!("apoapsis ({}) doesn't fit the semi-major axis ({how})", far.to_text()),
            "apoapsis lies between once and twice the semi-major axis",
        );
    }
    Ok((q, (far.m() - a.m()) / a.m()))
}

fn from_axis_and_eccentricity(a: Length, e: f64) -> Result<(f64, f64), Fault> {
    let q = a.m() * (1.0 - e);
    if q > 0.0 {
        return Ok((q, e));
    }
    if e < 1.0 {
        fault(
            format!(
                "a semi-major axis of {} belongs to a hyperbola, an eccentricity of {e} doesn't",
                a.to_text()
            ),
            "state a semi-major axis above 0, or an eccentricity above 1",
        )
    } else if e > 1.0 {
        fault(
            format!("an eccentricity of {e} belongs to a hyperbola, whose semi-major axis is below 0"),
            format!("write semi-major = \"-{}\", or state periapsis", a.to_text()),
        )
    } else {
        fault("a parabola (eccentricity 1) has no semi-major axis", "state periapsis and eccentricity")
    }
}
