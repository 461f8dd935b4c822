//! The sections of a change.

use super::{Section, key};

/// `[[change]]`.
pub const CHANGE: Section = Section {
    what: "a change",
    keys: &[
        key(
            "at",
            "time or table",
            r#"{ beat = "The long fall" }"#,
            "when: in model time from the scenario's start, when a beat starts, or at an event",
        ),
        key("gravity", "body", r#""Orla""#, "the body whose gravity is switched"),
        key("on", "true or false", "false", "with gravity: whether it acts from then on"),
        key(
            "kick",
            "body",
            r#""Ball""#,
            "the body whose velocity changes; one that rests on another leaves it if that lifts it off",
        ),
        key("speed", "speed", r#""200 m/s""#, "with kick: by how much; negative: backwards"),
        key(
            "along",
            "velocity or outwards",
            r#""velocity""#,
            "with kick: where it is going, or away from the body that it is about; velocity unless stated",
        ),
        key("about", "body", r#""Orla""#, "with along: relative to which body; its primary unless stated"),
        key(
            "velocity",
            "three speeds",
            r#"["0 km/s", "1 km/s", "0 km/s"]"#,
            "with kick: what is added, ecliptic axes, instead of speed",
        ),
    ],
};

/// `at` of a change, as a table.
pub const CHANGE_TIME: Section = Section {
    what: "the time of a change",
    keys: &[
        key(
            "beat",
            "title of a beat",
            r#""The long fall""#,
            "when this beat starts, as planned; every beat that shows later model times sees the change, wherever it stands",
        ),
        key("event", "event", r#""2nd periapsis of Fenn""#, "at an event, counted from the scenario's start"),
        key("before", "time", r#""3 d""#, "with event: so long before it, in model time"),
        key("after", "time", r#""3 d""#, "so long after it, in model time"),
    ],
};

/// The keys of a change that say what changes.
pub const CHANGES: [&str; 2] = ["gravity", "kick"];
