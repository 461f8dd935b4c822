//! Elementary functions from the `libm` crate on every target.
//!
//! Those of the standard library are the platform's: natively and in WebAssembly they differ in the last bit of
//! several in a hundred values, which would make a rehearsed show differ from the one the audience sees. Square
//! root, absolute value, rounding, minimum and maximum are exact by IEEE 754: use those of `f64`.

/// Sine of an angle in radians.
#[inline]
pub fn sin(x: f64) -> f64 {
    libm::sin(x)
}

/// Cosine of an angle in radians.
#[inline]
pub fn cos(x: f64) -> f64 {
    libm::cos(x)
}

/// Tangent of an angle in radians.
#[inline]
pub fn tan(x: f64) -> f64 {
    libm::tan(x)
}

/// Arcsine, radians in -π/2 to π/2; NaN outside -1 to 1.
#[inline]
pub fn asin(x: f64) -> f64 {
    libm::asin(x)
}

/// Arccosine, radians in 0 to π; NaN outside -1 to 1.
#[inline]
pub fn acos(x: f64) -> f64 {
    libm::acos(x)
}

/// Arctangent, radians in -π/2 to π/2.
#[inline]
pub fn atan(x: f64) -> f64 {
    libm::atan(x)
}

/// Hyperbolic sine.
#[inline]
pub fn sinh(x: f64) -> f64 {
    libm::sinh(x)
}

/// Hyperbolic cosine.
#[inline]
pub fn cosh(x: f64) -> f64 {
    libm::cosh(x)
}

/// Hyperbolic tangent.
#[inline]
pub fn tanh(x: f64) -> f64 {
    libm::tanh(x)
}

/// Inverse hyperbolic sine.
#[inline]
pub fn asinh(x: f64) -> f64 {
    libm::asinh(x)
}

/// Inverse hyperbolic cosine; NaN below 1.
#[inline]
pub fn acosh(x: f64) -> f64 {
    libm::acosh(x)
}

/// Inverse hyperbolic tangent; NaN outside -1 to 1.
#[inline]
pub fn atanh(x: f64) -> f64 {
    libm::atanh(x)
}

/// e to the power of x.
#[inline]
pub fn exp(x: f64) -> f64 {
    libm::exp(x)
}

/// e to the power of x, less 1; exact also near 0.
#[inline]
pub fn exp_m1(x: f64) -> f64 {
    libm::expm1(x)
}

/// Natural logarithm; NaN below 0.
#[inline]
pub fn ln(x: f64) -> f64 {
    libm::log(x)
}

/// Natural logarithm of 1 + x; exact also near 0.
#[inline]
pub fn ln_1p(x: f64) -> f64 {
    libm::log1p(x)
}

/// Logarithm to base 10; NaN below 0.
#[inline]
pub fn log10(x: f64) -> f64 {
    libm::log10(x)
}

/// Logarithm to base 2; NaN below 0.
#[inline]
pub fn log2(x: f64) -> f64 {
    libm::log2(x)
}

/// Cube root, of negative numbers too.
#[inline]
pub fn cbrt(x: f64) -> f64 {
    libm::cbrt(x)
}

/// Sine and cosine of an angle in radians.
#[inline]
pub fn sin_cos(x: f64) -> (f64, f64) {
    libm::sincos(x)
}

/// Angle of the point (x, y) from the x axis, radians in -π to π.
#[inline]
pub fn atan2(y: f64, x: f64) -> f64 {
    libm::atan2(y, x)
}

/// x to the power of y; NaN for a negative x and a fractional y.
#[inline]
pub fn pow(x: f64, y: f64) -> f64 {
    libm::pow(x, y)
}

/// √(x² + y²) without overflow on the way.
#[inline]
pub fn hypot(x: f64, y: f64) -> f64 {
    libm::hypot(x, y)
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::f64::consts::PI;

    /// Bits, not closeness: these are the values that every build has to give (e is one last place off here).
    #[test]
    fn bits_are_the_same_on_every_target() {
        assert_eq!(sin(1.0).to_bits(), 0x3fea_ed54_8f09_0cee);
        assert_eq!(exp(1.0).to_bits(), 0x4005_bf0a_8b14_576a);
        assert_eq!(ln(10.0).to_bits(), 0x4002_6bb1_bbb5_5516);
        assert_eq!(atan2(1.0, 1.0).to_bits(), (PI / 4.0).to_bits());
        assert_eq!(cbrt(-27.0).to_bits(), (-3.0_f64).to_bits());
        assert_eq!(hypot(3.0, 4.0).to_bits(), 5.0_f64.to_bits());
        assert!(hypot(3.0e200, 4.0e200).is_finite());
    }

    #[test]
    fn sine_and_cosine_together_equal_each_alone() {
        for i in -200..200 {
            let x = f64::from(i) * 0.173;
            assert_eq!(sin_cos(x), (sin(x), cos(x)), "at {x}");
        }
    }
}
