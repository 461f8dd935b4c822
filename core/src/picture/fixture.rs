//! Shows for the tests of the picture, with ephemerides made from exact ellipses.

use super::frame::Frame;
use crate::Vector3;
use crate::ephemeris::{Ephemeris, PER_BODY};
use crate::math::float;
use crate::resolve::{InitialBody, InitialState};
use crate::scenario::{
    Beat, BeatClock, BeatStart, Body, BodyId, Caption, Centre, Colour, Form, Kind, Mark, Physics, Place,
    Scenario, Surface, Then, View,
};
use crate::show::{Moment, Plan, PlannedBeat, Run, Show, Way};
use crate::time::Epoch;
use crate::units::{Angle, Length, Span};

/// The house at full size.
pub(crate) const HOUSE: Frame = Frame {
    width: 1920.0,
    height: 1080.0,
    scene: 1080.0,
    em: 1080.0,
    density: 1.0,
    label: 1080.0 / 25.7,
    caption: 60.0,
    margin: 96.0,
    has_text: true,
};

pub(crate) const AU: f64 = 149_597_870_700.0;
pub(crate) const DAY: f64 = 86_400.0;
const GM_ORLA: f64 = 0.9 * 1.327_124_4e20;

/// An ellipse around the origin in the ecliptic plane, perihelion towards `lon_rad`, passed at `tau_s`.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Ellipse {
    pub(crate) a: f64,
    pub(crate) e: f64,
    pub(crate) lon_rad: f64,
    pub(crate) tau_s: f64,
    pub(crate) gm: f64,
}

impl Ellipse {
    fn state(&self, t: f64) -> [Vector3<f64>; 3] {
        if self.a <= 0.0 {
            return [Vector3::zeros(); 3];
        }
        let n = (self.gm / (self.a * self.a * self.a)).sqrt();
        let m = n * (t - self.tau_s);
        let mut ea = m;
        for _ in 0..60 {
            let (s, c) = float::sin_cos(ea);
            ea -= ((ea - self.e * s - m) / (1.0 - self.e * c)).clamp(-1.0, 1.0);
        }
        let (s, c) = float::sin_cos(ea);
        let b = (1.0 - self.e * self.e).sqrt();
        let rate = n / (1.0 - self.e * c);
        let (sl, cl) = float::sin_cos(self.lon_rad);
        let turn = |x: f64, y: f64| Vector3::new(cl * x - sl * y, sl * x + cl * y, 0.0);
        let pos = turn(self.a * (c - self.e), self.a * b * s);
        let vel = turn(-self.a * s * rate, self.a * b * c * rate);
        let r = pos.norm();
        [pos, vel, -pos * (self.gm / (r * r * r))]
    }
}

/// An ephemeris of bodies on ellipses, from `from_s` (0 or before) to `until_s`, in steps of `step_s`.
pub(crate) fn ephemeris(
    gms: Vec<f64>,
    paths: &[Ellipse],
    from_s: f64,
    until_s: f64,
    step_s: f64,
) -> Ephemeris {
    let mut eph = Ephemeris::new(gms);
    let nodes: Vec<f64> = (1..=7).map(|i| f64::from(i) / 7.0).collect();
    let vandermonde = nalgebra::SMatrix::<f64, 7, 7>::from_fn(|r, c| (0..=c).map(|_| nodes[r]).product());
    let inverse = vandermonde.try_inverse().unwrap();
    for (end, sign) in [(until_s, 1.0), (from_s, -1.0)] {
        let mut t = 0.0_f64;
        while t.abs() < end.abs() {
            let h = sign * step_s;
            let mut data = Vec::with_capacity(paths.len() * PER_BODY);
            for path in paths {
                let [pos, vel, acc] = path.state(t);
                let mut rows = vec![pos, vel, acc];
                let diffs: Vec<Vector3<f64>> = nodes.iter().map(|n| path.state(t + n * h)[2] - acc).collect();
                for row in 0..7 {
                    rows.push((0..7).fold(Vector3::zeros(), |sum, c| sum + diffs[c] * inverse[(row, c)]));
                }
                data.extend(rows.iter().flat_map(|v| [v.x, v.y, v.z]));
            }
            if sign > 0.0 {
                eph.forward_mut().push(t, h, &data)
            } else {
                eph.backward_mut().push(t, h, &data)
            }
            t += h;
        }
    }
    eph
}

