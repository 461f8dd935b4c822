//! Reading tables: every fault becomes a problem with its place, and reading goes on.

use super::grammar::{Key, Section};
use super::model::{BodyId, Cast};
use super::names::{Names, nearest};
use super::problem::Problem;
use super::source::{At, Source};
use crate::units::{self, Quantity};
use std::cell::RefCell;
use toml_edit::{Item, TableLike, Value};

/// Most problems that are told of one text.
pub(super) const MAX_PROBLEMS: usize = 100;

/// The problems found so far in a text.
#[derive(Debug)]
pub(super) struct Report<'a> {
    source: Source<'a>,
    problems: RefCell<Vec<Problem>>,
}

impl<'a> Report<'a> {
    pub(super) fn new(text: &'a str) -> Self {
        Self { source: Source::new(text), problems: RefCell::default() }
    }

    pub(super) fn source(&self) -> &Source<'a> {
        &self.source
    }

    pub(super) fn error(&self, at: &At, wrong: impl Into<String>, remedy: impl Into<String>) {
        self.push(Problem::error(self.source.place(at.start), wrong, remedy));
    }

    pub(super) fn note(&self, at: &At, wrong: impl Into<String>, remedy: impl Into<String>) {
        self.push(Problem::note(self.source.place(at.start), wrong, remedy));
    }

    fn push(&self, problem: Problem) {
        if !self.is_full() {
            self.problems.borrow_mut().push(problem);
        }
    }

    /// Whether so much is wrong that the rest is not told.
    fn is_full(&self) -> bool {
        self.problems.borrow().len() >= MAX_PROBLEMS
    }

    /// All problems, in the order of the text.
    pub(super) fn into_problems(self) -> Vec<Problem> {
        let full = self.is_full();
        let mut problems = self.problems.into_inner();
        problems.sort_by_key(|p| p.place);
        if let (true, Some(last)) = (full, problems.last()) {
            let wrong = "there may be more problems than these";
            problems.push(Problem::note(last.place, wrong, "mend these first"));
        }
        problems
    }
}

/// A table that is being read.
#[derive(Clone)]
pub(super) struct Reading<'a> {
    table: &'a dyn TableLike,
    /// Where it starts.
    pub(super) at: At,
    grammar: &'static Section,
    report: &'a Report<'a>,
}

impl<'a> Reading<'a> {
    /// Starts reading a table; keys that the grammar doesn't know are problems from here on.
    pub(super) fn start(
        table: &'a dyn TableLike,
        at: At,
        grammar: &'static Section,
        report: &'a Report<'a>,
    ) -> Self {
        for (name, item) in table.iter() {
            if grammar.key(name).is_some() {
                continue;
            }
            if report.is_full() {
                break;
            }
            let key_at = table.key(name).and_then(toml_edit::Key::span);
            let at = key_at.or_else(|| item.span()).unwrap_or_else(|| at.clone());
            let remedy = match nearest(name, grammar.keys.iter().map(|k| k.name)) {
                Some(near) => format!("perhaps \"{near}\""),
                None => format!("its keys are: {}", grammar.key_names()),
            };
            let shown = units::text::clip(name);
            report.error(&at, format!("{} has no key \"{shown}\"", grammar.what), remedy);
        }
        Self { table, at, grammar, report }
    }

