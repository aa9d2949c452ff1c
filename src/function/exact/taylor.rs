//! Truncated power series whose coefficients are exact numbers or unknown.
//!
//! Every routine applies an identity between true coefficients term by term, so a result is known
//! where all the terms of its identity are. The one rule beyond that is 0 * unknown = 0 and
//! 0 / unknown = 0: an unknown coefficient is still a real number, and every divisor here is
//! different from zero because the function is analytic at the centre.

use rug::ops::Pow;
use rug::{Integer, Rational};

use crate::function::exact::Exact;

/// An exact number, or unknown.
pub(super) type Known = Option<Exact>;

/// The first coefficients of a power series.
pub(super) type Taylor = Vec<Known>;

/// Numerators and denominators that pass this size are given up as unknown, so that the work is
/// bounded.
const BITS: u32 = 4000;

fn fits(value: &Rational) -> bool {
    value.numer().significant_bits() <= BITS && value.denom().significant_bits() <= BITS
}

/// The number, unless it has grown too long.
pub(super) fn capped(value: Exact) -> Known {
    (fits(&value.rational) && fits(&value.pi_multiple)).then_some(value)
}

fn zero() -> Known {
    Some(Exact::zero())
}

fn is_zero(known: &Known) -> bool {
    matches!(known, Some(value) if value.is_zero())
}

fn sum(left: &Known, right: &Known) -> Known {
    let (left, right) = (left.as_ref()?, right.as_ref()?);
    capped(Exact {
        rational: Rational::from(&left.rational + &right.rational),
        pi_multiple: Rational::from(&left.pi_multiple + &right.pi_multiple),
    })
}

/// The negative of a number.
pub(super) fn negated(known: &Known) -> Known {
    known.as_ref().map(|value| Exact {
        rational: Rational::from(-&value.rational),
        pi_multiple: Rational::from(-&value.pi_multiple),
    })
}

fn times_rational(known: &Known, factor: &Rational) -> Known {
    if factor.is_zero() {
        return zero();
    }
    let value = known.as_ref()?;
    capped(Exact {
        rational: Rational::from(&value.rational * factor),
        pi_multiple: Rational::from(&value.pi_multiple * factor),
    })
}

fn multiple(left: &Known, right: &Known) -> Known {
    if is_zero(left) || is_zero(right) {
        return zero();
    }
    let (first, second) = (left.as_ref()?, right.as_ref()?);
    if let Some(factor) = first.as_rational() {
        times_rational(right, factor)
    } else if let Some(factor) = second.as_rational() {
        times_rational(left, factor)
    } else {
        None
    }
}

/// The quotient by a number that is not zero: known if the divisor is rational, or if both are
/// rational multiples of pi.
fn ratio(dividend: &Known, divisor: &Known) -> Known {
    if is_zero(divisor) {
        return None;
    }
    if is_zero(dividend) {
        return zero();
    }
    let (numerator, denominator) = (dividend.as_ref()?, divisor.as_ref()?);
    if let Some(rational) = denominator.as_rational() {
        times_rational(dividend, &Rational::from(rational.recip_ref()))
    } else if numerator.as_pi_multiple().is_some() && denominator.as_pi_multiple().is_some() {
        capped(Exact::from(Rational::from(
            &numerator.pi_multiple / &denominator.pi_multiple,
        )))
    } else {
        None
    }
}

/// The root of an integer > 0, if it is an integer.
pub(super) fn integer_root(value: &Integer, degree: u32) -> Option<Integer> {
    if *value == 1 {
        return Some(Integer::from(1));
    }
    if degree > BITS {
        return None;
    }
    let (root, remainder) = value.clone().root_rem(Integer::new(), degree);
    remainder.is_zero().then_some(root)
}

/// An integer power of a rational number > 0.
pub(super) fn number_power(base: &Rational, exponent: i32) -> Known {
    let bits = base
        .numer()
        .significant_bits()
        .max(base.denom().significant_bits());
    if *base != 1 && u64::from(bits - 1) * u64::from(exponent.unsigned_abs()) > u64::from(BITS) {
        return None;
    }
    capped(Exact::from(base.clone().pow(exponent)))
}

/// [value, 0, 0, ...]
pub(super) fn constant(count: usize, value: Known) -> Taylor {
    let mut coefficients = vec![zero(); count];
    coefficients[0] = value;
    coefficients
}

/// The series with another constant term.
pub(super) fn with_value(mut series: Taylor, value: Known) -> Taylor {
    series[0] = value;
    series
}

/// The product by a constant that is not in Q + Q pi: only zeros stay known.
pub(super) fn times_unknown(u: &[Known]) -> Taylor {
    u.iter()
        .map(|known| if is_zero(known) { zero() } else { None })
        .collect()
}

pub(super) fn negate(u: &[Known]) -> Taylor {
    u.iter().map(negated).collect()
}

pub(super) fn add(u: &[Known], v: &[Known]) -> Taylor {
    u.iter()
        .zip(v)
        .map(|(left, right)| sum(left, right))
        .collect()
}

pub(super) fn subtract(u: &[Known], v: &[Known]) -> Taylor {
    u.iter()
        .zip(v)
        .map(|(left, right)| sum(left, &negated(right)))
        .collect()
}

/// u_0 v_k + u_1 v_{k-1} + ... + u_k v_0 from the given first index of u on.
fn convolution(u: &[Known], v: &[Known], first: usize, k: usize) -> Known {
    let mut total = zero();
    for j in first..=k {
        total = sum(&total, &multiple(&u[j], &v[k - j]));
        if total.is_none() {
            break;
        }
    }
    total
}

