//! Numbers as people write them, read exactly.
//!
//! | written | meaning |
//! |---|---|
//! | `0.1`, `.5`, `3.`, `1e-7`, `-3`, `+2` | decimal: `0.1` is one tenth |
//! | `0x1.8p+3`, `0x10` | C99 hex-float; the exponent is of two, and may be left out |
//! | `1/3` | ratio of two whole decimal numbers |
//! | `2^-58` | power of two |
//!
//! White space around the number is ignored; one sign may stand in front. Nothing else is
//! accepted: no digit separators, no suffixes, no infinities.

use rug::ops::Pow;
use rug::{Integer, Rational};

use crate::number::format::Format;

#[cfg(test)]
mod tests;

/// Most digits of one number (of the numerator and of the denominator of a ratio). A table of 300
/// digits is at home here; a damaged file of a million digits is not.
pub const DIGIT_LIMIT: usize = 20_000;
/// Largest decimal exponent in modulus; covers binary128 and MPFR tables, and keeps 10^e small.
pub const DECIMAL_EXPONENT_LIMIT: u32 = 20_000;
/// Largest exponent of two in modulus: about the decimal limit, 20,000 log2(10) = 66,439.
pub const BINARY_EXPONENT_LIMIT: u32 = 70_000;

/// Most characters of the text that an error repeats.
const QUOTED_LENGTH: usize = 40;

/// A text that is not a number: what was found, why it is not accepted, what to write instead.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
#[error("`{found}` {problem}{}", .advice.as_ref().map(|advice| format!("; {advice}")).unwrap_or_default())]
pub struct LiteralError {
    /// The text, shortened if it is long.
    pub found: String,
    /// What is wrong with it, as the predicate of a sentence.
    pub problem: String,
    /// What to write instead, as an order.
    pub advice: Option<String>,
}

/// Reads a number exactly.
///
/// # Errors
///
/// The text is not in one of the forms of this module, has too many digits, or has too large an
/// exponent; the work is bounded by these limits and the length of the text.
pub fn parse(text: &str) -> Result<Rational, LiteralError> {
    let text = text.trim();
    read(text).map_err(|problem| explain(text, problem, read))
}

/// Reads a decimal number or a hex-float without a sign, as it stands inside a formula.
pub(crate) fn parse_unsigned(text: &str) -> Result<Rational, LiteralError> {
    read_unsigned(text).map_err(|problem| explain(text, problem, read_unsigned))
}

/// Why a text could not be read.
#[derive(Clone, Copy, Debug)]
enum Problem {
    Empty,
    NoDigits,
    Character(char),
    SecondPoint,
    TooManyDigits,
    ExponentDigits,
    ExponentTooLarge(u32),
    NotIntegers,
    ZeroDenominator,
    OtherBase,
}

impl Problem {
    fn describe(self) -> String {
        match self {
            Self::Empty => "is empty where a number should stand".into(),
            Self::NoDigits => "is not a number: it has no digits".into(),
            Self::Character(character) => {
                format!(
                    "is not a number: `{}` does not belong in it",
                    character.escape_debug()
                )
            }
            Self::SecondPoint => "is not a number: it has two points".into(),
            Self::TooManyDigits => format!("has more than {DIGIT_LIMIT} digits"),
            Self::ExponentDigits => "is not a number: its exponent is not a whole number".into(),
            Self::ExponentTooLarge(limit) => {
                format!("has an exponent beyond the limit of {limit} in modulus")
            }
            Self::NotIntegers => "is not a ratio of two whole decimal numbers".into(),
            Self::ZeroDenominator => "has the denominator zero".into(),
            Self::OtherBase => "is a power of another base than 2".into(),
        }
    }
}

/// The complete grammar; the text is already trimmed.
fn read(text: &str) -> Result<Rational, Problem> {
    let (negative, magnitude) = match text.as_bytes().first() {
        None => return Err(Problem::Empty),
        Some(b'-') => (true, &text[1..]),
        Some(b'+') => (false, &text[1..]),
        Some(_) => (false, text),
    };
    let value = if let Some((base, exponent)) = magnitude.split_once('^') {
        if base != "2" {
            return Err(Problem::OtherBase);
        }
        power_of_two(read_exponent(exponent, BINARY_EXPONENT_LIMIT)?)
    } else if let Some((numerator, denominator)) = magnitude.split_once('/') {
        read_ratio(numerator, denominator)?
    } else {
        read_unsigned(magnitude)?
    };
    Ok(if negative { -value } else { value })
}

fn read_unsigned(text: &str) -> Result<Rational, Problem> {
    match text.strip_prefix("0x").or_else(|| text.strip_prefix("0X")) {
        Some(digits) => {
            let (mantissa, exponent) = split_exponent(digits, ['p', 'P'], BINARY_EXPONENT_LIMIT)?;
            let (value, fraction_digits) = read_digits(mantissa, 16)?;
            Ok(value * power_of_two(exponent - 4 * fraction_digits))
        }
        None => {
            let (mantissa, exponent) = split_exponent(text, ['e', 'E'], DECIMAL_EXPONENT_LIMIT)?;
            let (value, fraction_digits) = read_digits(mantissa, 10)?;
            let exponent = exponent - fraction_digits;
            let scale = Integer::from(10).pow(exponent.unsigned_abs());
            Ok(if exponent < 0 {
                Rational::from((value, scale))
            } else {
                Rational::from(value * scale)
            })
        }
    }
}

