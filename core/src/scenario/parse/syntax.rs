//! What to tell a person whose text is not TOML.

use super::super::problem::Problem;
use super::super::source::Source;

/// The problem of a text that is not TOML, in words that help to mend it.
pub(super) fn problem(error: &toml_edit::TomlError, source: &Source<'_>) -> Problem {
    let at = error.span().unwrap_or(0..0);
    let message = error.message();
    let here = source.at(&at).trim();
    let has = |words: &str| message.contains(words);
    // A text left open in a list is noticed as a list left open.
    let open = if has("string") || has("unclosed") { open_quote(source.at(&(0..at.start))) } else { None };
    let place = source.place(open.unwrap_or(at.start));
    let (wrong, remedy) = if has("duplicate key") {
        (format!("{} is stated twice", quoted(here)), "keep one of the two".to_owned())
    } else if has("string") || open.is_some() {
        let wrong = if has("escape") {
            "a text has a backslash that means nothing"
        } else {
            "a text is not closed, or holds what it must not"
        };
        (wrong.to_owned(), "texts stand between \" and \" on one line, or between \"\"\" and \"\"\"; a backslash is written \\\\".to_owned())
    } else if has("recursion") {
        (
            "lists and tables are nested too deeply".to_owned(),
            "a scenario needs four levels at most".to_owned(),
        )
    } else {
        (format!("this is not TOML: {message}"), remedy_of(message).to_owned())
    };
    Problem::error(place, wrong, remedy)
}

/// Where the text starts that is still open at the end of `before`: there the author looks for it.
fn open_quote(before: &str) -> Option<usize> {
    if before.matches("\"\"\"").count() % 2 == 1 {
        return before.rfind("\"\"\"");
    }
    let line_start = before.rfind('\n').map_or(0, |i| i + 1);
    let mut open: Option<(usize, char)> = None;
    let mut escaped = false;
    for (i, c) in before.get(line_start..)?.char_indices() {
        match open {
            None if c == '#' => break,
            None if c == '"' || c == '\'' => open = Some((line_start + i, c)),
            Some((_, '"')) if escaped => escaped = false,
            Some((_, '"')) if c == '\\' => escaped = true,
            Some((_, quote)) if c == quote => open = None,
            _ => {}
        }
    }
    open.map(|(i, _)| i)
}

fn quoted(here: &str) -> String {
    let name = crate::units::text::clip(here.trim_matches(['"', '\'', '[', ']']));
    if name.is_empty() { "a key".to_owned() } else { format!("\"{name}\"") }
}

fn remedy_of(message: &str) -> &'static str {
    const REMEDIES: [(&str, &str); 6] = [
        ("array", "lists stand between [ and ], with commas between"),
        ("inline table", "tables on one line stand between { and }, with commas between"),
        ("table", "sections start with [[body]], [[beat]] or [physics] on a line of their own"),
        ("key", "each line is a key, an equals sign and a value, as in title = \"Equal areas\""),
        ("number", "quantities stand in quotes with their unit, as in \"0.6 au\""),
        ("date", "dates look like 2031-03-05T20:00:00Z"),
    ];
    REMEDIES
        .iter()
        .find(|(word, _)| message.contains(word))
        .map_or("each line is a key, an equals sign and a value; texts stand in quotes", |(_, remedy)| remedy)
}
