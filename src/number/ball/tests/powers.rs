use rug::ops::PowAssignRound;

use super::super::powers::rational_power;
use super::*;

/// x^q at 1200 bits; a little less and a little more, as q is rounded.
fn enclosure(base: &Float, exponent: &Rational) -> (Float, Float) {
    let mut value = Float::with_val(1200, base);
    value.pow_assign_round(&Float::with_val(1200, exponent), Round::Nearest);
    let error = Float::with_val(1200, &value >> 1000);
    (
        Float::with_val(1200, &value - &error),
        Float::with_val(1200, &value + &error),
    )
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(2000))]

    #[test]
    fn powers_of_few_bits_are_rounded_in_the_given_direction(
        significand in 1u32..1024,
        shift in -12i32..3,
        numerator in -90i32..90,
        denominator in 2u32..90,
        tiny in prop_oneof![Just(None), Just(Some(1)), Just(Some(-1))],
    ) {
        let base = Float::with_val(10, significand) << shift;
        let exponent = match tiny {
            None => Rational::from((numerator, denominator)),
            // Rounding such an exponent is rounding it to 1, for which the power is the base.
            Some(sign) => Rational::from(1) + (Rational::from(sign) >> 200),
        };
        let (least, largest) = enclosure(&base, &exponent);
        let below = rational_power(&base, &exponent, Round::Down);
        let above = rational_power(&base, &exponent, Round::Up);
        prop_assert!(below <= largest && above >= least);
        if tiny.is_some() && base != 1 {
            prop_assert!(below < base && above == base || below == base && above > base);
            let grows = (base > 1) == (tiny == Some(1));
            prop_assert_eq!(grows, above > base);
        }
        prop_assert!(below > 0 && above.to_f64() / below.to_f64() < 1.3);
    }
}
