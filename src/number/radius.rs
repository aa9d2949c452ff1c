//! Upper bounds of magnitudes: non-negative numbers of 30 bits, every operation rounded up.
//!
//! A [`Radius`] is m 2^e with 2^29 <= m < 2^30, or zero, or infinity. It is `Copy`, never allocates
//! and its exponent is far wider than that of any number it bounds, so that it is the cheap half of
//! a ball. An operation on upper bounds returns an upper bound; where a bound from below is needed
//! the word `lower` is in the name of the operation.

use rug::float::Round;
use rug::{Float, Rational};

/// Bits of the mantissa.
pub const RADIUS_BITS: u32 = 30;

/// The least and the largest exponent kept. Beyond them a radius becomes the least positive radius
/// or infinity; sums of a few exponents cannot overflow an `i64`.
const EXPONENT_MIN: i64 = -(1 << 60);
const EXPONENT_MAX: i64 = 1 << 60;

const MANTISSA_MIN: u32 = 1 << (RADIUS_BITS - 1);
const MANTISSA_END: u32 = 1 << RADIUS_BITS;

/// A non-negative number of 30 bits, or infinity, used as an upper bound.
///
/// The order is the order of the numbers. The derived comparison of (exponent, mantissa) is that
/// order because the mantissa is normalised, zero has the least exponent of all and infinity the
/// largest.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Radius {
    exponent: i64,
    mantissa: u32,
}

/// A term of a [sum](Radius::sum): mantissa 2^exponent with a mantissa of at most 2^60, 0 with the
/// least exponent, or infinity with the largest exponent.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Term {
    mantissa: u64,
    exponent: i64,
}

impl Term {
    /// The number 0.
    pub(crate) const ZERO: Self = Self {
        mantissa: 0,
        exponent: i64::MIN,
    };

    /// 2^exponent for |exponent| < 2^59.
    #[inline]
    pub(crate) const fn power_of_two(exponent: i64) -> Self {
        const BITS: u32 = 2 * RADIUS_BITS - 2;
        Self {
            mantissa: 1 << BITS,
            exponent: exponent - BITS as i64,
        }
    }
}

#[allow(
    clippy::should_implement_trait,
    reason = "an operator would hide that the operation rounds up"
)]
impl Radius {
    /// The number 0.
    pub const ZERO: Self = Self {
        exponent: i64::MIN,
        mantissa: 0,
    };

    /// No bound at all.
    pub const INFINITY: Self = Self {
        exponent: i64::MAX,
        mantissa: MANTISSA_MIN,
    };

    /// The number 1.
    pub const ONE: Self = Self {
        exponent: 1 - RADIUS_BITS as i64,
        mantissa: MANTISSA_MIN,
    };

    /// True for the number 0.
    #[inline]
    pub const fn is_zero(self) -> bool {
        self.mantissa == 0
    }

    /// True if nothing is bounded.
    #[inline]
    pub const fn is_infinite(self) -> bool {
        self.exponent == i64::MAX
    }

    /// 2^exponent, exact for |exponent| < 2^59 and rounded up beyond.
    #[inline]
    pub const fn power_of_two(exponent: i64) -> Self {
        Self::capped(
            MANTISSA_MIN,
            exponent.saturating_sub(RADIUS_BITS as i64 - 1),
        )
    }

    /// The exponent e with 2^(e-1) <= self < 2^e; `None` for zero and infinity.
    #[inline]
    pub const fn binary_exponent(self) -> Option<i64> {
        if self.is_zero() || self.is_infinite() {
            return None;
        }
        Some(self.exponent + RADIUS_BITS as i64)
    }

    /// The least radius >= |value|; infinity for an infinite value or a NaN.
    pub fn from_f64_upper(value: f64) -> Self {
        if !value.is_finite() {
            return Self::INFINITY;
        }
        let bits = value.to_bits();
        let biased = ((bits >> 52) & 0x7ff) as i64;
        let fraction = bits & ((1 << 52) - 1);
        if biased == 0 {
            Self::from_u64_scaled(fraction, -1074)
        } else {
            Self::from_u64_scaled(fraction | 1 << 52, biased - 1075)
        }
    }

    /// The least radius >= value.
    #[inline]
    pub const fn from_u64_upper(value: u64) -> Self {
        Self::from_u64_scaled(value, 0)
    }

