//! Dates in a scenario: text in quotes, or TOML's own.

use super::super::reader::Field;
use crate::time::Epoch;

/// The instant that a field states, UTC.
pub(super) fn read(field: &Field<'_>) -> Option<Epoch> {
    let text = match (field.item.as_str(), field.item.as_datetime()) {
        (Some(text), _) => text.to_owned(),
        (None, Some(date)) => date.to_string(),
        (None, None) => {
            field.wrong_type("a date");
            return None;
        }
    };
    match Epoch::parse_utc(&text) {
        Ok(epoch) => Some(epoch),
        Err(error) => {
            let shown = crate::units::text::clip(&text);
            field.error(
                format!("\"{shown}\": {error}"),
                format!("a date in UTC is wanted, as in {}", field.key.example),
            );
            None
        }
    }
}