pub(super) fn product(u: &[Known], v: &[Known]) -> Taylor {
    (0..u.len()).map(|k| convolution(u, v, 0, k)).collect()
}

/// q = u/v with v_0 different from zero: v_0 q_k = u_k - sum_{j=1..k} v_j q_{k-j}.
pub(super) fn quotient(u: &[Known], v: &[Known]) -> Taylor {
    let mut result: Taylor = Vec::with_capacity(u.len());
    for k in 0..u.len() {
        let mut rest = u[k].clone();
        for j in 1..=k {
            rest = sum(&rest, &negated(&multiple(&v[j], &result[k - j])));
        }
        result.push(ratio(&rest, &v[0]));
    }
    result
}

/// u^n by repeated squaring; u^0 = 1.
pub(super) fn power_integer(u: &[Known], exponent: u32) -> Taylor {
    let mut result = constant(u.len(), Some(Exact::from(Rational::from(1))));
    for position in (0..u32::BITS - exponent.leading_zeros()).rev() {
        result = product(&result, &result);
        if exponent >> position & 1 == 1 {
            result = product(&result, u);
        }
    }
    result
}

/// The derivative: (k + 1) u_{k+1}, one term shorter.
fn derivative(u: &[Known]) -> Taylor {
    (1..u.len())
        .map(|k| times_rational(&u[k], &Rational::from(k)))
        .collect()
}

/// The integral of u' w with a given value at the centre.
pub(super) fn integral(u: &[Known], w: &[Known], value: Known) -> Taylor {
    let slopes = derivative(u);
    let mut result = Vec::with_capacity(u.len());
    result.push(value);
    for k in 1..u.len() {
        result.push(times_rational(
            &convolution(&slopes, w, 0, k - 1),
            &Rational::from((1, k)),
        ));
    }
    result
}

/// y = exp(u): y' = u' y, so k y_k = sum_{j=1..k} j u_j y_{k-j}.
pub(super) fn exponential(u: &[Known], value: Known) -> Taylor {
    let slopes = derivative(u);
    let mut result = Vec::with_capacity(u.len());
    result.push(value);
    for k in 1..u.len() {
        let next = convolution(&slopes, &result, 0, k - 1);
        result.push(times_rational(&next, &Rational::from((1, k))));
    }
    result
}

/// y = log(u): y' = u'/u.
pub(super) fn logarithm(u: &[Known], value: Known) -> Taylor {
    let mut slopes = derivative(u);
    slopes.push(None);
    integrate(&quotient(&slopes, u), value)
}

/// The integral of a series with a given value at the centre; the last coefficient is not used.
fn integrate(slopes: &[Known], value: Known) -> Taylor {
    let mut result = Vec::with_capacity(slopes.len());
    result.push(value);
    for k in 1..slopes.len() {
        result.push(times_rational(&slopes[k - 1], &Rational::from((1, k))));
    }
    result
}

/// y = u^r by Miller's recurrence, from u y' = r u' y:
/// k u_0 y_k = sum_{j=1..k} (r j - (k - j)) u_j y_{k-j}.
///
/// Where u_0 = 0 the power is not analytic and only its value is kept.
pub(super) fn power(u: &[Known], exponent: &Rational, value: Known) -> Taylor {
    let mut result = Vec::with_capacity(u.len());
    result.push(value);
    if is_zero(&u[0]) || !fits(exponent) {
        result.resize(u.len(), None);
        return result;
    }
    for k in 1..u.len() {
        let mut total = zero();
        for j in 1..=k {
            let weight = exponent * Rational::from(j) - Rational::from(k - j);
            total = sum(
                &total,
                &times_rational(&multiple(&u[j], &result[k - j]), &weight),
            );
        }
        result.push(ratio(
            &times_rational(&total, &Rational::from((1, k))),
            &u[0],
        ));
    }
    result
}

/// (s, c) with s' = u' c and c' = -u' s (circular) or c' = u' s (hyperbolic).
pub(super) fn rotation(
    u: &[Known],
    sine: Known,
    cosine: Known,
    circular: bool,
) -> (Taylor, Taylor) {
    let slopes = derivative(u);
    let (mut sines, mut cosines) = (vec![sine], vec![cosine]);
    for k in 1..u.len() {
        let factor = Rational::from((1, k));
        let sine = times_rational(&convolution(&slopes, &cosines, 0, k - 1), &factor);
        let cosine = times_rational(&convolution(&slopes, &sines, 0, k - 1), &factor);
        sines.push(sine);
        cosines.push(if circular { negated(&cosine) } else { cosine });
    }
    (sines, cosines)
}

/// y = tan(u) from y' = u' (1 + y^2), or y = tanh(u) from y' = u' (1 - y^2).
pub(super) fn tangent(u: &[Known], value: Known, circular: bool) -> Taylor {
    let slopes = derivative(u);
    let mut result = vec![value];
    let mut derivatives: Taylor = Vec::new();
    for k in 1..u.len() {
        let square = convolution(&result, &result, 0, k - 1);
        let square = if circular { square } else { negated(&square) };
        let one = Some(Exact::from(Rational::from(u32::from(k == 1))));
        derivatives.push(sum(&one, &square));
        let next = convolution(&slopes, &derivatives, 0, k - 1);
        result.push(times_rational(&next, &Rational::from((1, k))));
    }
    result
}
