//! The numbers of a file that bear on the motion, in its order.

use super::report::{Number, Owner};
use crate::scenario::edit::{Document, List, Path, Root, StatedNumber};
use crate::scenario::{BodyId, ChangeTime, Scenario, SwarmId};

/// A number, and where in the file it can be changed.
#[derive(Debug)]
pub(super) struct Found {
    pub(super) number: Number,
    pub(super) at: StatedNumber,
}

/// All of them: those of `[physics]`, of bodies and swarms, of changes; of beats those that say when a beat starts for which a change waits.
pub(super) fn all(document: &Document, scenario: &Scenario) -> Vec<Found> {
    let mut found = Vec::new();
    let mut take = |root: Root<'static>, owner: Owner, wanted: &dyn Fn(&str) -> bool| {
        for at in document.numbers(root) {
            let is_wanted = at.keys.first().is_some_and(|key| wanted(key));
            if !is_wanted || is_name(scenario, &at.stated) {
                continue;
            }
            let keys = if owner == Owner::Physics { at.keys.get(1..) } else { at.keys.get(..) };
            let number = Number {
                owner,
                quantity: quantity(keys.unwrap_or_default()),
                stated: at.stated.clone(),
                place: at.place,
            };
            found.push(Found { number, at });
        }
    };
    take(Root::Top, Owner::Physics, &|key| key == "physics");
    let (mut bodies, mut swarms) = (0, 0);
    for section in 0..document.count(List::Bodies) {
        let root = Root::BodyAt(section);
        let owner = if document.get(Path { root, keys: &["swarm"] }).is_some() {
            swarms += 1;
            Owner::Swarm(SwarmId(swarms - 1))
        } else {
            bodies += 1;
            Owner::Body(BodyId(bodies - 1))
        };
        take(root, owner, &|_| true);
    }
    for change in 0..scenario.changes.len() {
        take(Root::Change(change), Owner::Change(change), &|_| true);
    }
    let waited_for = scenario.changes.iter().filter_map(|change| match change.at {
        ChangeTime::Beat { beat, .. } => Some(beat),
        ChangeTime::Time(_) | ChangeTime::Event { .. } => None,
    });
    if let Some(last) = waited_for.max() {
        for beat in 0..=last {
            let goes_on = beat < last;
            take(Root::Beat(beat), Owner::Beat(beat), &|key| key == "start" || goes_on && key == "clock");
        }
    }
    found
}

/// A name may look like a quantity.
fn is_name(scenario: &Scenario, text: &str) -> bool {
    let text = text.trim();
    scenario.bodies.iter().any(|body| body.name == text)
        || scenario.swarms.iter().any(|swarm| swarm.name == text)
}

/// "place.velocity.x"; of lists that are no vectors, entries are counted from 1.
fn quantity(keys: &[String]) -> String {
    let mut words: Vec<String> = Vec::new();
    for key in keys {
        let of_vector = words.last().is_some_and(|list| list == "position" || list == "velocity");
        let axis = key.parse::<usize>().ok().filter(|_| !words.is_empty());
        words.push(match axis {
            Some(axis @ 0..3) if of_vector => ["x", "y", "z"][axis].to_owned(),
            Some(entry) => (entry + 1).to_string(),
            None => key.clone(),
        });
    }
    words.join(".")
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_number_that_bears_on_the_motion_is_found_and_no_other() {
        let text = r#"
format = 1
title = "All kinds"
[physics]
softening = "10 km"
[[body]]
name = "Orla"
mass = "1 Sun mass"
radius = "1 Sun radius"
surface = "bounce"
restitution = 0.5
atmosphere = { heights = ["0 km", "9 km"], densities = ["1 kg/m^3", "0.1 kg/m^3"] }
[[body]]
name = "3 m"
drag = { area-per-mass = "0.01 m^2/kg", coefficient = 2 }
place = { about = "Orla", position = ["1 au", "0 au", "0 au"], velocity = ["1 km/s", "2 km/s", "3 km/s"] }
[[change]]
at = { beat = "Second", after = "3 d" }
kick = "3 m"
speed = "5 m/s"
[[change]]
at = { event = "distance 1.5 au of 3 m from Orla", after = "1 h" }
kick = "3 m"
velocity = ["1 m/s", "2 m/s", "3 m/s"]
[[beat]]
title = "First"
clock = { pace = "1 d/s", lasts = "20 s" }
view = { centre = "3 m", span = "6 au" }
[[beat]]
title = "Second"
start = { time = "20 d" }
clock = { pace = "1 d/s", lasts = "20 s" }
marks = [{ trail = "3 m", lasts = "3 d" }]
"#;
        let document = Document::parse(text).expect("TOML");
        let parsed = document.scenario();
        let scenario = parsed.scenario.unwrap_or_else(|| panic!("{:#?}", parsed.problems));
        let found = all(&document, &scenario);
        let of = |owner: Owner| -> Vec<&str> {
            let owned = found.iter().filter(|one| one.number.owner == owner);
            owned.map(|one| one.number.quantity.as_str()).collect()
        };
        assert_eq!(of(Owner::Physics), ["softening"]);
        assert_eq!(
            of(Owner::Body(BodyId(0))),
            [
                "mass",
                "radius",
                "restitution",
                "atmosphere.heights.1",
                "atmosphere.heights.2",
                "atmosphere.densities.1",
                "atmosphere.densities.2"
            ]
        );
        assert_eq!(
            of(Owner::Body(BodyId(1))),
            [
                "drag.area-per-mass",
                "drag.coefficient",
                "place.position.x",
                "place.position.y",
                "place.position.z",
                "place.velocity.x",
                "place.velocity.y",
                "place.velocity.z"
            ]
        );
        assert_eq!(of(Owner::Change(0)), ["at.after", "speed"]);
        assert_eq!(of(Owner::Change(1)), ["at.event", "at.after", "velocity.x", "velocity.y", "velocity.z"]);
        assert_eq!(of(Owner::Beat(0)), ["clock.pace", "clock.lasts"]);
        assert_eq!(of(Owner::Beat(1)), ["start.time"], "a change waits for its start alone");
        let swarmed = "format = 1\ntitle = \"S\"\n[[body]]\nname = \"Orla\"\nmass = \"1 kg\"\n[[body]]\nname = \"Dust\"\n\
                       swarm = { ring = \"Orla\", from = \"1 km\", to = \"2 km\", count = 20 }\n[[body]]\nname = \"Brae\"\nmass = \"2 kg\"\nplace = { about = \"Orla\", position = [\"1 m\", \"0 m\", \"0 m\"] }\n";
        let document = Document::parse(swarmed).expect("TOML");
        let scenario = document.scenario().scenario.expect("a scenario");
        let owners: Vec<Owner> = all(&document, &scenario).iter().map(|one| one.number.owner).collect();
        let swarm = Owner::Swarm(SwarmId(0));
        let last = Owner::Body(BodyId(1));
        assert_eq!(owners, [Owner::Body(BodyId(0)), swarm, swarm, swarm, last, last, last, last]);
    }
}
