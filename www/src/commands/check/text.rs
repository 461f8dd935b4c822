//! The report for people, in columns for a terminal.

use std::fmt::Write as _;
use std::mem::discriminant;

use fallaround_core::check::{BeatReport, Finding, Number, Report, Why};
use fallaround_core::ephemeris::{Contact, Outcome};
use fallaround_core::show::Show;
use fallaround_core::units::number;

use super::{Shown, outcome};

/// How many of the numbers that move the picture are told.
const LEVERS: usize = 3;

/// How many of the numbers that were not changed are named, for each reason; the report for programs has all.
const NAMED: usize = 8;

/// What is less is no matter, px.
const LEAST_PX: f64 = 0.001;

/// Of a show.
pub(super) fn of(file: &str, shown: &Shown) -> String {
    let mut out = String::new();
    // Writing to a string can't fail.
    let mut line = |text: String| writeln!(out, "{}", text.trim_end()).unwrap_or_default();
    let (show, report) = (&shown.proven.show, &shown.proven.report);
    let verdict = if report.is_ready() { "is ready" } else { "is not ready" };
    line(format!("{file}: \"{}\" {verdict}", show.scenario.title));
    for finding in &report.findings {
        line(self::finding(file, finding));
    }
    whole(shown, &mut line);
    beats(show, report, &mut line);
    contacts(show, &mut line);
    for one in &report.encounters {
        let hill = one.hill_radii.map(|hill| format!(", {} of its Hill radii", number::with_digits(hill, 2)));
        line(format!(
            "  close        {} passes {} at {} in beat {}: {} km from centre to centre{}",
            show.initial.name(one.body),
            show.initial.name(one.other),
            time(one.t_s),
            one.beat + 1,
            number::with_digits(one.distance_m / 1e3, 4),
            hill.unwrap_or_default()
        ));
    }
    out
}

/// The contacts; a body that bounces on and on is told of once.
fn contacts(show: &Show, line: &mut impl FnMut(String)) {
    let bouncing = |a: &Contact, b: &Contact| {
        a.outcome == Outcome::Bounced && (a.body, a.onto, a.outcome) == (b.body, b.onto, b.outcome)
    };
    for alike in show.ephemeris.contacts().chunk_by(bouncing) {
        let (Some(first), Some(last)) = (alike.first(), alike.last()) else { continue };
        let what = format!(
            "{} {} {}",
            show.initial.name(first.body),
            outcome(first.outcome),
            show.initial.name(first.onto)
        );
        line(match alike.len() {
            1 => format!("  contact      {what} at {}, {}", time(first.t_s), speed(first.speed_m_s)),
            times => format!(
                "  contact      {what} {times} times, from {} ({}) to {} ({})",
                time(first.t_s),
                speed(first.speed_m_s),
                time(last.t_s),
                speed(last.speed_m_s)
            ),
        });
    }
}

/// A speed of contact.
fn speed(m_s: f64) -> String {
    format!("{} m/s", number::with_digits(m_s, if m_s < 1000.0 { 3 } else { 4 }))
}

/// As editors read it.
fn finding(file: &str, finding: &Finding) -> String {
    let Finding { weight, place, wrong, remedy, .. } = finding;
    format!("  {file}:{}:{}: {}: {wrong}; {remedy}", place.line, place.column, weight.name())
}

