//! Everything that a presenter can do, and the keys for it.
//!
//! The same table drives the keyboard, the clicker and the help card, so they can't disagree.

/// One thing that a presenter can ask for.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Command {
    /// On to the next beat.
    Next,
    /// To the beat before.
    Back,
    /// The model stands still, or goes on.
    Hold,
    /// The picture goes black, or comes back.
    Blackout,
    /// To the start of this beat.
    RestartBeat,
    /// To the start of the show.
    RestartShow,
    /// A slower pace.
    Slower,
    /// A faster pace.
    Faster,
    /// To a beat, counted from 0.
    Jump(usize),
    /// Full screen, or out of it.
    FullScreen,
    /// Captions in the next of the scenario's languages.
    Language,
    /// The words to say, or no words.
    Words,
    /// The card with all keys.
    Keys,
    /// Out of the show, after asking.
    Leave,
}

/// One line of the help card: what is printed for its keys, what they do, and the keys as the browser names them.
#[derive(Debug)]
pub struct KeyRow {
    /// What is printed.
    pub printed: &'static str,
    /// What it does.
    pub does: &'static str,
    /// The command.
    pub command: Command,
    /// `KeyboardEvent.key`, letters in lower case.
    pub keys: &'static [&'static str],
}

/// The key table. Number keys stand apart: they are typed and finished with Enter.
pub const KEY_TABLE: &[KeyRow] = &[
    row("space, page down, right arrow", "next beat", Command::Next, &[" ", "pagedown", "arrowright"]),
    row("Z, page up, left arrow", "back to the beat before", Command::Back, &["z", "pageup", "arrowleft"]),
    row("X", "hold the model, and let it go on", Command::Hold, &["x"]),
    row("C, B, full stop", "blackout, and back", Command::Blackout, &["c", "b", "."]),
    row("R", "this beat from its start", Command::RestartBeat, &["r"]),
    row("home", "the show from its start", Command::RestartShow, &["home"]),
    row("Q", "slower", Command::Slower, &["q"]),
    row("W", "faster", Command::Faster, &["w"]),
    row("F", "full screen", Command::FullScreen, &["f"]),
    row("L", "captions in the next language", Command::Language, &["l"]),
    row("N", "words to say", Command::Words, &["n"]),
    row("tab, ?", "all keys", Command::Keys, &["tab", "?"]),
    row("escape", "leave the show, after asking", Command::Leave, &["escape"]),
];

const fn row(
    printed: &'static str,
    does: &'static str,
    command: Command,
    keys: &'static [&'static str],
) -> KeyRow {
    KeyRow { printed, does, command, keys }
}

/// A key as it was pressed.
#[derive(Debug, Clone, Copy)]
pub struct Press<'a> {
    /// `KeyboardEvent.key`.
    pub key: &'a str,
    /// Whether the key is only being held down.
    pub repeat: bool,
    /// Whether Control, Alt or Meta is down: then the key is the browser's.
    pub modified: bool,
}

/// What a press came to.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Heard {
    /// A command.
    Do(Command),
    /// A beat's number is being typed; empty: it was given up.
    Typing(String),
    /// One of ours, but not to be acted on: held down, or too soon after the last.
    Swallowed,
    /// Not ours.
    Nothing,
}

/// A second `Next` within this many milliseconds is taken for a slip of the hand.
pub const NEXT_APART_MS: f64 = 250.0;

/// A number that isn't finished within this many milliseconds is given up: a stray digit must not wait for an Enter.
pub const TYPING_MS: f64 = 4000.0;

/// Longest beat number that can be typed.
const DIGITS_MOST: usize = 3;

/// Turns presses into commands. Holds what the next press has to know of the ones before.
#[derive(Debug, Default)]
pub struct Hands {
    typed: String,
    typed_ms: f64,
    last_next_ms: Option<f64>,
}

impl Hands {
    /// Hears a key at a time of the browser's clock, ms.
    pub fn press(&mut self, press: Press<'_>, now_ms: f64) -> Heard {
        if press.modified {
            return Heard::Nothing;
        }
        if now_ms - self.typed_ms > TYPING_MS {
            self.typed.clear();
        }
        if press.key.len() == 1 && press.key.as_bytes()[0].is_ascii_digit() {
            self.typed_ms = now_ms;
            return self.digit(press);
        }
        if !self.typed.is_empty() {
            match press.key {
                "Enter" => return self.typed_number(),
                "Backspace" if !press.repeat => {
                    self.typed.pop();
                    return Heard::Typing(self.typed.clone());
                }
                "Escape" => {
                    self.typed.clear();
                    return Heard::Typing(String::new());
                }
                _ => self.typed.clear(),
            }
        }
        let key = press.key.to_lowercase();
        let Some(row) = KEY_TABLE.iter().find(|row| row.keys.contains(&key.as_str())) else {
            return Heard::Nothing;
        };
        if press.repeat {
            return Heard::Swallowed;
        }
        self.ask(row.command, now_ms)
    }