    /// The largest radius <= value, a bound from below.
    #[inline]
    pub const fn from_u64_lower(value: u64) -> Self {
        let bits = 64 - value.leading_zeros();
        let cut = bits.saturating_sub(RADIUS_BITS);
        Self::from_u64_scaled(value >> cut, cut as i64)
    }

    /// The least radius >= |value|; infinity for an infinite value or a NaN.
    #[inline]
    pub fn of_float_upper(value: &Float) -> Self {
        match Self::leading_bits(value) {
            None if value.is_zero() => Self::ZERO,
            None => Self::INFINITY,
            Some((mantissa, exponent, false)) => Self { exponent, mantissa },
            Some((mantissa, exponent, true)) => Self::carried(mantissa + 1, exponent),
        }
    }

    /// The largest radius <= |value|, a bound from below; zero for a NaN (nothing is known) and
    /// infinity for an infinite value.
    #[inline]
    pub fn of_float_lower(value: &Float) -> Self {
        match Self::leading_bits(value) {
            None if value.is_infinite() => Self::INFINITY,
            None => Self::ZERO,
            Some((mantissa, exponent, _)) => Self { exponent, mantissa },
        }
    }

    /// The least radius >= |value|, within MPFR's exponent range: infinity above it, its least
    /// positive number below it.
    pub fn of_rational_upper(value: &Rational) -> Self {
        let (float, _) = Float::with_val_round(RADIUS_BITS, value, Round::AwayZero);
        Self::of_float_upper(&float)
    }

    /// self + other, rounded up. Exceeds the sum by at most a factor 1 + 2^-28.
    ///
    /// With a >= b and d the distance of the exponents, b = b_m 2^-d units of the last place of a,
    /// which `ceil` rounds to whole units; for d >= 30 it is less than one unit.
    #[inline]
    #[must_use]
    pub fn add(self, other: Self) -> Self {
        let (large, small) = if self >= other {
            (self, other)
        } else {
            (other, self)
        };
        if small.is_zero() || large.is_infinite() {
            return large;
        }
        let distance = large.exponent - small.exponent;
        let units = if distance >= i64::from(RADIUS_BITS) {
            1
        } else {
            let mask = (1u32 << distance) - 1;
            (small.mantissa + mask) >> distance
        };
        Self::carried(large.mantissa + units, large.exponent)
    }

    /// A bound from below: the largest d >= 0 of 30 bits that is certain to be at most self - other,
    /// zero if self <= other. Nothing is known of infinity - infinity: zero.
    ///
    /// With d the distance of the exponents, other is rounded up to whole units of
    /// 2^-30 times the last place of self before the subtraction and the difference is truncated.
    #[inline]
    #[must_use]
    pub fn sub_lower(self, other: Self) -> Self {
        if other >= self {
            return Self::ZERO;
        }
        if other.is_zero() || self.is_infinite() {
            return self;
        }
        let distance = self.exponent - other.exponent;
        let own = u64::from(self.mantissa) << RADIUS_BITS;
        let taken = if distance >= 2 * i64::from(RADIUS_BITS) {
            1
        } else {
            let shifted = u64::from(other.mantissa) << RADIUS_BITS;
            let mask = (1u64 << distance) - 1;
            (shifted + mask) >> distance
        };
        let difference = own - taken;
        if difference == 0 {
            return Self::ZERO;
        }
        let exponent = self.exponent - i64::from(RADIUS_BITS);
        let shift = difference.ilog2() as i64 - (i64::from(RADIUS_BITS) - 1);
        let mantissa = if shift >= 0 {
            difference >> shift
        } else {
            difference << -shift
        };
        if exponent + shift < EXPONENT_MIN {
            return Self::ZERO;
        }
        Self {
            exponent: exponent + shift,
            mantissa: mantissa as u32,
        }
    }

    /// self * other, rounded up; zero times infinity is zero (the factor that is zero is exact).
    #[inline]
    #[must_use]
    pub fn mul(self, other: Self) -> Self {
        if self.is_zero() || other.is_zero() {
            return Self::ZERO;
        }
        if self.is_infinite() || other.is_infinite() {
            return Self::INFINITY;
        }
        // The product lies in [2^58, 2^60).
        let product = u64::from(self.mantissa) * u64::from(other.mantissa);
        let shift = RADIUS_BITS - 1 + (product >> (2 * RADIUS_BITS - 1)) as u32;
        let mantissa = (product + ((1u64 << shift) - 1)) >> shift;
        Self::carried(
            mantissa as u32,
            self.exponent + other.exponent + i64::from(shift),
        )
    }