/// What holds of the whole show.
fn whole(shown: &Shown, line: &mut impl FnMut(String)) {
    let (show, report) = (&shown.proven.show, &shown.proven.report);
    let bodies: Vec<&str> = show.scenario.bodies.iter().map(|body| body.name.as_str()).collect();
    line(format!("  fingerprint  {}", shown.fingerprint));
    line(format!("  bodies       {}", bodies.join(", ")));
    let beats = show.plan.beats.len();
    line(format!(
        "  length       {} in {}",
        minutes(show.plan.lasts_s()),
        if beats == 1 { "1 beat".to_owned() } else { format!("{beats} beats") }
    ));
    line(format!(
        "  model time   {} to {}, {} steps",
        time(show.ephemeris.from_s()),
        time(show.ephemeris.until_s()),
        show.ephemeris.forward().len() + show.ephemeris.backward().len()
    ));
    for (index, sentence) in report.method.iter().enumerate() {
        line(format!("  {:11}  {sentence}", if index == 0 { "method" } else { "" }));
    }
    let tolerance = show.ephemeris.tolerance();
    line(format!(
        "  paths        thinned to {:.0e} of distances and {:.0e} of speeds",
        tolerance.place, tolerance.velocity
    ));
    line(match shown.energy_error {
        Some(error) => format!("  energy       kept to {error:.1e} of it"),
        None => "  energy       not a measure here (contact, change, relativity, oblateness, drag, or nothing massive moves)".to_owned(),
    });
    let worst = |of: fn(&BeatReport) -> f64| {
        // The first of equals.
        let beats = report.beats.iter().map(of).enumerate().rev();
        beats.max_by(|a, b| a.1.total_cmp(&b.1)).unwrap_or_default()
    };
    let (beat, _) = worst(|beat| beat.off.map_or(0.0, |off| off.px));
    if let Some(off) = report.beats.get(beat).and_then(|beat| beat.off) {
        let body = off.of.called(&show.initial);
        line(format!(
            "  exactness    {body} is drawn {} off at most, in beat {} (by a second run in shorter steps)",
            px(off.px),
            beat + 1
        ));
    }
    last_digits(show, report, line);
    let (beat, ms) = worst(|beat| beat.frame_ms);
    line(format!(
        "  cost         {:.1} MB of {:.0}; frames take about {ms:.1} ms without a graphics card at most, in beat {}",
        report.bytes as f64 / 1e6,
        report.most_bytes as f64 / 1e6,
        beat + 1
    ));
    let least = |of: fn(&BeatReport) -> Option<f64>| report.beats.iter().filter_map(of).reduce(f64::min);
    let size = |size: Option<f64>| size.map_or_else(|| "none".to_owned(), |size| format!("{size:.1} arcmin"));
    line(format!(
        "  back row     smallest capitals {}, thinnest lines {}, from five picture heights away",
        size(least(|beat| beat.capital_arcmin)),
        size(least(|beat| beat.line_arcmin))
    ));
    let (turning, turn_deg_s) = worst(|beat| beat.turn_deg_s);
    let (sliding, pan_heights_s) = worst(|beat| beat.pan_heights_s);
    let mut moves = Vec::new();
    if turn_deg_s > 0.0 {
        moves.push(format!("turns by at most {turn_deg_s:.0} degrees a second, into beat {}", turning + 1));
    }
    if pan_heights_s > 0.0 {
        moves.push(format!(
            "slides by at most {pan_heights_s:.1} picture heights a second, into beat {}",
            sliding + 1
        ));
    }
    let moves = if moves.is_empty() { "stays as it is".to_owned() } else { moves.join(" and ") };
    line(format!("  comfort      the view {moves}"));
    let (beat, share) = worst(|beat| beat.flashing);
    line(if share == 0.0 {
        "  flashes      none, however fast the keys are hit".to_owned()
    } else {
        format!(
            "  flashes      at most {:.0} % of ten degrees of sight, in beat {}, where 25 % are allowed",
            100.0 * share,
            beat + 1
        )
    });
}

