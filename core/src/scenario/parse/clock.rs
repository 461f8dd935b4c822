//! A beat's clock, its start and what follows it.

use super::super::grammar;
use super::super::model::{BeatClock, BeatStart, ModelSpan, Then};
use super::super::names::Names;
use super::super::reader::{Field, Reading, kind_of};
use super::{dates, events};
use crate::time::Epoch;
use crate::units::Span;

/// Show time of a beat that states no clock, s.
const HOLD_S: f64 = 30.0;
/// Show time of a beat with a pace that doesn't say how long it lasts, s.
const PACE_LASTS_S: f64 = 60.0;
/// Show time that a beat goes on after the event that it reaches, unless it says how long it lasts, s.
const AFTER_REACH_S: f64 = 10.0;

/// The clock of a beat; one that states none is held.
pub(super) fn read(beat: &Reading<'_>, names: &Names) -> Option<BeatClock> {
    let Some(field) = beat.get("clock") else { return Some(BeatClock::Hold { lasts: Span::from_s(HOLD_S) }) };
    let table = field.table(&grammar::CLOCK)?;
    let stated = table.stated(&["pace", "span", "reach", "hold"]);
    let Some(main) = stated.first() else {
        table.error(
            "a clock says neither pace, span, reach nor hold",
            "state one of them, as in { pace = \"12 d/s\" }",
        );
        return None;
    };
    if let Some(second) = stated.get(1) {
        table.report().error(
            &second.key_at,
            format!("a clock has both {} and {}", main.name(), second.name()),
            "state one of pace, span, reach and hold",
        );
    }
    for (key, fits) in [("at", ["reach"].as_slice()), ("lasts", &["pace", "span", "reach"])] {
        if let Some(extra) = table.get(key)
            && !fits.contains(&main.name())
        {
            table.report().error(
                &extra.key_at,
                format!("{key} means nothing beside {}", main.name()),
                format!("leave it out, or state {} instead", fits.join(" or ")),
            );
        }
    }
    match main.name() {
        "pace" => {
            let pace = main.positive();
            let lasts = lasts_or(&table, Span::from_s(PACE_LASTS_S));
            Some(BeatClock::Pace { pace: pace?, lasts: lasts? })
        }
        "span" => {
            let span = model_span(main, names);
            let lasts = table.need("lasts").and_then(|f| f.positive());
            Some(BeatClock::Stretch { span: span?, lasts: lasts? })
        }
        "reach" => reach(main, &table, names),
        _ => Some(BeatClock::Hold { lasts: main.positive()? }),
    }
}

fn lasts_or(table: &Reading<'_>, or: Span) -> Option<Span> {
    table.get("lasts").map_or(Some(or), |f| f.positive())
}

fn reach(main: &Field<'_>, table: &Reading<'_>, names: &Names) -> Option<BeatClock> {
    let event = events::read(main, names);
    let at: Option<Span> = table.need("at").and_then(|f| f.positive());
    let lasts = match (table.get("lasts"), at) {
        (Some(field), _) => {
            let lasts: Option<Span> = field.positive();
            if let (Some(lasts), Some(at)) = (lasts, at)
                && lasts < at
            {
                field.error("the beat ends before its event", "lasts must not be less than at");
            }
            lasts
        }
        (None, at) => at.map(|at| Span::from_s(at.s() + AFTER_REACH_S)),
    };
    Some(BeatClock::Reach { event: event?, at: at?, lasts: lasts? })
}

fn model_span(field: &Field<'_>, names: &Names) -> Option<ModelSpan> {
    let Some(periods) = field.item.as_str().and_then(|text| events::periods(text, names)) else {
        return field.positive().map(ModelSpan::Fixed);
    };
    match periods {
        Ok((count, body)) if count > 0.0 => Some(ModelSpan::Periods { count, body }),
        Ok(_) => {
            field.error("a span covers no periods", "it must be more than 0");
            None
        }
        Err((wrong, remedy)) => {
            field.error(wrong, remedy);
            None
        }
    }
}

/// Where a beat starts. `date` is the scenario's: `Some(None)` when it is stated wrongly.
pub(super) fn start(beat: &Reading<'_>, names: &Names, date: Option<Option<Epoch>>) -> Option<BeatStart> {
    let Some(field) = beat.get("start") else { return Some(BeatStart::GoOn) };
    if field.item.as_str().is_some() {
        return field.choice(&[("go-on", BeatStart::GoOn), ("restart", BeatStart::Restart)]);
    }
    if !field.item.is_table_like() {
        let is = kind_of(field.item);
        field.error(
            format!("start is {is}"),
            "\"go-on\", \"restart\" or a table is wanted, as in { event = \"apoapsis of Fenn\" }",
        );
        return None;
    }
    let table = field.table(&grammar::START)?;
    let stated = table.stated(&["time", "date", "event"]);
    let Some(main) = stated.first() else {
        table.error(
            "a start says neither time, date nor event",
            "state one of them, as in { time = \"100 d\" }",
        );
        return None;
    };
    if let Some(second) = stated.get(1) {
        table.report().error(
            &second.key_at,
            format!("a start has both {} and {}", main.name(), second.name()),
            "state one of time, date and event",
        );
    }
    let shifts = table.stated(&["before", "after"]);
    if let Some(shift) = shifts.first()
        && main.name() != "event"
    {
        let wrong = format!("{} means nothing beside {}", shift.name(), main.name());
        table.report().error(&shift.key_at, wrong, "leave it out, or state event instead");
    }
    match main.name() {
        "time" => main.quantity().map(BeatStart::Time),
        "date" => {
            let at = dates::read(main);
            match date {
                None => {
                    let remedy = "add date = \"2031-03-05T20:00:00Z\" at the top of the file, or state time";
                    main.error("a start by date needs the scenario's date", remedy);
                    None
                }
                Some(origin) => Some(BeatStart::Time(Span::from_s(at?.tdb_s() - origin?.tdb_s()))),
            }
        }
        _ => event_start(main, &table, &shifts, names),
    }
}

fn event_start(
    main: &Field<'_>,
    table: &Reading<'_>,
    shifts: &[Field<'_>],
    names: &Names,
) -> Option<BeatStart> {
    let event = events::read(main, names);
    if let [_, second, ..] = shifts {
        table.report().error(&second.key_at, "a start has both before and after", "state one of them");
    }
    let after = match shifts.first() {
        None => Some(Span::default()),
        Some(field) => field.not_negative::<Span>().map(|by| match field.name() {
            "before" => Span::from_s(-by.s()),
            _ => by,
        }),
    };
    Some(BeatStart::Event { event: event?, after: after? })
}

/// What follows a beat: a span is over when it is over, all else goes on.
pub(super) fn then(beat: &Reading<'_>, clock: Option<&BeatClock>) -> Option<Then> {
    match beat.get("then") {
        Some(field) => field.choice(&[("go-on", Then::GoOn), ("hold", Then::Hold), ("next", Then::Next)]),
        None if matches!(clock, Some(BeatClock::Stretch { .. })) => Some(Then::Hold),
        None => Some(Then::GoOn),
    }
}
