//! Mercury and Venus before the Sun, against the transits of 2003 to 2019.
//!
//! Dates and times are from memory of published almanacs (first and last contact of the discs, seen from the Earth's centre,
//! UTC, to the minute), not from a file; no source is at hand to copy.

use fallaround_core::ephemeris::events::{Query, find};
use fallaround_core::scenario::EventKind;
use fallaround_core::time::Epoch;
use fallaround_tests::{assert_close, body, paths, scenario, start};

/// Events are geometric, almanacs tell what is seen: the Sun's light takes 8.3 minutes, in which nothing can move on by more
/// than it does in that time. Then the rounding of the minute.
const TIME_MIN: f64 = 8.8;

/// The rounding of two minutes, and what light does to the path: while it is on its way from Mercury, the Earth moves by 9,000 km or
/// 10 arcsec against the Sun, at some 10 degrees to Mercury's path. The path shifts sideways by 1.7 arcsec, and a chord that
/// passes as far from the Sun's centre as it is half long (that of 2003) lasts 0.9 minutes more or less at 4 arcsec a minute.
const LENGTH_MIN: f64 = 2.0;

/// Planet, first contact, last contact.
const SEEN: [(&str, &str, &str); 6] = [
    ("Mercury", "2003-05-07T05:13:00Z", "2003-05-07T10:32:00Z"),
    ("Venus", "2004-06-08T05:13:00Z", "2004-06-08T11:26:00Z"),
    ("Mercury", "2006-11-08T19:12:00Z", "2006-11-09T00:10:00Z"),
    ("Venus", "2012-06-05T22:09:00Z", "2012-06-06T04:49:00Z"),
    ("Mercury", "2016-05-09T11:12:00Z", "2016-05-09T18:42:00Z"),
    ("Mercury", "2019-11-11T12:35:00Z", "2019-11-11T18:04:00Z"),
];

#[test]
fn the_inner_planets_crossed_the_sun_when_they_did_and_at_no_other_time() {
    let bodies = ["Sun", "Mercury", "Venus", "Earth"]
        .map(|name| format!("[[body]]\nname = \"{name}\"\nreal = \"{name}\"\n"))
        .concat();
    let asked = scenario(&format!("date = \"2003-01-01T00:00:00Z\"\n{bodies}"));
    let from = asked.date.expect("a date");
    let initial = start(&asked);
    // To the end of 2019.
    let until_s = 17.0 * 365.25 * 86_400.0;
    let eph = paths(&initial, 0.0, until_s);
    for planet in ["Mercury", "Venus"] {
        let look = |kind| {
            let query = Query::new(kind, body(&initial, planet), Some(body(&initial, "Earth")));
            find(&eph, &initial, &query, 0.0, until_s)
        };
        let (entries, exits) = (look(EventKind::TransitEntry), look(EventKind::TransitExit));
        let want: Vec<_> = SEEN.iter().filter(|seen| seen.0 == planet).collect();
        assert_eq!((entries.len(), exits.len()), (want.len(), want.len()), "{planet}: {entries:?}");
        for ((entry, exit), (_, first, last)) in entries.iter().zip(&exits).zip(want) {
            let seconds = |date: &str| Epoch::parse_utc(date).expect("a date").tdb_s() - from.tdb_s();
            assert_close(first, entry.t_s / 60.0, seconds(first) / 60.0, TIME_MIN, "min");
            let length_min = (seconds(last) - seconds(first)) / 60.0;
            assert_close(last, (exit.t_s - entry.t_s) / 60.0, length_min, LENGTH_MIN, "min");
            // Sum of the angular radii: a quarter of a degree for the Sun, and next to nothing.
            assert!(entry.unit == "deg" && (0.26..0.28).contains(&entry.value), "{entry:?}");
        }
    }
}