/// The numbers that move the picture most, and those that were not changed.
fn last_digits(show: &Show, report: &Report, line: &mut impl FnMut(String)) {
    let mut label = "last digits";
    let mut told = |text: String| {
        line(format!("  {label:<11}  {text}"));
        label = "";
    };
    let worst = report.levers.iter().filter_map(|lever| Some((lever, lever.worst()?)));
    for (index, (lever, (beat, shift))) in worst.take(LEVERS).enumerate() {
        if index > 0 && shift.px < LEAST_PX {
            break;
        }
        let of = if index == 0 {
            format!(": the most of {}", numbers(report.levers.len()))
        } else {
            String::new()
        };
        told(format!(
            "{}, changed by a billionth, moves {} by {} in beat {}{of}",
            lever.number.called(show),
            shift.of.called(&show.initial),
            px(shift.px),
            beat + 1
        ));
    }
    let kinds = [
        (Why::NoTime, "not tried, for want of time"),
        (Why::Alone, "not tried, as no number so near will do"),
        (Why::Zero, "not tried, as a billionth of 0 is 0"),
        (Why::Breaks(String::new()), "tried, and no show came of it"),
    ];
    for (kind, why) in &kinds {
        let all = report.left_out.iter().filter(|one| discriminant(&one.why) == discriminant(kind));
        let all: Vec<&Number> = all.map(|one| &one.number).collect();
        if !all.is_empty() {
            told(format!("{why}: {}", named(show, &all)));
        }
    }
    if report.levers.is_empty() && report.left_out.is_empty() {
        told("no numbers are stated that bear on the motion".to_owned());
    }
}

fn numbers(count: usize) -> String {
    if count == 1 { "1 number".to_owned() } else { format!("{count} numbers") }
}

/// "mass and radius of Brae; orbit.eccentricity of Fenn and Pell; 3 more".
fn named(show: &Show, all: &[&Number]) -> String {
    let mut of_each: Vec<(String, Vec<&str>)> = Vec::new();
    for number in all.iter().take(NAMED) {
        let of = number.of(show);
        match of_each.last_mut().filter(|(owner, _)| *owner == of) {
            Some((_, quantities)) => quantities.push(&number.quantity),
            None => of_each.push((of, vec![&number.quantity])),
        }
    }
    // Those of which the same is told go together.
    let mut alike: Vec<(Vec<&str>, Vec<&str>)> = Vec::new();
    for (owner, quantities) in &of_each {
        match alike.iter_mut().find(|(same, _)| same == quantities) {
            Some((_, owners)) => owners.push(owner),
            None => alike.push((quantities.clone(), vec![owner])),
        }
    }
    let told =
        alike.iter().map(|(quantities, owners)| format!("{} of {}", listed(quantities), listed(owners)));
    let mut parts: Vec<String> = told.collect();
    if let Some(more) = all.len().checked_sub(NAMED).filter(|more| *more > 0) {
        parts.push(format!("{more} more"));
    }
    parts.join("; ")
}

/// "a, b and c".
fn listed(words: &[&str]) -> String {
    match words {
        [first @ .., last] if !first.is_empty() => format!("{} and {last}", first.join(", ")),
        _ => words.concat(),
    }
}

fn beats(show: &Show, report: &Report, line: &mut impl FnMut(String)) {
    let titles = show.scenario.beats.iter().map(|beat| beat.title.chars().count());
    let width = titles.max().unwrap_or(0).max(4);
    line(format!(
        "  {:<4} {:>5}  {:<width$}  {:>12}  {:>12}  {:>10}  {:>19}  {:>9}",
        "beat", "at", "title", "model from", "until", "off by, px", "billionth moves, px", "frame, ms"
    ));
    let all = show.scenario.beats.iter().zip(&show.plan.beats).zip(&report.beats);
    for (index, ((beat, planned), report_of)) in all.enumerate() {
        let moved = report_of.lever.and_then(|lever| *report.levers.get(lever)?.shifts.get(index)?);
        line(format!(
            "  {:>4} {:>5}  {:<width$}  {:>12}  {:>12}  {:>10}  {:>19}  {:>9.1}",
            index + 1,
            minutes(planned.show_s),
            beat.title,
            time(planned.from_s),
            time(planned.until_s),
            report_of.off.map_or_else(String::new, |off| pixels(off.px)),
            moved.map_or_else(String::new, |moved| pixels(moved.px)),
            report_of.frame_ms
        ));
        if let Some(cue) = &report_of.cue {
            line(format!(
                "              {} after {:.1} s, at {}",
                cue.event.said(|body| show.initial.name(body)),
                cue.at_s,
                time(cue.model_s)
            ));
        }
    }
}

