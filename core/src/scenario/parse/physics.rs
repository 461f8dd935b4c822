//! `[physics]`, and which parts of it go together.

use super::super::grammar;
use super::super::model::{Form, Physics};
use super::super::reader::Reading;
use super::bodies::ReadBody;

/// What the scenario says of physics, if anything.
pub(super) fn read(top: &Reading<'_>, bodies: &[Option<ReadBody>]) -> Physics {
    let Some(table) = top.get("physics").and_then(|field| field.table(&grammar::PHYSICS)) else {
        return Physics::default();
    };
    let physics = Physics {
        relativity: table.flag("relativity"),
        drag: table.flag("drag"),
        oblateness: table.flag("oblateness"),
        companions: table.flag("companions"),
        softening: table.positive("softening"),
    };
    if let Some(field) = table.get("softening") {
        // Both are expansions about points, of which nothing is left at a distance of the softening.
        for (key, on) in [("relativity", physics.relativity), ("oblateness", physics.oblateness)] {
            if on == Some(true) {
                let wrong = format!("softening does not go with {key}");
                table.report().error(&field.key_at, wrong, "leave one of them out");
            }
        }
        let real = bodies.iter().flatten().find(|read| matches!(read.body.form, Form::Real(_)));
        if let Some(real) = real {
            table.report().error(
                &field.key_at,
                format!("softening would take {} off its real path", real.body.name),
                "leave it out, or place the bodies by orbit instead of real",
            );
        }
    }
    physics
}

#[cfg(test)]
mod tests {
    use super::super::parse;

    #[test]
    fn softening_is_read_and_refused_beside_what_it_does_not_go_with() {
        let text = |physics: &str, body: &str| {
            format!(
                "format = 1\ntitle = \"T\"\ndate = \"2031-03-05T20:00:00Z\"\n[physics]\n{physics}\n[[body]]\nname = \"Orla\"\nmass = \"1 kg\"\n{body}"
            )
        };
        let softened = parse(&text("softening = \"1000 km\"\nrelativity = false", "")).scenario.unwrap();
        assert_eq!(softened.physics.softening.map(|length| length.m()), Some(1e6));
        for (physics, body, says) in [
            ("softening = \"1 km\"\nrelativity = true", "", "5:1: softening does not go with relativity"),
            ("softening = \"1 km\"\noblateness = true", "", "5:1: softening does not go with oblateness"),
            ("softening = \"0 km\"", "", "softening is 0 km; it must be more than 0"),
            ("softening = \"3 s\"", "", "s is a time"),
            (
                "softening = \"1 km\"",
                "[[body]]\nname = \"Mars\"\nreal = \"Mars\"\n",
                "5:1: softening would take Mars off its real path; leave it out, or place",
            ),
        ] {
            let parsed = parse(&text(physics, body));
            assert!(parsed.scenario.is_none());
            let told: Vec<String> = parsed.problems.iter().map(ToString::to_string).collect();
            assert!(told.iter().any(|one| one.contains(says)), "{told:?}, want {says}");
        }
    }
}
