//! Numbers as people write them, and the shortest text of a double.

/// What keeps a text from starting with a number.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum NumberFault {
    /// There is no digit where the number should start.
    None,
    /// A comma stands where a point should, or between thousands.
    Comma,
    /// A space stands between groups of digits.
    SpacedDigits,
    /// An underscore that is not between two digits.
    Underscore,
    /// A power of ten written out, as in 3 × 10^8.
    PowerOfTen,
    /// Too large for a double.
    TooLarge,
}

/// The number at the start of a text, and what follows it.
///
/// Signs (the typographic minus too), a point, an exponent, and underscores between digits are understood.
/// The number is finite.
///
/// # Errors
/// Says what a person got wrong.
pub fn leading(text: &str) -> Result<(f64, &str), NumberFault> {
    let text = text.trim();
    let mut plain = String::new();
    let mut rest = text;
    take_sign(&mut rest, &mut plain);
    let whole = take_digits(&mut rest, &mut plain)?;
    let mut fraction = 0;
    if let Some(after) = rest.strip_prefix('.') {
        plain.push('.');
        rest = after;
        fraction = take_digits(&mut rest, &mut plain)?;
    }
    if whole + fraction == 0 {
        return Err(NumberFault::None);
    }
    take_exponent(&mut rest, &mut plain)?;

    let mut next = rest.chars();
    if next.next() == Some(',') && next.next().is_some_and(|c| c.is_ascii_digit()) {
        return Err(NumberFault::Comma);
    }
    let unspaced = rest.trim_start();
    if unspaced.starts_with(|c: char| c.is_ascii_digit()) {
        return Err(NumberFault::SpacedDigits);
    }
    let factor = unspaced.trim_start_matches(['×', '*', 'x', '·', ' ']);
    if factor.len() < unspaced.len() && factor.starts_with("10") {
        return Err(NumberFault::PowerOfTen);
    }
    let value: f64 = plain.parse().ok().ok_or(NumberFault::None)?;
    if value.is_finite() { Ok((value, unspaced)) } else { Err(NumberFault::TooLarge) }
}

fn take_sign(rest: &mut &str, plain: &mut String) {
    if let Some(after) = rest.strip_prefix(['-', '−']) {
        plain.push('-');
        *rest = after;
    } else if let Some(after) = rest.strip_prefix('+') {
        *rest = after;
    }
}

fn take_digits(rest: &mut &str, plain: &mut String) -> Result<usize, NumberFault> {
    let mut count = 0;
    let mut after_digit = false;
    while let Some(c) = rest.chars().next() {
        if c.is_ascii_digit() {
            plain.push(c);
            count += 1;
            after_digit = true;
        } else if c == '_' {
            if !after_digit || !rest[1..].starts_with(|c: char| c.is_ascii_digit()) {
                return Err(NumberFault::Underscore);
            }
            after_digit = false;
        } else {
            break;
        }
        *rest = &rest[1..];
    }
    Ok(count)
}

/// An `e` belongs to the number only when digits follow: "1 e" is no number, "2 Earth masses" has none.
fn take_exponent(rest: &mut &str, plain: &mut String) -> Result<(), NumberFault> {
    let Some(mut after) = rest.strip_prefix(['e', 'E']) else { return Ok(()) };
    let mut exponent = String::from("e");
    take_sign(&mut after, &mut exponent);
    if after.starts_with(|c: char| c.is_ascii_digit()) {
        take_digits(&mut after, &mut exponent)?;
        plain.push_str(&exponent);
        *rest = after;
    }
    Ok(())
}

/// Text of a number with so many significant digits: plain between 0.0001 and 10 million, else with an exponent.
/// Zeros at the end are left away.
pub fn with_digits(value: f64, digits: usize) -> String {
    let scientific = format!("{value:.*e}", digits.saturating_sub(1));
    tidy(&scientific)
}

/// Rounded to a whole number, with commas between thousands.
pub fn grouped(value: f64) -> String {
    let digits = format!("{value:.0}");
    let mut grouped = String::new();
    for (i, digit) in digits.chars().enumerate() {
        if i > 0 && (digits.len() - i).is_multiple_of(3) {
            grouped.push(',');
        }
        grouped.push(digit);
    }
    grouped
}

/// The shortest text that reads back to the same double.
pub fn shortest(value: f64) -> String {
    tidy(&format!("{value:e}"))
}

/// Rust's exponent form made plain where it is short.
fn tidy(scientific: &str) -> String {
    let Some((mantissa, exponent)) = scientific.split_once('e') else { return scientific.to_owned() };
    let Ok(exponent) = exponent.parse::<i32>() else { return scientific.to_owned() };
    let (sign, mantissa) = mantissa.strip_prefix('-').map_or(("", mantissa), |m| ("-", m));
    let digits: String = mantissa.chars().filter(char::is_ascii_digit).collect();
    let digits = match digits.trim_end_matches('0') {
        "" => "0",
        some => some,
    };
    let count = i32::try_from(digits.len()).unwrap_or(i32::MAX);
    let zeros = |n: i32| "0".repeat(usize::try_from(n).unwrap_or(0));
    match exponent {
        -4..=-1 => format!("{sign}0.{}{digits}", zeros(-exponent - 1)),
        0..=6 if count <= exponent + 1 => format!("{sign}{digits}{}", zeros(exponent + 1 - count)),
        0..=6 => {
            let (whole, fraction) = digits.split_at(usize::try_from(exponent + 1).unwrap_or(1));
            format!("{sign}{whole}.{fraction}")
        }
        _ => {
            let (first, more) = digits.split_at(1);
            let point = if more.is_empty() { "" } else { "." };
            format!("{sign}{first}{point}{more}e{exponent}")
        }
    }
}
