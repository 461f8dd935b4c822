//! The Moon in the Earth's shadow, against the eclipses of 2025 and 2026.
//!
//! Dates and times are from memory of published almanacs (UTC, to the minute), not from a file; no source is at hand to copy.

use fallaround_core::ephemeris::events::{Query, find};
use fallaround_core::scenario::EventKind;
use fallaround_core::time::Epoch;
use fallaround_tests::{assert_close, body, paths, scenario, start};

/// Almanacs let the Earth's air widen the shadow by about 1 % of the Moon's parallax, 0.6 arcmin, which the Moon covers in
/// 1.2 minutes (more where it enters at a slant), and aim the shadow by the Sun's apparent place, 20 arcsec or 0.7 minutes off
/// the geometric one. Their times are known to the minute here.
const TIME_MIN: f64 = 3.0;

/// First and last touch of the umbra, UTC.
const TOTAL: [(&str, &str); 3] = [
    ("2025-03-14T05:10:00Z", "2025-03-14T08:48:00Z"),
    ("2025-09-07T16:27:00Z", "2025-09-07T19:57:00Z"),
    ("2026-03-03T09:50:00Z", "2026-03-03T13:17:00Z"),
];

#[test]
fn the_moon_is_eclipsed_when_it_was() {
    let bodies = ["Sun", "Earth", "Moon"]
        .map(|name| format!("[[body]]\nname = \"{name}\"\nreal = \"{name}\"\n"))
        .concat();
    let asked = scenario(&format!("date = \"2025-01-01T00:00:00Z\"\n{bodies}"));
    let from = asked.date.expect("a date");
    let initial = start(&asked);
    let until_s = 730.0 * 86_400.0;
    let eph = paths(&initial, 0.0, until_s);
    let look = |kind| {
        let query = Query::new(kind, body(&initial, "Moon"), Some(body(&initial, "Earth")));
        find(&eph, &initial, &query, 0.0, until_s)
    };
    let (entries, exits) = (look(EventKind::ShadowEntry), look(EventKind::ShadowExit));
    // Three total eclipses and the partial one of 2026-08-28.
    assert_eq!((entries.len(), exits.len()), (4, 4), "{entries:?}");
    for ((entry, exit), (first, last)) in entries.iter().zip(&exits).zip(TOTAL) {
        for (event, want) in [(entry, first), (exit, last)] {
            let want_s = Epoch::parse_utc(want).expect("a date").tdb_s() - from.tdb_s();
            assert_close(want, event.t_s / 60.0, want_s / 60.0, TIME_MIN, "min");
        }
    }
    // Each lies within its time in the penumbra, and the wider penumbra is met no less often.
    let (outer_in, outer_out) = (look(EventKind::PenumbraEntry), look(EventKind::PenumbraExit));
    for (entry, exit) in entries.iter().zip(&exits) {
        let around = outer_in.iter().zip(&outer_out).any(|(a, b)| a.t_s < entry.t_s && exit.t_s < b.t_s);
        assert!(around, "{entry:?}");
    }
}
