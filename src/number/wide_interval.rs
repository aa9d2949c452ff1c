//! Closed real intervals with MPFR endpoints and directed rounding.
//!
//! MPFR's exponents are so wide that neither exp(-1e5) nor erfc(108) underflows, which intervals
//! of doubles cannot offer.
//!
//! | input | result |
//! |---|---|
//! | two operands of different precision | the larger precision |
//! | a result beyond MPFR's exponents | an infinite end, or 0 where it underflows, outward |
//! | an operand that leaves the real domain | `None`; closed ends of a domain belong to it |
//!
//! # Invariant
//!
//! The ends have one precision, lower <= upper, lower < +inf and upper > -inf; an end is never
//! NaN. So no interval is empty, an infinite end stands for arbitrarily large numbers, and the sum
//! of two lower (or two upper) ends is never inf - inf. Every operation keeps the invariant.

use rug::float::{Constant, Round, Special};
use rug::{Float, Rational};

mod arithmetic;
mod functions;
mod trigonometric;

#[cfg(test)]
mod tests;

/// The set of real numbers x with lower <= x <= upper.
#[derive(Clone, Debug, PartialEq)]
pub struct WideInterval {
    lower: Float,
    upper: Float,
}

/// The smaller number; neither is NaN.
fn smaller(a: Float, b: Float) -> Float {
    if a <= b { a } else { b }
}

/// The larger number; neither is NaN.
fn larger(a: Float, b: Float) -> Float {
    if a >= b { a } else { b }
}

impl WideInterval {
    /// The smallest interval that holds both numbers, at the larger precision of the two. An end
    /// that is NaN bounds nothing and becomes infinite, and so does an end that is infinite on
    /// the wrong side: the result encloses whatever the ends were meant to bound.
    pub fn new(lower: Float, upper: Float) -> Self {
        let precision = lower.prec().max(upper.prec());
        if lower.is_nan() || upper.is_nan() {
            let unbounded = |x: Float| if x.is_nan() { None } else { Some(x) };
            let (lower, upper) = (unbounded(lower), unbounded(upper));
            let lower = lower.unwrap_or_else(|| Float::with_val(precision, Special::NegInfinity));
            let upper = upper.unwrap_or_else(|| Float::with_val(precision, Special::Infinity));
            return Self::new(lower, upper);
        }
        let (mut lower, mut upper) = if lower <= upper {
            (lower, upper)
        } else {
            (upper, lower)
        };
        lower.set_prec(precision);
        upper.set_prec(precision);
        if lower.is_infinite() && lower.is_sign_positive() {
            lower = Float::with_val(precision, Special::NegInfinity);
        }
        if upper.is_infinite() && upper.is_sign_negative() {
            upper = Float::with_val(precision, Special::Infinity);
        }
        Self { lower, upper }
    }

    /// The interval that holds one number.
    ///
    /// An infinity or a NaN gives the whole line.
    pub fn point(x: &Float) -> Self {
        Self::new(x.clone(), x.clone())
    }

    /// The number 0.
    pub fn zero(precision: u32) -> Self {
        Self {
            lower: Float::new(precision),
            upper: Float::new(precision),
        }
    }

    /// An integer, exact where it has no more bits than the precision.
    pub fn from_integer(x: i64, precision: u32) -> Self {
        Self {
            lower: Float::with_val_round(precision, x, Round::Down).0,
            upper: Float::with_val_round(precision, x, Round::Up).0,
        }
    }

    /// Encloses a rational number.
    pub fn from_rational(x: &Rational, precision: u32) -> Self {
        Self::from_rationals(x, x, precision)
    }

    /// Encloses the interval between two rational numbers, in either order.
    pub fn from_rationals(a: &Rational, b: &Rational, precision: u32) -> Self {
        let (a, b) = if a <= b { (a, b) } else { (b, a) };
        Self {
            lower: Float::with_val_round(precision, a, Round::Down).0,
            upper: Float::with_val_round(precision, b, Round::Up).0,
        }
    }

    /// The real line.
    pub fn whole(precision: u32) -> Self {
        Self {
            lower: Float::with_val(precision, Special::NegInfinity),
            upper: Float::with_val(precision, Special::Infinity),
        }
    }

    /// Encloses pi.
    pub fn pi(precision: u32) -> Self {
        Self::constant(Constant::Pi, precision)
    }

    /// Encloses the natural logarithm of 2.
    pub fn log_of_two(precision: u32) -> Self {
        Self::constant(Constant::Log2, precision)
    }

