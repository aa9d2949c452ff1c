//! Field operations. All work at the larger of the two precisions, except the operations that
//! assign, which keep the precision of the ball they assign to.

use std::cell::RefCell;
use std::cmp::Ordering;

use rug::float::Round;
use rug::ops::{
    AddAssignRound, AssignRound, DivAssignRound, MulAssignRound, NegAssign, SubAssignRound,
};
use rug::{Assign, Float};

use super::{Ball, GUARD_BITS, rounding_term};
use crate::number::radius::Radius;

/// A radius below 2^-10 of the midpoint counts as narrow: first-order bounds overestimate a narrow
/// argument's part by less than a thousandth, and cost less than evaluating the two ends.
const NARROW: i64 = -10;

thread_local! {
    /// Working memory of [`Ball::add_product`].
    static PRODUCT: RefCell<Float> = RefCell::new(Float::new(64));
}

impl Ball {
    /// {x + y}: |(x + y) - (m + n)| <= r + s for |x - m| <= r, |y - n| <= s.
    #[must_use]
    pub fn add(&self, other: &Self) -> Self {
        let (midpoint, ternary) = Float::with_val_round(
            self.common_precision(other),
            &self.midpoint + &other.midpoint,
            Round::Nearest,
        );
        Self::rounded_to(midpoint, ternary, self.radius.add(other.radius))
    }

    /// {x - y}: |(x - y) - (m - n)| <= r + s for |x - m| <= r, |y - n| <= s.
    #[must_use]
    pub fn sub(&self, other: &Self) -> Self {
        let (midpoint, ternary) = Float::with_val_round(
            self.common_precision(other),
            &self.midpoint - &other.midpoint,
            Round::Nearest,
        );
        Self::rounded_to(midpoint, ternary, self.radius.add(other.radius))
    }

    /// {x y}: |x y - m n| <= |m| s + |n| r + r s for |x - m| <= r, |y - n| <= s.
    ///
    /// The product with an exact 0 is an exact 0, also for the whole line, which holds real numbers
    /// only.
    #[must_use]
    pub fn mul(&self, other: &Self) -> Self {
        let precision = self.common_precision(other);
        if self.is_exact_zero() || other.is_exact_zero() {
            return Self::zero(precision);
        }
        let (midpoint, ternary) =
            Float::with_val_round(precision, &self.midpoint * &other.midpoint, Round::Nearest);
        Self::rounded_to(midpoint, ternary, self.product_error(other))
    }

    /// {-x}, exact.
    #[must_use]
    pub fn neg(&self) -> Self {
        let mut result = self.clone();
        result.neg_assign();
        result
    }

    /// Replaces the ball by its negative, exact.
    #[inline]
    pub fn neg_assign(&mut self) {
        if !self.midpoint.is_zero() {
            self.midpoint.neg_assign();
        }
    }

    /// {|x|}: the ball itself or its negative where the sign is proved; otherwise a ball around
    /// [0, max |x|].
    #[must_use]
    pub fn abs(&self) -> Self {
        if !self.contains_zero() || self.is_exact() {
            return if self.midpoint.is_sign_negative() {
                self.neg()
            } else {
                self.clone()
            };
        }
        let precision = self.precision();
        let largest = self.magnitude_upper().to_float_upper(precision);
        Self::from_bounds(&Float::new(precision), &largest, precision)
    }

    /// {x^2}. Narrow: |x^2 - m^2| <= (2 |m| + r) r. Wide: the squares of the ends, as x^2 is monotone
    /// in |x|, so that no negative number is added but by rounding.
    #[must_use]
    pub fn square(&self) -> Self {
        if self.is_exact_zero() {
            return self.clone();
        }
        if self.is_narrow() {
            let mut midpoint = self.midpoint.clone();
            let ternary = midpoint.square_round(Round::Nearest);
            let error = Radius::of_float_upper(&self.midpoint).mul_power_of_two(1);
            return Self::rounded_to(midpoint, ternary, error.add(self.radius).mul(self.radius));
        }
        self.even(|value, round| value.square_round(round))
    }

