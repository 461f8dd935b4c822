//! Derivatives against differences of whole trials.

use super::super::residuals;
use super::super::trial::Trial;
use crate::resolve::Solar;
use crate::scenario::edit::Document;

const SYSTEM: &str = r#"format = 1
title = "A system"
[[body]]
name = "Orla"
mass = "0.9 Sun masses"
[[body]]
name = "Brae"
mass = "300 Earth masses"
radius = "69000 km"
orbit = { around = "Orla", semi-major = "1.1 au", eccentricity = 0.1, inclination = "2 deg", anomaly = "40 deg" }
[[body]]
name = "Lune"
mass = "0.1 Earth masses"
radius = "3000 km"
orbit = { around = "Brae", semi-major = "900000 km", eccentricity = 0.05, anomaly = "10 deg" }
[[body]]
name = "Pell"
orbit = { around = "Orla", periapsis = "0.6 au", eccentricity = 0.7, inclination = "8 deg", argument = "20 deg", node = "30 deg", before-periapsis = "60 d" }
[[body]]
name = "Ball"
throw = { from = "Lune", height = "20 km", speed = "0.9 km/s", elevation = "50 deg", heading = "80 deg", latitude = "10 deg" }
[[body]]
name = "Shot"
place = { about = "Brae", position = ["500000 km", "10000 km", "-20000 km"], velocity = ["-3 km/s", "13 km/s", "1 km/s"] }
"#;

/// The derivatives at what the text states, and differences of trials; `None` where there are no derivatives.
fn both(wants: &str, free: &[(&str, &str, &str, &str)]) -> Option<[Vec<Vec<f64>>; 2]> {
    let free: Vec<String> = free
        .iter()
        .map(|(body, quantity, from, to)| {
            format!("{{ body = \"{body}\", quantity = \"{quantity}\", from = {from}, to = {to} }}")
        })
        .collect();
    let text = format!("{SYSTEM}[[aim]]\nwant = [{wants}]\nfree = [{}]\n", free.join(", "));
    let document = Document::parse(&text).unwrap();
    let parsed = document.scenario();
    let scenario = parsed.scenario.unwrap_or_else(|| panic!("{:?}", parsed.problems));
    let solar = Solar::of(&scenario);
    let trial = Trial { document: &document, aim: &scenario.aims[0], solar: &solar, scene_m: 1e9 };
    let point = trial.stated().unwrap();
    let flight = trial.fly(&point, None).unwrap();
    let got = trial.slopes(&point, &flight)?;
    const H: f64 = 3e-6;
    let differences = (0..point.len()).map(|k| {
        let at = |by: f64| {
            let mut point = point.clone();
            point[k] += by;
            residuals(&trial.misses(&point, None).unwrap())
        };
        let ([up, down], [far_up, far_down]) = ([H, -H].map(at), [2.0 * H, -2.0 * H].map(at));
        // Off by the fourth power of H.
        let near = up.iter().zip(&down).zip(far_up.iter().zip(&far_down));
        near.map(|((a, b), (c, d))| (8.0 * (a - b) - (c - d)) / (12.0 * H)).collect()
    });
    Some([got, differences.collect()])
}

#[test]
fn derivatives_are_those_of_trials() {
    let pell = [
        ("Pell", "orbit.periapsis", "\"0.5 au\"", "\"0.7 au\""),
        ("Pell", "orbit.node", "\"0 deg\"", "\"50 deg\""),
        ("Pell", "orbit.before-periapsis", "\"50 d\"", "\"70 d\""),
        ("Orla", "mass", "\"0.8 Sun masses\"", "\"1 Sun masses\""),
        ("Brae", "orbit.eccentricity", "0.05", "0.15"),
    ];
    let ball = [
        ("Ball", "throw.speed", "\"0.8 km/s\"", "\"1 km/s\""),
        ("Ball", "throw.heading", "\"60 deg\"", "\"100 deg\""),
        ("Ball", "throw.latitude", "\"0 deg\"", "\"20 deg\""),
        ("Lune", "mass", "\"0.09 Earth masses\"", "\"0.11 Earth masses\""),
    ];
    let shot = [
        ("Shot", "place.velocity.y", "\"12 km/s\"", "\"14 km/s\""),
        ("Shot", "place.position.z", "\"-25000 km\"", "\"-15000 km\""),
    ];
    for (wants, free) in [
        (
            "{ event = \"periapsis of Pell\", at = \"60 d\", distance = \"0.5 au\", speed = \"40 km/s\", longitude = \"9 deg\", latitude = \"2 deg\" }",
            &pell[..],
        ),
        ("{ event = \"ascending-node of Pell\", at = \"55 d\", longitude = \"30 deg\" }", &pell),
        (
            "{ event = \"distance 0.8 au of Pell from Orla\", at = \"30 d\", until = \"120 d\", latitude = \"0 deg\" }",
            &pell,
        ),
        // Two wants, the later one first, and of bodies with mass.
        (
            "{ event = \"apoapsis of Brae\", at = \"200 d\", distance = \"1.2 au\" }, { body = \"Brae\", about = \"Orla\", at = \"90 d\", distance = \"1 au\", speed = \"20 km/s\" }",
            &pell,
        ),
        (
            "{ event = \"contact of Ball with Lune\", at = \"20 min\", speed = \"0.5 km/s\", longitude = \"30 deg\", latitude = \"10 deg\" }",
            &ball,
        ),
        (
            "{ event = \"closest-approach of Shot to Lune\", at = \"1 d\", until = \"10 d\", distance = \"100000 km\" }",
            &shot,
        ),
        // A count stays as it is.
        (
            "{ event = \"periapsis of Shot\", until = \"10 d\", count = 2 }, { body = \"Shot\", at = \"3 d\", distance = \"1e6 km\" }",
            &shot,
        ),
    ] {
        let [got, want] = both(wants, free).unwrap_or_else(|| panic!("{wants}: no derivatives"));
        for (number, (got, want)) in got.iter().zip(&want).enumerate() {
            assert_eq!(got.len(), want.len());
            let size = |row: &[f64]| row.iter().fold(0.0, |a: f64, x| a.max(x.abs()));
            let off: Vec<f64> = got.iter().zip(want).map(|(a, b)| a - b).collect();
            // A touch is known to the rounding of positions of 1e11 m, some 1e-4 m: at 0.7 km/s that is 1e-10 of 20 minutes, and counts
            // 18 / 12 H at most. Derivatives are some 0.1 and more.
            let tolerance = 1e-6 * size(want) + 5e-5;
            assert!(size(&off) < tolerance, "{wants}: {:?}: got {got:?}, want {want:?}", free[number]);
        }
    }
}

#[test]
fn where_only_trials_can_tell_there_are_none() {
    let node = [("Pell", "orbit.node", "\"0 deg\"", "\"50 deg\"")];
    assert!(both("{ body = \"Pell\", about = \"Brae\", at = \"3 d\", period-ratio = 2 }", &node).is_none());
    assert!(
        both("{ event = \"conjunction of Pell from Brae\", until = \"1 yr\", at = \"40 d\" }", &node)
            .is_none()
    );
    // After the contact the ball rests.
    let speed = [("Ball", "throw.speed", "\"0.8 km/s\"", "\"1 km/s\"")];
    assert!(
        both("{ body = \"Ball\", about = \"Orla\", at = \"3 d\", distance = \"1 au\" }", &speed).is_none()
    );
}