    /// What stands behind a key of the grammar.
    pub(super) fn get(&self, name: &str) -> Option<Field<'a>> {
        debug_assert!(self.grammar.key(name).is_some(), "{name} is not in the grammar");
        let key = self.grammar.key(name)?;
        let (stated, item) = self.table.get_key_value(name)?;
        let key_at = stated.span().unwrap_or_else(|| self.at.clone());
        let at = item.span().unwrap_or_else(|| key_at.clone());
        Some(Field { key, item, at, key_at, report: self.report })
    }

    /// What stands behind a key that must be there.
    pub(super) fn need(&self, name: &str) -> Option<Field<'a>> {
        let field = self.get(name);
        if field.is_none()
            && let Some(key) = self.grammar.key(name)
        {
            let wrong = format!("{} needs its {name}", self.grammar.what);
            self.report.error(&self.at, wrong, format!("add {name} = {}", key.example));
        }
        field
    }

    /// Those of some keys that are stated, in the order in which they stand in the text.
    pub(super) fn stated(&self, names: &[&str]) -> Vec<Field<'a>> {
        let mut fields: Vec<Field<'a>> = names.iter().filter_map(|n| self.get(n)).collect();
        fields.sort_by_key(|f| f.key_at.start);
        fields
    }

    /// A quantity that must be more than 0.
    pub(super) fn positive<Q: Quantity>(&self, name: &str) -> Option<Q> {
        self.get(name).and_then(|f| f.positive())
    }

    /// A quantity; `or` where the key is left out. `None` only for a wrong one.
    pub(super) fn quantity_or<Q: Quantity>(&self, name: &str, or: Q) -> Option<Q> {
        self.get(name).map_or(Some(or), |f| f.quantity())
    }

    /// True or false, where stated.
    pub(super) fn flag(&self, name: &str) -> Option<bool> {
        self.get(name).and_then(|f| f.flag())
    }

    /// A text; "" where the key is left out.
    pub(super) fn text_or_empty(&self, name: &str) -> String {
        self.get(name).and_then(|f| f.text()).map(tidy_text).unwrap_or_default()
    }

    /// Reports a problem of the whole table.
    pub(super) fn error(&self, wrong: impl Into<String>, remedy: impl Into<String>) {
        self.report.error(&self.at, wrong, remedy);
    }

    pub(super) fn report(&self) -> &'a Report<'a> {
        self.report
    }
}

/// Text as it is said and shown: one kind of line break, nothing empty around it.
pub(super) fn tidy_text(text: &str) -> String {
    text.replace("\r\n", "\n").trim().to_owned()
}

/// What stands behind a key.
#[derive(Clone)]
pub(super) struct Field<'a> {
    pub(super) key: &'static Key,
    pub(super) item: &'a Item,
    /// Where the value stands.
    pub(super) at: At,
    /// Where the key stands.
    pub(super) key_at: At,
    pub(super) report: &'a Report<'a>,
}

