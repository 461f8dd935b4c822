//! Rows on standard output: CSV, or an array of JSON objects, written as they come.
//!
//! Numbers are written as the shortest text that reads back to the same double.

use std::io::{self, Write};

use serde_json::Value;

/// A value in a row.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) enum Cell<'a> {
    /// A number; finite.
    Number(f64),
    /// A text; empty where there is nothing to say.
    Text(&'a str),
}

/// How rows are written.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) enum Format {
    /// RFC 4180, but with line feeds alone.
    Csv,
    /// One array of objects.
    Json,
}

impl Format {
    /// JSON if asked for, else CSV.
    pub(crate) const fn of(json: bool) -> Self {
        if json { Self::Json } else { Self::Csv }
    }
}

/// A table that is being written.
#[derive(Debug)]
pub(crate) struct Table<'a, W> {
    out: W,
    columns: &'a [&'a str],
    format: Format,
    rows: u64,
}

impl<'a, W: Write> Table<'a, W> {
    /// Starts with the header.
    ///
    /// # Errors
    /// When it can't be written.
    pub(crate) fn start(mut out: W, columns: &'a [&'a str], format: Format) -> io::Result<Self> {
        match format {
            Format::Csv => writeln!(out, "{}", columns.join(","))?,
            Format::Json => write!(out, "[")?,
        }
        Ok(Self { out, columns, format, rows: 0 })
    }

    /// Writes a row: a cell for each column.
    ///
    /// # Errors
    /// When it can't be written.
    pub(crate) fn row(&mut self, cells: &[Cell<'_>]) -> io::Result<()> {
        debug_assert_eq!(cells.len(), self.columns.len());
        let json = self.format == Format::Json;
        if json {
            self.out.write_all(if self.rows == 0 { b"\n" } else { b",\n" })?;
        }
        for (index, (column, cell)) in self.columns.iter().zip(cells).enumerate() {
            let before = if index > 0 {
                ","
            } else if json {
                "{"
            } else {
                ""
            };
            self.out.write_all(before.as_bytes())?;
            if json {
                write!(self.out, "{}:", Value::from(*column))?;
            }
            match cell {
                Cell::Number(number) => self.out.write_all(shortest(*number).as_bytes())?,
                Cell::Text(text) if json => write!(self.out, "{}", Value::from(*text))?,
                Cell::Text(text) => self.out.write_all(quoted(text).as_bytes())?,
            }
        }
        self.rows += 1;
        self.out.write_all(if json { b"}" } else { b"\n" })
    }

    /// Writes the end.
    ///
    /// # Errors
    /// When it can't be written.
    pub(crate) fn finish(mut self) -> io::Result<()> {
        if self.format == Format::Json {
            self.out.write_all(if self.rows == 0 { b"]\n" } else { b"\n]\n" })?;
        }
        self.out.flush()
    }
}

/// The shortest text that reads back to the same double: plain or with an exponent, plain where both are as long.
pub(crate) fn shortest(number: f64) -> String {
    let plain = number.to_string();
    let exponent = format!("{number:e}");
    if exponent.len() < plain.len() { exponent } else { plain }
}

/// A text as a CSV field.
fn quoted(text: &str) -> String {
    if text.contains(['"', ',', '\n', '\r']) {
        format!("\"{}\"", text.replace('"', "\"\""))
    } else {
        text.to_owned()
    }
}

/// Whoever read our output has had enough: no failure. Any other error stays one.
///
/// # Errors
/// Those other errors.
pub(crate) fn unless_closed(result: io::Result<()>) -> io::Result<()> {
    match result {
        Err(error) if error.kind() == io::ErrorKind::BrokenPipe => Ok(()),
        other => other,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn written(format: Format, rows: &[[Cell<'_>; 2]]) -> String {
        let mut out = Vec::new();
        let mut table = Table::start(&mut out, &["t_s", "body"], format).unwrap();
        for row in rows {
            table.row(row).unwrap();
        }
        table.finish().unwrap();
        String::from_utf8(out).unwrap()
    }

    #[test]
    fn csv_quotes_what_needs_it() {
        let rows = [[Cell::Number(-0.5), Cell::Text("Fenn")], [Cell::Number(1e21), Cell::Text("a \"b\", c")]];
        assert_eq!(written(Format::Csv, &rows), "t_s,body\n-0.5,Fenn\n1e21,\"a \"\"b\"\", c\"\n");
        assert_eq!(written(Format::Csv, &[]), "t_s,body\n");
    }

    #[test]
    fn json_is_an_array_of_objects() {
        let rows = [[Cell::Number(3.0), Cell::Text("Fenn")], [Cell::Number(-2.5e-9), Cell::Text("a \"b\"")]];
        let text = written(Format::Json, &rows);
        let read: Value = serde_json::from_str(&text).unwrap();
        let want = serde_json::json!([{"t_s": 3, "body": "Fenn"}, {"t_s": -2.5e-9, "body": "a \"b\""}]);
        assert_eq!(read, want);
        assert_eq!(written(Format::Json, &[]), "[]\n");
    }

    #[test]
    fn numbers_are_short_and_read_back() {
        for (number, text) in
            [(0.0, "0"), (1e5, "1e5"), (86_400.0, "86400"), (100.0, "100"), (1.5e-7, "1.5e-7"), (0.1, "0.1")]
        {
            assert_eq!(shortest(number), text);
        }
        // A run through many magnitudes and mantissas, by the golden ratio's rest.
        let mut fraction = 0.5_f64;
        for exponent in -300..300 {
            fraction = (fraction + 0.618_033_988_749_894_9) % 1.0;
            let number = format!("{}e{exponent}", 1.0 + fraction).parse::<f64>().unwrap();
            assert_eq!(shortest(number).parse::<f64>().unwrap().to_bits(), number.to_bits());
        }
    }
}
