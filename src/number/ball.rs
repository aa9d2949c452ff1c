//! Balls: a midpoint of arbitrary precision and an upper bound of the distance to it.
//!
//! A [`Ball`] stands for the set of real numbers x with |x - midpoint| <= radius. Every operation
//! returns a ball that contains the value of the operation at every point of its arguments. The
//! midpoint is rounded to nearest, and the error of that rounding, known to be zero where MPFR's
//! ternary value says so, is part of the radius.
//!
//! A ball of infinite radius is the whole real line; its midpoint is 0. A midpoint is never a NaN,
//! an infinity or -0: where MPFR overflows the result is the whole line, where it underflows the
//! least positive number is added to the radius.

mod arithmetic;
mod functions;
mod powers;
mod trigonometric;

use std::cmp::Ordering;

use rug::float::{self, Constant, Round};
use rug::{Assign, Float, Rational};

use crate::number::radius::{RADIUS_BITS, Radius, Term};

/// The least precision of a midpoint; a smaller one is raised to it.
const PRECISION_MIN: u32 = 2;

/// The real numbers within `radius` of `midpoint`.
#[derive(Debug)]
pub struct Ball {
    midpoint: Float,
    radius: Radius,
}

impl Clone for Ball {
    fn clone(&self) -> Self {
        Self {
            midpoint: self.midpoint.clone(),
            radius: self.radius,
        }
    }

    /// Reuses the memory of the midpoint.
    fn clone_from(&mut self, source: &Self) {
        self.midpoint.clone_from(&source.midpoint);
        self.radius = source.radius;
    }
}

/// Constructors. A precision below 2 is raised to 2.
impl Ball {
    /// The number 0.
    pub fn zero(precision: u32) -> Self {
        Self {
            midpoint: Float::new(allowed_precision(precision)),
            radius: Radius::ZERO,
        }
    }

    /// The number 1.
    pub fn one(precision: u32) -> Self {
        let midpoint = Float::with_val(allowed_precision(precision), 1u32);
        Self {
            midpoint,
            radius: Radius::ZERO,
        }
    }

    /// The whole real line.
    pub fn whole(precision: u32) -> Self {
        Self {
            midpoint: Float::new(allowed_precision(precision)),
            radius: Radius::INFINITY,
        }
    }

    /// The circle constant, to half a unit in the last place.
    pub fn pi(precision: u32) -> Self {
        Self::nearest(precision, Constant::Pi)
    }

    /// A rational number, to half a unit in the last place; exact if the precision allows.
    pub fn from_rational(value: &Rational, precision: u32) -> Self {
        Self::nearest(precision, value)
    }

    /// An integer, to half a unit in the last place; exact if the precision allows.
    pub fn from_i64(value: i64, precision: u32) -> Self {
        Self::nearest(precision, value)
    }

    /// The number itself, exactly, with its own precision; the whole line if it is infinite or a
    /// NaN.
    pub fn from_float(value: Float) -> Self {
        if value.prec() < PRECISION_MIN {
            return Self::nearest(PRECISION_MIN, &value);
        }
        Self::rounded_to(value, Ordering::Equal, Radius::ZERO)
    }

    /// The ball around a number that is taken as exact; the whole line if the number is infinite or
    /// a NaN.
    pub fn from_midpoint(midpoint: Float, radius: Radius) -> Self {
        let mut ball = Self::from_float(midpoint);
        ball.add_error(radius);
        ball
    }

    /// A ball that contains both numbers and all between them, in either order; the whole line if
    /// one of them is infinite or a NaN.
    ///
    /// The midpoint m is near (lo + hi)/2. By convexity a radius of max(|hi - m|, |lo - m|)
    /// suffices whatever m is; both distances are rounded away from zero.
    pub fn from_bounds(lower: &Float, upper: &Float, precision: u32) -> Self {
        if !lower.is_finite() || !upper.is_finite() {
            return Self::whole(precision);
        }
        if lower == upper {
            return Self::nearest(precision, lower);
        }
        let precision = allowed_precision(precision);
        // The sum overflows only for bounds at the end of the exponent range.
        let mut midpoint = Float::with_val(precision, lower + upper);
        midpoint >>= 1u32;
        if !midpoint.is_finite() {
            return Self::whole(precision);
        }
        if midpoint.is_zero() {
            midpoint = Float::new(precision);
        }
        let mut radius = Radius::ZERO;
        for bound in [lower, upper] {
            let (distance, _) =
                Float::with_val_round(RADIUS_BITS, bound - &midpoint, Round::AwayZero);
            radius = radius.max(Radius::of_float_upper(&distance));
        }
        Self::from_midpoint(midpoint, radius)
    }

