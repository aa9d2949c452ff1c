//! Rough, deterministic arithmetic that steers the search and never concludes.
//!
//! The platform's mathematical library differs between machines in the last place, so a search
//! steered by it could write different bytes on another machine; these functions use only the
//! basic operations of IEEE 754, which are the same everywhere.

use rug::Float;

/// About log2 |x| (at most 0.09 below it): exponent plus linear interpolation of the significand.
/// Zero gives a very small number.
pub fn log2_of(x: &Float) -> f64 {
    if x.is_zero() {
        return ZERO_LOG2;
    }
    if !x.is_finite() {
        return -ZERO_LOG2;
    }
    let (significand, exponent) = x.to_f64_exp();
    f64::from(exponent) + 2.0 * significand.abs() - 2.0
}

/// Stands for the logarithm of zero.
pub const ZERO_LOG2: f64 = -1e18;

/// About 2^x (a power of two times a linear interpolation), as a short exact number, 8 bits.
pub fn power_of_two(x: f64) -> Float {
    let x = x.clamp(-1e9, 1e9);
    let whole = x.floor();
    let mut result = Float::with_val(8, 1.0 + (x - whole));
    result <<= whole as i32;
    result
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn logarithm_and_power_are_inverse_to_each_other() {
        for x in [-300.25, -3.0, -0.5, 0.0, 0.75, 10.5, 4000.0] {
            let back = log2_of(&power_of_two(x));
            assert!((back - x).abs() < 0.02, "{x} came back as {back}");
        }
        assert!((log2_of(&Float::with_val(53, 1e10)) - 33.219_28).abs() < 0.09);
        assert_eq!(log2_of(&Float::new(53)), ZERO_LOG2);
    }
}
