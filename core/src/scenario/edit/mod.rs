//! Changing the text of a scenario: comments, order and everything else that is not changed stay as they are, to
//! the byte.
//!
//! A change replaces the smallest piece of the text that it can, found by where the parts of the TOML stand; the
//! text is never written anew from the data. A change after which the text would no longer be TOML is refused.

mod holder;
mod numbers;
mod sections;

use super::parse::{Parsed, parse, without_mark};
use super::problem::Problem;
use holder::Holder;
use std::ops::Range;

pub use numbers::StatedNumber;
pub use sections::List;

/// The text of a scenario, open to changes. It is always TOML, not always a sound scenario.
#[derive(Debug, Clone, PartialEq, Eq, Default)]
pub struct Document {
    /// With its byte order mark, if it has one.
    text: String,
}

/// Where a path starts.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Root<'a> {
    /// At the top of the file.
    Top,
    /// In the body of this name.
    Body(&'a str),
    /// In the body at this place in the file's order, from 0.
    BodyAt(usize),
    /// In the beat at this place in the file's order, from 0.
    Beat(usize),
    /// In the change at this place in the file's order, from 0.
    Change(usize),
}

/// A place in a scenario: keys from a root on. In a list, a key is an index, from "0".
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Path<'a> {
    /// Where it starts.
    pub root: Root<'a>,
    /// The keys, at least one.
    pub keys: &'a [&'a str],
}

impl<'a> Path<'a> {
    /// At the top of the file.
    pub const fn top(keys: &'a [&'a str]) -> Self {
        Self { root: Root::Top, keys }
    }
    /// In a body: `Path::body("Fenn", &["orbit", "periapsis"])`.
    pub const fn body(name: &'a str, keys: &'a [&'a str]) -> Self {
        Self { root: Root::Body(name), keys }
    }
    /// In a beat, by its index.
    pub const fn beat(index: usize, keys: &'a [&'a str]) -> Self {
        Self { root: Root::Beat(index), keys }
    }
}

/// A value to be written.
#[derive(Debug, Clone, PartialEq)]
pub enum Value {
    /// A text; quantities are texts.
    Text(String),
    /// A number.
    Number(f64),
    /// True or false.
    Flag(bool),
    /// Any value as TOML writes it: a list, a table on one line.
    Toml(String),
}

impl From<&str> for Value {
    fn from(text: &str) -> Self {
        Self::Text(text.to_owned())
    }
}

impl From<f64> for Value {
    fn from(number: f64) -> Self {
        Self::Number(number)
    }
}

impl From<bool> for Value {
    fn from(flag: bool) -> Self {
        Self::Flag(flag)
    }
}

impl Value {
    fn to_toml(&self) -> String {
        match self {
            Self::Text(text) => toml_edit::Value::from(text.as_str()).to_string(),
            Self::Number(number) => toml_edit::Value::from(*number).to_string(),
            Self::Flag(flag) => flag.to_string(),
            Self::Toml(toml) => toml.trim().to_owned(),
        }
    }
}