impl<'a> Field<'a> {
    pub(super) fn name(&self) -> &'static str {
        self.key.name
    }

    /// Reports a problem of the value.
    pub(super) fn error(&self, wrong: impl Into<String>, remedy: impl Into<String>) {
        self.report.error(&self.at, wrong, remedy);
    }

    /// Reports that this is not what is wanted.
    pub(super) fn wrong_type(&self, wanted: &str) {
        let Key { name, example, .. } = self.key;
        let is = kind_of(self.item);
        self.error(format!("{name} is {is}"), format!("{wanted} is wanted, as in {name} = {example}"));
    }

    pub(super) fn text(&self) -> Option<&'a str> {
        let text = self.item.as_str();
        if text.is_none() {
            self.wrong_type("a text in quotes");
        }
        text
    }

    pub(super) fn flag(&self) -> Option<bool> {
        let flag = self.item.as_bool();
        if flag.is_none() {
            self.wrong_type("true or false");
        }
        flag
    }

    /// A finite number without unit.
    pub(super) fn number(&self) -> Option<f64> {
        let Some(number) = self.item.as_value().and_then(number_of) else {
            self.wrong_type("a number without quotes and unit");
            return None;
        };
        if number.is_finite() {
            return Some(number);
        }
        self.error(format!("{} is not a finite number", self.name()), "write a number of ordinary size");
        None
    }

    /// A whole number in a range.
    pub(super) fn whole(&self, from: i64, to: i64) -> Option<usize> {
        let Some(number) = self.item.as_integer() else {
            self.wrong_type("a whole number");
            return None;
        };
        if (from..=to).contains(&number) {
            return usize::try_from(number).ok();
        }
        self.error(format!("{} is {number}", self.name()), format!("it must be {from} to {to}"));
        None
    }

    pub(super) fn quantity<Q: Quantity>(&self) -> Option<Q> {
        self.quantity_by(Q::parse)
    }

    /// A quantity, by one of the ways in which it can be read.
    pub(super) fn quantity_by<Q: Quantity>(
        &self,
        parse: impl Fn(&str) -> Result<Q, units::UnitError>,
    ) -> Option<Q> {
        match self.item.as_value() {
            Some(value) => quantity_of(value, &self.at, self.name(), self.report, parse),
            None => {
                self.wrong_type(&format!("a number with its unit, in quotes, for {}", self.name()));
                None
            }
        }
    }

    pub(super) fn positive<Q: Quantity>(&self) -> Option<Q> {
        let quantity: Q = self.quantity()?;
        self.check_positive(quantity)
    }

    pub(super) fn check_positive<Q: Quantity>(&self, quantity: Q) -> Option<Q> {
        if quantity.si() > 0.0 {
            return Some(quantity);
        }
        let shown = units::text::clip(self.item.as_str().unwrap_or(""));
        self.error(format!("{} is {shown}", self.name()), "it must be more than 0");
        None
    }

    pub(super) fn not_negative<Q: Quantity>(&self) -> Option<Q> {
        let quantity: Q = self.quantity()?;
        if quantity.si() >= 0.0 {
            return Some(quantity);
        }
        let shown = units::text::clip(self.item.as_str().unwrap_or(""));
        self.error(format!("{} is {shown}", self.name()), "it must not be negative");
        None
    }

    /// Three quantities.
    pub(super) fn three<Q: Quantity>(&self) -> Option<[Q; 3]> {
        let values: Vec<&Value> = self.item.as_array().map(|a| a.iter().collect()).unwrap_or_default();
        let [x, y, z] = values.as_slice() else {
            self.wrong_type("a list of three");
            return None;
        };
        let mut read = [x, y, z].into_iter().map(|value| {
            let at = value.span().unwrap_or_else(|| self.at.clone());
            quantity_of(value, &at, self.name(), self.report, Q::parse)
        });
        // All three are read before any is given up, so that each one's fault is told.
        let (x, y, z) = (read.next()?, read.next()?, read.next()?);
        Some([x?, y?, z?])
    }

    /// A list of quantities; `None` when one is wrong.
    pub(super) fn list<Q: Quantity>(&self) -> Option<Vec<Q>> {
        let Some(list) = self.item.as_array() else {
            self.wrong_type("a list");
            return None;
        };
        let read = list.iter().map(|value| {
            let at = value.span().unwrap_or_else(|| self.at.clone());
            quantity_of(value, &at, self.name(), self.report, Q::parse)
        });
        // All are read before one is given up, so that each one's fault is told.
        let read: Vec<Option<Q>> = read.collect();
        read.into_iter().collect()
    }

    /// The body of this name.
    pub(super) fn body(&self, names: &Names) -> Option<BodyId> {
        let name = self.text()?.trim();
        let found = names.find(name);
        if found.is_none() {
            let (wrong, remedy) = names.no_body(name);
            self.error(wrong, remedy);
        }
        found
    }

    /// The bodies and swarms of a list of names, each once.
    pub(super) fn cast(&self, names: &Names) -> Cast {
        let mut found = Cast::default();
        let Some(list) = self.item.as_array() else {
            self.wrong_type("a list of names");
            return found;
        };
        for value in list {
            let at = value.span().unwrap_or_else(|| self.at.clone());
            let Some(name) = value.as_str() else {
                let wrong = format!("a name in {} is {}", self.name(), kind_of_value(value));
                self.report.error(&at, wrong, "a body's name in quotes is wanted");
                continue;
            };
            let name = name.trim();
            match (names.find(name), names.find_swarm(name)) {
                (Some(body), _) if !found.bodies.contains(&body) => found.bodies.push(body),
                (None, Some(swarm)) if !found.swarms.contains(&swarm) => found.swarms.push(swarm),
                (None, None) => {
                    let (wrong, remedy) = names.no_one(name);
                    self.report.error(&at, wrong, remedy);
                }
                _ => {}
            }
        }
        found
    }

    /// One of some words.
    pub(super) fn choice<T: Copy>(&self, choices: &[(&str, T)]) -> Option<T> {
        let word = self.text()?;
        if let Some((_, value)) = choices.iter().find(|(name, _)| *name == word) {
            return Some(*value);
        }
        let all: Vec<&str> = choices.iter().map(|(name, _)| *name).collect();
        let remedy = match nearest(word, all.iter().copied()) {
            Some(near) => format!("perhaps \"{near}\"; the choice is: {}", all.join(", ")),
            None => format!("the choice is: {}", all.join(", ")),
        };
        let shown = units::text::clip(word);
        self.error(format!("there is no {} \"{shown}\"", self.name()), remedy);
        None
    }

    /// The table behind this key.
    pub(super) fn table(&self, grammar: &'static Section) -> Option<Reading<'a>> {
        let table = self.item.as_table_like();
        if table.is_none() {
            self.wrong_type("a table");
        }
        Some(Reading::start(table?, self.at.clone(), grammar, self.report))
    }

    /// The tables behind this key, written as `[[key]]` or as a list.
    pub(super) fn tables(&self, grammar: &'static Section) -> Vec<Reading<'a>> {
        let start = |table: &'a dyn TableLike, at: Option<At>| {
            Reading::start(table, at.unwrap_or_else(|| self.at.clone()), grammar, self.report)
        };
        if let Some(tables) = self.item.as_array_of_tables() {
            return tables.iter().map(|t| start(t, t.span())).collect();
        }
        let Some(list) = self.item.as_array() else {
            self.report.error(
                &self.key_at,
                format!("{} is {}", self.name(), kind_of(self.item)),
                format!("each one stands under its own [[{}]]", self.name()),
            );
            return Vec::new();
        };
        let mut found = Vec::new();
        for value in list {
            match value.as_inline_table() {
                Some(table) => found.push(start(table, value.span())),
                None => self.report.error(
                    &value.span().unwrap_or_else(|| self.at.clone()),
                    format!("{} is {}", grammar.what, kind_of_value(value)),
                    "a table is wanted",
                ),
            }
        }
        found
    }
}