fn read_ratio(numerator: &str, denominator: &str) -> Result<Rational, Problem> {
    let integer = |text: &str| match read_digits(text, 10) {
        Ok((value, 0)) if !text.contains('.') => Ok(value),
        Err(problem @ Problem::TooManyDigits) => Err(problem),
        _ => Err(Problem::NotIntegers),
    };
    let (numerator, denominator) = (integer(numerator)?, integer(denominator)?);
    if denominator.is_zero() {
        return Err(Problem::ZeroDenominator);
    }
    Ok(Rational::from((numerator, denominator)))
}

/// Digits with at most one point: the whole number that they spell without it, and how many of
/// them stand behind it.
fn read_digits(text: &str, radix: u32) -> Result<(Integer, i32), Problem> {
    let (whole, fraction) = text.split_once('.').unwrap_or((text, ""));
    for character in whole.chars().chain(fraction.chars()) {
        if character == '.' {
            return Err(Problem::SecondPoint);
        }
        if !character.is_digit(radix) {
            return Err(Problem::Character(character));
        }
    }
    let digits = [whole, fraction].concat();
    if digits.is_empty() {
        return Err(Problem::NoDigits);
    }
    if digits.len() > DIGIT_LIMIT {
        return Err(Problem::TooManyDigits);
    }
    let value = Integer::from_str_radix(&digits, radix as i32).map_err(|_| Problem::NoDigits)?;
    let fraction_digits = i32::try_from(fraction.len()).map_err(|_| Problem::TooManyDigits)?;
    Ok((value, fraction_digits))
}

fn split_exponent(text: &str, marks: [char; 2], limit: u32) -> Result<(&str, i32), Problem> {
    match text.split_once(marks) {
        None => Ok((text, 0)),
        Some((mantissa, exponent)) => Ok((mantissa, read_exponent(exponent, limit)?)),
    }
}

fn read_exponent(text: &str, limit: u32) -> Result<i32, Problem> {
    let (negative, digits) = match text.strip_prefix('-') {
        Some(digits) => (true, digits),
        None => (false, text.strip_prefix('+').unwrap_or(text)),
    };
    if digits.is_empty() || !digits.bytes().all(|byte| byte.is_ascii_digit()) {
        return Err(Problem::ExponentDigits);
    }
    let digits = digits.trim_start_matches('0');
    let magnitude = if digits.is_empty() {
        Ok(0)
    } else {
        digits.parse::<i32>()
    };
    match magnitude {
        Ok(magnitude) if magnitude.unsigned_abs() <= limit => {
            Ok(if negative { -magnitude } else { magnitude })
        }
        _ => Err(Problem::ExponentTooLarge(limit)),
    }
}

fn power_of_two(exponent: i32) -> Rational {
    Rational::from(1) << exponent
}

/// Turns a problem into an error with advice. A spelling is advised only if `accepts` reads it, so
/// no advice leads to the next error.
fn explain(
    text: &str,
    problem: Problem,
    accepts: fn(&str) -> Result<Rational, Problem>,
) -> LiteralError {
    let mut found: String = text.chars().take(QUOTED_LENGTH).collect();
    if found.len() < text.len() {
        found.push('…');
    }
    let error = |problem: String, advice: Option<String>| LiteralError {
        found: found.clone(),
        problem,
        advice,
    };
    // Candidates are copies of the text: not worth it, nor readable, for one of a million digits.
    if text.len() > DIGIT_LIMIT || text.is_empty() {
        return error(problem.describe(), None);
    }
    let written = |candidate: &str| accepts(candidate).is_ok();
    let unsigned = text.trim_start_matches(['-', '+']).to_ascii_lowercase();
    if ["nan", "inf", "infinity", "snan", "qnan"].contains(&unsigned.as_str()) {
        return error("is not a real number".into(), None);
    }
    if text.contains(',') {
        let point = text.replace(',', ".");
        let removed = text.replace(',', "");
        let problem = "is not a number: a comma does not belong in it".to_string();
        let ambiguous = text.rsplit(',').next().is_some_and(|tail| tail.len() == 3);
        match (written(&point), written(&removed)) {
            (true, true) if ambiguous => {
                let advice = format!(
                    "write {point} if the comma is a decimal point, {removed} if it separates thousands"
                );
                return error(problem, Some(advice));
            }
            (true, _) => return error(problem, Some(format!("write {point}"))),
            (false, true) => return error(problem, Some(format!("write {removed}"))),
            (false, false) => {}
        }
    }
    if let Some(suffix) = text.chars().last().filter(|last| "fFlL".contains(*last)) {
        let plain = &text[..text.len() - 1];
        if let Ok(value) = accepts(plain) {
            let rounded = Format::BINARY32.round(&value);
            let advice = match Format::BINARY32.to_hex(&rounded.value) {
                Some(hex) if "fF".contains(suffix) && rounded.inexact && !rounded.overflow => {
                    format!("write {plain} for exactly that, {hex} for its rounding to binary32")
                }
                _ => format!("write {plain}"),
            };
            let problem = format!("carries the C suffix `{suffix}`, and numbers here are exact");
            return error(problem, Some(advice));
        }
    }
    let respelt: [(&str, String); 6] = [
        (
            "writes a power in another way than C or mathematics do here",
            text.replace("**", "^"),
        ),
        (
            "has digit separators",
            text.replace(['_', '\'', '\u{2019}'], ""),
        ),
        ("has white space inside", text.split_whitespace().collect()),
        (
            "has a sign that is not the ASCII one",
            text.replace(['\u{2212}', '\u{2013}'], "-"),
        ),
        (
            "has an exponent marked as in Fortran",
            text.replace(['d', 'D'], "e"),
        ),
        (
            "is a power of another base than 2",
            text.replacen("10^", "1e", 1),
        ),
    ];
    for (problem, candidate) in respelt {
        if candidate != text && written(&candidate) {
            return error(problem.into(), Some(format!("write {candidate}")));
        }
    }
    error(problem.describe(), None)
}