    /// The same guard for commands that come from a button.
    pub fn ask(&mut self, command: Command, now_ms: f64) -> Heard {
        if command == Command::Next {
            let too_soon = self.last_next_ms.is_some_and(|last| now_ms - last < NEXT_APART_MS);
            self.last_next_ms = Some(now_ms);
            if too_soon {
                return Heard::Swallowed;
            }
        }
        Heard::Do(command)
    }

    fn digit(&mut self, press: Press<'_>) -> Heard {
        if press.repeat || self.typed.len() >= DIGITS_MOST {
            return Heard::Swallowed;
        }
        self.typed.push_str(press.key);
        Heard::Typing(self.typed.clone())
    }

    fn typed_number(&mut self) -> Heard {
        let number = self.typed.parse::<usize>().ok();
        self.typed.clear();
        match number.and_then(|n| n.checked_sub(1)) {
            Some(beat) => Heard::Do(Command::Jump(beat)),
            None => Heard::Typing(String::new()),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn key(key: &str) -> Press<'_> {
        Press { key, repeat: false, modified: false }
    }

    #[test]
    fn every_key_has_one_meaning() {
        let mut seen: Vec<&str> = KEY_TABLE.iter().flat_map(|row| row.keys.iter().copied()).collect();
        let all = seen.len();
        seen.sort_unstable();
        seen.dedup();
        assert_eq!(seen.len(), all);
    }

    #[test]
    fn clicker_keys_are_known() {
        let mut hands = Hands::default();
        assert_eq!(hands.press(key("PageDown"), 0.0), Heard::Do(Command::Next));
        assert_eq!(hands.press(key("PageUp"), 10.0), Heard::Do(Command::Back));
        assert_eq!(hands.press(key("."), 20.0), Heard::Do(Command::Blackout));
    }

    #[test]
    fn hammering_next_goes_one_beat_at_a_time() {
        let mut hands = Hands::default();
        assert_eq!(hands.press(key(" "), 1000.0), Heard::Do(Command::Next));
        assert_eq!(hands.press(key(" "), 1100.0), Heard::Swallowed);
        assert_eq!(hands.press(key(" "), 1300.0), Heard::Swallowed, "the guard starts anew at each press");
        assert_eq!(hands.press(key(" "), 1600.0), Heard::Do(Command::Next));
        let held = Press { key: " ", repeat: true, modified: false };
        assert_eq!(hands.press(held, 9000.0), Heard::Swallowed);
    }

    #[test]
    fn a_typed_number_and_enter_jump() {
        let mut hands = Hands::default();
        assert_eq!(hands.press(key("1"), 0.0), Heard::Typing("1".into()));
        assert_eq!(hands.press(key("2"), 1.0), Heard::Typing("12".into()));
        assert_eq!(hands.press(key("Enter"), 2.0), Heard::Do(Command::Jump(11)));
        assert_eq!(hands.press(key("Enter"), 3.0), Heard::Nothing);
        hands.press(key("0"), 4.0);
        assert_eq!(hands.press(key("Enter"), 5.0), Heard::Typing(String::new()), "there is no beat 0");
        hands.press(key("7"), 6.0);
        assert_eq!(
            hands.press(key("Escape"), 7.0),
            Heard::Typing(String::new()),
            "escape gives up the number, not the show"
        );
        assert_eq!(hands.press(key("Escape"), 8.0), Heard::Do(Command::Leave));
    }

    #[test]
    fn a_stray_digit_does_not_wait_for_an_enter() {
        let mut hands = Hands::default();
        hands.press(key("1"), 0.0);
        assert_eq!(hands.press(key("Enter"), TYPING_MS + 1.0), Heard::Nothing);
        hands.press(key("2"), 10_000.0);
        assert_eq!(hands.press(key("Enter"), 10_500.0), Heard::Do(Command::Jump(1)));
    }

    #[test]
    fn browser_shortcuts_stay_the_browsers() {
        let ctrl_r = Press { key: "r", repeat: false, modified: true };
        assert_eq!(Hands::default().press(ctrl_r, 0.0), Heard::Nothing);
    }

    #[test]
    fn capitals_count_as_letters() {
        assert_eq!(Hands::default().press(key("X"), 0.0), Heard::Do(Command::Hold));
    }
}
