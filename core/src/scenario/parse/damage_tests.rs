//! Good files, damaged at random: no panic, and every problem has its place.

use super::*;
use proptest::prelude::*;

const EXAMPLE: &str = include_str!("../testdata/example.toml");
const FULL: &str = include_str!("../testdata/full.toml");

/// What a hand, a disk or another program may do to a text.
#[derive(Debug, Clone)]
enum Damage {
    Cut(usize, usize),
    Put(usize, String),
    Swap(usize, usize),
    Line(usize),
}

fn damage() -> impl Strategy<Value = Damage> {
    let piece = prop_oneof![
        "\\PC{0,3}",
        proptest::sample::select(vec![
            "\"",
            "[",
            "]",
            "{",
            "}",
            "=",
            ",",
            "\n",
            "[[body]]\n",
            "[[beat]]\n",
            "1e999",
            "nan",
            "-",
            "'''",
            "\\",
            "\u{0}",
            "\r",
            "#",
            ".",
            " of ",
            "x = 1\n",
            "[body.orbit]\n",
            "9223372036854775807",
            "periods of ",
            "\u{feff}",
        ])
        .prop_map(str::to_owned),
    ];
    prop_oneof![
        (any::<usize>(), 0_usize..40).prop_map(|(a, n)| Damage::Cut(a, n)),
        (any::<usize>(), piece).prop_map(|(a, p)| Damage::Put(a, p)),
        (any::<usize>(), any::<usize>()).prop_map(|(a, b)| Damage::Swap(a, b)),
        any::<usize>().prop_map(Damage::Line),
    ]
}

fn damaged(text: &str, damage: &Damage) -> String {
    let mut chars: Vec<char> = text.chars().collect();
    let len = chars.len().max(1);
    match damage {
        Damage::Cut(at, n) => {
            let at = at % len;
            chars.drain(at..(at + n).min(chars.len()));
        }
        Damage::Put(at, piece) => {
            let at = at % len;
            chars.splice(at..at, piece.chars());
        }
        Damage::Swap(a, b) => {
            if !chars.is_empty() {
                chars.swap(a % len, b % len);
            }
        }
        Damage::Line(at) => {
            let mut lines: Vec<&str> = text.lines().collect();
            if !lines.is_empty() {
                let at = at % lines.len();
                let line = lines.remove(at);
                lines.insert(at / 2, line);
            }
            return lines.join("\n");
        }
    }
    chars.into_iter().collect()
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(2000))]
    #[test]
    fn no_damage_to_a_file_panics_and_every_problem_has_a_place(
        full in any::<bool>(), damages in proptest::collection::vec(damage(), 1..4),
    ) {
        let mut text = if full { FULL } else { EXAMPLE }.to_owned();
        for d in &damages {
            text = damaged(&text, d);
        }
        let parsed = parse(&text);
        let failed = parsed.problems.iter().any(|p| p.severity == Severity::Error);
        prop_assert_eq!(parsed.scenario.is_some(), !failed);
        let lines = text.split('\n').count();
        for p in &parsed.problems {
            prop_assert!((1..=lines).contains(&p.place.line), "{} of {}", p, lines);
            let line = text.split('\n').nth(p.place.line - 1).unwrap();
            prop_assert!((1..=line.chars().count() + 1).contains(&p.place.column), "{}: {:?}", p, line);
            prop_assert!(!p.wrong.is_empty() && !p.remedy.is_empty());
            prop_assert!(!p.wrong.ends_with('.') && !p.to_string().contains('\n'), "{}", p);
        }
    }

    #[test]
    fn no_text_at_all_panics(text in "\\PC{0,200}", bytes in proptest::collection::vec(any::<u8>(), 0..200)) {
        let parsed = parse(&text);
        prop_assert!(parsed.scenario.is_some() || !parsed.problems.is_empty());
        let parsed = parse_bytes(&bytes);
        prop_assert!(parsed.scenario.is_some() || !parsed.problems.is_empty());
    }
}
