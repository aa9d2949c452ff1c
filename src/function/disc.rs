//! Upper bounds of |f| on complex discs, with a proof that f is analytic there.
//!
//! # Theorem
//!
//! The operations of a formula take real numbers to real numbers, so that each of them satisfies
//! g(conj z) = conj g(z) where it is analytic, and everything below follows from enclosures of the
//! values on the upper half of the circle |z - c| = r. By induction over the operations, each of
//! them is proved analytic in the open disc and continuous on the closed one, and equal to the
//! real operation on the diameter; the bound is then the largest modulus on the circle (maximum
//! principle).
//!
//! Let v be an operand of which that is known already.
//!
//! 1. *Arguments of v on the circle.* If the enclosure of v on every arc lies in one of the half
//!    planes Re > 0, Im > 0, Re < 0, Im < 0, then v has no zero on the circle, and its argument can
//!    be followed along the arcs. Because v is real at both ends of the half circle, the argument
//!    changes there by w pi for an integer w and by 2 w pi along the whole circle. By the argument
//!    principle v has exactly w zeros in the disc. (For a function that is only continuous on the
//!    circle: the half planes are open and the arcs compact, so that slightly smaller circles lie in
//!    the same half planes and have the same w.)
//! 2. *Logarithms and powers.* If w = 0 and v > 0 at c + r, then v has no zero and a logarithm L
//!    that is analytic in the disc and real on the diameter, where L = log v. On the circle the
//!    argument followed from c + r is Im L, so that L, and exp(q L) for the roots and powers, can be
//!    evaluated there. The principal branch need not be left alone: exp(4x) may turn
//!    several times around 0. For a cube root v < 0 serves as well, as -cbrt(-v).
//! 3. *Quotients u/v.* If w = 0, the quotient is analytic. It is also if k = w leading Taylor
//!    coefficients at c are PROVED to be exactly zero both of v and of u: then all zeros of v are the
//!    one of order k at c, and it is cancelled by u (sin(x)/x at 0). A negative integer power is
//!    the quotient with u = 1.
//! 4. *Moduli.* |v| = v or |v| = -v on the diameter if w = 0, or if all w zeros lie at c, by 3,
//!    and w is even: v does not change its sign on the diameter.
//! 5. *Tangents* are quotients by cos v and cosh v.
//! 6. *Inverse functions.* The principal branches of asin, acos, atan, acosh, asinh, atanh are
//!    analytic in the plane without their cuts, which is simply connected. Let U be such a set, and
//!    let the values of v on the circle lie in it. For b outside U the curve v(circle) does not wind
//!    around b, so that v - b has no zero in the disc: v(disc) lies in U, and the
//!    composition is analytic.
//!
//! An arc whose enclosure is too wide to conclude is halved, up to four times.
//!
//! The argument principle, the maximum principle and the winding numbers in simply connected sets
//! are those of any course of complex analysis (Ahlfors, Complex Analysis, chapter 4; from memory).

use rug::Float;

use crate::function::disc::circle::Circle;
use crate::function::exact::Centre;
use crate::function::formula::Formula;
use crate::function::refusal::{Refusal, RefusalKind};
use crate::number::radius::Radius;

mod arc;
mod circle;
mod turning;

#[cfg(test)]
mod tests;

/// Bits that an enclosure needs beyond those that the centre and the radius use up.
const PRECISION: u32 = 53;

/// Bits are added in steps of a machine word, which is what they cost.
const STEP: u32 = 64;

/// Radii below 2^-SMALL are tried again with more bits.
const SMALL: i64 = 16;

/// No more bits than this for a small radius.
const LARGEST_PRECISION: u32 = 4096;

/// Proves f analytic in the open disc |z - c| < radius and continuous on the closed one, and
/// returns an upper bound of |f| there. `arcs` (rounded up to a power of two, 256 at most) rectangles
/// cover the upper half circle; those that are too wide are halved up to four times.
///
/// # Errors
///
/// The operation that could not be shown to be analytic, or whose enclosure was unbounded.
/// `proved` only if a constant part of the formula has no value.
pub fn magnitude_on_disc(
    formula: &Formula,
    centre: &Centre,
    radius: &Float,
    arcs: usize,
) -> Result<Radius, Refusal> {
    let exponent = radius.get_exp();
    let Some(exponent) = exponent.filter(|_| *radius > 0) else {
        return Err(Refusal {
            node: formula.root(),
            kind: RefusalKind::Unbounded,
            proved: false,
        });
    };
    let place = centre.wide_interval(PRECISION).magnitude();
    let distance = place
        .get_exp()
        .map_or(0, |e| i64::from(e) - i64::from(exponent))
        .max(0);
    // Numbers of the size of c have to be known to a small part of r.
    let first = precision(distance);
    let result = Circle::new(formula, centre, radius, first).and_then(|c| c.magnitude(arcs));
    // On a small disc a function such as 1 - cos(x) is of the order of r^2, and the difference of
    // its parts has few digits left.
    let smallness = Some(i64::from(-exponent))
        .filter(|&bits| bits >= SMALL)
        .unwrap_or(0);
    let second = precision(distance.saturating_add(2 * smallness));
    match result {
        Err(refusal) if second > first && !refusal.proved => {
            let retried = Circle::new(formula, centre, radius, second);
            retried
                .and_then(|circle| circle.magnitude(arcs))
                .map_err(|_| refusal)
        }
        result => result,
    }
}

/// The precision for `extra` >= 0 bits beyond the usual ones.
fn precision(extra: i64) -> u32 {
    let extra = u32::try_from(extra).unwrap_or(u32::MAX);
    PRECISION
        .saturating_add(extra.div_ceil(STEP).saturating_mul(STEP))
        .min(LARGEST_PRECISION)
}
