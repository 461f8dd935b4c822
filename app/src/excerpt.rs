//! The line of a text that a problem is about, cut to what fits, with the place marked.

/// Characters shown before and after the place at most.
const AROUND: usize = 60;

/// A line around a place.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Excerpt {
    /// What stands before the place.
    pub before: String,
    /// What stands from the place on.
    pub after: String,
}

/// The line around a place, both counted from 1; `None` where the text has no such line. A column past the
/// end of the line marks its end.
pub fn excerpt(text: &str, line: usize, column: usize) -> Option<Excerpt> {
    let line = text.lines().nth(line.checked_sub(1)?)?;
    let at = column.saturating_sub(1).min(line.chars().count());
    let skipped = at.saturating_sub(AROUND);
    let mut before: String = line.chars().take(at).skip(skipped).map(visible).collect();
    if skipped > 0 {
        before.insert(0, '…');
    }
    let mut rest = line.chars().skip(at);
    let mut after: String = rest.by_ref().take(AROUND).map(visible).collect();
    if rest.next().is_some() {
        after.push('…');
    }
    Some(Excerpt { before, after })
}

/// Characters that would move, hide or reorder their neighbours are shown as a replacement character.
fn visible(c: char) -> char {
    match c {
        '\t' => ' ',
        '\u{200b}'..='\u{200f}' | '\u{202a}'..='\u{202e}' | '\u{2060}'..='\u{206f}' | '\u{feff}' => {
            '\u{fffd}'
        }
        c if c.is_control() => '\u{fffd}',
        c => c,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_place_parts_the_line() {
        let found = excerpt("title = \"a\"\nmas = \"1 kg\"\n", 2, 1).unwrap();
        assert_eq!(found, Excerpt { before: String::new(), after: "mas = \"1 kg\"".into() });
        let later = excerpt("título = 3", 1, 10).unwrap();
        assert_eq!((later.before.as_str(), later.after.as_str()), ("título = ", "3"));
    }

    #[test]
    fn lines_without_end_are_cut() {
        let long = "x".repeat(1_000_000);
        let found = excerpt(&long, 1, 500_000).unwrap();
        assert_eq!(found.before.chars().count(), AROUND + 1);
        assert_eq!(found.after.chars().count(), AROUND + 1);
    }

    #[test]
    fn places_outside_the_text_do_no_harm() {
        assert_eq!(excerpt("a", 0, 0), None);
        assert_eq!(excerpt("a", 2, 1), None);
        assert_eq!(excerpt("a", 1, 99), Some(Excerpt { before: "a".into(), after: String::new() }));
    }

    #[test]
    fn characters_that_reorder_text_are_shown() {
        let found = excerpt("a\u{202e}b\tc", 1, 1).unwrap();
        assert_eq!(found.after, "a\u{fffd}b c");
    }
}