fn quantity_of<Q: Quantity>(
    value: &Value,
    at: &At,
    name: &str,
    report: &Report<'_>,
    parse: impl Fn(&str) -> Result<Q, units::UnitError>,
) -> Option<Q> {
    let error = match value {
        Value::String(text) => match parse(text.value()) {
            Ok(quantity) => return Some(quantity),
            Err(error) => error,
        },
        // The bare number's text runs through the same reading, for the same advice on units.
        Value::Integer(_) | Value::Float(_) => match parse(report.source().at(at)) {
            Ok(quantity) => return Some(quantity),
            Err(error) => units::UnitError {
                wrong: format!("{name} = {} is a bare number", units::text::clip(report.source().at(at))),
                ..error
            },
        },
        other => units::UnitError {
            wrong: format!("{name} is {}", kind_of_value(other)),
            remedy: format!("{}, as in \"{}\"", units::text::wanted(Q::DIMENSIONS), Q::EXAMPLE),
        },
    };
    report.error(at, error.wrong, error.remedy);
    None
}

fn number_of(value: &Value) -> Option<f64> {
    match value {
        Value::Float(number) => Some(*number.value()),
        // Whole numbers beyond 2^53 lose their last digits, as any double does.
        Value::Integer(number) => Some(*number.value() as f64),
        _ => None,
    }
}

/// What an item is, with its article.
pub(super) fn kind_of(item: &Item) -> &'static str {
    match item {
        Item::None => "nothing",
        Item::Value(value) => kind_of_value(value),
        Item::Table(_) => "a table",
        Item::ArrayOfTables(_) => "a list of tables",
    }
}

pub(super) fn kind_of_value(value: &Value) -> &'static str {
    match value {
        Value::String(_) => "a text",
        Value::Integer(_) | Value::Float(_) => "a number",
        Value::Boolean(_) => "true or false",
        Value::Datetime(_) => "a date",
        Value::Array(_) => "a list",
        Value::InlineTable(_) => "a table",
    }
}
