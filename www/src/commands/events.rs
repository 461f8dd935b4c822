//! `events`: what happens in a stretch of model time, in order.

use std::io::{self, BufWriter, Write};
use std::process::ExitCode;

use anyhow::{Context as _, Result, ensure};
use fallaround_core::ephemeris::events::{self, Event, Query};
use fallaround_core::scenario::{Beat, BeatClock, BeatStart, BodyId};

use crate::cli::Events;
use crate::load::{self, Resolved};
use crate::table::{Cell, Format, Table, unless_closed};

const COLUMNS: [&str; 6] = ["t_s", "kind", "body", "other", "value", "unit"];

/// Prints the events.
///
/// # Errors
/// When the file, a name or a time is wrong, or the output can't be written.
pub(crate) fn command(options: &Events) -> Result<ExitCode> {
    let (from_s, until_s) = (options.between.from, options.between.to);
    ensure!(until_s >= from_s, "--to is before --from");
    let resolved = load::resolved(&options.scenario, &options.today)?;
    let bodies = options.body.iter().map(|name| resolved.body(name)).collect::<Result<Vec<_>>>()?;
    let ephemeris = resolved.integrate(&options.scenario, from_s, until_s)?;
    let mut found = events::all(&ephemeris, &resolved.initial, from_s, until_s);
    for query in distances(&resolved.scenario.beats) {
        found.extend(events::find(&ephemeris, &resolved.initial, &query, from_s, until_s));
    }
    found.retain(|event| {
        let of_kind = options.kind.is_empty() || options.kind.iter().any(|kind| kind == event.kind.name());
        let takes_part = |body: &BodyId| *body == event.body || Some(*body) == event.other;
        of_kind && (bodies.is_empty() || bodies.iter().any(takes_part))
    });
    found.sort_by(|a, b| a.t_s.total_cmp(&b.t_s));

    let out = BufWriter::new(io::stdout().lock());
    let table = Table::start(out, &COLUMNS, Format::of(options.json));
    let result = table.and_then(|table| write(table, &resolved, &found));
    unless_closed(result).context("standard output")?;
    Ok(ExitCode::SUCCESS)
}

/// The crossings of distances that beats name, each once.
fn distances(beats: &[Beat]) -> Vec<Query> {
    let mut queries: Vec<Query> = Vec::new();
    for beat in beats {
        let reached = match beat.clock {
            BeatClock::Reach { event, .. } => Some(event),
            _ => None,
        };
        let started = match beat.start {
            BeatStart::Event { event, .. } => Some(event),
            _ => None,
        };
        for event in reached.into_iter().chain(started).filter(|event| event.distance.is_some()) {
            let query = Query::from(&event);
            if !queries.contains(&query) {
                queries.push(query);
            }
        }
    }
    queries
}

fn write<W: Write>(mut table: Table<'_, W>, resolved: &Resolved, found: &[Event]) -> io::Result<()> {
    let name = |body: Option<BodyId>| {
        let body = body.and_then(|body| resolved.scenario.bodies.get(body.0));
        Cell::Text(body.map_or("", |body| body.name.as_str()))
    };
    for event in found {
        table.row(&[
            Cell::Number(event.t_s),
            Cell::Text(event.kind.name()),
            name(Some(event.body)),
            name(event.other),
            Cell::Number(event.value),
            Cell::Text(event.unit),
        ])?;
    }
    table.finish()
}