    /// A value that MPFR can round to nearest.
    fn nearest<T>(precision: u32, value: T) -> Self
    where
        Float: rug::ops::AssignRound<T, Round = Round, Ordering = Ordering>,
    {
        let (midpoint, ternary) =
            Float::with_val_round(allowed_precision(precision), value, Round::Nearest);
        Self::rounded_to(midpoint, ternary, Radius::ZERO)
    }

    /// The ball around a midpoint that was rounded to nearest with the given ternary value, whose
    /// true value is within `radius`.
    #[inline]
    fn rounded_to(midpoint: Float, ternary: Ordering, radius: Radius) -> Self {
        let mut ball = Self { midpoint, radius };
        ball.settle(ternary);
        ball
    }

    /// Restores the invariant after the midpoint was rounded to nearest: adds the rounding error to
    /// the radius; turns an infinite midpoint or radius into the whole line and -0 into 0.
    #[inline]
    fn settle(&mut self, ternary: Ordering) {
        if ternary != Ordering::Equal {
            let error = rounding_term(&self.midpoint, ternary);
            self.radius = Radius::sum([self.radius.term(), error]);
        }
        if !self.midpoint.is_normal() || self.radius.is_infinite() {
            if !self.midpoint.is_finite() {
                self.radius = Radius::INFINITY;
            }
            self.midpoint.assign(0u32);
        }
    }
}

/// The parts of a ball, bounds and predicates.
impl Ball {
    /// The number in the middle; 0 for the whole line.
    #[inline]
    pub fn midpoint(&self) -> &Float {
        &self.midpoint
    }

    /// The upper bound of the distance to the midpoint.
    #[inline]
    pub fn radius(&self) -> Radius {
        self.radius
    }

    /// The precision of the midpoint, at least 2.
    #[inline]
    pub fn precision(&self) -> u32 {
        self.midpoint.prec()
    }

    /// True if the ball is the midpoint alone.
    #[inline]
    pub fn is_exact(&self) -> bool {
        self.radius.is_zero()
    }

    /// True if the ball is the number 0 alone.
    #[inline]
    pub fn is_exact_zero(&self) -> bool {
        self.radius.is_zero() && self.midpoint.is_zero()
    }

    /// True unless the ball is the whole line.
    #[inline]
    pub fn is_finite(&self) -> bool {
        !self.radius.is_infinite()
    }

    /// Whether 0 belongs to the ball; decided exactly.
    ///
    /// |m| <= r is equivalent to up(|m|) <= r, because r is one of the numbers that `up` rounds to.
    #[inline]
    pub fn contains_zero(&self) -> bool {
        Radius::of_float_upper(&self.midpoint) <= self.radius
    }

    /// Whether every number of the ball is > 0; decided exactly.
    #[inline]
    pub fn is_positive(&self) -> bool {
        self.midpoint.is_sign_positive() && !self.contains_zero()
    }

    /// Whether every number of the ball is < 0; decided exactly.
    #[inline]
    pub fn is_negative(&self) -> bool {
        self.midpoint.is_sign_negative() && !self.contains_zero()
    }

    /// A lower bound of the ball: its least number rounded down to the precision of the ball.
    pub fn lower(&self) -> Float {
        self.lower_at(self.precision())
    }

    /// An upper bound of the ball: its greatest number rounded up to the precision of the ball.
    pub fn upper(&self) -> Float {
        self.upper_at(self.precision())
    }

    /// An upper bound of |x| on the ball.
    #[inline]
    pub fn magnitude_upper(&self) -> Radius {
        Radius::of_float_upper(&self.midpoint).add(self.radius)
    }

    /// A lower bound of |x| on the ball; 0 if the ball contains 0.
    pub fn magnitude_lower(&self) -> Radius {
        if self.contains_zero() {
            return Radius::ZERO;
        }
        let midpoint = Radius::of_float_lower(&self.midpoint);
        if self.radius <= midpoint.mul_power_of_two(-4) {
            return midpoint.sub_lower(self.radius);
        }
        // Near cancellation the 30 bits of the midpoint are too few.
        let end = if self.midpoint.is_sign_positive() {
            self.lower()
        } else {
            self.upper()
        };
        Radius::of_float_lower(&end)
    }

    /// Whether a rational number belongs to the ball. Decided exactly unless its distance to the
    /// midpoint is below MPFR's least positive number, where true still means that it belongs.
    ///
    /// |q - m| <= r is equivalent to up(|q - m|) <= r, with `up` rounding to 30 bits.
    pub fn contains_rational(&self, value: &Rational) -> bool {
        if self.radius.is_infinite() {
            return true;
        }
        let (distance, _) =
            Float::with_val_round(RADIUS_BITS, &self.midpoint - value, Round::AwayZero);
        Radius::of_float_upper(&distance) <= self.radius
    }

