//! Exact and outward-rounded text of numbers, for certificates and people.

use rug::float::Round;
use rug::{Float, Integer, Rational};

/// Significant decimal digits of the ends of an enclosure in a certificate.
pub const ENCLOSURE_DIGITS: usize = 15;

/// `x` in decimal with `digits` significant digits, rounded toward minus infinity.
pub fn rounded_down(x: &Float, digits: usize) -> String {
    rounded(x, digits, Round::Down)
}

/// `x` in decimal with `digits` significant digits, rounded toward plus infinity.
pub fn rounded_up(x: &Float, digits: usize) -> String {
    rounded(x, digits, Round::Up)
}

/// The rational `x` in decimal, rounded toward minus infinity.
pub fn rational_down(x: &Rational, digits: usize) -> String {
    rounded_down(
        &Float::with_val_round(bits(digits), x, Round::Down).0,
        digits,
    )
}

/// The rational `x` in decimal, rounded toward plus infinity.
pub fn rational_up(x: &Rational, digits: usize) -> String {
    rounded_up(&Float::with_val_round(bits(digits), x, Round::Up).0, digits)
}

/// Working bits that make the second rounding of a decimal conversion harmless.
fn bits(digits: usize) -> u32 {
    u32::try_from(digits)
        .unwrap_or(u32::MAX / 8)
        .saturating_mul(4)
        + 64
}

fn rounded(x: &Float, digits: usize, round: Round) -> String {
    if x.is_nan() {
        return "nan".to_owned();
    }
    if x.is_infinite() {
        return if x.is_sign_negative() { "-inf" } else { "inf" }.to_owned();
    }
    if x.is_zero() {
        return "0".to_owned();
    }
    let (negative, mut significant, exponent) = x.to_sign_string_exp_round(10, Some(digits), round);
    // value = 0.DIGITS * 10^exponent
    let point = exponent.unwrap_or(0);
    significant.truncate(significant.trim_end_matches('0').len().max(1));
    let sign = if negative { "-" } else { "" };
    format!("{sign}{}", place_point(&significant, i64::from(point)))
}

/// Writes 0.DIGITS * 10^point: plainly where that is short, with an exponent otherwise.
fn place_point(digits: &str, point: i64) -> String {
    let count = digits.len() as i64;
    if (-3..=0).contains(&point) {
        return format!("0.{}{digits}", "0".repeat(point.unsigned_abs() as usize));
    }
    if point > 0 && point <= 15 {
        if point >= count {
            return format!("{digits}{}", "0".repeat((point - count) as usize));
        }
        let (whole, fraction) = digits.split_at(point as usize);
        return format!("{whole}.{fraction}");
    }
    let (first, rest) = digits.split_at(1);
    let fraction = if rest.is_empty() {
        String::new()
    } else {
        format!(".{rest}")
    };
    format!("{first}{fraction}e{}", point - 1)
}

/// The shortest exact literal of a rational that this project reads: an integer, a C99 hex-float
/// where the denominator is a power of two, a ratio otherwise.
pub fn exact(x: &Rational) -> String {
    if *x.denom() == 1 && x.numer().significant_bits() <= 53 {
        return x.numer().to_string();
    }
    if x.denom().is_power_of_two() {
        return hexadecimal(x);
    }
    format!("{}/{}", x.numer(), x.denom())
}

/// A dyadic rational as 0x1.fffp+n.
fn hexadecimal(x: &Rational) -> String {
    let sign = if *x < 0 { "-" } else { "" };
    let numerator = Integer::from(x.numer().abs_ref());
    let trailing = numerator.find_one(0).unwrap_or(0);
    let odd = numerator >> trailing;
    let length = odd.significant_bits();
    // odd = 1.fraction * 2^(length-1)
    let exponent =
        i64::from(length) - 1 + i64::from(trailing) - i64::from(x.denom().significant_bits() - 1);
    let fraction_bits = length.saturating_sub(1);
    let fraction = odd - (Integer::from(1) << fraction_bits);
    if fraction == 0 {
        return format!("{sign}0x1p{exponent:+}");
    }
    let digits = fraction_bits.div_ceil(4);
    let aligned = fraction << (digits * 4 - fraction_bits);
    let text = format!("{aligned:x}");
    let padding = "0".repeat((digits as usize).saturating_sub(text.len()));
    format!("{sign}0x1.{padding}{text}p{exponent:+}")
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::number::literal;
    use proptest::prelude::*;

    #[test]
    fn writes_what_a_person_would() {
        let down = |x: f64| rounded_down(&Float::with_val(53, x), 6);
        assert_eq!(down(0.5), "0.5");
        assert_eq!(down(1e-7), "9.99999e-8");
        assert_eq!(down(123.25), "123.25");
        assert_eq!(down(1e20), "1e20");
        assert_eq!(down(-0.125), "-0.125");
        assert_eq!(down(-0.007_812_5), "-0.0078125");
        assert_eq!(rounded_up(&Float::with_val(53, 1e-7), 6), "1e-7");
        assert_eq!(exact(&Rational::from((3, 4))), "0x1.8p-1");
        assert_eq!(exact(&Rational::from((1, 3))), "1/3");
        assert_eq!(exact(&Rational::from(-12)), "-12");
    }

    proptest! {
        #[test]
        fn exact_text_reads_back(n in any::<i64>(), d in 1u64.., shift in 0u32..200) {
            for x in [Rational::from((n, d)), Rational::from(n) >> shift, Rational::from(n) << shift] {
                prop_assert_eq!(literal::parse(&exact(&x)).unwrap(), x);
            }
        }

        #[test]
        fn rounding_has_its_direction_and_is_tight(x in -1e300f64..1e300, scale in -200i32..200) {
            let x = Float::with_val(53, x) << scale;
            let exactly = x.to_rational().unwrap();
            let down = literal::parse(&rounded_down(&x, 15)).unwrap();
            let up = literal::parse(&rounded_up(&x, 15)).unwrap();
            prop_assert!(down <= exactly && exactly <= up);
            let slack = Rational::from(exactly.abs_ref()) / Rational::from(10i64.pow(14));
            prop_assert!(up - down <= slack);
        }
    }
}
