//! Counts among numbers, and numbers taken from the front of a row: what goes from one thread to another is one flat array of f64.

/// A count as a number. Counts stay far below 2⁵³, where f64 is exact.
#[expect(clippy::cast_precision_loss, reason = "counts of things in memory are exact in f64")]
pub fn number_from(count: usize) -> f64 {
    count as f64
}

/// The count that a number is; `None` where it is none, or more than 2³² - 1.
#[expect(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "checked to be a whole number that fits"
)]
pub fn count_from(number: f64) -> Option<usize> {
    (number >= 0.0 && number <= f64::from(u32::MAX) && number.fract() == 0.0).then_some(number as usize)
}

/// Takes so many numbers off the front; `None`, and nothing taken, where there are fewer.
pub fn take<'a>(rest: &mut &'a [f64], count: usize) -> Option<&'a [f64]> {
    let (part, tail) = rest.split_at_checked(count)?;
    *rest = tail;
    Some(part)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn only_whole_numbers_are_counts() {
        for count in [0, 1, 4_294_967_295] {
            assert_eq!(count_from(number_from(count)), Some(count));
        }
        for number in [-1.0, 0.5, 4_294_967_296.0, f64::NAN, f64::INFINITY] {
            assert_eq!(count_from(number), None, "{number}");
        }
    }

    #[test]
    fn what_is_not_there_is_not_taken() {
        let mut rest: &[f64] = &[1.0, 2.0, 3.0];
        assert_eq!(take(&mut rest, 2), Some(&[1.0, 2.0][..]));
        assert_eq!(take(&mut rest, 2), None);
        assert_eq!(take(&mut rest, 1), Some(&[3.0][..]));
    }
}
