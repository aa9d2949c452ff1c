//! The binary formats of IEEE 754 and relatives in which coefficients and results are stored.
//!
//! A format with precision `p` and exponent range `[e_min, e_max]` holds the numbers
//! `m 2^(e - p + 1)` with whole `|m| < 2^p` and `e_min <= e <= e_max`: normal ones with
//! `|m| >= 2^(p-1)`, and the subnormal ones and zero with `e = e_min`. The sign of zero and the
//! infinities have no counterpart among the rational numbers; the former is dropped, the latter
//! are reported as [`Rounded::overflow`].

use std::cmp::Ordering;

use rug::{Integer, Rational};

#[cfg(test)]
mod tests;

/// A binary storage format.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub struct Format {
    name: &'static str,
    precision: u32,
    minimum_exponent: i32,
    maximum_exponent: i32,
}

/// A number rounded to a format.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Rounded {
    /// The number of the format; where [`overflow`](Self::overflow) is set there is none, and this
    /// is the greatest finite number with the sign of the argument.
    pub value: Rational,
    /// The value differs from the argument.
    pub inexact: bool,
    /// Rounding with unbounded exponent exceeds the greatest finite number: IEEE 754 gives an
    /// infinity.
    pub overflow: bool,
    /// The argument lies strictly between 0 and 2^e_min in modulus and the value is inexact
    /// (tininess before rounding).
    pub underflow: bool,
}

impl Format {
    pub const BINARY16: Self = Self::new("binary16", 11, 15);
    pub const BFLOAT16: Self = Self::new("bfloat16", 8, 127);
    pub const BINARY32: Self = Self::new("binary32", 24, 127);
    pub const BINARY64: Self = Self::new("binary64", 53, 1023);
    pub const BINARY128: Self = Self::new("binary128", 113, 16383);

    /// Every format, narrowest first.
    pub const ALL: [Self; 5] = [
        Self::BINARY16,
        Self::BFLOAT16,
        Self::BINARY32,
        Self::BINARY64,
        Self::BINARY128,
    ];

    /// In all of these formats e_min = 1 - e_max (IEEE 754-2019, 3.3; bfloat16 likewise).
    const fn new(name: &'static str, precision: u32, maximum_exponent: i32) -> Self {
        Self {
            name,
            precision,
            minimum_exponent: 1 - maximum_exponent,
            maximum_exponent,
        }
    }

    /// The format with the name used in audit files, or `None`.
    pub fn from_name(name: &str) -> Option<Self> {
        Self::ALL.into_iter().find(|format| format.name == name)
    }

