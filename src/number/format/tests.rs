use proptest::prelude::*;
use rug::Float;
use rug::float::Round;

use super::*;
use crate::number::literal;

/// The finite values of a 16-bit format from 0 upwards, decoded from their bits: the position in
/// the list is the bit pattern, and an even pattern has an even significand.
fn enumerated(format: Format) -> Vec<Rational> {
    let fraction_bits = format.precision() - 1;
    let exponent_bits = 15 - fraction_bits;
    let bias = (1i32 << (exponent_bits - 1)) - 1;
    (0u32..1 << 15)
        .map(|bits| (bits >> fraction_bits, bits & ((1 << fraction_bits) - 1)))
        .take_while(|&(exponent, _)| exponent < (1 << exponent_bits) - 1)
        .map(|(exponent, fraction)| {
            let (significand, exponent) = match exponent {
                0 => (fraction, 1),
                _ => (fraction + (1 << fraction_bits), exponent as i32),
            };
            Rational::from(significand) << (exponent - bias - fraction_bits as i32)
        })
        .collect()
}

/// Checks every number of the format and every interval between neighbours: its middle and the
/// numbers to both sides of the middle, with both signs.
fn check_exhaustively(format: Format) {
    let values = enumerated(format);
    let rounds_to = |value: &Rational, expected: &Rational| {
        for negative in [false, true] {
            let signed = |x: &Rational| {
                if negative {
                    Rational::from(-x)
                } else {
                    x.clone()
                }
            };
            let rounded = format.round(&signed(value));
            assert_eq!(
                rounded.value,
                signed(expected),
                "{} of {value}",
                format.name()
            );
            assert_eq!(rounded.inexact, value != expected);
            assert!(!rounded.overflow);
            let tiny = *value < (Rational::from(1) << format.minimum_exponent());
            assert_eq!(rounded.underflow, tiny && value != expected);
        }
    };
    for value in &values {
        rounds_to(value, value);
        assert!(format.is_representable(value));
        let hex = format.to_hex(value).expect("representable");
        assert_eq!(literal::parse(&hex).as_ref(), Ok(value), "{hex}");
    }
    let nudge = Rational::from(1) >> 300;
    for (lower_bits, pair) in values.windows(2).enumerate() {
        let middle = Rational::from(&pair[0] + &pair[1]) / 2u32;
        rounds_to(&middle, &pair[lower_bits % 2]);
        rounds_to(&Rational::from(&middle - &nudge), &pair[0]);
        rounds_to(&Rational::from(&middle + &nudge), &pair[1]);
        rounds_to(&Rational::from(&pair[0] + &nudge), &pair[0]);
        rounds_to(&Rational::from(&pair[1] - &nudge), &pair[1]);
        assert_eq!(format.to_hex(&middle), None);
    }
    let greatest = values.last().expect("not empty");
    assert_eq!(*greatest, format.greatest());
    assert_eq!(values[1], format.least_positive());
    // The greatest number is odd, so the middle to its successor rounds away, to infinity.
    let above = format.ulp(greatest) / 2u32 + greatest;
    rounds_to(&Rational::from(&above - &nudge), greatest);
    for beyond in [above.clone(), above + &nudge, Rational::from(1) << 100_000] {
        let rounded = format.round(&-beyond);
        assert!(rounded.overflow && rounded.inexact && !rounded.underflow);
        assert_eq!(rounded.value, Rational::from(-greatest));
    }
}

#[test]
fn binary16_is_right_everywhere() {
    check_exhaustively(Format::BINARY16);
}

#[test]
fn bfloat16_is_right_everywhere() {
    check_exhaustively(Format::BFLOAT16);
}

#[test]
fn parameters_are_those_of_the_standard() {
    for (name, precision, minimum, maximum) in [
        ("binary16", 11, -14, 15),
        ("bfloat16", 8, -126, 127),
        ("binary32", 24, -126, 127),
        ("binary64", 53, -1022, 1023),
        ("binary128", 113, -16382, 16383),
    ] {
        let format = Format::from_name(name).expect(name);
        assert_eq!(format.name(), name);
        assert_eq!(format.precision(), precision);
        assert_eq!(
            (format.minimum_exponent(), format.maximum_exponent()),
            (minimum, maximum)
        );
    }
    assert_eq!(Format::from_name("double"), None);
    let exact = |value: f64| Rational::from_f64(value).expect("finite");
    assert_eq!(Format::BINARY64.greatest(), exact(f64::MAX));
    assert_eq!(Format::BINARY32.greatest(), exact(f32::MAX.into()));
    assert_eq!(Format::BINARY64.least_positive(), exact(f64::from_bits(1)));
}

#[test]
fn ulp_steps_at_powers_of_two_and_stops_at_the_least() {
    let format = Format::BINARY64;
    let power = |exponent: i32| Rational::from(1) << exponent;
    assert_eq!(format.ulp(&Rational::from(1)), power(-52));
    assert_eq!(format.ulp(&Rational::from(-1)), power(-52));
    assert_eq!(format.ulp(&(Rational::from(1) - power(-200))), power(-53));
    assert_eq!(format.ulp(&power(-1022)), power(-1074));
    assert_eq!(format.ulp(&power(-5000)), power(-1074));
    assert_eq!(format.ulp(&Rational::new()), power(-1074));
    assert_eq!(format.ulp(&power(2000)), power(1948));
}