pub(crate) fn body(name: &str, kind: Kind, colour: Colour) -> Body {
    Body {
        name: name.into(),
        kind,
        gm: None,
        radius: None,
        colour,
        surface: Surface::Stop,
        atmosphere: None,
        drag: None,
        form: Form::Origin,
        place: Place::default(),
    }
}

pub(crate) fn view(about: usize, offset_m: [f64; 3], span_m: f64, turn_deg: f64) -> View {
    View {
        centre: Centre { about: Some(BodyId(about)), offset: offset_m.map(Length::from_m) },
        span: Length::from_m(span_m),
        tilt: Angle::from_rad(0.0),
        turn: Angle::from_rad(turn_deg.to_radians()),
    }
}

pub(crate) fn beat(caption: &str, view: View, marks: Vec<Mark>) -> Beat {
    Beat {
        title: "A beat".into(),
        say: String::new(),
        captions: vec![Caption { language: "en".into(), text: caption.into() }],
        clock: BeatClock::Hold { lasts: Span::from_s(30.0) },
        start: BeatStart::GoOn,
        then: Then::GoOn,
        view,
        marks,
        cast: None,
        place: Place::default(),
        clock_place: Place::default(),
    }
}

pub(crate) fn planned(from_s: f64, until_s: f64, lasts_s: f64) -> PlannedBeat {
    PlannedBeat {
        show_s: 0.0,
        lasts_s,
        from_s,
        until_s,
        pace: (until_s - from_s) / lasts_s,
        cue: None,
        way: Way::Still,
        then: Then::GoOn,
        run: Run::Anew,
        keeps_sectors: false,
    }
}

pub(crate) fn moment(beat: usize, model_s: f64, from_s: f64, pace: f64) -> Moment {
    Moment {
        model_s,
        pace,
        held: false,
        beat,
        before: None,
        lately: crate::show::Lately::default(),
        since_cut_s: 10.0,
        beat_from_s: from_s,
        run_from_s: from_s,
        veil: 0.0,
    }
}

/// A show of bodies on ellipses around the first, which stands still. Radii in metres.
pub(crate) fn show(
    bodies: Vec<(Body, Ellipse, f64, f64)>,
    covers_s: [f64; 2],
    step_s: f64,
    beats: Vec<(Beat, PlannedBeat)>,
) -> Show {
    let paths: Vec<Ellipse> = bodies.iter().map(|b| b.1).collect();
    let gms: Vec<f64> = bodies.iter().map(|b| b.2).collect();
    let initial = InitialState::of(
        bodies
            .iter()
            .enumerate()
            .map(|(i, (b, path, gm, radius_m))| InitialBody {
                name: b.name.clone(),
                gm_m3_s2: *gm,
                radius_m: *radius_m,
                surface: b.surface,
                primary: (i > 0).then_some(BodyId(0)),
                pos: path.state(0.0)[0],
                vel: path.state(0.0)[1],
            })
            .collect(),
    );
    let (beats, planned): (Vec<_>, Vec<_>) = beats.into_iter().unzip();
    Show {
        scenario: Scenario {
            title: "A show".into(),
            summary: String::new(),
            audience: String::new(),
            language: "en".into(),
            date: Epoch::parse_utc("2031-05-04T20:00:00Z").ok(),
            physics: Physics::default(),
            bodies: bodies.into_iter().map(|b| b.0).collect(),
            swarms: Vec::new(),
            changes: Vec::new(),
            beats,
            aims: Vec::new(),
        },
        ephemeris: ephemeris(gms, &paths, covers_s[0], covers_s[1], step_s),
        initial,
        swarms: Vec::new(),
        plan: Plan { beats: planned, covers_from_s: covers_s[0], covers_until_s: covers_s[1] },
    }
}

