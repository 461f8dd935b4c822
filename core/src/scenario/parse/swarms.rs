//! Swarms: `[[body]]`s with the form `swarm`.

use super::super::grammar::{self, FORMS, SWARM_SHAPES};
use super::super::model::{BodyId, Colour, Plane, Spot, Swarm, SwarmShape};
use super::super::names::Names;
use super::super::reader::{Field, Reading};
use super::{MAX_TRACERS, air, bodies, forms};
use crate::units::{Angle, Length, Quantity, Speed};
use std::f64::consts::PI;

/// Keys of a body that mean nothing of a swarm, and why.
const FOREIGN: [(&str, &str); 7] = [
    ("kind", "its tracers are drawn as points"),
    ("mass", "its tracers feel gravity and pull on nothing"),
    ("gm", "its tracers feel gravity and pull on nothing"),
    ("radius", "its tracers are points"),
    ("surface", "its tracers are points without a surface"),
    ("restitution", "its tracers are points without a surface"),
    ("atmosphere", "its tracers are points without a surface"),
];

/// Reads all swarms; `None` when one has a problem. `of_bodies`: the sections of the bodies.
pub(super) fn read(sections: &[Reading<'_>], of_bodies: &[Reading<'_>], names: &Names) -> Option<Vec<Swarm>> {
    let mut left = MAX_TRACERS;
    let swarms: Vec<Option<Swarm>> =
        sections.iter().map(|section| one(section, of_bodies, names, &mut left)).collect();
    swarms.into_iter().collect()
}

fn one(section: &Reading<'_>, of_bodies: &[Reading<'_>], names: &Names, left: &mut usize) -> Option<Swarm> {
    let field = section.get("swarm")?;
    for (key, why) in FOREIGN {
        if let Some(stated) = section.get(key) {
            let wrong = format!("a swarm has no {key}: {why}");
            stated.report.error(&stated.key_at, wrong, "leave it out");
        }
    }
    for other in section.stated(&FORMS).iter().filter(|form| form.name() != "swarm") {
        other.report.error(
            &other.key_at,
            format!("a body has both {} and swarm", other.name()),
            "write a [[body]] for each",
        );
    }
    let colour = bodies::colour(section);
    let drag = air::drag(section);
    let table = field.table(&grammar::SWARM)?;
    let count = count(&table, left);
    let seed = match table.get("seed") {
        Some(field) => field.whole(0, i64::from(u32::MAX)),
        None => Some(1),
    };
    let shape = shape(&table, of_bodies, names);
    Some(Swarm {
        name: bodies::name(section),
        colour: colour.unwrap_or(Colour::Bone),
        drag,
        shape: shape?,
        count: count?,
        seed: u64::try_from(seed?).ok()?,
        place: section.report().source().place(section.at.start),
    })
}

/// How many tracers; what is left of all is made less by so many.
fn count(table: &Reading<'_>, left: &mut usize) -> Option<usize> {
    let field = table.need("count")?;
    let count = field.whole(1, i64::try_from(MAX_TRACERS).ok()?)?;
    if count > *left {
        field.error(
            format!("all swarms together have more than {MAX_TRACERS} tracers"),
            format!("{left} are left for this one"),
        );
        return None;
    }
    *left -= count;
    Some(count)
}

/// The keys that add to each shape.
fn extras(word: &str) -> &'static [&'static str] {
    match word {
        "ring" => &["from", "to", "thickness", "inclination", "node"],
        "belt" => &["from", "to", "eccentricity", "spread", "inclination", "node"],
        "cloud" => &["from", "to", "eccentricity"],
        _ => &["fastest", "slowest", "height", "latitude", "longitude"],
    }
}

/// All keys that add to some shape.
const EXTRAS: [&str; 12] = [
    "from",
    "to",
    "thickness",
    "eccentricity",
    "spread",
    "inclination",
    "node",
    "fastest",
    "slowest",
    "height",
    "latitude",
    "longitude",
];

fn shape(table: &Reading<'_>, of_bodies: &[Reading<'_>], names: &Names) -> Option<SwarmShape> {
    let stated = table.stated(&SWARM_SHAPES);
    let Some(main) = stated.first() else {
        table.error(
            "a swarm doesn't say what it is",
            "start with ring, belt, cloud or burst, as in { ring = \"Brae\", from = \"9000 km\", to = \"14000 km\", count = 5000 }",
        );
        return None;
    };
    if let Some(second) = stated.get(1) {
        table.report().error(
            &second.key_at,
            format!("a swarm is both {} and {}", main.name(), second.name()),
            "write a [[body]] for each",
        );
    }
    let fitting = extras(main.name());
    let mut fits = true;
    for extra in table.stated(&EXTRAS) {
        if !fitting.contains(&extra.name()) {
            fits = false;
            table.report().error(
                &extra.key_at,
                format!("{} means nothing beside {}", extra.name(), main.name()),
                format!("beside {} may stand: {}", main.name(), fitting.join(", ")),
            );
        }
    }
    let body = main.body(names);
    if let Some(body) = body {
        fits &= check_body(main, body, of_bodies, table, names);
    }
    let shape = match main.name() {
        "burst" => burst(table, body),
        orbits => on_orbits(orbits, table, body),
    };
    shape.filter(|_| fits)
}