#[test]
fn hex_is_short_and_exact() {
    for (value, text) in [
        (0.0, "0x0p+0"),
        (1.0, "0x1p+0"),
        (-2.0, "-0x1p+1"),
        (0.1, "0x1.999999999999ap-4"),
        (12.0, "0x1.8p+3"),
        (-1.0e-300, "-0x1.56e1fc2f8f359p-997"),
        (1.0 + f64::EPSILON, "0x1.0000000000001p+0"),
        (f64::from_bits(1), "0x1p-1074"),
        (f64::from_bits(3), "0x1.8p-1073"),
        (f64::MAX, "0x1.fffffffffffffp+1023"),
    ] {
        let value = Rational::from_f64(value).expect("finite");
        assert_eq!(Format::BINARY64.to_hex(&value).as_deref(), Some(text));
    }
    assert_eq!(hex(&Rational::from((1, 3))), None);
    assert_eq!(
        Format::BINARY32.to_hex(&Rational::from_f64(0.1).expect("finite")),
        None
    );
}

/// Decimal texts, dense around the ends of the exponent range.
fn decimals(least: i32, greatest: i32) -> impl Strategy<Value = String> {
    let exponent = prop_oneof![
        least - 22..least + 4,
        greatest - 22..greatest + 2,
        -30..30i32
    ];
    ("-?[0-9]{1,20}", exponent).prop_map(|(digits, exponent)| format!("{digits}e{exponent}"))
}

/// Rational numbers near the middle between neighbours of a format, over its whole range.
fn near_middles(format: Format) -> impl Strategy<Value = Rational> {
    let exponents =
        (format.minimum_exponent() - format.precision() as i32 - 3)..format.maximum_exponent() + 2;
    (any::<u128>(), exponents, 0u32..3, 1u32..4).prop_map(
        move |(bits, exponent, nudge, divisor)| {
            let significand = Integer::from(bits >> (127 - format.precision().min(126))) | 1u32;
            let significand_bits = significand.significant_bits() as i32;
            let nudged = match nudge {
                0 => Rational::from(significand),
                1 => Rational::from(significand) + (Rational::from(1) >> 200),
                _ => Rational::from(significand) - (Rational::from(1) >> 200),
            };
            (nudged << (exponent - significand_bits)) / divisor
        },
    )
}

/// Rounding by MPFR: to the precision first, then again to the subnormal grid with the first
/// rounding's direction taken into account.
fn by_mpfr(format: Format, value: &Rational) -> Option<Rational> {
    let (mut float, direction) = Float::with_val_round(format.precision(), value, Round::Nearest);
    float.subnormalize_round(format.minimum_exponent() + 1, direction, Round::Nearest);
    if float
        .get_exp()
        .is_some_and(|exponent| exponent > format.maximum_exponent() + 1)
    {
        return None;
    }
    float.to_rational()
}

fn agrees_with_mpfr(format: Format, value: &Rational) -> Result<(), TestCaseError> {
    let rounded = format.round(value);
    let expected = by_mpfr(format, value);
    prop_assert_eq!(rounded.overflow, expected.is_none());
    if let Some(expected) = expected {
        prop_assert_eq!(rounded.inexact, expected != *value);
        prop_assert_eq!(rounded.value, expected);
    }
    Ok(())
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(2000))]

    #[test]
    fn binary64_agrees_with_the_standard_library(text in decimals(-324, 308)) {
        let rounded = Format::BINARY64.round(&literal::parse(&text).unwrap());
        let double: f64 = text.parse().unwrap();
        prop_assert_eq!(rounded.overflow, double.is_infinite());
        if let Some(expected) = Rational::from_f64(double) {
            prop_assert_eq!(rounded.value, expected);
        }
    }

    #[test]
    fn binary32_agrees_with_the_standard_library(text in decimals(-45, 38)) {
        let rounded = Format::BINARY32.round(&literal::parse(&text).unwrap());
        let single: f32 = text.parse().unwrap();
        prop_assert_eq!(rounded.overflow, single.is_infinite());
        if let Some(expected) = Rational::from_f32(single) {
            prop_assert_eq!(rounded.value, expected);
        }
    }

    #[test]
    fn every_format_agrees_with_mpfr(
        (format, value) in prop::sample::select(Format::ALL.to_vec())
            .prop_flat_map(|format| near_middles(format).prop_map(move |value| (format, value))),
    ) {
        agrees_with_mpfr(format, &value)?;
        agrees_with_mpfr(format, &-value)?;
    }

    #[test]
    fn hex_reads_back(bits in any::<u64>()) {
        if let Some(value) = Rational::from_f64(f64::from_bits(bits)) {
            let hex = Format::BINARY64.to_hex(&value).expect("a double");
            prop_assert_eq!(literal::parse(&hex), Ok(value));
        }
    }

    #[test]
    fn exponent_brackets_the_number(numerator in any::<i64>(), denominator in 1u64.., shift in -500i32..500) {
        let value = Rational::from((numerator, denominator)) << shift;
        match binary_exponent(&value) {
            None => prop_assert!(value.is_zero()),
            Some(exponent) => {
                let power = Rational::from(1) << exponent;
                let modulus = value.abs();
                prop_assert!(power <= modulus && modulus < power * 2u32);
            }
        }
    }
}
