//! What the tests against published data share.
//!
//! Tolerances are never in here: each test states its own, with the reason.

use fallaround_core::Vector3;
use fallaround_core::ephemeris::{Ephemeris, Propagation};
use fallaround_core::resolve::{InitialState, resolve};
use fallaround_core::scenario::{BodyId, Scenario, parse};
use std::collections::BTreeMap;
use std::fs;
use std::path::Path;

/// Fails unless two numbers agree; says what was compared, both numbers, their difference and the unit.
///
/// # Panics
/// When they differ by more than `tolerance`, or one of them is not a number.
#[track_caller]
pub fn assert_close(what: &str, got: f64, want: f64, tolerance: f64, unit: &str) {
    let difference = got - want;
    // NaN is never close.
    let close = difference.abs() <= tolerance;
    assert!(
        close,
        "{what}: got {got} {unit}, want {want} {unit}, difference {difference:e} {unit} (allowed {tolerance:e})"
    );
}

/// A table of `tests/data`: comma-separated, comments start with `#`, the first other line names the columns.
#[derive(Debug)]
pub struct Table {
    /// The rows, in the order of the file.
    pub rows: Vec<Row>,
}

/// One row, by the names of its columns.
#[derive(Debug)]
pub struct Row {
    cells: BTreeMap<String, String>,
}

impl Table {
    /// Reads a table.
    ///
    /// # Panics
    /// When the file is missing, or a row has another number of cells than there are columns.
    pub fn read(name: &str) -> Self {
        let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("data").join(name);
        let text = fs::read_to_string(&path).unwrap_or_else(|e| panic!("{}: {e}", path.display()));
        let mut lines = text.lines().filter(|line| !line.starts_with('#') && !line.trim().is_empty());
        let columns: Vec<&str> = lines.next().unwrap_or_default().split(',').collect();
        let rows = lines
            .map(|line| {
                let cells: Vec<&str> = line.split(',').collect();
                assert_eq!(cells.len(), columns.len(), "{name}: {line}");
                Row {
                    cells: columns
                        .iter()
                        .map(ToString::to_string)
                        .zip(cells.iter().map(ToString::to_string))
                        .collect(),
                }
            })
            .collect();
        Self { rows }
    }
}

impl Row {
    /// The text in a column.
    ///
    /// # Panics
    /// When there is no such column.
    pub fn text(&self, column: &str) -> &str {
        self.cells.get(column).unwrap_or_else(|| panic!("no column {column}"))
    }

    /// The number in a column.
    ///
    /// # Panics
    /// When there is no such column, or no number in it.
    pub fn number(&self, column: &str) -> f64 {
        self.text(column).parse().unwrap_or_else(|e| panic!("{column}: {e}"))
    }

    /// Three numbers in three columns, in thousands: kilometres become metres.
    pub fn kilo_vector(&self, columns: [&str; 3]) -> Vector3<f64> {
        Vector3::from(columns.map(|column| 1e3 * self.number(column)))
    }
}

/// The scenario of bodies written as in a file, with a beat that does nothing.
///
/// # Panics
/// When the text has a problem.
pub fn scenario(bodies: &str) -> Scenario {
    let text = format!(
        "format = 1\ntitle = \"Reference\"\n{bodies}\n[[beat]]\ntitle = \"Only\"\nsay = \"Look.\"\n\
         clock = {{ hold = \"1 s\" }}\nview = {{ centre = \"barycentre\", span = \"1 au\" }}\n"
    );
    let parsed = parse(&text);
    parsed.scenario.unwrap_or_else(|| panic!("{text}\n{:#?}", parsed.problems))
}

/// Where the bodies of a scenario start.
///
/// # Panics
/// When they can't be placed.
pub fn start(scenario: &Scenario) -> InitialState {
    resolve(scenario).unwrap_or_else(|problems| panic!("{problems:#?}"))
}

/// The paths from `from_s` (0 or before) to `until_s` (0 or after).
///
/// # Panics
/// When the integration stops on the way.
pub fn paths(initial: &InitialState, from_s: f64, until_s: f64) -> Ephemeris {
    let mut propagation = Propagation::new(initial);
    for end_s in [until_s, from_s] {
        if end_s != 0.0 {
            match propagation.advance(end_s, usize::MAX) {
                Ok(covered) => assert!(covered, "{end_s} s is not covered"),
                Err(stopped) => panic!("{stopped}"),
            }
        }
    }
    propagation.into_ephemeris()
}

/// A body by its name.
///
/// # Panics
/// When there is none of that name.
pub fn body(initial: &InitialState, name: &str) -> BodyId {
    let index = initial.bodies.iter().position(|body| body.name == name);
    BodyId(index.unwrap_or_else(|| panic!("no body {name}")))
}

/// The angle between two directions, arcsec; exact for small ones.
pub fn angle_arcsec(a: Vector3<f64>, b: Vector3<f64>) -> f64 {
    fallaround_core::math::float::atan2(a.cross(&b).norm(), a.dot(&b)) * 648_000.0 / std::f64::consts::PI
}
