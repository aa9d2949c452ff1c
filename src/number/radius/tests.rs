use proptest::prelude::*;
use rug::float::Round;
use rug::ops::Pow;
use rug::{Float, Integer, Rational};

use super::*;

/// m 2^e exactly, for the finite radii of these tests.
fn exact(radius: Radius) -> Rational {
    assert!(!radius.is_infinite());
    if radius.is_zero() {
        return Rational::new();
    }
    let power = i32::try_from(radius.exponent).expect("a small exponent");
    Rational::from(radius.mantissa) << power
}

/// 1 + 2^-28: what one rounding may add.
fn one_rounding() -> Rational {
    Rational::from(1) + (Rational::from(1) >> 28)
}

fn is_normal(radius: Radius) -> bool {
    radius.is_zero()
        || radius.is_infinite()
        || (MANTISSA_MIN..MANTISSA_END).contains(&radius.mantissa)
}

fn radius() -> impl Strategy<Value = Radius> {
    let mantissa = prop_oneof![
        MANTISSA_MIN..MANTISSA_END,
        Just(MANTISSA_MIN),
        Just(MANTISSA_END - 1),
        Just(MANTISSA_MIN + 1),
    ];
    prop_oneof![
        20 => (mantissa, -80i64..80).prop_map(|(mantissa, exponent)| Radius { exponent, mantissa }),
        1 => Just(Radius::ZERO),
    ]
}

fn assert_tight_above(value: Radius, truth: &Rational) {
    assert!(is_normal(value), "{value:?}");
    let above = exact(value);
    assert!(&above >= truth, "{value:?} is below {truth}");
    assert!(
        above <= truth * one_rounding(),
        "{value:?} is far above {truth}"
    );
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(4000))]

    #[test]
    fn sums_products_and_quotients_are_tight_upper_bounds(a in radius(), b in radius()) {
        let (x, y) = (exact(a), exact(b));
        assert_tight_above(a.add(b), &Rational::from(&x + &y));
        assert_tight_above(a.mul(b), &Rational::from(&x * &y));
        match a.div(b) {
            None => prop_assert!(b.is_zero()),
            Some(quotient) => assert_tight_above(quotient, &Rational::from(&x / &y)),
        }
        prop_assert_eq!(a.cmp(&b), x.cmp(&y));
        prop_assert_eq!(exact(a.max(b)), x.clone().max(y.clone()));
        prop_assert_eq!(exact(a.min(b)), x.min(y));
    }

    #[test]
    fn differences_are_tight_lower_bounds(a in radius(), b in radius(), near in 0u32..9) {
        let c = if a.is_zero() { a } else { Radius::carried(a.mantissa + near, a.exponent) };
        for (large, small) in [(a, b), (b, a), (c, a)] {
            let truth = exact(large) - exact(small);
            let below = large.sub_lower(small);
            prop_assert!(is_normal(below));
            if truth <= 0 {
                prop_assert!(below.is_zero());
            } else {
                prop_assert!(exact(below) <= truth);
                // The unit of the subtraction is 2^-59 of the minuend.
                let slack = (exact(large) >> 59) + Rational::from(&truth >> 28);
                prop_assert!(exact(below) + slack >= truth);
            }
        }
    }

    #[test]
    fn roots_powers_and_shifts_are_tight(a in radius(), power in 0u32..20, shift in -90i64..90) {
        let x = exact(a);
        if let Some(exponent) = a.binary_exponent() {
            let above = Rational::from(1) << exponent as i32;
            prop_assert!(x < above && x >= above / 2u32);
        } else {
            prop_assert!(a.is_zero());
        }
        let root = exact(a.sqrt());
        let square = Rational::from(&root * &root);
        prop_assert!(square >= x);
        prop_assert!(square <= &x * one_rounding().square());
        let truth = x.clone().pow(power as i32);
        let bound = exact(a.pow(power));
        prop_assert!(bound >= truth);
        prop_assert!(bound <= truth * one_rounding().pow(2 * power as i32 + 1));
        prop_assert_eq!(exact(a.mul_power_of_two(shift)), x << shift as i32);
    }

    #[test]
    fn floats_are_rounded_outward(mantissa: i128, extra in 0u64..4, shift in -300i32..300) {
        let integer = Integer::from(mantissa) * 1000u32 + extra;
        let float = Float::with_val(200, &integer) << shift;
        let truth = float.to_rational().unwrap().abs();
        let above = Radius::of_float_upper(&float);
        assert_tight_above(above, &truth);
        let below = Radius::of_float_lower(&float);
        prop_assert!(is_normal(below) && exact(below) <= truth);
        prop_assert!(exact(below) * one_rounding() >= truth);
        assert_tight_above(Radius::of_rational_upper(&Rational::from(-&truth)), &truth);
        for precision in [1, 5, 29, 30, 53] {
            let back = above.to_float_upper(precision);
            let nearest = Float::with_val_round(precision, exact(above), Round::Up).0;
            prop_assert_eq!(back, nearest);
        }
    }

    #[test]
    fn doubles_and_integers_are_rounded_outward(value in any::<f64>(), integer: u64) {
        if value.is_finite() {
            let truth = Rational::from_f64(value).unwrap().abs();
            assert_tight_above(Radius::from_f64_upper(value), &truth);
            let back = Radius::from_f64_upper(value).to_f64_upper();
            prop_assert!(back >= value.abs());
        }
        let integers = [integer, integer >> 32, integer >> 60];
        for truth in integers {
            assert_tight_above(Radius::from_u64_upper(truth), &Rational::from(truth));
            let below = exact(Radius::from_u64_lower(truth));
            prop_assert!(below <= truth && below * one_rounding() >= truth);
        }
    }
}