const STILL: Ellipse = Ellipse { a: 0.0, e: 0.0, lon_rad: 0.0, tau_s: 0.0, gm: 1.0 };

/// Fenn's ellipse around Orla: 0.42 au at its nearest, eccentricity 0.736.
pub(crate) const FENN: Ellipse = Ellipse {
    a: 0.42 * AU / (1.0 - 0.736),
    e: 0.736,
    lon_rad: core::f64::consts::PI,
    tau_s: 80.0 * DAY,
    gm: GM_ORLA,
};

/// Its period, s.
pub(crate) const FENN_PERIOD_S: f64 = 773.0 * DAY;

/// Fenn around Orla, with six sectors of twenty days.
pub(crate) fn equal_areas() -> Show {
    let marks = vec![
        Mark::Trail { body: BodyId(1), lasts: None },
        Mark::Conic { body: BodyId(1), about: None },
        Mark::Sector {
            body: BodyId(1),
            about: None,
            every: Some(Span::from_s(20.0 * DAY)),
            count: Some(6),
            area: true,
        },
        Mark::Scale,
        Mark::Date,
    ];
    let caption = "Six slices, twenty days each.\nEvery one covers the same:\n*3,245 million million km²*";
    let view = view(0, [1.14 * AU, -0.22 * AU, 0.0], 3.05 * AU, 0.0);
    show(
        vec![
            (body("Orla", Kind::Star, Colour::Bone), STILL, GM_ORLA, 6.2e8),
            (body("Fenn", Kind::Comet, Colour::Green), FENN, 0.0, 0.0),
        ],
        [0.0, 800.0 * DAY],
        DAY,
        vec![(beat(caption, view, marks), planned(0.0, 120.0 * DAY, 60.0))],
    )
}

/// Two bodies and one beat without marks.
pub(crate) fn two_bodies() -> Show {
    let mut show = equal_areas();
    show.scenario.beats[0].marks.clear();
    show
}

/// Five planets on near circles, some of which meet often, with read-outs, two beats, the second seen from nearer.
pub(crate) fn planets() -> Show {
    let ring = |au: f64, e: f64, lon: f64| Ellipse {
        a: au * AU,
        e,
        lon_rad: lon,
        tau_s: -9.0 * DAY * au,
        gm: GM_ORLA,
    };
    let planet = |name: &str, colour, au: f64, e: f64, lon: f64| {
        (body(name, Kind::Planet, colour), ring(au, e, lon), 0.0, 6e6)
    };
    let mut marks: Vec<Mark> = (1..=5).map(|i| Mark::Trail { body: BodyId(i), lasts: None }).collect();
    marks.extend((1..=4).map(|i| Mark::Readout {
        what: crate::scenario::Readout::Speed,
        body: BodyId(i),
        about: None,
    }));
    marks.extend([Mark::Velocity { body: BodyId(3), about: None }, Mark::Scale, Mark::Date, Mark::Pace]);
    let far = view(0, [0.0; 3], 4.4 * AU, 0.0);
    let mut near = view(3, [0.0; 3], 0.6 * AU, 30.0);
    near.tilt = Angle::from_rad(0.6);
    show(
        vec![
            (body("Orla", Kind::Star, Colour::Bone), STILL, GM_ORLA, 6.2e8),
            planet("Cade", Colour::Sky, 0.4, 0.1, 0.3),
            planet("Hale", Colour::Yellow, 0.72, 0.01, 1.0),
            planet("Brae", Colour::Green, 1.1, 0.02, 2.0),
            planet("Pell", Colour::Vermilion, 1.2, 0.05, 2.2),
            planet("Tarn", Colour::Blue, 1.9, 0.09, 4.0),
        ],
        [0.0, 900.0 * DAY],
        0.5 * DAY,
        vec![
            (beat("The nearer,\nthe *faster*", far, marks), planned(0.0, 800.0 * DAY, 60.0)),
            (beat("Closer in", near, vec![]), planned(800.0 * DAY, 860.0 * DAY, 30.0)),
        ],
    )
}