/// Why a change was refused. The text is as it was.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
pub enum EditError {
    /// The file has no such body.
    #[error("there is no body \"{0}\"")]
    NoSuchBody(String),
    /// The file has no such body, beat or change, counted from 0.
    #[error("there is no {0} number {1}")]
    NoSuchSection(&'static str, usize),
    /// Nothing stands at that path.
    #[error("nothing stands at {0}")]
    NothingThere(String),
    /// A part of the path is neither table nor list.
    #[error("{0} holds nothing")]
    HoldsNothing(String),
    /// What belongs to one section stands in parts, with another in between, or in a list on one line.
    #[error("the {0} are not written as sections that follow one another")]
    Scattered(&'static str),
    /// The change would leave no TOML.
    #[error("the change would break the file: {0}")]
    WouldBreak(String),
}

/// A piece of the text and what takes its place.
type Change = (Range<usize>, String);

impl Document {
    /// Opens a text.
    ///
    /// # Errors
    /// When it is not TOML; what [`parse()`] says of it.
    pub fn parse(text: &str) -> Result<Self, Vec<Problem>> {
        match toml_edit::Document::parse(without_mark(text)) {
            Ok(_) => Ok(Self { text: text.to_owned() }),
            Err(_) => Err(parse(text).problems),
        }
    }

    /// The text as it is now.
    pub fn to_text(&self) -> String {
        self.text.clone()
    }

    /// The text as it is now.
    pub fn text(&self) -> &str {
        &self.text
    }

    /// The scenario that the text states, and its problems.
    pub fn scenario(&self) -> Parsed {
        parse(&self.text)
    }

    /// How many bodies or beats the text has.
    pub fn count(&self, list: List) -> usize {
        self.look(|document, _| Ok(sections::count(document, list))).unwrap_or(0)
    }

    /// What stands at a path, as TOML.
    pub fn get(&self, path: Path<'_>) -> Option<String> {
        self.look(|document, text| {
            let (holder, last) = self.holder(document, path)?;
            let entry = holder.entry(last).ok_or_else(|| nothing_at(path))?;
            text.get(entry.at).map(str::to_owned).ok_or_else(|| nothing_at(path))
        })
        .ok()
    }

    /// The text that stands at a path, without its quotes.
    pub fn get_text(&self, path: Path<'_>) -> Option<String> {
        self.look(|document, _| {
            let (holder, last) = self.holder(document, path)?;
            holder.text(last).ok_or_else(|| nothing_at(path))
        })
        .ok()
    }

    /// Puts a value at a path, in the place of what stands there; what is missing on the way is made.
    ///
    /// # Errors
    /// When there is no such body or beat, something on the way holds nothing, or the value is not TOML.
    pub fn set(&mut self, path: Path<'_>, value: impl Into<Value>) -> Result<(), EditError> {
        let value = value.into().to_toml();
        let mut changed = self.clone();
        let is_section = changed.look(|document, text| {
            let (holder, rest) = changed.farthest(document, path)?;
            let Some((key, below)) = rest.split_first() else { return Err(nothing_at(path)) };
            match holder.entry(key) {
                Some(entry) if entry.section => Ok(None),
                Some(entry) => Ok(Some((entry.at, value.clone()))),
                None => {
                    let nested = below.iter().rev().fold(value.clone(), |inner, key| {
                        format!("{{ {} = {inner} }}", toml_edit::Key::new(*key))
                    });
                    holder.insertion(key, &nested, text).map(Some).ok_or_else(|| nothing_at(path))
                }
            }
        })?;
        match is_section {
            Some(change) => changed.apply(vec![change])?,
            // What is a section of its own gives way to a line.
            None => {
                changed.remove(path)?;
                changed.set(path, Value::Toml(value))?;
            }
        }
        *self = changed;
        Ok(())
    }

    /// Takes away what stands at a path, with its key.
    ///
    /// # Errors
    /// When nothing stands there.
    pub fn remove(&mut self, path: Path<'_>) -> Result<(), EditError> {
        let changes = self.look(|document, text| {
            let (holder, last) = self.holder(document, path)?;
            let entry = holder.entry(last).ok_or_else(|| nothing_at(path))?;
            if entry.section && entry.leaves.is_empty() {
                return Ok(vec![(sections::block_at(document, text, entry.at.start), String::new())]);
            }
            Ok(holder.removal(last, text))
        })?;
        self.apply(changes)
    }

    /// Inserts a body or beat so that it stands at `index` (at the end, where that is beyond it). `lines` are its
    /// keys, without the `[[body]]`.
    ///
    /// # Errors
    /// When the lines are not TOML.
    pub fn insert(&mut self, list: List, index: usize, lines: &str) -> Result<(), EditError> {
        let block = format!("[[{}]]\n{}", list.key(), lines.trim());
        let change = self.look(|document, text| sections::insertion(document, text, list, index, &block))?;
        self.apply(vec![change])
    }

    /// Takes away a body or beat with its comments: those inside, and those right above its `[[body]]`.
    ///
    /// # Errors
    /// When there is no such one, or its parts don't stand together.
    pub fn remove_section(&mut self, list: List, index: usize) -> Result<(), EditError> {
        let change = self.look(|document, text| sections::removal(document, text, list, index))?;
        self.apply(vec![change])
    }

    /// Moves a body or beat with its comments to another place in the order.
    ///
    /// # Errors
    /// When there is no such one, or its parts don't stand together.
    pub fn shift(&mut self, list: List, from: usize, to: usize) -> Result<(), EditError> {
        if to >= self.count(list) {
            return Err(EditError::NoSuchSection(list.key(), to));
        }
        let mut changed = self.clone();
        let block = changed.look(|document, text| {
            let range = sections::block(document, text, list, from)?;
            Ok(text.get(range).unwrap_or("").trim_end().to_owned())
        })?;
        if from == to {
            return Ok(());
        }
        changed.remove_section(list, from)?;
        let change = changed.look(|document, text| sections::insertion(document, text, list, to, &block))?;
        changed.apply(vec![change])?;
        *self = changed;
        Ok(())
    }

    /// Runs over the TOML of the text as it is now; places are those of the text without its mark.
    fn look<T>(
        &self,
        find: impl FnOnce(&toml_edit::Table, &str) -> Result<T, EditError>,
    ) -> Result<T, EditError> {
        let text = without_mark(&self.text);
        let document =
            toml_edit::Document::parse(text).map_err(|e| EditError::WouldBreak(e.message().to_owned()))?;
        find(document.as_table(), text)
    }

    /// What holds the last key of a path.
    fn holder<'d, 'p>(
        &self,
        document: &'d toml_edit::Table,
        path: Path<'p>,
    ) -> Result<(Holder<'d>, &'p str), EditError> {
        match self.farthest(document, path)? {
            (holder, [last]) => Ok((holder, last)),
            _ => Err(nothing_at(path)),
        }
    }

    /// The holder farthest along a path, and the keys that are left: at least one.
    fn farthest<'d, 'p>(
        &self,
        document: &'d toml_edit::Table,
        path: Path<'p>,
    ) -> Result<(Holder<'d>, &'p [&'p str]), EditError> {
        let mut holder = Holder::root(document, path.root)?;
        let mut keys = path.keys;
        while let [key, rest @ ..] = keys
            && !rest.is_empty()
            && holder.entry(key).is_some()
        {
            holder = holder.inside(key).ok_or_else(|| EditError::HoldsNothing((*key).to_owned()))?;
            keys = rest;
        }
        if keys.is_empty() { Err(nothing_at(path)) } else { Ok((holder, keys)) }
    }

    /// Makes changes, which don't overlap, if the text stays TOML.
    fn apply(&mut self, mut changes: Vec<Change>) -> Result<(), EditError> {
        let mark = self.text.len() - without_mark(&self.text).len();
        let line_break = if self.text.contains("\r\n") { "\r\n" } else { "\n" };
        let mut text = self.text.clone();
        changes.sort_by_key(|(range, _)| range.start);
        for (range, with) in changes.into_iter().rev() {
            let with = with.replace("\r\n", "\n").replace('\n', line_break);
            text.replace_range(range.start + mark..range.end + mark, &with);
        }
        match toml_edit::Document::parse(without_mark(&text)) {
            Ok(_) => {
                self.text = text;
                Ok(())
            }
            Err(error) => Err(EditError::WouldBreak(error.message().to_owned())),
        }
    }
}

fn nothing_at(path: Path<'_>) -> EditError {
    EditError::NothingThere(path.keys.join(" / "))
}

#[cfg(test)]
mod tests;
