//! A beat's view: what it leaves out is as in the beat before.

use super::super::grammar;
use super::super::model::{BodyId, Centre, View};
use super::super::names::Names;
use super::super::reader::{Field, Reading};
use crate::units::{Angle, Length};

/// The parts of a view as far as they are known. `None` in a part: it was stated, but wrongly.
#[derive(Debug, Clone, Copy)]
pub(super) struct Known {
    centre: Option<Centre>,
    span: Option<Length>,
    tilt: Option<Angle>,
    turn: Option<Angle>,
}

impl Known {
    /// The view, when every part is known.
    pub(super) fn view(self) -> Option<View> {
        Some(View { centre: self.centre?, span: self.span?, tilt: self.tilt?, turn: self.turn? })
    }
}

/// The view of a beat. `before` is that of the beat before, where there is one.
pub(super) fn read(beat: &Reading<'_>, before: Option<Known>, names: &Names) -> Known {
    let Some(field) = beat.get("view") else {
        return before.unwrap_or_else(|| {
            beat.error(
                "the first beat has no view",
                "add view = { centre = \"…\", span = \"6 au\" }; later beats go on with it",
            );
            Known { centre: None, span: None, tilt: None, turn: None }
        });
    };
    let Some(table) = field.table(&grammar::VIEW) else {
        return Known { centre: None, span: None, tilt: None, turn: None };
    };
    let first = before.is_none();
    let stated = |key: &str| if first { table.need(key) } else { table.get(key) };
    let centre = match stated("centre") {
        Some(field) => centre(&field, names),
        None => before.and_then(|b| b.centre),
    };
    let span = match stated("span") {
        Some(field) => field.positive(),
        None => before.and_then(|b| b.span),
    };
    let angle = |key: &str, before: Option<Option<Angle>>| match table.get(key) {
        Some(field) => field.quantity(),
        None => before.unwrap_or(Some(Angle::default())),
    };
    let tilt = angle("tilt", before.map(|b| b.tilt));
    let turn = angle("turn", before.map(|b| b.turn));
    Known { centre, span, tilt, turn }
}

fn centre(field: &Field<'_>, names: &Names) -> Option<Centre> {
    if field.item.is_str() {
        return Some(Centre { about: about(field, names)?, offset: [Length::default(); 3] });
    }
    if !field.item.is_table_like() {
        field.wrong_type("a body's name, \"barycentre\" or a table");
        return None;
    }
    let table = field.table(&grammar::CENTRE)?;
    let about = match table.get("about") {
        Some(field) => about(&field, names),
        None => Some(None),
    };
    let offset = match table.get("offset") {
        Some(field) => field.three(),
        None => Some([Length::default(); 3]),
    };
    Some(Centre { about: about?, offset: offset? })
}

/// A body, or the barycentre (`Some(None)`).
fn about(field: &Field<'_>, names: &Names) -> Option<Option<BodyId>> {
    match field.text()? {
        "barycentre" => Some(None),
        _ => field.body(names).map(Some),
    }
}
