//! Numbers that look random and follow from a seed: the same everywhere.

/// SplitMix64: a counter whose bits are mixed. Every seed is as good as another.
///
/// # Source
/// G. L. Steele, D. Lea & C. H. Flood 2014, "Fast splittable pseudorandom number generators", OOPSLA '14, 453-472, figure
/// 16 (with the shifts and factors of their variant 13).
#[derive(Debug, Clone)]
pub(super) struct Draws(u64);

impl Draws {
    /// From a seed.
    pub(super) const fn new(seed: u64) -> Self {
        Self(seed)
    }

    /// The next 64 bits.
    const fn bits(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9e37_79b9_7f4a_7c15);
        let z = (self.0 ^ (self.0 >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
        let z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
        z ^ (z >> 31)
    }

    /// The next number, evenly from 0 to below 1, in steps of 2⁻⁵³.
    #[expect(clippy::cast_precision_loss, reason = "53 bits fit")]
    pub(super) fn share(&mut self) -> f64 {
        (self.bits() >> 11) as f64 / (1_u64 << 53) as f64
    }

    /// The next number, evenly between two others.
    pub(super) fn between(&mut self, from: f64, to: f64) -> f64 {
        from + (to - from) * self.share()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_first_numbers_are_those_of_the_reference_program() {
        // Output of S. Vigna's splitmix64.c (2015, public domain) for seed 1234567, as widely printed; from memory.
        let mut draws = Draws::new(1_234_567);
        let want = [
            6_457_827_717_110_365_317,
            3_203_168_211_198_807_973,
            9_817_491_932_198_370_423,
            4_593_380_528_125_082_431,
            16_408_922_859_458_223_821,
        ];
        assert_eq!([(); 5].map(|()| draws.bits()), want);
        assert_eq!(Draws::new(0).bits(), 0xe220_a839_7b1d_cdaf);
    }

    #[test]
    fn shares_are_even_over_0_to_below_1() {
        const COUNT: u32 = 100_000;
        let mut draws = Draws::new(5);
        let (mut sum, mut tenths) = (0.0, [0_u32; 10]);
        for _ in 0..COUNT {
            let share = draws.share();
            assert!((0.0..1.0).contains(&share));
            sum += share;
            let tenth = (1..10).filter(|n| share * 10.0 >= f64::from(*n)).count();
            tenths[tenth] += 1;
        }
        // Five standard deviations: 1/sqrt(12 n) of the mean, sqrt(0.09 n) of a count.
        assert!((sum / f64::from(COUNT) - 0.5).abs() < 5.0 * 0.289 / 316.0, "{sum}");
        for count in tenths {
            assert!((f64::from(count) - 1e4).abs() < 5.0 * 95.0, "{tenths:?}");
        }
    }
}