    /// The sum of up to eight terms, rounded up once: much faster than a chain of single operations.
    ///
    /// The mantissas of the terms are at most 2^60. All are aligned to the largest exponent, each
    /// that loses bits by that is rounded up, and the sum fits 64 bits. The result exceeds the sum of
    /// the terms by at most a factor 1 + 2^-28 if the largest term has a mantissa of at least 2^58,
    /// which sums and products of radii have.
    #[inline]
    pub(crate) fn sum<const N: usize>(terms: [Term; N]) -> Self {
        const { assert!(N <= 8) };
        let mut exponent = i64::MIN;
        for term in &terms {
            exponent = exponent.max(term.exponent);
        }
        if exponent == i64::MAX {
            return Self::INFINITY;
        }
        let mut sum = 0;
        for term in &terms {
            let shift = exponent.saturating_sub(term.exponent).min(63) as u32;
            sum += (term.mantissa >> shift) + u64::from(shift != 0 && term.mantissa != 0);
        }
        Self::from_u64_scaled(sum, exponent)
    }

    /// The radius as a term of a sum.
    #[inline]
    pub(crate) fn term(self) -> Term {
        let exponent = self.exponent.saturating_sub(i64::from(RADIUS_BITS));
        let exponent = if self.is_infinite() {
            i64::MAX
        } else {
            exponent
        };
        Term {
            mantissa: u64::from(self.mantissa) << RADIUS_BITS,
            exponent,
        }
    }

    /// The exact product as a term of a sum.
    #[inline]
    pub(crate) fn term_of_product(self, other: Self) -> Term {
        let mantissa = u64::from(self.mantissa) * u64::from(other.mantissa);
        let exponent = if mantissa == 0 {
            i64::MIN
        } else if self.is_infinite() || other.is_infinite() {
            i64::MAX
        } else {
            self.exponent + other.exponent
        };
        Term { mantissa, exponent }
    }

    /// An upper bound of |value|, too large by at most a factor 1 + 2^-28: the leading 30 bits plus one
    /// unit, without a look at the bits that follow.
    #[inline]
    pub fn of_float_near_upper(value: &Float) -> Self {
        match Self::leading_bits(value) {
            None if value.is_zero() => Self::ZERO,
            None => Self::INFINITY,
            Some((mantissa, exponent, _)) => Self::carried(mantissa + 1, exponent),
        }
    }

    /// The quotient of the two numbers, rounded up. It bounds |a| / |b| if self >= |a| and
    /// `divisor` <= |b|: the divisor is a bound from BELOW. `None` for a divisor that is zero;
    /// infinity for an infinite divisor, of which no quotient is taken.
    #[inline]
    #[must_use]
    pub fn div(self, divisor: Self) -> Option<Self> {
        if divisor.is_zero() {
            return None;
        }
        if self.is_infinite() || divisor.is_infinite() {
            return Some(Self::INFINITY);
        }
        if self.is_zero() {
            return Some(Self::ZERO);
        }
        // The quotient lies in (2^30, 2^32).
        let numerator = u64::from(self.mantissa) << (RADIUS_BITS + 1);
        let quotient = numerator.div_ceil(u64::from(divisor.mantissa));
        let exponent = self.exponent - divisor.exponent - i64::from(RADIUS_BITS) - 1;
        Some(Self::from_u64_scaled(quotient, exponent))
    }

    /// self * 2^power, exact while the exponent is within the limits.
    #[inline]
    #[must_use]
    pub fn mul_power_of_two(self, power: i64) -> Self {
        if self.is_zero() || self.is_infinite() {
            return self;
        }
        Self::capped(self.mantissa, self.exponent.saturating_add(power))
    }

    /// self^power, rounded up; 0^0 = 1 and infinity^0 = 1.
    #[must_use]
    pub fn pow(self, power: u32) -> Self {
        let mut result = Self::ONE;
        let mut square = self;
        let mut remaining = power;
        while remaining != 0 {
            if remaining & 1 == 1 {
                result = result.mul(square);
            }
            remaining >>= 1;
            if remaining != 0 {
                square = square.mul(square);
            }
        }
        result
    }

