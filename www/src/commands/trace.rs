//! `trace`: where every body is and how it moves, at equal steps of time.

use std::io::{self, BufWriter, Write};
use std::process::ExitCode;

use anyhow::{Context as _, Result, ensure};
use fallaround_core::ephemeris::{Ephemeris, State};
use fallaround_core::math::frame::equatorial_from_ecliptic;
use fallaround_core::scenario::BodyId;

use crate::cli::{Axes, Trace};
use crate::load::{self, Resolved};
use crate::table::{Cell, Format, Table, unless_closed};

const COLUMNS: [&str; 8] = ["t_s", "body", "x_m", "y_m", "z_m", "vx_m_s", "vy_m_s", "vz_m_s"];
/// More rows than this (some 8 GB) are a mistyped step.
const MOST_ROWS: f64 = 50e6;
/// By how much of a step the last instant may be missed through rounding and still be printed.
const SLACK: f64 = 1e-9;

/// Prints the states.
///
/// # Errors
/// When the file, a name or a time is wrong, or the output can't be written.
pub(crate) fn command(options: &Trace) -> Result<ExitCode> {
    let (from_s, until_s) = (options.between.from, options.between.to);
    ensure!(until_s >= from_s, "--to is before --from");
    ensure!(options.step > 0.0, "--step must be more than 0");
    let resolved = load::resolved(&options.scenario, &options.today)?;
    let about = options.about.as_deref().map(|name| resolved.body(name)).transpose()?;
    let times = count(from_s, until_s, options.step, resolved.scenario.bodies.len())?;
    let ephemeris = resolved.integrate(&options.scenario, from_s, until_s)?;

    let out = BufWriter::with_capacity(1 << 16, io::stdout().lock());
    let times = (0..times).map(|index| from_s + index as f64 * options.step);
    let table = Table::start(out, &COLUMNS, Format::of(options.json));
    let result = table.and_then(|table| write(table, &resolved, &ephemeris, times, about, options.axes));
    unless_closed(result).context("standard output")?;
    Ok(ExitCode::SUCCESS)
}

/// How many instants there are.
#[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "between 1 and the limit")]
fn count(from_s: f64, until_s: f64, step_s: f64, bodies: usize) -> Result<u64> {
    let times = ((until_s - from_s) / step_s + SLACK).floor() + 1.0;
    let rows = times * bodies as f64;
    ensure!(
        rows <= MOST_ROWS,
        "that would be {rows:.3e} rows, {times:.3e} instants of {bodies} bodies; the most is {MOST_ROWS:e}: take a longer --step"
    );
    Ok(times as u64)
}

fn write<W: Write>(
    mut table: Table<'_, W>,
    resolved: &Resolved,
    ephemeris: &Ephemeris,
    times: impl Iterator<Item = f64>,
    about: Option<BodyId>,
    axes: Axes,
) -> io::Result<()> {
    for t_s in times {
        for (index, body) in resolved.scenario.bodies.iter().enumerate() {
            let id = BodyId(index);
            let state = match about {
                Some(about) => ephemeris.relative(id, about, t_s),
                None => ephemeris.state(id, t_s),
            };
            let Some(State { mut pos, mut vel }) = state else { continue };
            if axes == Axes::Icrs {
                pos = equatorial_from_ecliptic(pos);
                vel = equatorial_from_ecliptic(vel);
            }
            let numbers = [t_s, pos.x, pos.y, pos.z, vel.x, vel.y, vel.z].map(Cell::Number);
            let [t, x, y, z, vx, vy, vz] = numbers;
            table.row(&[t, Cell::Text(&body.name), x, y, z, vx, vy, vz])?;
        }
    }
    table.finish()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_last_instant_is_printed_in_spite_of_rounding() {
        assert_eq!(count(0.0, 0.3, 0.1, 1).unwrap(), 4);
        assert_eq!(count(0.0, 0.99, 0.1, 1).unwrap(), 10);
        assert_eq!(count(-5.0, -5.0, 10.0, 1).unwrap(), 1);
    }

    #[test]
    fn absurd_tables_are_refused() {
        assert!(count(0.0, 1e9, 1.0, 3).is_err());
        assert!(count(0.0, 1.0, 1e-300, 3).is_err());
    }
}