/// Whether the body has what the shape needs: gravity to go around, a surface for a spot on it.
fn check_body(
    main: &Field<'_>,
    body: BodyId,
    of_bodies: &[Reading<'_>],
    table: &Reading<'_>,
    names: &Names,
) -> bool {
    let Some(section) = of_bodies.get(body.0) else { return false };
    // A key that is stated wrongly has its own problem already.
    let has = |keys: &[&str]| keys.iter().any(|key| section.get(key).is_some());
    let name = names.name(body);
    if main.name() != "burst" && !has(&["mass", "gm", "real"]) {
        main.error(
            format!("{name} has no mass, so nothing goes around it"),
            format!("give {name} its mass or gm"),
        );
        return false;
    }
    if let Some(spot) = table.stated(&SPOT).first()
        && !has(&["radius", "real"])
    {
        spot.report.error(
            &spot.key_at,
            format!("{name} has no radius, so it has no surface with a {}", spot.name()),
            format!("give {name} its radius, or leave {} out", spot.name()),
        );
        return false;
    }
    true
}

fn on_orbits(word: &str, table: &Reading<'_>, body: Option<BodyId>) -> Option<SwarmShape> {
    let from: Option<Length> = table.need("from").and_then(|f| f.positive());
    let to_field = table.need("to");
    let to: Option<Length> = to_field.as_ref().and_then(Field::positive);
    let ordered = match (from, to, &to_field) {
        (Some(from), Some(to), Some(field)) if to < from => {
            field.error("to is less than from", "exchange the two");
            false
        }
        _ => true,
    };
    let eccentricity = table.get("eccentricity").map_or(Some(0.0), |field| {
        let e = field.number()?;
        if (0.0..1.0).contains(&e) {
            return Some(e);
        }
        field.error(
            format!("eccentricity is {e}"),
            "it must be 0 to below 1: the orbits of a swarm are closed",
        );
        None
    });
    let plane = plane(table);
    let spread = table.get("spread").map_or(Some(Angle::default()), |field| {
        let spread: Angle = field.not_negative()?;
        if spread.rad() <= PI * (1.0 + f64::EPSILON) {
            return Some(spread);
        }
        field.error("spread is more than half a turn", "it must be 0 deg to 180 deg");
        None
    });
    let thickness = table.get("thickness").map_or(Some(Length::default()), |field| {
        let thickness: Length = field.not_negative()?;
        if from.is_none_or(|from| thickness.m() <= 2.0 * from.m()) {
            return Some(thickness);
        }
        field.error(
            "the ring is thicker than it is wide across",
            "thickness must be at most twice from; cloud is a swarm in all directions",
        );
        None
    });
    if !ordered {
        return None;
    }
    let (around, from, to, eccentricity) = (body?, from?, to?, eccentricity?);
    Some(match word {
        "ring" => SwarmShape::Ring { around, from, to, thickness: thickness?, plane: plane? },
        "belt" => SwarmShape::Belt { around, from, to, eccentricity, spread: spread?, plane: plane? },
        _ => SwarmShape::Cloud { around, from, to, eccentricity },
    })
}

fn plane(table: &Reading<'_>) -> Option<Plane> {
    let inclination = table.quantity_or("inclination", Angle::default());
    let node = table.quantity_or("node", Angle::default());
    Some(Plane { inclination: inclination?, node: node? })
}

/// The keys that say from which spot of a surface.
const SPOT: [&str; 3] = ["height", "latitude", "longitude"];

fn burst(table: &Reading<'_>, body: Option<BodyId>) -> Option<SwarmShape> {
    let fastest: Option<Speed> = table.need("fastest").and_then(|f| f.positive());
    let slowest_field = table.get("slowest");
    let slowest: Option<Speed> =
        slowest_field.as_ref().map_or(Some(Speed::default()), |field| field.not_negative());
    if let (Some(slowest), Some(fastest), Some(field)) = (slowest, fastest, &slowest_field)
        && slowest.si() > fastest.si()
    {
        field.error("slowest is more than fastest", "exchange the two");
        return None;
    }
    let spot = if table.stated(&SPOT).is_empty() {
        Some(None)
    } else {
        let height = table.get("height").map_or(Some(Length::default()), |field| field.not_negative());
        let latitude = forms::latitude(table);
        let longitude = table.quantity_or("longitude", Angle::default());
        (|| Some(Some(Spot { height: height?, latitude: latitude?, longitude: longitude? })))()
    };
    Some(SwarmShape::Burst { of: body?, slowest: slowest?, fastest: fastest?, spot: spot? })
}
