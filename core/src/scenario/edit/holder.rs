//! What holds a key: lines of a section, a table on one line, or a list. Where its entries stand, and where a new
//! one would.

use super::{Change, EditError, Root};
use std::ops::Range;
use toml_edit::{Array, InlineTable, Item, Key, Table, Value};

/// What holds keys.
pub(super) enum Holder<'d> {
    /// Lines under a header, or at the top of the file.
    Lines {
        table: &'d Table,
        /// Where the header ends; `None` at the top.
        header_end: Option<usize>,
        /// Keys before a dot, in front of each line's own.
        prefix: String,
    },
    /// `{ … }`.
    Inline {
        table: &'d InlineTable,
        /// Where the braces stand.
        braces: Range<usize>,
        prefix: String,
    },
    /// `[ … ]`.
    List {
        list: &'d Array,
        /// Where the brackets stand.
        brackets: Range<usize>,
    },
}

/// Where something that is held stands.
#[derive(Debug)]
pub(super) struct Entry {
    /// Its key and value.
    pub(super) whole: Range<usize>,
    /// Its value; of a section, its header.
    pub(super) at: Range<usize>,
    /// Whether it is not one value in one place: a section, or lines with dotted keys.
    pub(super) section: bool,
    /// The lines of one with dotted keys, each key and value.
    pub(super) leaves: Vec<Range<usize>>,
}

impl<'d> Holder<'d> {
    /// The holder at which a path starts.
    pub(super) fn root(document: &'d Table, root: Root<'_>) -> Result<Self, EditError> {
        let (key, index) = match root {
            Root::Top => {
                return Ok(Self::Lines { table: document, header_end: None, prefix: String::new() });
            }
            Root::Body(name) => ("body", body_index(document, name)?),
            Root::BodyAt(index) => ("body", index),
            Root::Beat(index) => ("beat", index),
            Root::Change(index) => ("change", index),
        };
        let missing = || EditError::NoSuchSection(key, index);
        match document.get(key).ok_or_else(missing)? {
            Item::ArrayOfTables(tables) => {
                let table = tables.get(index).ok_or_else(missing)?;
                let header_end = table.span().map(|at| at.end);
                Ok(Self::Lines { table, header_end, prefix: String::new() })
            }
            Item::Value(Value::Array(list)) => {
                let value = list.get(index).ok_or_else(missing)?;
                Self::of_value(value, String::new(), None).ok_or_else(missing)
            }
            _ => Err(missing()),
        }
    }

    /// `around`: where the braces of the table stand in which dotted keys make this one.
    fn of_value(value: &'d Value, prefix: String, around: Option<Range<usize>>) -> Option<Self> {
        match value {
            Value::InlineTable(table) if table.is_dotted() => {
                Some(Self::Inline { table, braces: around?, prefix })
            }
            Value::InlineTable(table) => {
                Some(Self::Inline { table, braces: value.span()?, prefix: String::new() })
            }
            Value::Array(list) => Some(Self::List { list, brackets: value.span()? }),
            _ => None,
        }
    }

    /// The holder behind a key.
    pub(super) fn inside(&self, key: &str) -> Option<Self> {
        match self {
            Self::Lines { table, header_end, prefix } => match table.get(key)? {
                Item::Table(inner) if inner.is_dotted() => Some(Self::Lines {
                    table: inner,
                    header_end: *header_end,
                    prefix: format!("{prefix}{}.", Key::new(key)),
                }),
                Item::Table(inner) if inner.is_implicit() => None,
                Item::Table(inner) => Some(Self::Lines {
                    table: inner,
                    header_end: inner.span().map(|at| at.end),
                    prefix: String::new(),
                }),
                Item::Value(value) => Self::of_value(value, String::new(), None),
                _ => None,
            },
            Self::Inline { table, braces, prefix } => {
                let prefix = format!("{prefix}{}.", Key::new(key));
                Self::of_value(table.get(key)?, prefix, Some(braces.clone()))
            }
            Self::List { list, .. } => Self::of_value(list.get(key.parse().ok()?)?, String::new(), None),
        }
    }

