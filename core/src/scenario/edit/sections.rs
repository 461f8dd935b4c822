//! Bodies and beats as blocks of text: a header, all that belongs to it, and the comment right above it.

use super::{Change, EditError};
use std::ops::Range;
use toml_edit::{Item, Table};

/// The two lists of a scenario.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum List {
    /// `[[body]]`.
    Bodies,
    /// `[[beat]]`.
    Beats,
}

impl List {
    /// Its key in the file.
    pub(super) const fn key(self) -> &'static str {
        match self {
            Self::Bodies => "body",
            Self::Beats => "beat",
        }
    }
}

/// A header and the body or beat that it belongs to.
struct Header {
    start: usize,
    owner: Option<(List, usize)>,
}

fn headers(document: &Table) -> Vec<Header> {
    let mut found = Vec::new();
    collect(document, None, true, &mut found);
    found.sort_by_key(|h| h.start);
    found
}

fn collect(table: &Table, owner: Option<(List, usize)>, top: bool, found: &mut Vec<Header>) {
    for (key, item) in table.iter() {
        match item {
            Item::Table(inner) => {
                if let Some(at) = inner.span()
                    && !inner.is_implicit()
                    && !inner.is_dotted()
                {
                    found.push(Header { start: at.start, owner });
                }
                collect(inner, owner, false, found);
            }
            Item::ArrayOfTables(tables) => {
                let list = [List::Bodies, List::Beats].into_iter().find(|l| top && l.key() == key);
                for (index, inner) in tables.iter().enumerate() {
                    let owner = list.map(|l| (l, index)).or(owner);
                    if let Some(at) = inner.span() {
                        found.push(Header { start: at.start, owner });
                    }
                    collect(inner, owner, false, found);
                }
            }
            _ => {}
        }
    }
}

/// How many bodies or beats there are.
pub(super) fn count(document: &Table, list: List) -> usize {
    match document.get(list.key()) {
        Some(Item::ArrayOfTables(tables)) => tables.len(),
        Some(Item::Value(value)) => value.as_array().map_or(0, toml_edit::Array::len),
        _ => 0,
    }
}

/// Where the block of a header starts: with the comment lines right above it.
fn block_start(text: &str, header: usize) -> usize {
    let line_start = |at: usize| text.get(..at).and_then(|t| t.rfind('\n')).map_or(0, |i| i + 1);
    let mut start = line_start(header);
    while start > 0 {
        let above = line_start(start - 1);
        if !text.get(above..start).unwrap_or("").trim_start().starts_with('#') {
            break;
        }
        start = above;
    }
    start
}

/// Where a body or beat stands, with its comments and the empty lines behind it.
pub(super) fn block(
    document: &Table,
    text: &str,
    list: List,
    index: usize,
) -> Result<Range<usize>, EditError> {
    if !matches!(document.get(list.key()), Some(Item::ArrayOfTables(_)) | None) {
        return Err(EditError::Scattered(list.key()));
    }
    let headers = headers(document);
    let own: Vec<usize> =
        headers.iter().enumerate().filter(|(_, h)| h.owner == Some((list, index))).map(|(i, _)| i).collect();
    let (Some(first), Some(last)) = (own.first(), own.last()) else {
        return Err(EditError::NoSuchSection(list.key(), index));
    };
    if last - first + 1 != own.len() {
        return Err(EditError::Scattered(list.key()));
    }
    let start = headers.get(*first).map_or(0, |h| block_start(text, h.start));
    let end = headers.get(last + 1).map_or(text.len(), |h| block_start(text, h.start));
    Ok(start..end)
}

/// Where one header's own lines stand, to the next header's.
pub(super) fn block_at(document: &Table, text: &str, header: usize) -> Range<usize> {
    let next = headers(document).iter().map(|h| h.start).find(|start| *start > header);
    block_start(text, header)..next.map_or(text.len(), |h| block_start(text, h))
}

/// The change that takes a body or beat away.
pub(super) fn removal(document: &Table, text: &str, list: List, index: usize) -> Result<Change, EditError> {
    let range = block(document, text, list, index)?;
    if range.end < text.len() {
        return Ok((range, String::new()));
    }
    // At the end of the file, the empty lines before it go too.
    let before = text.get(..range.start).unwrap_or("").trim_end();
    let with = if before.is_empty() { "" } else { "\n" };
    Ok((before.len()..range.end, with.to_owned()))
}

/// The change that puts a block so that it stands at `index`, or at the end.
pub(super) fn insertion(
    document: &Table,
    text: &str,
    list: List,
    index: usize,
    block_text: &str,
) -> Result<Change, EditError> {
    let there = count(document, list);
    let at = if index < there {
        block(document, text, list, index)?.start
    } else if there > 0 {
        block(document, text, list, there - 1)?.end
    } else if list == List::Bodies && count(document, List::Beats) > 0 {
        block(document, text, List::Beats, 0)?.start
    } else {
        text.len()
    };
    let before = text.get(..at).unwrap_or("");
    let breaks = before.chars().rev().filter(|c| *c != '\r').take_while(|c| *c == '\n').count();
    let gap = match breaks {
        _ if before.is_empty() => "",
        0 => "\n\n",
        1 => "\n",
        _ => "",
    };
    let tail = if at < text.len() { "\n\n" } else { "\n" };
    Ok((at..at, format!("{gap}{block_text}{tail}")))
}
