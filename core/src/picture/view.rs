//! How the audience looks: a view, and the eased move from one view to the next.

use super::frame::Frame;
use super::geometry::Px;
use super::look;
use super::scene::position;
use crate::Vector3;
use crate::math::float;
use crate::scenario::View;
use crate::show::Show;

/// A parallel projection: from metres (barycentric, ecliptic axes) to pixels.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Camera {
    /// What stands in the middle, m.
    pub centre: Vector3<f64>,
    /// Unit vector that points right in the picture.
    pub right: Vector3<f64>,
    /// Unit vector that points up in the picture.
    pub up: Vector3<f64>,
    /// Unit vector that points at the eye.
    pub toward: Vector3<f64>,
    /// Pixels per metre.
    pub px_per_m: f64,
    /// The picture's middle, px.
    pub middle: Px,
}

/// A view at an instant, as numbers that can be moved between.
#[derive(Debug, Clone, Copy, PartialEq)]
struct Pose {
    centre: Vector3<f64>,
    span_m: f64,
    tilt_rad: f64,
    turn_rad: f64,
}

impl Camera {
    /// The camera of a view at a model time.
    pub fn of(show: &Show, view: &View, t_s: f64, frame: &Frame) -> Self {
        Self::at(pose(show, view, t_s), frame)
    }

    /// The camera on its way from a view through others, all at the same model time. Each move is a view and the share
    /// of its time that has passed, 0 to 1, before easing; it starts from what the moves before it show at this instant,
    /// which may still be on their way. So a move that begins before another is over neither jumps nor jerks.
    ///
    /// The logarithm of the span goes evenly. The centre goes so that what will stand in the middle moves
    /// straight and never leaves the picture: its distance from the middle, in spans, falls steadily to 0.
    pub fn moving(show: &Show, from: &View, moves: &[(View, f64)], t_s: f64, frame: &Frame) -> Self {
        let mut now = pose(show, from, t_s);
        // The way round is chosen between views at rest, as they are stated: between moving ones it could change under
        // way, and views half a round apart would be at the mercy of a rounding.
        let (mut turned_rad, mut stated_rad) = (now.turn_rad, now.turn_rad);
        for (to, share) in moves {
            let goal = pose(show, to, t_s);
            turned_rad += shorter_way(goal.turn_rad - stated_rad);
            stated_rad = goal.turn_rad;
            now = now.toward(&Pose { turn_rad: turned_rad, ..goal }, look::ease(*share));
        }
        Self::at(now, frame)
    }

    fn at(pose: Pose, frame: &Frame) -> Self {
        let (sin_turn, cos_turn) = float::sin_cos(pose.turn_rad);
        let (sin_tilt, cos_tilt) = float::sin_cos(pose.tilt_rad);
        let right = Vector3::new(cos_turn, sin_turn, 0.0);
        let flat_up = Vector3::new(-sin_turn, cos_turn, 0.0);
        let pole = Vector3::new(0.0, 0.0, 1.0);
        Self {
            centre: pose.centre,
            right,
            up: flat_up * cos_tilt + pole * sin_tilt,
            toward: pole * cos_tilt - flat_up * sin_tilt,
            px_per_m: frame.scene / pose.span_m,
            middle: [0.5 * frame.width, 0.5 * frame.height],
        }
    }

    /// Where a point is in the picture, px.
    pub fn project(&self, point: Vector3<f64>) -> Px {
        let [x, y] = self.turn(point - self.centre);
        [self.middle[0] + x, self.middle[1] + y]
    }

    /// A vector in the picture, px; y grows downwards.
    pub fn turn(&self, vector: Vector3<f64>) -> Px {
        [vector.dot(&self.right) * self.px_per_m, -vector.dot(&self.up) * self.px_per_m]
    }

    /// How far a point is in front of the centre, towards the eye, px.
    pub fn depth(&self, point: Vector3<f64>) -> f64 {
        (point - self.centre).dot(&self.toward) * self.px_per_m
    }
}

impl Pose {
    /// The pose after a share of the way to another.
    fn toward(&self, goal: &Self, share: f64) -> Self {
        let ratio = goal.span_m / self.span_m;
        let grown = float::exp(share * float::ln(ratio));
        let gone = if (ratio - 1.0).abs() < 1e-6 { share } else { (grown - 1.0) / (ratio - 1.0) };
        Self {
            centre: self.centre + (goal.centre - self.centre) * gone,
            span_m: self.span_m * grown,
            tilt_rad: self.tilt_rad + (goal.tilt_rad - self.tilt_rad) * share,
            turn_rad: self.turn_rad + (goal.turn_rad - self.turn_rad) * share,
        }
    }
}

