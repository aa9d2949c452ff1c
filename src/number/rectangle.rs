//! Complex rectangles: a real and an imaginary interval, with the elementary functions.
//!
//! Every function encloses its values on the rectangle; most of them in the smallest rectangle, up
//! to rounding, because real and imaginary part are monotone in the coordinates or products of
//! functions of one coordinate. A partial function returns `None` where the rectangle meets its
//! branch cut or singularity, or comes so close that rounding cannot exclude it. The branches are
//! the principal ones; cuts are closed here: a rectangle that touches one is refused.
//!
//! A rectangle with an infinite end is a valid operand; the result is then unbounded or `None`.

use rug::Float;
use rug::float::Round;

use crate::number::radius::Radius;
use crate::number::wide_interval::WideInterval;

mod error_function;
mod exponential;
mod inverse;
mod trigonometric;

#[cfg(test)]
mod tests;

/// The complex numbers x + iy with x in `real` and y in `imaginary`.
#[derive(Clone, Debug, PartialEq)]
pub struct Rectangle {
    /// Real parts.
    pub real: WideInterval,
    /// Imaginary parts.
    pub imaginary: WideInterval,
}

#[allow(
    clippy::should_implement_trait,
    reason = "an operator would hide that the result is rounded outward"
)]
impl Rectangle {
    /// The rectangle with these sides.
    #[inline]
    pub fn new(real: WideInterval, imaginary: WideInterval) -> Self {
        Self { real, imaginary }
    }

    /// A real interval as a rectangle.
    pub fn from_real(real: WideInterval) -> Self {
        let imaginary = WideInterval::zero(real.precision());
        Self { real, imaginary }
    }

    /// Bits of the ends of the real side.
    pub fn precision(&self) -> u32 {
        self.real.precision()
    }

    fn integer(&self, x: i64) -> WideInterval {
        WideInterval::from_integer(x, self.precision())
    }

    /// Upper bound of |z|: the corner that is farthest from 0.
    pub fn magnitude(&self) -> Radius {
        let x = Radius::of_float_upper(&self.real.magnitude());
        let y = Radius::of_float_upper(&self.imaginary.magnitude());
        if y.is_zero() {
            return x;
        }
        x.mul(x).add(y.mul(y)).sqrt()
    }

    /// True if both sides are bounded.
    pub fn is_finite(&self) -> bool {
        self.real.is_finite() && self.imaginary.is_finite()
    }

    /// True if 0 is in the rectangle.
    pub fn contains_zero(&self) -> bool {
        self.real.contains_zero() && self.imaginary.contains_zero()
    }

    /// True if the rectangle meets the half line (-inf, 0], the cut of the logarithm.
    pub fn meets_negative_axis(&self) -> bool {
        self.imaginary.contains_zero() && *self.real.lower() <= 0
    }

    /// True if the two have a number in common.
    pub fn overlaps(&self, other: &Self) -> bool {
        let apart =
            |a: &WideInterval, b: &WideInterval| a.lower() > b.upper() || b.lower() > a.upper();
        !apart(&self.real, &other.real) && !apart(&self.imaginary, &other.imaginary)
    }

    /// The smallest rectangle that holds both.
    #[must_use]
    pub fn hull(&self, other: &Self) -> Self {
        Self::new(
            self.real.hull(&other.real),
            self.imaginary.hull(&other.imaginary),
        )
    }

    /// The numbers in both; `None` if there are none.
    #[must_use]
    pub fn intersection(&self, other: &Self) -> Option<Self> {
        Some(Self::new(
            self.real.intersection(&other.real)?,
            self.imaginary.intersection(&other.imaginary)?,
        ))
    }

    /// -z.
    #[must_use]
    pub fn neg(&self) -> Self {
        Self::new(self.real.neg(), self.imaginary.neg())
    }

    /// i^turns z: a rotation by quarter turns, exact.
    #[must_use]
    pub fn turned(&self, turns: i64) -> Self {
        match turns.rem_euclid(4) {
            0 => self.clone(),
            1 => Self::new(self.imaginary.neg(), self.real.clone()),
            2 => self.neg(),
            _ => Self::new(self.imaginary.clone(), self.real.neg()),
        }
    }

    /// z + w.
    #[must_use]
    #[inline]
    pub fn add(&self, other: &Self) -> Self {
        Self::new(
            self.real.add(&other.real),
            self.imaginary.add(&other.imaginary),
        )
    }

    /// z - w.
    #[must_use]
    #[inline]
    pub fn sub(&self, other: &Self) -> Self {
        Self::new(
            self.real.sub(&other.real),
            self.imaginary.sub(&other.imaginary),
        )
    }

    /// z + x for a real interval x.
    #[must_use]
    pub fn add_real(&self, x: &WideInterval) -> Self {
        Self::new(self.real.add(x), self.imaginary.clone())
    }

    /// z x for a real interval x.
    #[must_use]
    pub fn scale(&self, x: &WideInterval) -> Self {
        Self::new(self.real.mul(x), self.imaginary.mul(x))
    }