    /// Where the entry of a key stands.
    pub(super) fn entry(&self, key: &str) -> Option<Entry> {
        match self {
            Self::Lines { table, .. } => {
                let (key, item) = table.get_key_value(key)?;
                entry_of(key.span(), item)
            }
            Self::Inline { table, .. } => {
                let (key, item) = table.get_key_value(key)?;
                entry_of(key.span(), item)
            }
            Self::List { list, .. } => {
                let at = list.get(key.parse().ok()?)?.span()?;
                Some(Entry { whole: at.clone(), at, section: false, leaves: Vec::new() })
            }
        }
    }

    /// The text of an entry that is one.
    pub(super) fn text(&self, key: &str) -> Option<String> {
        match self {
            Self::Lines { table, .. } => table.get(key)?.as_str(),
            Self::Inline { table, .. } => table.get(key)?.as_str(),
            Self::List { list, .. } => list.get(key.parse().ok()?)?.as_str(),
        }
        .map(str::to_owned)
    }

    /// The keys of all entries, in the order of the table; of a list, its indices.
    pub(super) fn keys(&self) -> Vec<String> {
        match self {
            Self::Lines { table, .. } => table.iter().map(|(key, _)| key.to_owned()).collect(),
            Self::Inline { table, .. } => table.iter().map(|(key, _)| key.to_owned()).collect(),
            Self::List { list, .. } => (0..list.len()).map(|index| index.to_string()).collect(),
        }
    }

    /// All entries that stand in this holder's own lines, braces or brackets, in the order of the text.
    fn entries(&self) -> Vec<Entry> {
        let mut entries: Vec<Entry> = match self {
            Self::Lines { table, .. } => table
                .iter()
                .filter_map(|(key, _)| self.entry(key))
                .filter(|e| !e.section || !e.leaves.is_empty())
                .collect(),
            Self::Inline { table, .. } => table.iter().filter_map(|(key, _)| self.entry(key)).collect(),
            Self::List { list, .. } => (0..list.len()).filter_map(|i| self.entry(&i.to_string())).collect(),
        };
        entries.sort_by_key(|e| e.whole.start);
        entries
    }

    /// The change that adds an entry behind the others.
    pub(super) fn insertion(&self, key: &str, value: &str, text: &str) -> Option<Change> {
        let last = self.entries().iter().map(|e| e.whole.end).max();
        match self {
            Self::Lines { header_end, prefix, .. } => {
                let line = format!("{prefix}{} = {value}", Key::new(key));
                Some(match last.or(*header_end) {
                    Some(after) => {
                        let end = line_end(text, after);
                        (end..end, format!("\n{line}"))
                    }
                    // The top of a file that has no keys of its own yet.
                    None => (0..0, format!("{line}\n")),
                })
            }
            Self::Inline { braces, prefix, .. } => {
                let entry = format!("{prefix}{} = {value}", Key::new(key));
                Some(behind(last, braces, &entry, " ", text))
            }
            Self::List { list, brackets } => {
                (key.parse() == Ok(list.len())).then(|| behind(last, brackets, value, "", text))
            }
        }
    }

    /// The changes that take an entry away, with what parts it from the others.
    pub(super) fn removal(&self, key: &str, text: &str) -> Vec<Change> {
        let Some(entry) = self.entry(key) else { return Vec::new() };
        let gone = |range: Range<usize>| (range, String::new());
        if let Self::Lines { .. } = self {
            let pieces = if entry.leaves.is_empty() { vec![entry.whole] } else { entry.leaves };
            return pieces.into_iter().map(|piece| gone(whole_lines(text, piece))).collect();
        }
        let around = self.entries();
        let before = around.iter().rfind(|e| e.whole.end <= entry.whole.start);
        let after = around.iter().find(|e| e.whole.start >= entry.whole.end);
        match (before, after) {
            (_, Some(next)) => vec![gone(entry.whole.start..next.whole.start)],
            (Some(last), None) => vec![gone(last.whole.end..entry.whole.end)],
            (None, None) => {
                // A comma may stand behind the only entry.
                let rest = text.get(entry.whole.end..).unwrap_or("");
                let comma = rest.trim_start().starts_with(',');
                let end = if comma {
                    entry.whole.end + rest.find(',').map_or(0, |i| i + 1)
                } else {
                    entry.whole.end
                };
                vec![gone(entry.whole.start..end)]
            }
        }
    }
}