/// A length in the picture; what no eye could see is told as that.
fn px(px: f64) -> String {
    if px < LEAST_PX { format!("under {LEAST_PX} px") } else { format!("{} px", number::with_digits(px, 2)) }
}

/// The same in a column of pixels.
fn pixels(px: f64) -> String {
    if px < LEAST_PX { format!("< {LEAST_PX}") } else { number::with_digits(px, 2) }
}

/// Show time: `9:05`.
#[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "a show lasts hours, not ages")]
fn minutes(seconds: f64) -> String {
    let seconds = seconds.max(0.0).round() as u64;
    format!("{}:{:02}", seconds / 60, seconds % 60)
}

/// Model time in the unit that fits it.
fn time(seconds: f64) -> String {
    let size = seconds.abs();
    let (per, unit) = if size >= 2.0 * 31_557_600.0 {
        (31_557_600.0, "yr")
    } else if size >= 2.0 * 86_400.0 {
        (86_400.0, "d")
    } else if size >= 2.0 * 3600.0 {
        (3600.0, "h")
    } else {
        (1.0, "s")
    };
    format!("{:.3} {unit}", seconds / per)
}

#[cfg(test)]
mod tests {
    use super::*;
    use fallaround_core::check::Owner;
    use fallaround_core::scenario::Place;

    #[test]
    fn times_are_told_in_units_that_fit() {
        assert_eq!(minutes(545.0), "9:05");
        assert_eq!(time(90.0), "90.000 s");
        assert_eq!(time(-86_400.0 * 3.0), "-3.000 d");
        assert_eq!(time(31_557_600.0 * 12.5), "12.500 yr");
    }

    #[test]
    fn a_ball_that_bounces_on_and_on_is_told_of_once() {
        let text = "format = 1\ntitle = \"T\"\n[[body]]\nname = \"Skerry\"\nmass = \"1 Moon masses\"\nradius = \"1737 km\"\n\
                    surface = \"bounce\"\nrestitution = 0.5\n[[body]]\nname = \"Ball\"\ndrop = { onto = \"Skerry\", height = \"100 m\" }\n\
                    [[beat]]\ntitle = \"Fall\"\nclock = { span = \"90 s\", lasts = \"9 s\" }\nview = { centre = \"Ball\", span = \"300 m\" }\n";
        let show = fallaround_core::show::Rehearsal::whole(text).unwrap();
        let mut lines = Vec::new();
        contacts(&show, &mut |line| lines.push(line));
        let [bounces, rest] = lines.as_slice() else { panic!("{lines:#?}") };
        assert!(bounces.starts_with("  contact      Ball bounces off Skerry 1"), "{bounces}");
        assert!(bounces.contains(" times, from 11.095 s (18 m/s) to "), "{bounces}");
        assert!(rest.starts_with("  contact      Ball comes to rest on Skerry at "), "{rest}");
    }

    #[test]
    fn what_no_eye_could_see_is_told_as_that() {
        assert_eq!(px(3e-8), "under 0.001 px");
        assert_eq!(px(12.34), "12 px");
    }
    #[test]
    fn numbers_that_were_not_changed_are_named_together_where_they_are_alike() {
        let text = "format = 1\ntitle = \"T\"\n[[body]]\nname = \"Orla\"\nmass = \"1 Sun mass\"\n";
        let show = fallaround_core::show::Rehearsal::whole(text).unwrap();
        let number = |change: usize, quantity: &str| Number {
            owner: Owner::Change(change),
            quantity: quantity.to_owned(),
            stated: "0 d".to_owned(),
            place: Place::default(),
        };
        let all =
            [number(0, "at"), number(0, "speed"), number(1, "speed"), number(2, "at"), number(2, "speed")];
        let all: Vec<&Number> = all.iter().collect();
        assert_eq!(named(&show, &all), "at and speed of change 1 and change 3; speed of change 2");
        let many = vec![all[0]; NAMED + 3];
        assert!(named(&show, &many).ends_with("; 3 more"), "{}", named(&show, &many));
    }
}