fn pose(show: &Show, view: &View, t_s: f64) -> Pose {
    let about = view.centre.about.map_or_else(Vector3::zeros, |body| position(show, body, t_s));
    let [x, y, z] = view.centre.offset.map(crate::units::Length::m);
    let span = view.span.m();
    Pose {
        centre: about + Vector3::new(x, y, z),
        // A span that is none shows something rather than nothing.
        span_m: if span.is_finite() && span > 0.0 { span } else { 1.0 },
        tilt_rad: view.tilt.rad(),
        turn_rad: view.turn.rad(),
    }
}

/// The same turn, at most half a round.
fn shorter_way(angle_rad: f64) -> f64 {
    let round = 2.0 * core::f64::consts::PI;
    angle_rad - round * (angle_rad / round).round()
}

#[cfg(test)]
mod tests {
    use super::super::fixture;
    use super::*;
    use crate::scenario::{BodyId, Centre};
    use crate::units::{Angle, Length};

    const HOUSE: Frame = fixture::HOUSE;

    fn view(span: f64, tilt_deg: f64, turn_deg: f64) -> View {
        View {
            centre: Centre { about: None, offset: [Length::from_m(0.0); 3] },
            span: Length::from_m(span),
            tilt: Angle::from_rad(tilt_deg.to_radians()),
            turn: Angle::from_rad(turn_deg.to_radians()),
        }
    }

    fn near(got: Px, want: Px) {
        assert!(
            (got[0] - want[0]).abs() < 1e-9 && (got[1] - want[1]).abs() < 1e-9,
            "got {got:?}, want {want:?}"
        );
    }

    #[test]
    fn a_span_fills_the_height() {
        let show = fixture::two_bodies();
        let camera = Camera::of(&show, &view(1080.0, 0.0, 0.0), 0.0, &HOUSE);
        near(camera.project(Vector3::new(0.0, 540.0, 0.0)), [960.0, 0.0]);
        near(camera.project(Vector3::new(100.0, 0.0, 99.0)), [1060.0, 540.0]);
    }

    #[test]
    fn turn_says_which_direction_points_right() {
        let show = fixture::two_bodies();
        let camera = Camera::of(&show, &view(1080.0, 0.0, 90.0), 0.0, &HOUSE);
        near(camera.project(Vector3::new(0.0, 10.0, 0.0)), [970.0, 540.0]);
    }

    #[test]
    fn tilt_brings_the_pole_up_and_foreshortens_what_lies_behind() {
        let show = fixture::two_bodies();
        let camera = Camera::of(&show, &view(1080.0, 60.0, 0.0), 0.0, &HOUSE);
        near(camera.project(Vector3::new(0.0, 100.0, 0.0)), [960.0, 490.0]);
        near(camera.project(Vector3::new(0.0, 0.0, 100.0)), [960.0, 540.0 - 100.0 * 0.75_f64.sqrt()]);
        assert!(camera.depth(Vector3::new(0.0, -1.0, 0.0)) > 0.0);
    }

    #[test]
    fn a_move_starts_and_ends_at_its_views_and_keeps_its_target_in_sight() {
        let show = fixture::two_bodies();
        let wide = view(1e12, 0.0, 350.0);
        let mut close = view(1e9, 30.0, 10.0);
        close.centre.about = Some(BodyId(1));
        let target = position(&show, BodyId(1), 0.0);
        let mut last = f64::INFINITY;
        for i in 0..=100 {
            let share = f64::from(i) / 100.0;
            let camera = Camera::moving(&show, &wide, &[(close, share)], 0.0, &HOUSE);
            let p = camera.project(target);
            let off = super::super::geometry::length([p[0] - 960.0, p[1] - 540.0]);
            assert!(off < last + 1e-6, "{off} after {last}");
            last = off;
        }
        let end = Camera::moving(&show, &wide, &[(close, 1.0)], 0.0, &HOUSE);
        let rest = Camera::of(&show, &close, 0.0, &HOUSE);
        near(end.project(target), rest.project(target));
        assert!((end.px_per_m / rest.px_per_m - 1.0).abs() < 1e-12);
        // 350 to 10 degrees is a turn by 20, not by 340.
        let half = Camera::moving(&show, &wide, &[(close, 0.3125)], 0.0, &HOUSE);
        assert!(half.right.y.abs() < 1e-9, "{}", half.right.y);
    }
}