    /// {x / y}, or `None` if the divisor contains 0.
    ///
    /// Narrow divisor: for |x - m| <= r, |y - n| <= s < |n|,
    /// |x/y - m/n| = |(x - m) - (m/n)(y - n)| / |y| <= (r + |m/n| s) / (|n| - s),
    /// with |m/n| bounded through its rounded value. Wide divisor: y has one sign, so x/y is monotone
    /// in x and in y and its extrema are among the quotients of the ends.
    #[must_use]
    pub fn div(&self, divisor: &Self) -> Option<Self> {
        let precision = self.common_precision(divisor);
        if divisor.contains_zero() {
            return None;
        }
        if self.is_exact_zero() {
            return Some(Self::zero(precision));
        }
        if !self.is_finite() {
            return Some(Self::whole(precision));
        }
        if !divisor.is_narrow() {
            return Some(self.quotient_of_ends(divisor, precision));
        }
        let (midpoint, ternary) = Float::with_val_round(
            precision,
            &self.midpoint / &divisor.midpoint,
            Round::Nearest,
        );
        let mut quotient = Self::rounded_to(midpoint, ternary, Radius::ZERO);
        if !(self.is_exact() && divisor.is_exact()) {
            let numerator = self
                .radius
                .add(quotient.magnitude_upper().mul(divisor.radius));
            let error = numerator
                .div(divisor.magnitude_lower())
                .unwrap_or(Radius::INFINITY);
            quotient.add_error(error);
        }
        Some(quotient)
    }

    /// Adds {x} to this ball, at its own precision.
    #[inline]
    pub fn add_assign(&mut self, other: &Self) {
        let ternary = self
            .midpoint
            .add_assign_round(&other.midpoint, Round::Nearest);
        self.radius = self.radius.add(other.radius);
        self.settle(ternary);
    }

    /// Subtracts {x} from this ball, at its own precision.
    #[inline]
    pub fn sub_assign(&mut self, other: &Self) {
        let ternary = self
            .midpoint
            .sub_assign_round(&other.midpoint, Round::Nearest);
        self.radius = self.radius.add(other.radius);
        self.settle(ternary);
    }

    /// Multiplies this ball by {x}, at its own precision; the bound is that of [`mul`](Self::mul).
    #[inline]
    pub fn mul_assign(&mut self, other: &Self) {
        if self.is_exact_zero() {
            return;
        }
        if other.is_exact_zero() {
            self.midpoint.assign(0u32);
            self.radius = Radius::ZERO;
            return;
        }
        self.radius = self.product_error(other);
        let ternary = self
            .midpoint
            .mul_assign_round(&other.midpoint, Round::Nearest);
        self.settle(ternary);
    }

    /// self += {x y}, at the precision of this ball. The bound is that of [`mul`](Self::mul) plus the
    /// radius and the errors of the two roundings.
    ///
    /// This is the step of a convolution of series. It does not allocate, and all the parts of the
    /// radius are summed and rounded at once. MPFR's product into working memory and sum, all of equal
    /// precisions, take less time than its fused operation (half at 64 bits, nine tenths at 512).
    #[inline]
    pub fn add_product(&mut self, left: &Self, right: &Self) {
        self.accumulate(left, right, |sum, product| {
            sum.add_assign_round(product, Round::Nearest)
        });
    }

    /// self -= {x y}, as [`add_product`](Self::add_product).
    #[inline]
    pub fn sub_product(&mut self, left: &Self, right: &Self) {
        self.accumulate(left, right, |sum, product| {
            sum.sub_assign_round(product, Round::Nearest)
        });
    }

    #[inline]
    fn accumulate<F>(&mut self, left: &Self, right: &Self, combine: F)
    where
        F: Fn(&mut Float, &Float) -> Ordering,
    {
        if left.is_exact_zero() || right.is_exact_zero() {
            return;
        }
        PRODUCT.with_borrow_mut(|product| {
            if product.prec() != self.precision() {
                product.set_prec(self.precision());
            }
            let ternary = product.assign_round(&left.midpoint * &right.midpoint, Round::Nearest);
            let product_error = rounding_term(product, ternary);
            let ternary = combine(&mut self.midpoint, product);
            let sum_error = rounding_term(&self.midpoint, ternary);
            let m = Radius::of_float_near_upper(&left.midpoint);
            let n = Radius::of_float_near_upper(&right.midpoint);
            self.radius = Radius::sum([
                self.radius.term(),
                m.term_of_product(right.radius),
                n.term_of_product(left.radius),
                left.radius.term_of_product(right.radius),
                product_error,
                sum_error,
            ]);
        });
        self.settle(Ordering::Equal);
    }

