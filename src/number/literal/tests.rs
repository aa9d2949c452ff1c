use proptest::prelude::*;

use super::*;

fn ratio(numerator: i64, denominator: i64) -> Rational {
    Rational::from((numerator, denominator))
}

#[test]
fn every_form_is_read_exactly() {
    for (text, value) in [
        ("0.1", ratio(1, 10)),
        (".5", ratio(1, 2)),
        ("3.", ratio(3, 1)),
        ("1e-7", ratio(1, 10_000_000)),
        ("1E+3", ratio(1000, 1)),
        ("12.5e1", ratio(125, 1)),
        ("-3", ratio(-3, 1)),
        ("+2", ratio(2, 1)),
        ("-0", ratio(0, 1)),
        ("0.0e-5", ratio(0, 1)),
        ("007", ratio(7, 1)),
        ("1e0000000000000000000001", ratio(10, 1)),
        ("  2.5\t\n", ratio(5, 2)),
        ("0x1.8p+3", ratio(12, 1)),
        ("-0X1.8P-1", ratio(-3, 4)),
        ("0x10", ratio(16, 1)),
        ("0x.8", ratio(1, 2)),
        ("0xAbC.dEp4", ratio(0xabcde, 16)),
        ("0x1.999999999999ap-4", Rational::from_f64(0.1).unwrap()),
        ("0x1e1", ratio(0x1e1, 1)),
        ("1/3", ratio(1, 3)),
        ("-6/4", ratio(-3, 2)),
        ("0/7", ratio(0, 1)),
        ("2^10", ratio(1024, 1)),
        ("2^+3", ratio(8, 1)),
        ("-2^-3", ratio(-1, 8)),
        ("2^0", ratio(1, 1)),
    ] {
        assert_eq!(parse(text), Ok(value), "{text}");
    }
}

#[test]
fn errors_say_what_to_write() {
    for (text, message) in [
        ("1,5", "write 1.5"),
        (
            "1,500",
            "write 1.500 if the comma is a decimal point, 1500 if it separates thousands",
        ),
        ("1,234,567", "write 1234567"),
        ("1_000.5", "write 1000.5"),
        ("1'000", "write 1000"),
        ("2**-58", "write 2^-58"),
        ("10^-3", "write 1e-3"),
        ("1d-5", "write 1e-5"),
        ("1.5D+2", "write 1.5e+2"),
        ("1 / 3", "write 1/3"),
        ("- 2", "write -2"),
        ("\u{2212}2", "write -2"),
        ("0.5f", "suffix `f`, and numbers here are exact; write 0.5"),
        (
            "0.1f",
            "write 0.1 for exactly that, 0x1.99999ap-4 for its rounding to binary32",
        ),
        ("0.1L", "suffix `L`, and numbers here are exact; write 0.1"),
        ("nan", "`nan` is not a real number"),
        ("-Infinity", "is not a real number"),
        ("", "`` is empty where a number should stand"),
        (" ", "is empty"),
        ("+", "it has no digits"),
        (".", "it has no digits"),
        ("0x", "it has no digits"),
        ("0xp3", "it has no digits"),
        ("e5", "it has no digits"),
        ("1.2.3", "it has two points"),
        ("1e", "its exponent is not a whole number"),
        ("1e+", "its exponent is not a whole number"),
        ("1e5.0", "its exponent is not a whole number"),
        ("0x1p0x3", "its exponent is not a whole number"),
        ("2^0.5", "its exponent is not a whole number"),
        ("3^2", "is a power of another base than 2"),
        ("1/0", "has the denominator zero"),
        ("1/00", "has the denominator zero"),
        ("0.5/3", "is not a ratio of two whole decimal numbers"),
        ("1/-3", "is not a ratio of two whole decimal numbers"),
        ("1/3/4", "is not a ratio of two whole decimal numbers"),
        ("1./3", "is not a ratio of two whole decimal numbers"),
        ("--1", "`-` does not belong in it"),
        ("pi/4", "is not a ratio of two whole decimal numbers"),
        ("0b11", "`b` does not belong in it"),
        ("\u{661}", "does not belong in it"),
    ] {
        let error = parse(text).expect_err(text).to_string();
        assert!(error.contains(message), "{text}: {error}");
    }
}