    /// z w.
    #[must_use]
    pub fn mul(&self, other: &Self) -> Self {
        Self::new(
            self.real
                .mul(&other.real)
                .sub(&self.imaginary.mul(&other.imaginary)),
            self.real
                .mul(&other.imaginary)
                .add(&self.imaginary.mul(&other.real)),
        )
    }

    /// z^2 = x^2 - y^2 + 2ixy; tighter than the product, which takes its factors as independent.
    #[must_use]
    pub fn square(&self) -> Self {
        Self::new(
            self.real.square().sub(&self.imaginary.square()),
            self.real.mul(&self.imaginary).double(),
        )
    }

    /// z / x for a real interval x; `None` if x may be 0.
    #[must_use]
    pub fn div_real(&self, x: &WideInterval) -> Option<Self> {
        Some(Self::new(self.real.div(x)?, self.imaginary.div(x)?))
    }

    /// 1/z = x/(x^2 + y^2) - iy/(x^2 + y^2); `None` if z may be 0, or is unbounded.
    #[must_use]
    pub fn reciprocal(&self) -> Option<Self> {
        if self.contains_zero() || !self.is_finite() {
            return None;
        }
        Some(Self::new(
            reciprocal_part(&self.real, &self.imaginary.abs()),
            reciprocal_part(&self.imaginary, &self.real.abs()).neg(),
        ))
    }

    /// z / w = z (1/w); `None` if w may be 0, or is unbounded.
    #[must_use]
    pub fn div(&self, other: &Self) -> Option<Self> {
        if other.imaginary.is_exact_zero() {
            return self.div_real(&other.real);
        }
        Some(self.mul(&other.reciprocal()?))
    }

    /// z^n by repeated squaring; `None` for a negative n if z may be 0. 0^0 = 1.
    #[must_use]
    pub fn pow_integer(&self, n: i32) -> Option<Self> {
        if self.imaginary.is_exact_zero() {
            return Some(Self::from_real(self.real.pow_integer(n)?));
        }
        let mut result: Option<Self> = None;
        let mut square = self.clone();
        let mut remaining = n.unsigned_abs();
        while remaining > 0 {
            if remaining & 1 == 1 {
                result = Some(match result {
                    None => square.clone(),
                    Some(result) => result.mul(&square),
                });
            }
            remaining >>= 1;
            if remaining > 0 {
                square = square.square();
            }
        }
        match result {
            None => Some(Self::from_real(self.integer(1))),
            Some(power) if n < 0 => power.reciprocal(),
            result => result,
        }
    }
}

/// Encloses g(x, q) = x/(x^2 + q^2) for x in an interval and q in an interval of numbers >= 0, not
/// both containing 0; the smallest enclosure up to rounding. Both intervals are finite.
///
/// g is odd in x, so its infimum is minus the supremum over -x, and for p = |x| >= 0
/// h(p, q) = p/(p^2 + q^2) falls with q, rises with p up to p = q, where it is 1/(2q), and falls
/// from there on. So the supremum of g over [x1, x2] x [q1, q2] is
/// - for x2 > 0: h at q = q1 and the p in [max(x1, 0), x2] that is nearest to q1;
/// - for x2 <= 0: minus the infimum of h over p in [-x2, -x1], which is at q = q2 and one of the
///   ends of p.
pub(super) fn reciprocal_part(x: &WideInterval, q: &WideInterval) -> WideInterval {
    let upper = reciprocal_supremum(x.lower(), x.upper(), q);
    let negative = x.neg();
    let lower = -reciprocal_supremum(negative.lower(), negative.upper(), q);
    WideInterval::new(lower, upper)
}

fn reciprocal_supremum(from: &Float, to: &Float, q: &WideInterval) -> Float {
    let (near, far) = (q.lower(), q.upper());
    if *to <= 0 {
        let precision = to.prec();
        let first = reciprocal_value(&Float::with_val(precision, -to), far, Round::Down);
        let last = reciprocal_value(&Float::with_val(precision, -from), far, Round::Down);
        return -(if first <= last { first } else { last });
    }
    let start = if *from > 0 { from } else { near };
    let nearest = if near < start {
        start
    } else if near > to {
        to
    } else {
        near
    };
    reciprocal_value(nearest, near, Round::Up)
}

/// p/(p^2 + q^2) = 1/(p + q^2/p) for finite p >= 0 and q >= 0, not both 0, rounded in a direction.
fn reciprocal_value(p: &Float, q: &Float, round: Round) -> Float {
    if p.is_zero() {
        return Float::new(p.prec());
    }
    let opposite = if round == Round::Down {
        Round::Up
    } else {
        Round::Down
    };
    let precision = p.prec();
    let mut sum = Float::with_val_round(precision, q * q, opposite).0;
    sum = Float::with_val_round(precision, &sum / p, opposite).0;
    sum = Float::with_val_round(precision, &sum + p, opposite).0;
    sum.recip_round(round);
    sum
}