    pub fn name(self) -> &'static str {
        self.name
    }

    /// Bits of the significand, the leading one included.
    pub fn precision(self) -> u32 {
        self.precision
    }

    /// e_min: the least positive normal number is 2^e_min.
    pub fn minimum_exponent(self) -> i32 {
        self.minimum_exponent
    }

    /// e_max: all finite numbers are below 2^(e_max + 1) in modulus.
    pub fn maximum_exponent(self) -> i32 {
        self.maximum_exponent
    }

    /// The greatest finite number, (2^p - 1) 2^(e_max - p + 1).
    pub fn greatest(self) -> Rational {
        let significand = (Integer::from(1) << self.precision) - 1u32;
        Rational::from(significand) << (self.maximum_exponent - self.precision as i32 + 1)
    }

    /// The least positive number, 2^(e_min - p + 1), a subnormal one.
    pub fn least_positive(self) -> Rational {
        Rational::from(1) << self.least_quantum_exponent()
    }

    /// ulp(y) = 2^(max(e, e_min) - p + 1) with 2^e <= |y| < 2^(e+1), and the least one at 0. It is
    /// not limited at the upper end: beyond the greatest number it goes on growing.
    pub fn ulp(self, value: &Rational) -> Rational {
        Rational::from(1) << self.quantum_exponent(value)
    }

    /// Rounds to the nearest number of the format, ties to the one with even significand.
    ///
    /// Exact arithmetic throughout: with `q = |value| / ulp(value)`, the result is the nearest
    /// whole number to `q`, times the ulp. The ulp is constant on [2^e, 2^(e+1)) and the upper end
    /// is itself a multiple of it, so rounding up to 2^(e+1) needs no second step.
    pub fn round(self, value: &Rational) -> Rounded {
        let quantum = self.quantum_exponent(value);
        let (mut numerator, mut denominator) = (value.numer().clone().abs(), value.denom().clone());
        if quantum < 0 {
            numerator <<= quantum.unsigned_abs();
        } else {
            denominator <<= quantum.unsigned_abs();
        }
        let (mut significand, remainder) = numerator.div_rem(denominator.clone());
        let inexact = !remainder.is_zero();
        let round_up = match (remainder << 1u32).cmp(&denominator) {
            Ordering::Less => false,
            Ordering::Greater => true,
            Ordering::Equal => significand.is_odd(),
        };
        if round_up {
            significand += 1u32;
        }
        let magnitude = Rational::from(significand) << quantum;
        let overflow = magnitude > self.greatest();
        let magnitude = if overflow { self.greatest() } else { magnitude };
        let tiny = value.clone().abs() < (Rational::from(1) << self.minimum_exponent);
        Rounded {
            value: if *value < 0 { -magnitude } else { magnitude },
            inexact: inexact || overflow,
            overflow,
            underflow: inexact && tiny,
        }
    }

    /// True if the format holds the number exactly.
    pub fn is_representable(self, value: &Rational) -> bool {
        !self.round(value).inexact
    }

    /// The number as an exact hex-float, or `None` if the format does not hold it.
    pub fn to_hex(self, value: &Rational) -> Option<String> {
        if self.is_representable(value) {
            hex(value)
        } else {
            None
        }
    }

    fn least_quantum_exponent(self) -> isize {
        self.minimum_exponent as isize - self.precision as isize + 1
    }

    /// The exponent of [`ulp`](Self::ulp).
    fn quantum_exponent(self, value: &Rational) -> isize {
        let least = self.least_quantum_exponent();
        match binary_exponent(value) {
            None => least,
            Some(exponent) => least.max(exponent - self.precision as isize + 1),
        }
    }
}

/// The `e` with 2^e <= |value| < 2^(e+1), or `None` for 0.
pub fn binary_exponent(value: &Rational) -> Option<isize> {
    if value.is_zero() {
        return None;
    }
    // 2^(a-1) <= numerator < 2^a and 2^(b-1) <= denominator < 2^b leave e = a-b or a-b-1.
    let (numerator, denominator) = (value.numer(), value.denom());
    let (a, b) = (numerator.significant_bits(), denominator.significant_bits());
    let reaches = match a.cmp(&b) {
        Ordering::Less => {
            Integer::from(numerator << (b - a)).cmp_abs(denominator) != Ordering::Less
        }
        _ => numerator.cmp_abs(&Integer::from(denominator << (a - b))) != Ordering::Less,
    };
    let exponent = a as isize - b as isize;
    Some(if reaches { exponent } else { exponent - 1 })
}

/// A number m 2^k as an exact C99 hex-float with leading digit 1 (0 for zero) and no trailing
/// zeros, such as `0x1.8p+3`; `None` if the denominator is not a power of two.
pub fn hex(value: &Rational) -> Option<String> {
    if !value.denom().is_power_of_two() {
        return None;
    }
    let sign = if *value < 0 { "-" } else { "" };
    let Some(exponent) = binary_exponent(value) else {
        return Some("0x0p+0".into());
    };
    let mut significand = value.numer().clone().abs();
    significand >>= significand.find_one(0).unwrap_or(0);
    let fraction_bits = significand.significant_bits() - 1;
    let mut fraction = significand;
    fraction.set_bit(fraction_bits, false);
    let digits = fraction_bits.div_ceil(4);
    fraction <<= 4 * digits - fraction_bits;
    Some(if digits == 0 {
        format!("{sign}0x1p{exponent:+}")
    } else {
        let width = digits as usize;
        format!(
            "{sign}0x1.{:0>width$}p{exponent:+}",
            fraction.to_string_radix(16)
        )
    })
}
