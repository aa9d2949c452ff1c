//! Integer and rational powers.

use std::cmp::Ordering;

use rug::float::Round;
use rug::ops::{AssignRound, PowAssignRound};
use rug::{Float, Integer, Rational};

use super::Ball;
use super::functions::Trend;

/// Numerators and denominators up to this are powers and roots, which keep exact values exact.
const SMALL: u32 = 64;

impl Ball {
    /// {x^n}; x^0 = 1 for every x, 0 included. `None` if n < 0 and the ball contains 0.
    ///
    /// For x > 0 the power is increasing if n > 0 and decreasing if n < 0; negative x are brought
    /// there by x^n = (-1)^n (-x)^n. A ball around 0 has n > 0: an odd power is increasing, an even
    /// one increases with |x|.
    #[must_use]
    pub fn pow_integer(&self, exponent: i64) -> Option<Self> {
        match exponent {
            0 => return Some(Self::one(self.precision())),
            1 => return Some(self.clone()),
            2 => return Some(self.square()),
            _ => {}
        }
        let power = Integer::from(exponent);
        let function = |value: &mut Float, round| value.pow_assign_round(&power, round);
        let odd = exponent % 2 != 0;
        if self.is_positive() {
            let trend = if exponent > 0 {
                Trend::Increasing
            } else {
                Trend::Decreasing
            };
            Some(self.monotone(trend, function))
        } else if self.is_negative() {
            let value = self.neg().pow_integer(exponent)?;
            Some(if odd { value.neg() } else { value })
        } else if exponent < 0 {
            None
        } else if odd {
            Some(self.monotone(Trend::Increasing, function))
        } else {
            Some(self.even(function))
        }
    }

    /// {x^q}. An integer q is an integer power (of any base, where it fits an `i64`); otherwise
    /// `None` unless the ball is proved to be >= 0, and > 0 for q < 0.
    ///
    /// x^q is increasing in x >= 0 for q > 0 and decreasing in x > 0 for q < 0, so that the values
    /// at the two ends, rounded outward by `rational_power`, enclose all.
    #[must_use]
    pub fn pow_rational(&self, exponent: &Rational) -> Option<Self> {
        if exponent.is_integer()
            && let Some(integer) = exponent.numer().to_i64()
        {
            return self.pow_integer(integer);
        }
        let (lower, upper) = self.ends();
        let increasing = *exponent > 0;
        if lower < 0 || (lower.is_zero() && !increasing) {
            return None;
        }
        let (first, last) = if increasing {
            (&lower, &upper)
        } else {
            (&upper, &lower)
        };
        let least = rational_power(first, exponent, Round::Down);
        let largest = rational_power(last, exponent, Round::Up);
        Some(Self::from_bounds(&least, &largest, self.precision()))
    }
}

/// x^q rounded down or up for x >= 0, x > 0 if q < 0, at the precision of x.
///
/// A small q = a/b is the b-th root of x^|a|, and its reciprocal for a < 0: each step is monotone
/// and rounded so that its error has the wanted sign, and exact where its value is representable.
/// Any other q is enclosed in [q-, q+], and x^q lies between x^(q-) and x^(q+), the latter being
/// the larger for x >= 1 and the smaller for x < 1.
pub(super) fn rational_power(base: &Float, exponent: &Rational, round: Round) -> Float {
    let mut value = base.clone();
    if let (Some(power), Some(root)) = (small(exponent.numer()), small(exponent.denom()))
        && base
            .get_exp()
            .is_none_or(|binary| binary.unsigned_abs() < i32::MAX as u32 / 4 / SMALL)
    {
        let inner = if *exponent > 0 {
            round
        } else {
            opposite(round)
        };
        value.pow_assign_round(power, inner);
        value.root_round(root, inner);
        if *exponent < 0 {
            value.recip_round(round);
        }
        return value;
    }
    let precision = base.prec().saturating_add(SMALL);
    let grows = *base >= 1;
    let exponent_round = if grows { round } else { opposite(round) };
    let mut approximate = Float::new(precision);
    let _: Ordering = approximate.assign_round(exponent, exponent_round);
    value.pow_assign_round(&approximate, round);
    value
}

fn small(integer: &Integer) -> Option<u32> {
    integer.as_abs().to_u32().filter(|&value| value <= SMALL)
}

fn opposite(round: Round) -> Round {
    if round == Round::Down {
        Round::Up
    } else {
        Round::Down
    }
}