#[test]
fn limits_hold_at_and_one_step_past() {
    let digits = "7".repeat(DIGIT_LIMIT);
    assert!(parse(&digits).is_ok());
    assert!(parse(&format!("{digits}1")).is_err());
    assert!(parse(&format!("0.{}", &digits[1..])).is_ok());
    assert!(parse(&format!("0.{digits}")).is_err());
    assert!(parse(&format!("{digits}/{digits}")).is_ok_and(|value| value == 1));
    for text in [
        "1e20000",
        "1e-20000",
        "0x1p70000",
        "0x1p-70000",
        "2^70000",
        "2^-70000",
    ] {
        assert!(parse(text).is_ok(), "{text}");
    }
    for text in [
        "1e20001",
        "1e-20001",
        "0x1p70001",
        "0x1p-70001",
        "2^70001",
        "2^-70001",
    ] {
        let error = parse(text).expect_err(text).to_string();
        assert!(error.contains("beyond the limit"), "{error}");
    }
    let limit = Integer::from(10).pow(20_000);
    assert_eq!(parse("1e20000"), Ok(Rational::from(limit)));
}

#[test]
fn enormous_texts_are_refused_quickly_and_quoted_shortly() {
    for text in [
        "1e2000000000".to_string(),
        format!("1e{}", "9".repeat(1_000_000)),
        "9".repeat(1_000_000),
        "1,".repeat(500_000),
        "(".repeat(1_000_000),
        format!("2^{}", "1".repeat(1_000_000)),
    ] {
        let error = parse(&text).expect_err("too long");
        assert!(error.to_string().len() < 300, "{error}");
    }
}

#[test]
fn inside_formulas_only_unsigned_decimals_and_hex_floats_are_numbers() {
    assert_eq!(parse_unsigned("0x1p-1"), Ok(ratio(1, 2)));
    assert_eq!(parse_unsigned("2.50"), Ok(ratio(5, 2)));
    for text in ["-1", "1/3", "2^3", " 1", ""] {
        assert!(parse_unsigned(text).is_err(), "{text}");
    }
}

proptest! {
    /// Rust writes all decimal digits of a double when asked, and reads no part of this module.
    #[test]
    fn full_decimal_expansion_is_the_double(bits in any::<u64>()) {
        let double = f64::from_bits(bits);
        prop_assume!(double.is_finite());
        let value = Rational::from_f64(double);
        prop_assert_eq!(parse(&format!("{double:.1080}")).ok(), value.clone());
        prop_assert_eq!(parse(&format!("{double:.800e}")).ok(), value);
    }

    #[test]
    fn decimal_is_digits_times_a_power_of_ten(
        whole in 0u64..1_000_000, fraction in 0u32..1_000_000, exponent in -400i32..400,
        negative: bool,
    ) {
        let sign = if negative { "-" } else { "" };
        let text = format!("{sign}{whole}.{fraction:06}e{exponent}");
        let scale = Rational::from(Integer::from(10).pow(exponent.unsigned_abs()));
        let digits = Rational::from((whole * 1_000_000 + u64::from(fraction), 1_000_000u64));
        let value = if exponent < 0 { digits / scale } else { digits * scale };
        prop_assert_eq!(parse(&text), Ok(if negative { -value } else { value }));
    }

    #[test]
    fn hexadecimal_is_digits_times_a_power_of_two(
        whole: u32, fraction: u32, exponent in -5000i32..5000,
    ) {
        let text = format!("0x{whole:x}.{fraction:08x}p{exponent}");
        let digits = Rational::from((u64::from(whole) << 32) + u64::from(fraction));
        prop_assert_eq!(parse(&text), Ok(digits << (exponent - 32)));
    }

    #[test]
    fn ratio_is_a_quotient(numerator: i64, denominator in 1i64..) {
        let value = ratio(numerator, denominator);
        prop_assert_eq!(parse(&format!("{numerator}/{denominator}")), Ok(value.clone()));
        prop_assert_eq!(parse(&value.to_string()), Ok(value));
    }

    #[test]
    fn any_text_is_read_or_refused(text in "\\PC*") {
        let _ = parse(&text);
        let _ = parse_unsigned(&text);
    }

    /// No advice leads to the next error.
    #[test]
    fn what_is_advised_is_accepted(text in "[-+0-9.,eEpPdDxXfL_^*/' ]{1,12}") {
        let advice = parse(&text).err().and_then(|error| error.advice);
        if let Some(candidate) = advice.as_deref().and_then(|advice| advice.strip_prefix("write ")) {
            let candidate = candidate.split(' ').next().unwrap_or_default();
            prop_assert!(parse(candidate).is_ok(), "{} for {}", candidate, text);
        }
    }
}