    fn constant(constant: Constant, precision: u32) -> Self {
        Self {
            lower: Float::with_val_round(precision, constant, Round::Down).0,
            upper: Float::with_val_round(precision, constant, Round::Up).0,
        }
    }

    /// The lower end.
    #[inline]
    pub fn lower(&self) -> &Float {
        &self.lower
    }

    /// The upper end.
    #[inline]
    pub fn upper(&self) -> &Float {
        &self.upper
    }

    /// Bits of the ends.
    #[inline]
    pub fn precision(&self) -> u32 {
        self.lower.prec()
    }

    /// The same set with ends of another precision, rounded outward.
    #[must_use]
    pub fn with_precision(&self, precision: u32) -> Self {
        Self {
            lower: Float::with_val_round(precision, &self.lower, Round::Down).0,
            upper: Float::with_val_round(precision, &self.upper, Round::Up).0,
        }
    }

    /// The largest |x|.
    pub fn magnitude(&self) -> Float {
        larger(self.lower.clone().abs(), self.upper.clone().abs())
    }

    /// The smallest |x|.
    pub fn mignitude(&self) -> Float {
        if self.lower > 0 {
            self.lower.clone()
        } else if self.upper < 0 {
            Float::with_val(self.precision(), -&self.upper)
        } else {
            Float::new(self.precision())
        }
    }

    /// The width, rounded up.
    pub fn width(&self) -> Float {
        Float::with_val_round(self.precision(), &self.upper - &self.lower, Round::Up).0
    }

    /// A number of the interval: its rounded midpoint; the finite end of a half line; 0 for the
    /// whole line.
    pub fn midpoint(&self) -> Float {
        match (self.lower.is_finite(), self.upper.is_finite()) {
            (true, true) => {
                // Halves before the sum: the sum of the ends may overflow.
                let half = |x: &Float| Float::with_val(self.precision(), x / 2u32);
                let middle = half(&self.lower) + half(&self.upper);
                middle.clamp(&self.lower, &self.upper)
            }
            (true, false) => self.lower.clone(),
            (false, true) => self.upper.clone(),
            (false, false) => Float::new(self.precision()),
        }
    }

    /// True if the number is in the interval; false for a NaN.
    pub fn contains(&self, x: &Float) -> bool {
        self.lower <= *x && *x <= self.upper
    }

    /// True if the number is in the interval.
    pub fn contains_rational(&self, x: &Rational) -> bool {
        self.lower <= *x && *x <= self.upper
    }

    /// True if 0 is in the interval.
    #[inline]
    pub fn contains_zero(&self) -> bool {
        self.lower <= 0 && self.upper >= 0
    }

    /// True if every number is > 0.
    #[inline]
    pub fn is_positive(&self) -> bool {
        self.lower > 0
    }

    /// True if every number is < 0.
    #[inline]
    pub fn is_negative(&self) -> bool {
        self.upper < 0
    }

    /// True if both ends are finite.
    #[inline]
    pub fn is_finite(&self) -> bool {
        self.lower.is_finite() && self.upper.is_finite()
    }

    /// True if the interval holds one number.
    pub fn is_exact(&self) -> bool {
        self.lower == self.upper
    }

    /// True if the interval holds the number 0 and no other.
    pub fn is_exact_zero(&self) -> bool {
        self.lower.is_zero() && self.upper.is_zero()
    }

    /// The smallest interval that holds both.
    #[must_use]
    pub fn hull(&self, other: &Self) -> Self {
        let lower = if self.lower <= other.lower {
            &self.lower
        } else {
            &other.lower
        };
        let upper = if self.upper >= other.upper {
            &self.upper
        } else {
            &other.upper
        };
        let precision = self.precision().max(other.precision());
        Self {
            lower: Float::with_val(precision, lower),
            upper: Float::with_val(precision, upper),
        }
    }

    /// The numbers in both; `None` if there are none.
    #[must_use]
    pub fn intersection(&self, other: &Self) -> Option<Self> {
        let lower = if self.lower >= other.lower {
            &self.lower
        } else {
            &other.lower
        };
        let upper = if self.upper <= other.upper {
            &self.upper
        } else {
            &other.upper
        };
        let precision = self.precision().max(other.precision());
        (lower <= upper).then(|| Self {
            lower: Float::with_val(precision, lower),
            upper: Float::with_val(precision, upper),
        })
    }
}
