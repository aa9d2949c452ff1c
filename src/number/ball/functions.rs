//! Elementary functions that are monotone, or even and monotone in |x|.
//!
//! An exact argument costs one evaluation, rounded to nearest. For any other argument [a, b] the
//! function is evaluated at the two ends, which are rounded outward to at least 32 more bits
//! than the ball has, and the values are rounded outward too: for an increasing f, f(a) rounded down and f(b)
//! rounded up enclose f([a, b]), and nothing is lost but rounding. MPFR rounds these functions
//! correctly in every direction.
//!
//! For the whole line the ends are the infinities, where MPFR returns the limits. So bounded
//! functions stay bounded: atan of the whole line is a ball around [-pi/2, pi/2].

use std::cmp::Ordering;

use rug::Float;
use rug::float::Round;

use super::{Ball, GUARD_BITS};
use crate::number::radius::Radius;

/// Whether a function increases or decreases.
#[derive(Clone, Copy, PartialEq, Eq)]
pub(super) enum Trend {
    Increasing,
    Decreasing,
}

/// Total functions: defined for every real number.
impl Ball {
    /// {e^x}, increasing. The whole line where e^x overflows.
    #[must_use]
    pub fn exp(&self) -> Self {
        self.monotone(Trend::Increasing, |value, round| value.exp_round(round))
    }

    /// {2^x}, increasing; exact for an exact integer. The whole line where 2^x overflows.
    #[must_use]
    pub fn exp2(&self) -> Self {
        self.monotone(Trend::Increasing, |value, round| value.exp2_round(round))
    }

    /// {e^x - 1}, increasing, without the cancellation of [`exp`](Self::exp) near 0.
    #[must_use]
    pub fn expm1(&self) -> Self {
        self.monotone(Trend::Increasing, |value, round| value.exp_m1_round(round))
    }

    /// {x^(1/3)}, the real cube root of any sign, increasing.
    #[must_use]
    pub fn cbrt(&self) -> Self {
        self.monotone(Trend::Increasing, |value, round| value.cbrt_round(round))
    }

    /// {arctan x}, increasing, within [-pi/2, pi/2] up to the rounding of the ball.
    #[must_use]
    pub fn atan(&self) -> Self {
        self.monotone(Trend::Increasing, |value, round| value.atan_round(round))
    }

    /// {(e^x - e^-x)/2}, increasing.
    #[must_use]
    pub fn sinh(&self) -> Self {
        self.monotone(Trend::Increasing, |value, round| value.sinh_round(round))
    }

    /// {(e^x + e^-x)/2}, even and increasing in |x|.
    #[must_use]
    pub fn cosh(&self) -> Self {
        self.even(|value, round| value.cosh_round(round))
    }

    /// {sinh x / cosh x}, increasing, within [-1, 1] up to the rounding of the ball.
    #[must_use]
    pub fn tanh(&self) -> Self {
        self.monotone(Trend::Increasing, |value, round| value.tanh_round(round))
    }

    /// {log(x + sqrt(x^2 + 1))}, increasing.
    #[must_use]
    pub fn asinh(&self) -> Self {
        self.monotone(Trend::Increasing, |value, round| value.asinh_round(round))
    }

    /// {2/sqrt(pi) times the integral of e^(-t^2) from 0 to x}, increasing, within [-1, 1] up to the
    /// rounding of the ball.
    #[must_use]
    pub fn erf(&self) -> Self {
        self.monotone(Trend::Increasing, |value, round| value.erf_round(round))
    }

    /// {1 - erf x}, decreasing, without cancellation for large x.
    #[must_use]
    pub fn erfc(&self) -> Self {
        self.monotone(Trend::Decreasing, |value, round| value.erfc_round(round))
    }
}

/// Partial functions: `None` unless the ball is proved to lie inside the domain.
impl Ball {
    /// {x^(1/2)} for x >= 0, increasing; exact for an exact square.
    #[must_use]
    pub fn sqrt(&self) -> Option<Self> {
        let domain = |lower: &Float, _: &Float| *lower >= 0;
        self.monotone_on(domain, Trend::Increasing, |value, round| {
            value.sqrt_round(round)
        })
    }

    /// {log x} for x > 0, increasing.
    #[must_use]
    pub fn log(&self) -> Option<Self> {
        self.monotone_on(positive, Trend::Increasing, |value, round| {
            value.ln_round(round)
        })
    }

    /// {log x / log 2} for x > 0, increasing; exact for an exact power of two.
    #[must_use]
    pub fn log2(&self) -> Option<Self> {
        self.monotone_on(positive, Trend::Increasing, |value, round| {
            value.log2_round(round)
        })
    }

    /// {log x / log 10} for x > 0, increasing; exact for an exact power of ten.
    #[must_use]
    pub fn log10(&self) -> Option<Self> {
        self.monotone_on(positive, Trend::Increasing, |value, round| {
            value.log10_round(round)
        })
    }

    /// {log(1 + x)} for x > -1, increasing, without cancellation near 0.
    #[must_use]
    pub fn log1p(&self) -> Option<Self> {
        let domain = |lower: &Float, _: &Float| *lower > -1;
        self.monotone_on(domain, Trend::Increasing, |value, round| {
            value.ln_1p_round(round)
        })
    }