/// The change that adds an entry behind the last one between brackets; `pad` stands inside empty ones.
fn behind(last: Option<usize>, brackets: &Range<usize>, entry: &str, pad: &str, text: &str) -> Change {
    let Some(last) = last else {
        let inside = brackets.start + 1..brackets.end.saturating_sub(1);
        return (inside, format!("{pad}{entry}{pad}"));
    };
    let rest = text.get(last..brackets.end).unwrap_or("");
    let spaces = rest.len() - rest.trim_start().len();
    if rest.trim_start().starts_with(',') {
        let at = last + spaces + 1;
        return (at..at, format!(" {entry},"));
    }
    (last..last, format!(", {entry}"))
}

fn entry_of(key: Option<Range<usize>>, item: &Item) -> Option<Entry> {
    match item {
        Item::Table(table) if table.is_dotted() => {
            let mut leaves = Vec::new();
            // The first of its keys stands on the line of the first leaf, before the others.
            gather(table, key?.start, &mut leaves);
            let (start, end) = (leaves.iter().map(|l| l.start).min()?, leaves.iter().map(|l| l.end).max()?);
            Some(Entry { whole: start..end, at: start..end, section: true, leaves })
        }
        Item::Value(Value::InlineTable(table)) if table.is_dotted() => {
            let end = table.iter().filter_map(|(_, v)| v.span()).map(|at| at.end).max()?;
            let whole = key?.start..end;
            Some(Entry { at: whole.clone(), leaves: vec![whole.clone()], whole, section: false })
        }
        Item::Value(value) => {
            let at = value.span()?;
            Some(Entry { whole: key?.start..at.end, at, section: false, leaves: Vec::new() })
        }
        Item::Table(table) => {
            let at = table.span()?;
            Some(Entry { whole: at.clone(), at, section: true, leaves: Vec::new() })
        }
        Item::ArrayOfTables(_) | Item::None => None,
    }
}

/// The lines of a table that is written with dotted keys.
fn gather(table: &Table, first: usize, leaves: &mut Vec<Range<usize>>) {
    for (name, item) in table.iter() {
        match item {
            Item::Table(inner) => gather(inner, first, leaves),
            Item::Value(value) => {
                if let (Some(key), Some(at)) = (table.key(name).and_then(Key::span), value.span()) {
                    let start = if leaves.is_empty() { first.min(key.start) } else { key.start };
                    leaves.push(start..at.end);
                }
            }
            _ => {}
        }
    }
}

/// Where the line ends on which something ends, without its line break.
fn line_end(text: &str, from: usize) -> usize {
    let rest = text.get(from..).unwrap_or("");
    let end = rest.find('\n').unwrap_or(rest.len());
    let line = rest.get(..end).unwrap_or("");
    from + line.strip_suffix('\r').unwrap_or(line).len()
}

/// The lines on which something stands, with their last line break.
fn whole_lines(text: &str, piece: Range<usize>) -> Range<usize> {
    let before = text.get(..piece.start).unwrap_or("");
    let start = before.rfind('\n').map_or(0, |i| i + 1);
    let rest = text.get(piece.end..).unwrap_or("");
    start..rest.find('\n').map_or(text.len(), |i| piece.end + i + 1)
}

fn body_index(document: &Table, name: &str) -> Result<usize, EditError> {
    let is_called = |named: Option<&str>, real: Option<&str>| match (named, real) {
        (Some(named), _) => named.trim() == name,
        (None, Some(real)) => real.eq_ignore_ascii_case(name),
        (None, None) => false,
    };
    let found = match document.get("body") {
        Some(Item::ArrayOfTables(tables)) => tables.iter().position(|t| {
            is_called(t.get("name").and_then(Item::as_str), t.get("real").and_then(Item::as_str))
        }),
        Some(Item::Value(Value::Array(list))) => list.iter().position(|v| {
            let key = |key: &str| v.as_inline_table().and_then(|t| t.get(key)).and_then(Value::as_str);
            is_called(key("name"), key("real"))
        }),
        _ => None,
    };
    found.ok_or_else(|| EditError::NoSuchBody(name.to_owned()))
}
