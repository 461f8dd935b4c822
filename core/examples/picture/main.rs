//! One picture of a show as an SVG file, to look at without a browser's app around it.
//!
//! `cargo run --release -p fallaround-core --example picture -- SCENARIO [--beat N] [--at S] [--size WxH] [--density D]
//! [--language TAG] [--fonts FILE.css] [--sheet] > out.svg`; beats count from 1, `--at` is seconds of show time into the
//! beat, and the style sheet (with `@font-face` rules for the sans) is put into the file.
//!
//! With `--sheet`, a page of every beat instead: a row each, early, in the middle and late.

#![allow(clippy::print_stdout, reason = "the picture goes to standard output")]

mod svg;

use fallaround_core::picture::{Composer, Options, Screen};
use fallaround_core::scenario;
use fallaround_core::show::{Action, Clock, Rehearsal, Show};
use std::process::ExitCode;
use std::time::SystemTime;

struct Wanted {
    file: String,
    beat: usize,
    at_s: f64,
    screen: Screen,
    language: String,
    fonts: String,
    sheet: bool,
}

/// Shares of a beat's time at which a sheet shows it.
const SHEET_SHARES: [f64; 3] = [0.12, 0.5, 0.97];

fn main() -> ExitCode {
    match run() {
        Ok(text) => {
            println!("{text}");
            ExitCode::SUCCESS
        }
        Err(problem) => {
            eprintln!("{problem}");
            ExitCode::from(2)
        }
    }
}

fn run() -> Result<String, String> {
    let wanted = arguments()?;
    let text = std::fs::read_to_string(&wanted.file).map_err(|e| format!("{}: {e}", wanted.file))?;
    let now_s = SystemTime::now().duration_since(SystemTime::UNIX_EPOCH).map_or(0.0, |d| d.as_secs_f64());
    let show = Rehearsal::whole(&scenario::dated(&text, now_s)).map_err(|problems| {
        problems.iter().map(|p| format!("{}:{p}", wanted.file)).collect::<Vec<_>>().join("\n")
    })?;
    let fonts = if wanted.fonts.is_empty() {
        String::new()
    } else {
        std::fs::read_to_string(&wanted.fonts).map_err(|e| format!("{}: {e}", wanted.fonts))?
    };
    let options = Options { language: wanted.language, reduced_motion: false };
    let mut composer = Composer::new(&show, wanted.screen, options);
    if !wanted.sheet {
        return Ok(picture(&show, &mut composer, wanted.beat.saturating_sub(1), wanted.at_s, &fonts));
    }
    let mut page = format!(
        "<!doctype html><style>{fonts} body{{margin:0;display:grid;grid-template-columns:repeat(3,1fr);gap:6px;\
         background:#444}} svg{{width:100%;height:auto;display:block}}</style>"
    );
    for (beat, planned) in show.plan.beats.iter().enumerate() {
        for share in SHEET_SHARES {
            page += &picture(&show, &mut composer, beat, share * planned.lasts_s, "");
        }
    }
    Ok(page)
}

/// The picture at so many seconds of a beat that was jumped to, as SVG.
fn picture(show: &Show, composer: &mut Composer, beat: usize, at_s: f64, fonts: &str) -> String {
    let mut clock = Clock::new(&show.plan);
    clock.act(&show.plan, Action::Next);
    clock.act(&show.plan, Action::Jump(beat));
    let mut left_s = at_s;
    while left_s > 0.0 {
        clock.advance(&show.plan, left_s.min(1.0 / 60.0));
        left_s -= 1.0 / 60.0;
    }
    svg::svg(&composer.compose(show, &clock.moment(&show.plan)), fonts)
}

fn arguments() -> Result<Wanted, String> {
    let mut wanted = Wanted {
        file: String::new(),
        beat: 1,
        at_s: 10.0,
        screen: Screen { width_px: 1920.0, height_px: 1080.0, density: 1.0 },
        language: String::new(),
        fonts: String::new(),
        sheet: false,
    };
    let mut words = std::env::args().skip(1);
    while let Some(word) = words.next() {
        let mut value = || words.next().ok_or_else(|| format!("{word} needs a value"));
        match word.as_str() {
            "--beat" => wanted.beat = number(&value()?)?,
            "--at" => wanted.at_s = number(&value()?)?,
            "--density" => wanted.screen.density = number(&value()?)?,
            "--language" => wanted.language = value()?,
            "--sheet" => wanted.sheet = true,
            "--fonts" => wanted.fonts = value()?,
            "--size" => {
                let size = value()?;
                let (w, h) = size.split_once('x').ok_or("a size is written 1920x1080")?;
                (wanted.screen.width_px, wanted.screen.height_px) = (number(w)?, number(h)?);
            }
            other if other.starts_with('-') => return Err(format!("{other} is not known")),
            file => wanted.file = file.to_owned(),
        }
    }
    if wanted.file.is_empty() { Err("which scenario?".into()) } else { Ok(wanted) }
}

fn number<T: std::str::FromStr>(text: &str) -> Result<T, String> {
    text.parse().ok().ok_or_else(|| format!("{text} is not a number"))
}
