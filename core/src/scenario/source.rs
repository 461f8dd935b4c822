//! The text of a scenario, and where in it something stands.

use super::problem::Place;
use std::ops::Range;

/// Where something stands in a text, bytes.
pub(super) type At = Range<usize>;

/// A text with its line starts.
#[derive(Debug)]
pub(super) struct Source<'a> {
    text: &'a str,
    lines: Vec<usize>,
}

impl<'a> Source<'a> {
    /// `text` without a byte order mark.
    pub(super) fn new(text: &'a str) -> Self {
        let after_breaks = text.bytes().enumerate().filter(|(_, b)| *b == b'\n').map(|(i, _)| i + 1);
        Self { text, lines: std::iter::once(0).chain(after_breaks).collect() }
    }

    /// Line and column of a byte; columns count characters. Beyond the text: its end.
    pub(super) fn place(&self, byte: usize) -> Place {
        let byte = self.text.floor_char_boundary(byte.min(self.text.len()));
        let line = self.lines.partition_point(|start| *start <= byte).max(1);
        let start = self.lines.get(line - 1).copied().unwrap_or(0);
        let column = self.text.get(start..byte).map_or(0, |before| before.chars().count()) + 1;
        Place { line, column }
    }

    /// What stands there.
    pub(super) fn at(&self, at: &At) -> &'a str {
        self.text.get(at.clone()).unwrap_or("")
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn columns_count_characters() {
        let source = Source::new("é☉x\r\nab\n");
        let place = |byte| {
            let p = source.place(byte);
            (p.line, p.column)
        };
        assert_eq!(place(0), (1, 1));
        assert_eq!(place(2), (1, 2));
        assert_eq!(place(3), (1, 2), "inside a character: its start");
        assert_eq!(place(5), (1, 3));
        assert_eq!(place(8), (2, 1));
        assert_eq!(place(9), (2, 2));
        assert_eq!(place(11), (3, 1));
        assert_eq!(place(999), (3, 1));
        assert_eq!(Source::new("").place(0), Place { line: 1, column: 1 });
    }
}
