//! Random rationals and a plain evaluation for the tests of the conversions.

use proptest::prelude::*;
use rug::Rational;

/// Rationals with small and large numerators, both signs, and zero.
pub fn rational() -> impl Strategy<Value = Rational> {
    prop_oneof![
        1 => Just(Rational::new()),
        4 => (-50_i64..50, 1_i64..20).prop_map(Rational::from),
        2 => (any::<i64>(), 1_i64..1_000_000).prop_map(Rational::from),
        2 => (any::<i32>(), -60_i32..60)
            .prop_map(|(mantissa, exponent)| Rational::from(mantissa) << exponent),
    ]
}

/// sum_k powers[k] t^k by Horner's rule.
pub fn horner(powers: &[Rational], t: &Rational) -> Rational {
    powers
        .iter()
        .rev()
        .fold(Rational::new(), |sum, power| sum * t + power)
}
