//! Oppositions, conjunctions, stations and greatest elongations of 2020 to 2035 from JPL DE440: `data/apparitions.csv`, column
//! `jd_geo` (geometric directions, longitudes of the fixed ecliptic of J2000), which is what the engine means by these events.

use fallaround_core::ephemeris::events::{Query, find};
use fallaround_core::scenario::EventKind;
use fallaround_core::time::Epoch;
use fallaround_tests::{Table, assert_close, body, paths, scenario, start};

const DAY_S: f64 = 86_400.0;

/// The table gives 1e-5 d. Over 15 years the model is within 0.01 arcsec of DE440 as seen from Earth; longitudes relative to the
/// Sun change by at least 0.5 degrees a day, so that adds up to 1e-5 d at most.
const TIME_D: f64 = 2e-5;

/// Where an angle stands still it is its rate that counts. The Earth swings with the Moon at 1,070 km a day, and the model's Moon is
/// up to 100 arcsec off after decades: 0.5 km a day, seen from 0.4 au 0.002 arcsec a day. The rate changes by 40 arcsec a day in a
/// day around these events, which makes 5e-5 d.
const STILL_D: f64 = 5e-5;

#[test]
fn phenomena_come_when_de440_has_them() {
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
        ("Mars", EventKind::Stationary, vec!["retrograde_start", "retrograde_end"]),
        (
            "Venus",
            EventKind::GreatestElongation,
            vec!["greatest_elongation_east", "greatest_elongation_west"],
        ),
    ] {
        let mut want: Vec<(f64, bool)> = table
            .rows
            .iter()
            .filter(|row| row.text("body").eq_ignore_ascii_case(name) && events.contains(&row.text("event")))
            .map(|row| (row.number("jd_geo"), row.text("event").ends_with("west")))
            .collect();
        want.sort_by(|a, b| a.0.total_cmp(&b.0));
        let query = Query::new(kind, body(&initial, name), Some(earth));
        let got = find(&eph, &initial, &query, 0.0, until_s);
        assert_eq!(got.len(), want.len(), "{} of {name}", kind.name());
        let still = matches!(kind, EventKind::Stationary | EventKind::GreatestElongation);
        let tolerance_d = if still { STILL_D } else { TIME_D };
        for (got, (want, west)) in got.iter().zip(&want) {
            let jd = from.plus_s(got.t_s).tdb_jd();
            assert_close(&format!("{} of {name}", kind.name()), jd, *want, tolerance_d, "d");
            assert_eq!(got.value < 0.0, *west, "{got:?}");
        }
        compared += got.len();
    }
    // 20 conjunctions and 20 elongations of Venus, 23 oppositions of Mars and Jupiter, 16 stations of Mars.
    assert_eq!(compared, 79);
}
