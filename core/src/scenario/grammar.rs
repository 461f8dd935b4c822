//! The file format as data: each section's keys, what they mean, and an example of each.
//!
//! Parsing reads unknown keys and its remedies off these tables; the format's reference can be made from them.

mod aiming;
mod changing;
mod sowing;

pub use aiming::{AIM, FREE, WANT};
pub use changing::{CHANGE, CHANGE_TIME, CHANGES};
pub use sowing::{SWARM, SWARM_SHAPES};

/// A key of a section.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Key {
    /// Its name.
    pub name: &'static str,
    /// What it says.
    pub meaning: &'static str,
    /// What stands behind it, for people.
    pub value: &'static str,
    /// An example of that, as TOML.
    pub example: &'static str,
}

/// A section: a table of the file, or an inline table.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Section {
    /// What it is called in messages, with its article.
    pub what: &'static str,
    /// Its keys, in the order in which people are told of them.
    pub keys: &'static [Key],
}

impl Section {
    /// The key of a name.
    pub fn key(&self, name: &str) -> Option<&'static Key> {
        self.keys.iter().find(|k| k.name == name)
    }

    /// "a, b, c": the names of its keys.
    pub fn key_names(&self) -> String {
        self.keys.iter().map(|k| k.name).collect::<Vec<_>>().join(", ")
    }
}

const fn key(name: &'static str, value: &'static str, example: &'static str, meaning: &'static str) -> Key {
    Key { name, meaning, value, example }
}

