//! Oppositions and conjunctions of 2020 to 2035 from JPL DE440: `data/apparitions.csv`, column `jd_geo` (geometric directions,
//! longitudes of the fixed ecliptic of J2000), which is what the engine means by these events.

use fallaround_core::ephemeris::events::{Query, find};
use fallaround_core::scenario::EventKind;
use fallaround_core::time::Epoch;
use fallaround_tests::{Table, assert_close, body, paths, scenario, start};

const DAY_S: f64 = 86_400.0;

/// The table gives 1e-5 d. Over 15 years the model is within 0.01 arcsec of DE440 as seen from Earth; longitudes relative to the
/// Sun change by at least 0.5 degrees a day, so that adds up to 1e-5 d at most.
const TIME_D: f64 = 2e-5;

#[test]
fn oppositions_and_conjunctions_come_when_de440_has_them() {
    let table = Table::read("apparitions.csv");
    let names = ["Sun", "Venus", "Earth", "Mars", "Jupiter"];
    let bodies = names.map(|name| format!("[[body]]\nname = \"{name}\"\nreal = \"{name}\"\n")).concat();
    let mut asked = scenario(&format!("date = \"2020-01-01T00:00:00Z\"\n{bodies}"));
    let from = Epoch::from_tdb_jd(2_458_849.5);
    asked.date = Some(from);
    let initial = start(&asked);
    // To the end of 2035.
    let until_s = 16.0 * 365.25 * DAY_S;
    let eph = paths(&initial, 0.0, until_s);
    let earth = body(&initial, "Earth");
    let mut compared = 0;
    for (name, kind, events) in [
        ("Venus", EventKind::Conjunction, vec!["inferior_conjunction", "superior_conjunction"]),
        ("Mars", EventKind::Opposition, vec!["opposition"]),
        ("Jupiter", EventKind::Opposition, vec!["opposition"]),
    ] {
        let want: Vec<f64> = table
            .rows
            .iter()
            .filter(|row| row.text("body").eq_ignore_ascii_case(name) && events.contains(&row.text("event")))
            .map(|row| row.number("jd_geo"))
            .collect();
        let query = Query { kind, body: body(&initial, name), other: Some(earth) };
        let got = find(&eph, &initial, &query, 0.0, until_s);
        assert_eq!(got.len(), want.len(), "{} of {name}", kind.name());
        for (got, want) in got.iter().zip(&want) {
            let jd = from.plus_s(got.t_s).tdb_jd();
            assert_close(&format!("{} of {name}", kind.name()), jd, *want, TIME_D, "d");
        }
        compared += got.len();
    }
    // 20 conjunctions of Venus, 23 oppositions of Mars and Jupiter.
    assert_eq!(compared, 43);
}