#[test]
fn what_is_representable_stays_exact() {
    assert_eq!(Radius::from_u64_upper(1), Radius::ONE);
    assert_eq!(Radius::power_of_two(0), Radius::ONE);
    assert_eq!(exact(Radius::from_f64_upper(-0.75)), Rational::from((3, 4)));
    assert_eq!(Radius::from_f64_upper(0.0), Radius::ZERO);
    assert_eq!(
        Radius::from_f64_upper(f64::from_bits(1)),
        Radius::power_of_two(-1074)
    );
    assert_eq!(Radius::from_u64_upper(9).sqrt(), Radius::from_u64_upper(3));
    assert_eq!(Radius::from_u64_upper(3).pow(4), Radius::from_u64_upper(81));
    assert_eq!(Radius::ONE.add(Radius::ONE), Radius::from_u64_upper(2));
    assert_eq!(
        Radius::of_float_upper(&Float::with_val(99, -5)),
        Radius::from_u64_upper(5)
    );
    assert_eq!(
        Radius::of_rational_upper(&Rational::from((-3, 8))),
        Radius::from_f64_upper(0.375)
    );
}

#[test]
fn infinity_absorbs_and_zero_is_neutral() {
    let one = Radius::ONE;
    let infinity = Radius::INFINITY;
    assert!(one.add(infinity).is_infinite() && infinity.add(infinity).is_infinite());
    assert!(one.mul(infinity).is_infinite() && infinity.sqrt().is_infinite());
    assert_eq!(Radius::ZERO.mul(infinity), Radius::ZERO);
    assert_eq!(infinity.div(one), Some(infinity));
    assert_eq!(one.div(infinity), Some(infinity));
    assert_eq!(one.div(Radius::ZERO), None);
    assert_eq!(infinity.sub_lower(infinity), Radius::ZERO);
    assert_eq!(one.sub_lower(infinity), Radius::ZERO);
    assert_eq!(infinity.sub_lower(one), infinity);
    assert_eq!((infinity.pow(0), Radius::ZERO.pow(0)), (one, one));
    assert!(infinity > one && one > Radius::ZERO && Radius::ZERO.sqrt().is_zero());
    assert!(Radius::from_f64_upper(f64::NAN).is_infinite());
    assert!(Radius::from_f64_upper(f64::NEG_INFINITY).is_infinite());
    let not_a_number = Float::with_val(53, f64::NAN);
    assert!(Radius::of_float_upper(&not_a_number).is_infinite());
    assert!(Radius::of_float_lower(&not_a_number).is_zero());
    assert!(infinity.to_float_upper(10).is_infinite() && Radius::ZERO.to_float_upper(10).is_zero());
}

#[test]
fn exponents_are_cut_off_upwards() {
    let huge = Radius::power_of_two(1 << 59);
    assert!(!huge.is_infinite() && huge.mul(huge).pow(4).is_infinite());
    let tiny = Radius::power_of_two(-(1 << 59));
    let least = tiny.pow(1 << 20);
    assert!(!least.is_zero() && least.mul(tiny) == least);
    assert!(least.sub_lower(least.mul_power_of_two(-1)) <= least);
    assert!(Radius::power_of_two(i64::MAX).is_infinite());
    assert_eq!(Radius::power_of_two(i64::MIN), least);
    assert!(huge.to_float_upper(20).is_infinite());
    assert!(tiny.to_float_upper(20) > 0);
    assert!(tiny.div(huge).is_some_and(|quotient| !quotient.is_zero()));
    assert!(huge.div(tiny).is_some_and(|quotient| quotient >= huge));
    assert_eq!(huge.to_f64_upper(), f64::INFINITY);
    assert_eq!(tiny.to_f64_upper(), f64::from_bits(1));
}