    /// The square root, rounded up.
    #[must_use]
    pub fn sqrt(self) -> Self {
        if self.is_zero() || self.is_infinite() {
            return self;
        }
        // m 2^e = (m 2^s) 2^(e - s) with e - s even and m 2^s in [2^58, 2^60), whose root has 30
        // bits.
        let shift = if self.exponent.rem_euclid(2) == 0 {
            RADIUS_BITS
        } else {
            RADIUS_BITS - 1
        };
        let square = u64::from(self.mantissa) << shift;
        let floor = square.isqrt();
        let root = if floor * floor == square {
            floor
        } else {
            floor + 1
        };
        Self::carried(root as u32, (self.exponent - i64::from(shift)) / 2)
    }

    /// The larger of the two numbers.
    #[inline]
    #[must_use]
    pub fn max(self, other: Self) -> Self {
        Ord::max(self, other)
    }

    /// The smaller of the two numbers.
    #[inline]
    #[must_use]
    pub fn min(self, other: Self) -> Self {
        Ord::min(self, other)
    }

    /// The least floating-point number of the given precision that is >= self, exact for a
    /// precision of 30 bits or more. Infinity above MPFR's exponent range, the least positive number
    /// below it.
    pub fn to_float_upper(self, precision: u32) -> Float {
        let precision = precision.max(1);
        if self.is_infinite() {
            return Float::with_val(precision, rug::float::Special::Infinity);
        }
        let mantissa = Float::with_val(RADIUS_BITS, self.mantissa);
        // A shift by the least or the largest i32 leaves MPFR's exponent range.
        let power = self
            .exponent
            .clamp(i64::from(i32::MIN), i64::from(i32::MAX)) as i32;
        Float::with_val_round(precision, &mantissa << power, Round::Up).0
    }

    /// The least `f64` that is >= self.
    pub fn to_f64_upper(self) -> f64 {
        self.to_float_upper(RADIUS_BITS).to_f64_round(Round::Up)
    }

    /// The leading 30 bits of |value| as a truncated mantissa and exponent, and whether anything was
    /// cut off. `None` if the value is zero, infinite or a NaN.
    #[inline]
    fn leading_bits(value: &Float) -> Option<(u32, i64, bool)> {
        let significand = value.get_significand()?;
        let exponent = value.get_exp()?;
        // The significand fills its limbs from the top, its leading bit is 1.
        let (&top, rest) = significand.as_limbs().split_last()?;
        let dropped = 8 * size_of_val(&top) as u32 - RADIUS_BITS;
        let mantissa = (top >> dropped) as u32;
        let cut = top & ((1 << dropped) - 1) != 0 || rest.iter().any(|&limb| limb != 0);
        Some((mantissa, i64::from(exponent) - i64::from(RADIUS_BITS), cut))
    }

    /// The least radius >= value 2^exponent.
    #[inline]
    const fn from_u64_scaled(value: u64, exponent: i64) -> Self {
        if value == 0 {
            return Self::ZERO;
        }
        let bits = 64 - value.leading_zeros();
        if bits <= RADIUS_BITS {
            let shift = RADIUS_BITS - bits;
            Self::capped((value << shift) as u32, exponent - shift as i64)
        } else {
            let shift = bits - RADIUS_BITS;
            let cut = value & ((1 << shift) - 1) != 0;
            Self::carried(
                (value >> shift) as u32 + cut as u32,
                exponent + shift as i64,
            )
        }
    }

    /// Normalises a mantissa in [2^29, 2^31], rounding up.
    #[inline]
    const fn carried(mantissa: u32, exponent: i64) -> Self {
        if mantissa >= MANTISSA_END {
            let half = mantissa.div_ceil(2);
            // Half of 2^31 - 1, rounded up, or of 2^31 is 2^30.
            if half == MANTISSA_END {
                return Self::capped(MANTISSA_MIN, exponent + 2);
            }
            return Self::capped(half, exponent + 1);
        }
        Self::capped(mantissa, exponent)
    }

    /// Brings the exponent of a normalised mantissa within the limits, upwards.
    #[inline]
    const fn capped(mantissa: u32, exponent: i64) -> Self {
        if exponent > EXPONENT_MAX {
            Self::INFINITY
        } else if exponent < EXPONENT_MIN {
            Self {
                exponent: EXPONENT_MIN,
                mantissa: MANTISSA_MIN,
            }
        } else {
            Self { exponent, mantissa }
        }
    }
}

#[cfg(test)]
mod tests;