    /// {arcsin x} for -1 <= x <= 1, increasing.
    #[must_use]
    pub fn asin(&self) -> Option<Self> {
        self.monotone_on(unit, Trend::Increasing, |value, round| {
            value.asin_round(round)
        })
    }

    /// {arccos x} for -1 <= x <= 1, decreasing.
    #[must_use]
    pub fn acos(&self) -> Option<Self> {
        self.monotone_on(unit, Trend::Decreasing, |value, round| {
            value.acos_round(round)
        })
    }

    /// {the number y >= 0 with cosh y = x} for x >= 1, increasing.
    #[must_use]
    pub fn acosh(&self) -> Option<Self> {
        let domain = |lower: &Float, _: &Float| *lower >= 1;
        self.monotone_on(domain, Trend::Increasing, |value, round| {
            value.acosh_round(round)
        })
    }

    /// {log((1 + x)/(1 - x))/2} for -1 < x < 1, increasing.
    #[must_use]
    pub fn atanh(&self) -> Option<Self> {
        let domain = |lower: &Float, upper: &Float| *lower > -1 && *upper < 1;
        self.monotone_on(domain, Trend::Increasing, |value, round| {
            value.atanh_round(round)
        })
    }
}

fn positive(lower: &Float, _: &Float) -> bool {
    *lower > 0
}

fn unit(lower: &Float, upper: &Float) -> bool {
    *lower >= -1 && *upper <= 1
}

/// The three schemes of evaluation. `function` replaces its argument by the function's value rounded
/// in the given direction and returns the ternary value.
impl Ball {
    /// A function that is monotone on the real line.
    pub(super) fn monotone<F>(&self, trend: Trend, function: F) -> Self
    where
        F: Fn(&mut Float, Round) -> Ordering,
    {
        if self.is_exact() {
            return self.at_midpoint(function);
        }
        let (lower, upper) = self.ends();
        self.monotone_between(lower, upper, trend, function)
    }

    /// A function that is monotone on an interval, of which `domain` tells whether it contains
    /// [lower, upper].
    pub(super) fn monotone_on<D, F>(&self, domain: D, trend: Trend, function: F) -> Option<Self>
    where
        D: Fn(&Float, &Float) -> bool,
        F: Fn(&mut Float, Round) -> Ordering,
    {
        if self.is_exact() {
            let inside = domain(&self.midpoint, &self.midpoint);
            return inside.then(|| self.at_midpoint(function));
        }
        let (lower, upper) = self.ends();
        domain(&lower, &upper).then(|| self.monotone_between(lower, upper, trend, function))
    }

    /// An even function that increases with |x|.
    pub(super) fn even<F>(&self, function: F) -> Self
    where
        F: Fn(&mut Float, Round) -> Ordering,
    {
        if self.is_exact() {
            return self.at_midpoint(function);
        }
        let (lower, upper) = self.ends();
        let (least, largest) = if lower >= 0 {
            (lower, upper)
        } else if upper <= 0 {
            (-upper, -lower)
        } else {
            (Float::new(upper.prec()), upper.max(&-lower))
        };
        self.monotone_between(least, largest, Trend::Increasing, function)
    }

    /// The ends of the ball, rounded outward at the precision at which functions are evaluated.
    ///
    /// That precision keeps 16 bits of the radius, so that rounding the ends widens the ball by
    /// 2^-15 of itself, and at least the guard bits. A radius far below the square of the last place,
    /// 2^-2p, counts as 2^-2p 2^-64: where a function cancels, as the logarithm near 1, the distance
    /// of another midpoint of p bits from the zero is at least 2^-p, and so p bits of the value
    /// remain.
    pub(super) fn ends(&self) -> (Float, Float) {
        let precision = self.precision();
        let guarded = precision.saturating_add(GUARD_BITS);
        let longest = precision.saturating_mul(2).saturating_add(2 * GUARD_BITS);
        let work = match (self.midpoint.get_exp(), self.radius.binary_exponent()) {
            (Some(midpoint), Some(radius)) => {
                let bits = i64::from(midpoint) - radius + 16;
                bits.clamp(i64::from(guarded), i64::from(longest)) as u32
            }
            _ => guarded,
        };
        let work = work.min(rug::float::prec_max());
        (self.lower_at(work), self.upper_at(work))
    }

    fn at_midpoint<F>(&self, function: F) -> Self
    where
        F: Fn(&mut Float, Round) -> Ordering,
    {
        let mut value = self.midpoint.clone();
        let ternary = function(&mut value, Round::Nearest);
        Self::rounded_to(value, ternary, Radius::ZERO)
    }

    fn monotone_between<F>(
        &self,
        mut lower: Float,
        mut upper: Float,
        trend: Trend,
        function: F,
    ) -> Self
    where
        F: Fn(&mut Float, Round) -> Ordering,
    {
        if trend == Trend::Decreasing {
            std::mem::swap(&mut lower, &mut upper);
        }
        function(&mut lower, Round::Down);
        function(&mut upper, Round::Up);
        Self::from_bounds(&lower, &upper, self.precision())
    }
}
