//! The section of a swarm.

use super::{Section, key};

/// `swarm`. One of the first keys, whose value is the body; the others add to it.
pub const SWARM: Section = Section {
    what: "a swarm",
    keys: &[
        key("ring", "body", r#""Brae""#, "circles around a body, near one plane, evenly over its area"),
        key("belt", "body", r#""Orla""#, "ellipses around a body, turned at random"),
        key("cloud", "body", r#""Orla""#, "ellipses around a body, in all directions alike"),
        key("burst", "body", r#""Station""#, "fragments that fly apart from a body at the scenario's start"),
        key(
            "count",
            "whole number, 1 to 50000",
            "5000",
            "how many tracers; all swarms together have at most 50000",
        ),
        key("seed", "whole number, 0 or more", "7", "another number, another draw; 1 unless stated"),
        key("from", "length", r#""9000 km""#, "with ring, belt and cloud: smallest semi-major axis"),
        key("to", "length", r#""14000 km""#, "with ring, belt and cloud: largest semi-major axis"),
        key("thickness", "length", r#""2 km""#, "with ring: how thick it is; 0 unless stated"),
        key(
            "eccentricity",
            "number, 0 to below 1",
            "0.1",
            "with belt and cloud: largest eccentricity; 0 unless stated",
        ),
        key("spread", "angle", r#""8 deg""#, "with belt: largest inclination to its plane; 0 unless stated"),
        key(
            "inclination",
            "angle",
            r#""25 deg""#,
            "with ring and belt: of its plane to the ecliptic; 0 unless stated",
        ),
        key(
            "node",
            "angle",
            r#""80 deg""#,
            "with ring and belt: longitude of its plane's ascending node; 0 unless stated",
        ),
        key("fastest", "speed", r#""100 m/s""#, "with burst: greatest speed relative to the body"),
        key(
            "slowest",
            "speed",
            r#""10 m/s""#,
            "with burst: least speed relative to the body; 0 unless stated",
        ),
        key(
            "height",
            "length",
            r#""2 km""#,
            "with burst: height of the spot above the surface; 0 unless stated",
        ),
        key(
            "latitude",
            "angle",
            r#""50 deg""#,
            "with burst: latitude of the spot; 0 unless stated. With none of these three, from all around the body",
        ),
        key(
            "longitude",
            "angle",
            r#""10 deg""#,
            "with burst: longitude of the spot, to the east; 0 unless stated",
        ),
    ],
};

/// The keys of a swarm that say what it is.
pub const SWARM_SHAPES: [&str; 4] = ["ring", "belt", "cloud", "burst"];