    /// Whether a floating-point number belongs to the ball; as
    /// [`contains_rational`](Self::contains_rational). False for a NaN and for an infinity unless
    /// the ball is the whole line.
    pub fn contains_float(&self, value: &Float) -> bool {
        if self.radius.is_infinite() {
            return !value.is_nan();
        }
        let (distance, _) =
            Float::with_val_round(RADIUS_BITS, &self.midpoint - value, Round::AwayZero);
        Radius::of_float_upper(&distance) <= self.radius
    }

    /// Whether every number of `other` belongs to this ball. True is proved, false is not: the sum
    /// of the distance of the midpoints and the radius of `other` is rounded up.
    pub fn contains(&self, other: &Self) -> bool {
        if self.radius.is_infinite() {
            return true;
        }
        let (distance, _) = Float::with_val_round(
            RADIUS_BITS,
            &self.midpoint - &other.midpoint,
            Round::AwayZero,
        );
        Radius::of_float_upper(&distance).add(other.radius) <= self.radius
    }

    /// Whether two balls may have a number in common. False is a proof that they have none: the
    /// distance of the midpoints, rounded down, exceeds the sum of the radii, rounded up.
    pub fn overlaps(&self, other: &Self) -> bool {
        let (distance, _) =
            Float::with_val_round(RADIUS_BITS, &self.midpoint - &other.midpoint, Round::Zero);
        Radius::of_float_lower(&distance) <= self.radius.add(other.radius)
    }

    /// A ball that contains both, at the larger of the two precisions.
    #[must_use]
    pub fn union(&self, other: &Self) -> Self {
        let precision = self.precision().max(other.precision());
        let work = precision.saturating_add(GUARD_BITS);
        let lower = self.lower_at(work).min(&other.lower_at(work));
        let upper = self.upper_at(work).max(&other.upper_at(work));
        Self::from_bounds(&lower, &upper, precision)
    }

    /// The same set with a midpoint of another precision; the error of rounding it is added to the
    /// radius.
    #[must_use]
    pub fn with_precision(&self, precision: u32) -> Self {
        let (midpoint, ternary) =
            Float::with_val_round(allowed_precision(precision), &self.midpoint, Round::Nearest);
        Self::rounded_to(midpoint, ternary, self.radius)
    }

    /// Enlarges the ball by an error of at most `error`.
    #[inline]
    pub fn add_error(&mut self, error: Radius) {
        self.radius = self.radius.add(error);
        self.settle(Ordering::Equal);
    }

    /// m - r rounded down, never -0.
    fn lower_at(&self, precision: u32) -> Float {
        self.end_at(precision, Round::Down)
    }

    /// m + r rounded up, never -0.
    fn upper_at(&self, precision: u32) -> Float {
        self.end_at(precision, Round::Up)
    }

    fn end_at(&self, precision: u32, round: Round) -> Float {
        let radius = self.radius.to_float_upper(RADIUS_BITS);
        let (mut end, _) = if round == Round::Down {
            Float::with_val_round(precision, &self.midpoint - &radius, round)
        } else {
            Float::with_val_round(precision, &self.midpoint + &radius, round)
        };
        if end.is_zero() {
            // m - r = 0 rounded down is -0, of which 1/x and the like would make -infinity.
            end = Float::new(precision);
        }
        end
    }
}

/// Bits added to the precision at which the two ends of a ball are evaluated, so that rounding the
/// ends costs less than rounding the radius.
const GUARD_BITS: u32 = RADIUS_BITS + 2;

/// The precision of a midpoint.
fn allowed_precision(precision: u32) -> u32 {
    precision.clamp(PRECISION_MIN, float::prec_max())
}

/// An upper bound of the error of a midpoint that was rounded to nearest and is not exact.
///
/// For m = +-0.1... 2^e of p bits the neighbours of m are 2^(e-p) apart, or half of that below a
/// power of two, so the error is at most 2^(e-p-1). MPFR has no subnormal numbers: between 0 and the
/// least positive number w the error is less than w, and w bounds the error where m = 0 or |m| = w.
#[inline]
fn rounding_term(midpoint: &Float, ternary: Ordering) -> Term {
    if ternary == Ordering::Equal {
        return Term::ZERO;
    }
    match midpoint.get_exp() {
        Some(exponent) => {
            let half_unit = i64::from(exponent) - i64::from(midpoint.prec()) - 1;
            if exponent > i32::MIN / 8 {
                return Term::power_of_two(half_unit);
            }
            Term::power_of_two(half_unit.max(least_positive_exponent()))
        }
        // A zero comes from an underflow, an infinity has an unbounded error.
        None if midpoint.is_zero() => Term::power_of_two(least_positive_exponent()),
        None => Radius::INFINITY.term(),
    }
}

/// The exponent k of MPFR's least positive number 2^k.
fn least_positive_exponent() -> i64 {
    i64::from(float::exp_min()) - 1
}

#[cfg(test)]
mod tests;
