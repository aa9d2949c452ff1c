//! The approximant's polynomial rewritten around the centre of a patch.

use rug::{Complete, Float};

use crate::approximant::polynomial::Polynomial;
use crate::function::constant::Constant;
use crate::function::exact::Centre;
use crate::number::ball::Ball;

/// Coefficients of p(c + h t) in powers of t, as balls of the given precision.
///
/// With p(x) = sum c_k u^k and u = (x - o)/s we have u = alpha + beta t, alpha = (c - o)/s and
/// beta = h/s; the shift by alpha is Horner's repeated synthetic division (Knuth, TAOCP vol. 2,
/// 4.6.4), n(n-1)/2 ball operations, followed by the scaling by beta^k. Cancellation in the shift
/// shows as a larger radius, never as a wrong value.
pub fn shifted(
    polynomial: &Polynomial,
    centre: &Centre,
    scale: &Float,
    precision: u32,
) -> Vec<Ball> {
    let (alpha, beta) = local_variable(polynomial, centre, scale, precision);
    let mut coefficients: Vec<Ball> = polynomial
        .coefficients
        .iter()
        .map(|c| Ball::from_rational(c, precision))
        .collect();
    let n = coefficients.len();
    if !alpha.is_exact_zero() {
        for first in 0..n.saturating_sub(1) {
            for j in (first..n - 1).rev() {
                let (low, high) = coefficients.split_at_mut(j + 1);
                low[j].add_product(&alpha, &high[0]);
            }
        }
    }
    let mut power = Ball::one(precision);
    for coefficient in coefficients.iter_mut().skip(1) {
        power = power.mul(&beta);
        *coefficient = coefficient.mul(&power);
    }
    coefficients
}

/// p(c) by Horner's scheme in balls.
pub fn value_at(polynomial: &Polynomial, at: &Centre, precision: u32) -> Ball {
    let (u, _) = local_variable(polynomial, at, &Float::with_val(2, 1), precision);
    let mut sum = Ball::zero(precision);
    for c in polynomial.coefficients.iter().rev() {
        let mut next = Ball::from_rational(c, precision);
        next.add_product(&sum, &u);
        sum = next;
    }
    sum
}

/// alpha and beta with u = alpha + beta t for x = c + h t; exact rationals are divided exactly
/// and rounded once.
fn local_variable(
    polynomial: &Polynomial,
    centre: &Centre,
    scale: &Float,
    precision: u32,
) -> (Ball, Ball) {
    // A finite Float is a rational number, so the conversion cannot fail for a patch radius.
    let step = scale.to_rational().unwrap_or_default();
    if let (Some(origin), Some(width), true) = (
        polynomial.origin.as_rational(),
        polynomial.scale.as_rational(),
        centre.pi_multiple.is_zero(),
    ) {
        let alpha = (&centre.rational - origin).complete() / width;
        let beta = step / width;
        return (
            Ball::from_rational(&alpha, precision),
            Ball::from_rational(&beta, precision),
        );
    }
    let enclosed = |constant: &Constant| {
        constant
            .ball(precision)
            .unwrap_or_else(|| Ball::whole(precision))
    };
    let width = enclosed(&polynomial.scale);
    let quotient = |numerator: &Ball| {
        numerator
            .div(&width)
            .unwrap_or_else(|| Ball::whole(precision))
    };
    let alpha = quotient(&centre.ball(precision).sub(&enclosed(&polynomial.origin)));
    let beta = quotient(&Ball::from_rational(&step, precision));
    (alpha, beta)
}
