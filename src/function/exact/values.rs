//! Values of the elementary functions where they are known in Q + Q pi.

use rug::{Integer, Rational};

use crate::function::exact::Exact;
use crate::function::exact::taylor::{self, Known};

pub(super) fn known_integer(value: i32) -> Known {
    Some(Exact::from(Rational::from(value)))
}

/// f(u) where f(0) = 0 is the only value that is known.
pub(super) fn odd_value(u: &Known) -> Known {
    u.as_ref().filter(|value| value.is_zero()).cloned()
}

/// exp(u), and cosh(u): 1 at 0.
pub(super) fn exponential_value(u: &Known) -> Known {
    odd_value(u).and(known_integer(1))
}

/// log(u), and acosh(u): 0 at 1.
pub(super) fn logarithm_value(u: &Known) -> Known {
    u.as_ref()
        .filter(|value| value.as_rational().is_some_and(|value| *value == 1))?;
    Some(Exact::zero())
}

/// sin(b pi) = sin((b mod 2) pi), rational for b a multiple of 1/2 and for some multiples of 1/6
/// (and for no other rational b, by Niven's theorem).
fn sine_of_pi_multiple(multiple: &Rational) -> Known {
    let turn = Rational::from(multiple / 2u32);
    let sixths = (turn.clone() - turn.floor()) * 12u32;
    let value = match sixths.is_integer().then(|| sixths.numer().to_u32())?? {
        0 | 6 => Rational::new(),
        1 | 5 => Rational::from((1, 2)),
        3 => Rational::from(1),
        7 | 11 => Rational::from((-1, 2)),
        9 => Rational::from(-1),
        _ => return None,
    };
    Some(Exact::from(value))
}

pub(super) fn sine_value(u: &Known) -> Known {
    sine_of_pi_multiple(u.as_ref()?.as_pi_multiple()?)
}

/// cos(y) = sin(y + pi/2).
pub(super) fn cosine_value(u: &Known) -> Known {
    let multiple = u.as_ref()?.as_pi_multiple()?;
    sine_of_pi_multiple(&(multiple.clone() + Rational::from((1, 2))))
}

/// tan(b pi): 0 at integers b, 1 and -1 a quarter beyond and before them.
pub(super) fn tangent_value(u: &Known) -> Known {
    let multiple = u.as_ref()?.as_pi_multiple()?;
    let quarters = (multiple.clone() - multiple.clone().floor()) * 4u32;
    match quarters.is_integer().then(|| quarters.numer().to_u32())?? {
        0 => known_integer(0),
        1 => known_integer(1),
        3 => known_integer(-1),
        _ => None,
    }
}

/// asin(u) for u in {0, 1/2, -1/2, 1, -1}.
pub(super) fn arcsine_value(u: &Known) -> Known {
    let doubled = Rational::from(u.as_ref()?.as_rational()? * 2u32);
    let sixths = match doubled.is_integer().then(|| doubled.numer().to_i32())?? {
        0 => 0,
        1 => 1,
        -1 => -1,
        2 => 3,
        -2 => -3,
        _ => return None,
    };
    Some(Exact::of_pi(Rational::from((sixths, 6))))
}

/// atan(u) for u in {0, 1, -1}.
pub(super) fn arctangent_value(u: &Known) -> Known {
    let value = u.as_ref()?.as_rational()?;
    let quarters = value.is_integer().then(|| value.numer().to_i32())??;
    (-1..=1)
        .contains(&quarters)
        .then(|| Exact::of_pi(Rational::from((quarters, 4))))
}

/// log_b(u), where u is an integer power of b.
pub(super) fn power_of(base: u32, u: &Known) -> Known {
    let value = u.as_ref()?.as_rational()?;
    if *value <= 0 {
        return None;
    }
    let (large, small, sign) = if *value.denom() == 1 {
        (value.numer(), value.denom(), 1)
    } else {
        (value.denom(), value.numer(), -1)
    };
    let mut rest = large.clone();
    let exponent = rest.remove_factor_mut(&Integer::from(base));
    (rest == 1 && *small == 1).then(|| Exact::from(Rational::from(sign * i64::from(exponent))))
}

/// u^r for a rational u > 0 where it is rational (and 0^r = 0 for r > 0).
pub(super) fn rational_power(u: &Known, exponent: &Rational) -> Known {
    let base = u.as_ref()?.as_rational()?;
    if *base < 0 || (base.is_zero() && *exponent <= 0) {
        return None;
    }
    if base.is_zero() || *base == 1 {
        return u.clone();
    }
    let degree = exponent.denom().to_u32()?;
    let numerator = taylor::integer_root(base.numer(), degree)?;
    let denominator = taylor::integer_root(base.denom(), degree)?;
    taylor::number_power(
        &Rational::from((numerator, denominator)),
        exponent.numer().to_i32()?,
    )
}
