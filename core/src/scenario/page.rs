//! The format's reference as a page of Markdown, made from the same tables that parsing follows, so that it can't drift.

use super::grammar::{BODY_MARKS, PLAIN_MARKS, SECTIONS};
use super::model::EventKind;
use std::fmt::Write as _;

/// The page.
pub fn format_page() -> String {
    let mut page = String::from(
        "# The scenario file, format 1\n\n\
         One TOML file is one scenario. This page is made from the program's own tables: run\n\
         `cargo run -p fallaround-core --example format > scenarios/FORMAT.md` after a change of them.\n\n\
         A quantity is a text with a unit: \"0.6 au\", \"7.8 km/s\", \"12 deg\", \"3 months\", \"1.3 Earth masses\", \"12 d/s\" for a pace.\n\
         Times of the calendar are UTC. Axes are the ecliptic and equinox of J2000.\n\n\
         `fallaround check FILE` tells everything that is wrong with a file, with line and column.\n",
    );
    for section in SECTIONS {
        put(
            &mut page,
            format_args!(
                "\n## {}\n\n| key | value | example | meaning |\n| --- | --- | --- | --- |\n",
                title(section.what)
            ),
        );
        for key in section.keys {
            let example = key.example.replace('|', "\\|");
            put(
                &mut page,
                format_args!("| `{}` | {} | `{example}` | {} |\n", key.name, key.value, key.meaning),
            );
        }
    }
    let marks: Vec<String> = BODY_MARKS.iter().map(|mark| format!("`{mark} of BODY`")).collect();
    let plain: Vec<String> = PLAIN_MARKS.iter().map(|mark| format!("`{mark}`")).collect();
    put(&mut page, format_args!("\n## Marks in short\n\n{}, {}.\n", marks.join(", "), plain.join(", ")));
    let events: Vec<String> = EventKind::ALL.iter().map(|kind| format!("`{}`", kind.name())).collect();
    put(
        &mut page,
        format_args!(
            "\n## Events\n\n`KIND of BODY`, with `to`, `with`, `from` or `on` another body where one is meant, and a number \
             before it for a later one: \"periapsis of Fenn\", \"2nd contact of Ball with Brae\". A distance that is crossed \
             stands before the body: \"distance 1 au of Fenn from Orla\". The kinds: {}.\n",
            events.join(", ")
        ),
    );
    page
}

fn put(page: &mut String, what: std::fmt::Arguments<'_>) {
    // Writing to a string can't fail.
    let _written = page.write_fmt(what);
}

/// "a body" as the title of a section: "Body".
fn title(what: &str) -> String {
    let bare = ["a ", "an ", "the "].iter().find_map(|article| what.strip_prefix(article)).unwrap_or(what);
    let mut letters = bare.chars();
    letters.next().map_or_else(String::new, |first| first.to_uppercase().chain(letters).collect())
}
