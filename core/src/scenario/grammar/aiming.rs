//! The sections of an aim.

use super::{Section, key};

/// `[[aim]]`.
pub const AIM: Section = Section {
    what: "an aim",
    keys: &[
        key("want", "list of tables", r#"[{ event = "periapsis of Fenn", at = "140 d" }]"#, "what is wanted"),
        key(
            "free",
            "list of tables",
            r#"[{ body = "Fenn", quantity = "orbit.periapsis", from = "0.3 au", to = "0.5 au" }]"#,
            "the numbers that may be changed for it",
        ),
    ],
};

/// An entry of `want`.
pub const WANT: Section = Section {
    what: "a want",
    keys: &[
        key(
            "event",
            "event",
            r#""closest-approach of Pell to Brae""#,
            "the event of which something is wanted",
        ),
        key("body", "body", r#""Pell""#, "without event: the body of which something is wanted"),
        key("about", "body", r#""Brae""#, "with body: relative to which; its primary unless stated"),
        key("at", "time", r#""210 d""#, "when the event should happen; with body: the instant meant"),
        key("until", "time", r#""2 yr""#, "how far the event is looked for; twice its at unless stated"),
        key("distance", "length", r#""500 km""#, "distance wanted, from centre to centre"),
        key("speed", "speed", r#""7.8 km/s""#, "relative speed wanted"),
        key("longitude", "angle", r#""40 deg""#, "longitude wanted, seen from the centre of the other body"),
        key("latitude", "angle", r#""10 deg""#, "latitude wanted, seen from the centre of the other body"),
        key(
            "period-ratio",
            "number, more than 0",
            "1.5",
            "with body and about: wanted period of one by that of the other",
        ),
        key(
            "count",
            "whole number",
            "3",
            "with event: how many of them are wanted until the end of the search",
        ),
        key(
            "within",
            "quantity of what is wanted",
            r#""1 h""#,
            "how far off what is wanted may be, where a want has one outcome; 1 s, a millionth, or 0.04 arcsec unless stated",
        ),
    ],
};

/// An entry of `free`.
pub const FREE: Section = Section {
    what: "a free number",
    keys: &[
        key("body", "body", r#""Pell""#, "the body whose number it is"),
        key(
            "quantity",
            "key of the body",
            r#""throw.speed""#,
            "the number: form and key, such as place.velocity.x",
        ),
        key("from", "quantity", r#""5 km/s""#, "the least that it may be"),
        key("to", "quantity", r#""9 km/s""#, "the most that it may be"),
    ],
};