    /// {k x}: |k x - k m| <= |k| r.
    #[must_use]
    pub fn mul_integer(&self, factor: i64) -> Self {
        if factor == 0 {
            return Self::zero(self.precision());
        }
        let mut midpoint = self.midpoint.clone();
        let ternary = midpoint.mul_assign_round(factor, Round::Nearest);
        let error = self
            .radius
            .mul(Radius::from_u64_upper(factor.unsigned_abs()));
        Self::rounded_to(midpoint, ternary, error)
    }

    /// {x / k} for k > 0: |x/k - m/k| <= r/k. The whole line for k = 0.
    #[must_use]
    pub fn div_integer(&self, divisor: u64) -> Self {
        if divisor == 0 {
            return Self::whole(self.precision());
        }
        let mut midpoint = self.midpoint.clone();
        let ternary = midpoint.div_assign_round(divisor, Round::Nearest);
        let error = self
            .radius
            .div(Radius::from_u64_lower(divisor))
            .unwrap_or(Radius::INFINITY);
        Self::rounded_to(midpoint, ternary, error)
    }

    /// {2^power x}, exact within MPFR's exponent range.
    #[must_use]
    pub fn mul_power_of_two(&self, power: i64) -> Self {
        // A shift by the least or the largest i32 leaves MPFR's exponent range.
        let shift = power.clamp(i64::from(i32::MIN), i64::from(i32::MAX)) as i32;
        let (midpoint, ternary) =
            Float::with_val_round(self.precision(), &self.midpoint << shift, Round::Nearest);
        Self::rounded_to(midpoint, ternary, self.radius.mul_power_of_two(power))
    }

    /// {c x} for an exact number c: |c x - c m| <= |c| r. The whole line if c is infinite or a NaN.
    #[must_use]
    pub fn mul_float(&self, factor: &Float) -> Self {
        if factor.is_zero() || self.is_exact_zero() {
            return Self::zero(self.precision());
        }
        let (midpoint, ternary) =
            Float::with_val_round(self.precision(), &self.midpoint * factor, Round::Nearest);
        let error = self.radius.mul(Radius::of_float_upper(factor));
        Self::rounded_to(midpoint, ternary, error)
    }

    /// |m| s + |n| r + r s, the distance of the products from the product of the midpoints.
    #[inline]
    fn product_error(&self, other: &Self) -> Radius {
        if self.is_exact() && other.is_exact() {
            return Radius::ZERO;
        }
        let m = Radius::of_float_near_upper(&self.midpoint);
        let n = Radius::of_float_near_upper(&other.midpoint);
        Radius::sum([
            m.term_of_product(other.radius),
            n.term_of_product(self.radius),
            self.radius.term_of_product(other.radius),
        ])
    }

    fn quotient_of_ends(&self, divisor: &Self, precision: u32) -> Self {
        let work = precision.saturating_add(GUARD_BITS);
        let divisors = [divisor.lower_at(work), divisor.upper_at(work)];
        let numerators = [self.lower_at(work), self.upper_at(work)];
        let mut lower = Float::with_val(work, rug::float::Special::Infinity);
        let mut upper = Float::with_val(work, rug::float::Special::NegInfinity);
        for numerator in &numerators {
            for end in &divisors {
                // An end of 0 (the divisor's distance to 0 underflows) or an overflow makes an
                // infinity or a NaN here, and the whole line below.
                let down = Float::with_val_round(work, numerator / end, Round::Down).0;
                let up = Float::with_val_round(work, numerator / end, Round::Up).0;
                if down.is_nan() || up.is_nan() {
                    return Self::whole(precision);
                }
                lower = lower.min(&down);
                upper = upper.max(&up);
            }
        }
        Self::from_bounds(&lower, &upper, precision)
    }

    /// Whether the radius is at most 2^-10 of the midpoint, for which first-order bounds are tight.
    #[inline]
    pub(super) fn is_narrow(&self) -> bool {
        self.radius <= Radius::of_float_lower(&self.midpoint).mul_power_of_two(NARROW)
    }

    #[inline]
    fn common_precision(&self, other: &Self) -> u32 {
        self.precision().max(other.precision())
    }
}