/// The top of a file.
pub const TOP: Section = Section {
    what: "a scenario",
    keys: &[
        key("format", "1", "1", "the version of this format"),
        key("title", "text", r#""Equal areas""#, "what the scenario is called"),
        key("summary", "text", r#""Why a comet hurries near its star""#, "one line that says what it shows"),
        key("audience", "text", r#""12 and up""#, "for whom it is"),
        key("language", "language tag", r#""en""#, "language of captions that state none; en unless stated"),
        key("date", "date, UTC", r#""2031-03-05T20:00:00Z""#, "the instant at which model time is 0"),
        key("physics", "table", "{ relativity = true }", "physics beyond Newton's attraction of points"),
        key("body", "tables", r#"[{ name = "Orla", mass = "1 Sun mass" }]"#, "the bodies, one [[body]] each"),
        key(
            "change",
            "tables",
            r#"[{ at = "120 d", gravity = "Orla", on = false }]"#,
            "what is done to bodies on the way, one [[change]] each",
        ),
        key("beat", "tables", r#"[{ title = "The long fall" }]"#, "the steps of the talk, one [[beat]] each"),
        key(
            "aim",
            "tables",
            r#"[{ want = [{ event = "periapsis of Fenn", at = "140 d" }], free = [{ body = "Fenn", quantity = "orbit.periapsis", from = "0.3 au", to = "0.5 au" }] }]"#,
            "outcomes to solve numbers for, one [[aim]] each",
        ),
    ],
};

/// `[physics]`.
pub const PHYSICS: Section = Section {
    what: "[physics]",
    keys: &[
        key(
            "relativity",
            "true or false",
            "true",
            "first post-Newtonian relativity between all bodies; on with real bodies",
        ),
        key("drag", "true or false", "false", "drag in the air of bodies that have some; on unless stated"),
        key("oblateness", "true or false", "true", "the Earth's J2; on with real bodies"),
        key(
            "companions",
            "true or false",
            "false",
            "whether unnamed solar-system bodies pull on real ones, unseen; on unless stated",
        ),
        key(
            "softening",
            "length",
            r#""1000 km""#,
            "length below which gravity fades instead of growing without bound (Plummer's form); without real bodies, relativity and oblateness alone",
        ),
    ],
};

/// `[[body]]`.
pub const BODY: Section = Section {
    what: "a body",
    keys: &[
        key("name", "text", r#""Orla""#, "its name, unlike any other's"),
        key("kind", "star, planet, moon, comet, rock, ball or station", r#""comet""#, "what it is drawn as"),
        key("mass", "mass", r#""1.3 Earth masses""#, "its mass; without mass and gm it is a tracer"),
        key("gm", "GM", r#""1.2e20 m^3/s^2""#, "its mass times the constant of gravitation, instead of mass"),
        key("radius", "length", r#""6900 km""#, "its radius; without one it is a point"),
        key(
            "colour",
            "bone, green, vermilion, yellow, sky or blue",
            r#""sky""#,
            "its colour; given in order unless stated",
        ),
        key("surface", "stop, bounce or merge", r#""stop""#, "what contact with it does; stop unless stated"),
        key(
            "restitution",
            "number, 0 to 1",
            "0.8",
            "with bounce: the share of the speed that is kept; 1 unless stated",
        ),
        key(
            "atmosphere",
            "Earth or table",
            r#"{ surface-density = "1.2 kg/m^3", scale-height = "8 km" }"#,
            "the air around it; Earth: the U.S. Standard Atmosphere 1976",
        ),
        key(
            "drag",
            "table",
            r#"{ area-per-mass = "0.01 m^2/kg", coefficient = 0.5 }"#,
            "what it offers to the air of others; nothing unless stated",
        ),
        key("real", "solar-system body", r#""Mars""#, "form: where the real one is at the scenario's date"),
        key(
            "orbit",
            "table",
            r#"{ around = "Orla", semi-major = "1.1 au", eccentricity = 0.02 }"#,
            "form: on a conic around a body",
        ),
        key(
            "place",
            "table",
            r#"{ about = "Orla", position = ["1 au", "0 au", "0 au"], velocity = ["0 km/s", "29.8 km/s", "0 km/s"] }"#,
            "form: at a position with a velocity",
        ),
        key(
            "throw",
            "table",
            r#"{ from = "Brae", height = "200 km", speed = "7.8 km/s" }"#,
            "form: thrown from a surface",
        ),
        key("drop", "table", r#"{ onto = "Brae", height = "100 m" }"#, "form: let go above a surface"),
        key(
            "swarm",
            "table",
            r#"{ ring = "Brae", from = "9000 km", to = "14000 km", count = 5000 }"#,
            "form: many tracers instead of one body; beside it stand name, colour and drag alone",
        ),
    ],
};

/// `atmosphere` as a table.
pub const ATMOSPHERE: Section = Section {
    what: "an atmosphere",
    keys: &[
        key("surface-density", "density", r#""1.2 kg/m^3""#, "density at the surface"),
        key("scale-height", "length", r#""8 km""#, "height in which density falls by e"),
        key(
            "heights",
            "list of lengths",
            r#"["0 km", "10 km", "30 km"]"#,
            "instead of a scale height: heights above the surface, upwards",
        ),
        key(
            "densities",
            "list of densities",
            r#"["1.2 kg/m^3", "0.4 kg/m^3", "0.02 kg/m^3"]"#,
            "with heights: the density at each; exponential between them, nothing above",
        ),
    ],
};

/// `drag` of a body.
pub const DRAG: Section = Section {
    what: "a drag",
    keys: &[
        key("area-per-mass", "area per mass", r#""0.01 m^2/kg""#, "its cross-section over its mass"),
        key("coefficient", "number, 0 or more", "0.5", "coefficient of drag; 1 unless stated"),
    ],
};

/// The keys of a body that say how it comes to be there.
pub const FORMS: [&str; 6] = ["real", "orbit", "place", "throw", "drop", "swarm"];

/// `orbit`.
pub const ORBIT: Section = Section {
    what: "an orbit",
    keys: &[
        key("around", "body", r#""Orla""#, "the body it goes around"),
        key("periapsis", "length", r#""0.42 au""#, "nearest distance, from centre to centre"),
        key("apoapsis", "length", r#""6.6 au""#, "farthest distance, from centre to centre"),
        key("semi-major", "length", r#""1.1 au""#, "semi-major axis; negative for a hyperbola"),
        key("period", "time", r#""400 d""#, "period"),
        key("eccentricity", "number, 0 or more", "0.02", "eccentricity"),
        key("inclination", "angle", r#""4 deg""#, "inclination to the ecliptic; 0 unless stated"),
        key("node", "angle", r#""80 deg""#, "longitude of the ascending node; 0 unless stated"),
        key("argument", "angle", r#""30 deg""#, "argument of periapsis; 0 unless stated"),
        key("anomaly", "angle", r#""40 deg""#, "where on the orbit it starts: true anomaly"),
        key("mean-anomaly", "angle", r#""40 deg""#, "where on the orbit it starts: mean anomaly"),
        key(
            "before-periapsis",
            "time",
            r#""140 d""#,
            "where on the orbit it starts: so long before periapsis",
        ),
        key("after-periapsis", "time", r#""20 d""#, "where on the orbit it starts: so long after periapsis"),
    ],
};

/// `place`.
pub const PLACE: Section = Section {
    what: "a place",
    keys: &[
        key(
            "about",
            "body",
            r#""Orla""#,
            "relative to which body; without it, to the origin of the file's coordinates",
        ),
        key("position", "three lengths", r#"["1 au", "0 au", "0 au"]"#, "position, ecliptic axes"),
        key(
            "velocity",
            "three speeds",
            r#"["0 km/s", "29.8 km/s", "0 km/s"]"#,
            "velocity, ecliptic axes; at rest unless stated",
        ),
    ],
};

/// `throw`.
pub const THROW: Section = Section {
    what: "a throw",
    keys: &[
        key("from", "body", r#""Brae""#, "the body it is thrown from"),
        key("height", "length", r#""200 km""#, "height above the surface; 0 unless stated"),
        key("speed", "speed", r#""7.8 km/s""#, "speed relative to the body's centre"),
        key("elevation", "angle", r#""45 deg""#, "angle above the horizon; 0 unless stated"),
        key(
            "heading",
            "angle",
            r#""90 deg""#,
            "heading, from north through east; 90 deg, eastwards, unless stated",
        ),
        key("latitude", "angle", r#""50 deg""#, "latitude; 0 unless stated"),
        key("longitude", "angle", r#""10 deg""#, "longitude, to the east; 0 unless stated"),
    ],
};

/// `drop`.
pub const DROP: Section = Section {
    what: "a drop",
    keys: &[
        key("onto", "body", r#""Brae""#, "the body it falls onto"),
        key("height", "length", r#""100 m""#, "height above the surface"),
        key("latitude", "angle", r#""50 deg""#, "latitude; 0 unless stated"),
        key("longitude", "angle", r#""10 deg""#, "longitude, to the east; 0 unless stated"),
    ],
};

/// `[[beat]]`.
pub const BEAT: Section = Section {
    what: "a beat",
    keys: &[
        key("title", "text", r#""The long fall""#, "what it is called"),
        key("say", "text", r#""Watch how slowly it sets out""#, "what to say"),
        key(
            "caption",
            "text, or texts by language",
            r#"{ en = "The long fall", cy = "Y cwymp hir" }"#,
            "what the audience reads; *so* marks words",
        ),
        key(
            "clock",
            "table",
            r#"{ pace = "12 d/s", lasts = "60 s" }"#,
            "how model time goes; held for 30 s unless stated",
        ),
        key(
            "start",
            "go-on, restart or table",
            r#"{ event = "apoapsis of Fenn" }"#,
            "where model time starts; go-on unless stated",
        ),
        key(
            "then",
            "go-on, hold or next",
            r#""hold""#,
            "what happens when its time is over; hold after a span, else go-on",
        ),
        key(
            "view",
            "table",
            r#"{ centre = "Orla", span = "6 au" }"#,
            "how the audience looks; as in the beat before unless stated",
        ),
        key(
            "marks",
            "list",
            r#"["trail of Fenn", "scale"]"#,
            "what is drawn to explain; as in the beat before unless stated",
        ),
        key(
            "cast",
            "list of bodies and swarms",
            r#"["Orla", "Fenn"]"#,
            "who is on stage; as in the beat before unless stated, all with []",
        ),
    ],
};

/// `clock`.
pub const CLOCK: Section = Section {
    what: "a clock",
    keys: &[
        key("pace", "pace", r#""12 d/s""#, "model time per second of show time"),
        key(
            "span",
            "time, or periods of a body",
            r#""1 period of Fenn""#,
            "model time to cover while the beat lasts",
        ),
        key("reach", "event", r#""periapsis of Fenn""#, "the event to reach"),
        key("hold", "time", r#""30 s""#, "the model stands still so long"),
        key("at", "time", r#""40 s""#, "with reach: when in the beat the event comes"),
        key("lasts", "time", r#""60 s""#, "show time planned"),
    ],
};

/// `start`.
pub const START: Section = Section {
    what: "a start",
    keys: &[
        key("time", "time", r#""100 d""#, "model time, from the scenario's start"),
        key("date", "date, UTC", r#""2031-03-05T20:00:00Z""#, "date"),
        key("event", "event", r#""apoapsis of Fenn""#, "an event"),
        key("before", "time", r#""3 d""#, "with event: so long before it"),
        key("after", "time", r#""3 d""#, "with event: so long after it"),
    ],
};

/// `view`.
pub const VIEW: Section = Section {
    what: "a view",
    keys: &[
        key("centre", "body, barycentre or table", r#""Orla""#, "what stands in the middle"),
        key("span", "length", r#""6 au""#, "the length that the height of the picture covers"),
        key("tilt", "angle", r#""30 deg""#, "how far the eye is tipped from the ecliptic's pole"),
        key("turn", "angle", r#""0 deg""#, "the direction of the ecliptic that points right"),
    ],
};

/// `centre` as a table.
pub const CENTRE: Section = Section {
    what: "a centre",
    keys: &[
        key(
            "about",
            "body or barycentre",
            r#""Orla""#,
            "what it is measured from; the barycentre unless stated",
        ),
        key("offset", "three lengths", r#"["-2 au", "0 au", "0 au"]"#, "offset from it, ecliptic axes"),
    ],
};

/// A mark as a table. One of the first keys, whose value is the body; the others add to it.
pub const MARK: Section = Section {
    what: "a mark",
    keys: &[
        key("trail", "body", r#""Fenn""#, "the way it came"),
        key("path", "body", r#""Fenn""#, "the way it will go"),
        key("sector", "body", r#""Fenn""#, "what the line from the centre covers in equal times"),
        key("velocity", "body", r#""Fenn""#, "arrow of velocity"),
        key("gravity", "body", r#""Fenn""#, "arrow of the gravity that it feels"),
        key("conic", "body", r#""Fenn""#, "the conic on which it is"),
        key("foci", "body", r#""Fenn""#, "both foci of that conic"),
        key("apsides", "body", r#""Fenn""#, "nearest and farthest point of that conic"),
        key("speed", "body", r#""Fenn""#, "its speed, under its name"),
        key("distance", "body", r#""Fenn""#, "its distance, under its name"),
        key("height", "body", r#""Fenn""#, "its height above the surface, under its name"),
        key("period", "body", r#""Fenn""#, "its period, under its name"),
        key(
            "lasts",
            "time",
            r#""1 yr""#,
            "with trail: how far back; from the start of the beat unless stated",
        ),
        key("ahead", "time", r#""1 yr""#, "with path: how far ahead; one period unless stated"),
        key(
            "every",
            "time",
            r#""20 d""#,
            "with sector: model time of each; a twelfth of the period unless stated",
        ),
        key("count", "whole number", "6", "with sector: how many; as many as fit unless stated"),
        key("area", "true or false", "true", "with sector: whether each one's area is written beside it"),
        key("about", "body", r#""Orla""#, "relative to which body; its primary unless stated"),
    ],
};

/// Marks that belong to no body.
pub const PLAIN_MARKS: [&str; 3] = ["scale", "date", "pace"];

/// Marks of a body: the keys of [`MARK`] that take one.
pub const BODY_MARKS: [&str; 12] = [
    "trail", "path", "sector", "velocity", "gravity", "conic", "foci", "apsides", "speed", "distance",
    "height", "period",
];

/// Every section, for the format's reference.
pub const SECTIONS: [&Section; 21] = [
    &TOP,
    &PHYSICS,
    &BODY,
    &ATMOSPHERE,
    &DRAG,
    &ORBIT,
    &PLACE,
    &THROW,
    &DROP,
    &SWARM,
    &CHANGE,
    &CHANGE_TIME,
    &BEAT,
    &CLOCK,
    &START,
    &VIEW,
    &CENTRE,
    &MARK,
    &AIM,
    &WANT,
    &FREE,
];
