//! The conic on which a body is at this instant, and its foci.

use super::super::geometry::{Px, length};
use super::super::list::{Shape, Tag};
use super::super::look;
use super::super::scene::{Scene, stroke};
use crate::Vector3;
use crate::ephemeris::osculating::osculating;
use crate::math::float;
use crate::math::frame::{rotation_x, rotation_z};
use crate::scenario::BodyId;

/// The conic of an instant, as vectors.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Osculating {
    /// Where the focus is that the body goes around, m.
    pub focus: Vector3<f64>,
    /// From the focus towards periapsis, a unit vector.
    pub toward_periapsis: Vector3<f64>,
    /// At right angles to it in the orbit's plane, in the sense of motion.
    pub sideways: Vector3<f64>,
    /// Eccentricity.
    pub eccentricity: f64,
    /// Semi-latus rectum, m.
    pub parameter_m: f64,
    /// GM that belongs to it, m³/s².
    pub gm_m3_s2: f64,
}

impl Osculating {
    /// The conic of a body at the scene's instant, about another or about all that it goes around; `None` where there
    /// is none.
    pub fn of(scene: &Scene<'_>, body: BodyId, about: Option<BodyId>) -> Option<Self> {
        let found = osculating(&scene.show.ephemeris, &scene.show.initial, body, about, scene.t_s)?;
        let e = &found.elements;
        // Turning the axes back by the three angles turns the vectors forward.
        let turned = rotation_z(-e.node_rad) * rotation_x(-e.inclination_rad) * rotation_z(-e.argument_rad);
        Some(Self {
            focus: found.focus.pos,
            toward_periapsis: turned * Vector3::new(1.0, 0.0, 0.0),
            sideways: turned * Vector3::new(0.0, 1.0, 0.0),
            eccentricity: e.eccentricity,
            parameter_m: e.parameter_m(),
            gm_m3_s2: found.gm_m3_s2,
        })
    }

    /// Point at a true anomaly relative to the centre, m; `None` beyond the asymptotes.
    pub fn point_m(&self, true_anomaly_rad: f64) -> Option<Vector3<f64>> {
        let (s, c) = float::sin_cos(true_anomaly_rad);
        let d = 1.0 + self.eccentricity * c;
        (d > 1e-6).then(|| (self.toward_periapsis * c + self.sideways * s) * (self.parameter_m / d))
    }

    /// Distance at periapsis, m.
    pub fn periapsis_m(&self) -> f64 {
        self.parameter_m / (1.0 + self.eccentricity)
    }

    /// Distance at apoapsis, m, of a closed orbit.
    pub fn apoapsis_m(&self) -> Option<f64> {
        (self.eccentricity < 1.0 - 1e-9).then(|| self.parameter_m / (1.0 - self.eccentricity))
    }

    /// Period of a closed orbit, s.
    pub fn period_s(&self) -> Option<f64> {
        let a = 0.5 * (self.periapsis_m() + self.apoapsis_m()?);
        Some(2.0 * core::f64::consts::PI * a * (a / self.gm_m3_s2).sqrt())
    }
}

/// Points along the conic in the picture: evenly in the eccentric anomaly where it is closed (few points do,
/// the flat ends included), in the true anomaly where it is open.
pub fn outline(scene: &Scene<'_>, conic: &Osculating) -> (Vec<Px>, bool) {
    let to_px = |v: Vector3<f64>| scene.camera.project(conic.focus + v);
    if let Some(apoapsis) = conic.apoapsis_m() {
        let a = 0.5 * (conic.periapsis_m() + apoapsis);
        let b = (conic.periapsis_m() * apoapsis).sqrt();
        let middle = conic.toward_periapsis * (conic.periapsis_m() - a);
        // The line strays by at most r/2 (π/n)² from an ellipse whose largest radius of curvature is about r.
        let n = (core::f64::consts::PI * (a * scene.camera.px_per_m / 0.3).sqrt()).clamp(60.0, 6000.0).ceil();
        let at = |share: f64| {
            let (s, c) = float::sin_cos(2.0 * core::f64::consts::PI * share);
            to_px(middle + conic.toward_periapsis * (a * c) + conic.sideways * (b * s))
        };
        return (steps(n).map(at).collect(), true);
    }
    let most = float::acos((-1.0 / conic.eccentricity).clamp(-1.0, 1.0));
    let points = steps(1200.0).filter_map(|share| {
        // Crowded towards the asymptotes, where a small angle is a long way.
        let x = 2.0 * share - 1.0;
        conic.point_m(most * (1.5 * x - 0.5 * x * x * x) * (1.0 - 1e-4))
    });
    (points.map(to_px).collect(), false)
}

/// From 0 up to below 1 in so many steps.
fn steps(count: f64) -> impl Iterator<Item = f64> {
    core::iter::successors(Some(0.0), |i| Some(i + 1.0))
        .take_while(move |i| *i < count)
        .map(move |i| i / count)
}

/// Draws the conic of a body.
pub fn draw(scene: &mut Scene<'_>, body: BodyId, about: Option<BodyId>) {
    let Some(conic) = Osculating::of(scene, body, about) else {
        return;
    };
    let (mut points, closed) = outline(scene, &conic);
    if closed && let Some(&first) = points.first() {
        points.push(first);
    }
    let stroke = stroke(scene.frame.line(look::THIN) * 1.15, look::RULE);
    scene.add_line(Tag::Line(body), &points, &stroke);
}

/// Draws both foci of the conic of a body: crosses in the lamp's colour where no body is.
pub fn draw_foci(scene: &mut Scene<'_>, body: BodyId, about: Option<BodyId>) {
    let Some(conic) = Osculating::of(scene, body, about) else {
        return;
    };
    let mut foci = vec![conic.focus];
    if let Some(apoapsis) = conic.apoapsis_m() {
        foci.push(conic.focus - conic.toward_periapsis * (apoapsis - conic.periapsis_m()));
    }
    let (arm, width) = (scene.frame.part(1.0 / 90.0), scene.frame.line(look::MARK));
    for focus in foci {
        let at = scene.camera.project(focus);
        if length(at).is_finite() && scene.keep().holds(at) {
            let segments = vec![
                [[at[0] - arm, at[1]], [at[0] + arm, at[1]]],
                [[at[0], at[1] - arm], [at[0], at[1] + arm]],
            ];
            scene.add(Tag::Line(body), Shape::Segments { segments, stroke: stroke(width, look::LAMP) });
        }
    }
}
