//! The error function and its complement on complex rectangles.
//!
//! # Near the imaginary axis
//!
//! erf' = (2/sqrt(pi)) e^(-z^2), so along the vertical segment from x to x + iy
//!
//! ```text
//! erf(x + iy) = erf(x) + iy * integral_0^1 erf'(x + i tau y) d tau.
//! ```
//!
//! The integral is an average of values of erf' and lies in every closed convex set that contains
//! them all, hence in the rectangle that encloses erf' on X x hull(Y, 0). For large |y| the modulus is
//! bounded better by
//!
//! ```text
//! |erf(x + iy) - erf(x)| <= (2/sqrt(pi)) e^(-x^2) integral_0^|y| e^(s^2) ds
//!                        <= (2/sqrt(pi)) e^(-x^2) (e^(y^2) - 1)/|y|,
//! ```
//!
//! the last because (e^(y^2) - 1)/y = integral_0^y (2s/y) e^(s^2) ds, where both factors rise and the
//! first has the mean 1 (Chebyshev's integral inequality). It rises with |y|.
//!
//! # To the right of it
//!
//! erfc z = e^(-z^2) w(z), where for every z, by the substitution of z + t for the variable of
//! integration,
//!
//! ```text
//! w(z) = (2/sqrt(pi)) * integral_0^inf e^(-t^2 - 2zt) dt.                           (1)
//! ```
//!
//! So |w'(x + iy)| <= (4/sqrt(pi)) * integral_0^inf t e^(-t^2 - 2xt) dt = -w'(x), which falls with x,
//! and
//!
//! ```text
//! |w(x + iy) - w(x)| <= |y| * (-w'(x)),   -w'(x) = 2/sqrt(pi) - 2x w(x) <= 1/(sqrt(pi) x^2),   (2)
//! ```
//!
//! the last for x > 0 by dropping e^(-t^2) from the integral; w itself falls with x.
//!
//! For large |z| a better enclosure follows from 1/(z + is) = integral_0^inf e^(-(z + is)t) dt,
//! Re z > 0, averaged over s with the weight e^(-s^2)/sqrt(pi), whose characteristic function is
//! e^(-t^2/4): the average is integral_0^inf e^(-zt - t^2/4) dt = sqrt(pi) w(z) by t -> 2t and (1). The
//! weight is even and 1/(z + is) = (z - is)/(z^2 + s^2), so that sqrt(pi) w(z) is the average of
//! z/(z^2 + s^2) alone; with the finite geometric series
//!
//! ```text
//! z/(z^2 + s^2) = (1/z) (1 - q + q^2 - ... + (-q)^(n-1) + (-q)^n/(1 + q)),   q = s^2/z^2.
//! ```
//!
//! s^(2k) has the average (2k-1)!!/2^k. If |arg z| <= pi/4, then Re q >= 0 and |1 + q| >= 1;
//! otherwise |1 + q| >= |sin(2 arg z)|, the distance of -1 from the ray of q. In both cases
//! 1/|1 + q| <= kappa = 1 where |y| <= x, and |z|^2/(2x|y|) elsewhere. So
//!
//! ```text
//! sqrt(pi) z w(z) = sum_{k<n} (-1)^k (2k-1)!!/(2z^2)^k + theta,  |theta| <= kappa (2n-1)!!/|2z^2|^n.   (3)
//! ```
//!
//! (2) and (3) keep the relative accuracy of erfc for large real parts, where 1 - erf has none.

use rug::Float;
use rug::float::Round;

use super::Rectangle;
use crate::number::wide_interval::WideInterval;

/// From this real part on the formulas of the right half plane are used.
const RIGHT: f64 = 0.5;

/// From this real part on |erfc| is so small that 1 - erfc needs no refinement.
const FAR_RIGHT: f64 = 2.0;

/// Terms of the asymptotic series at most.
const TERMS: u32 = 8;

/// The interval [-radius, radius].
fn around_zero(radius: &Float) -> WideInterval {
    WideInterval::new(Float::with_val(radius.prec(), -radius), radius.clone())
}

/// 2/sqrt(pi).
fn slope_at_zero(precision: u32) -> WideInterval {
    let two = WideInterval::from_integer(2, precision);
    // pi > 0: the root and the quotient exist.
    let root = WideInterval::pi(precision)
        .sqrt()
        .and_then(|root| two.div(&root));
    root.unwrap_or_else(|| WideInterval::whole(precision))
}

impl Rectangle {
    /// The error function.
    #[must_use]
    pub fn erf(&self) -> Self {
        if self.imaginary.is_exact_zero() {
            return Self::from_real(self.real.erf());
        }
        if *self.real.upper() <= -RIGHT {
            return self.neg().erf().neg();
        }
        if *self.real.lower() < RIGHT {
            return self.erf_near_axis();
        }
        let complement = self.erfc_right().neg().add_real(&self.integer(1));
        if *self.real.lower() >= FAR_RIGHT {
            return complement;
        }
        let direct = self.erf_near_axis();
        complement.intersection(&direct).unwrap_or(direct)
    }

    /// The complementary error function, with relative accuracy for large real parts.
    #[must_use]
    pub fn erfc(&self) -> Self {
        if self.imaginary.is_exact_zero() {
            return Self::from_real(self.real.erfc());
        }
        if *self.real.lower() >= RIGHT {
            return self.erfc_right();
        }
        self.erf().neg().add_real(&self.integer(1))
    }

    fn erf_near_axis(&self) -> Self {
        let precision = self.precision();
        let segment = self.imaginary.hull(&WideInterval::zero(precision));
        let slope = Self::new(self.real.clone(), segment).square().neg().exp();
        let rise = slope
            .scale(&slope_at_zero(precision))
            .scale(&self.imaginary)
            .turned(1);
        let height = self.imaginary.magnitude();
        let rise = match self.rise_bound(&height) {
            Some(bound) if height > 0.5 => {
                let both = rise.intersection(&Self::new(bound.clone(), bound));
                both.unwrap_or(rise)
            }
            _ => rise,
        };
        rise.add_real(&self.real.erf())
    }

    /// An interval around 0 that contains both parts of erf(x + iy) - erf(x) for |y| <= height.
    fn rise_bound(&self, height: &Float) -> Option<WideInterval> {
        let height = WideInterval::point(height);
        let growth = height.square().expm1().div(&height)?;
        let decay = WideInterval::point(&self.real.mignitude())
            .square()
            .neg()
            .exp();
        let bound = growth.mul(&decay).mul(&slope_at_zero(self.precision()));
        Some(around_zero(bound.upper()))
    }

    /// erfc for Re z >= 1/2.
    fn erfc_right(&self) -> Self {
        self.square().neg().exp().mul(&self.scaled())
    }

    /// w for Re z >= 1/2.
    ///
    /// The relative width of erfc is about 2|z| times the width of the rectangle, so that a relative
    /// remainder of formula (3) of no more than that width needs no refinement by (2), whose values
    /// of erfc cost far more.
    fn scaled(&self) -> Self {
        let far = self.scaled_far();
        let width = self.real.width().max(&self.imaginary.width());
        match far {
            Some((far, remainder)) if remainder <= width => far,
            Some((far, _)) => {
                let near = self.scaled_near_axis();
                near.intersection(&far).unwrap_or(near)
            }
            None => self.scaled_near_axis(),
        }
    }

    /// w by formula (2), for Re z > 0.
    fn scaled_near_axis(&self) -> Self {
        let precision = self.precision();
        let (first, last) = (scaled_at(self.real.lower()), scaled_at(self.real.upper()));
        let left = WideInterval::point(self.real.lower());
        let slope = slope_at_zero(precision);
        let exact = slope.sub(&left.mul(&first).double()).upper().clone();
        let steepest = match slope.half().div(&left.square()) {
            Some(rough) if *rough.upper() < exact => rough.upper().clone(),
            _ => exact,
        };
        let height = self.imaginary.magnitude();
        let spread = Float::with_val_round(precision, &steepest * &height, Round::Up).0;
        let deviation = around_zero(&spread);
        Self::new(first.hull(&last).add(&deviation), deviation)
    }

    /// w by formula (3) with a bound of |theta|, for Re z > 0; `None` where |z| is too small for it
    /// to be of use.
    fn scaled_far(&self) -> Option<(Self, Float)> {
        let precision = self.precision();
        let size = self.real.square().add(&self.imaginary.square());
        if *size.lower() < 2 {
            return None;
        }
        let height = WideInterval::point(&self.imaginary.magnitude());
        let left = WideInterval::point(self.real.lower());
        let one = self.integer(1);
        let kappa = if height.upper() <= left.lower() {
            one.clone()
        } else {
            // |z|^2/(2x|y|) = (x/|y| + |y|/x)/2 is largest where |y|/x is, which exceeds 1 there.
            let ratio = height.div(&left)?;
            ratio.add(&one.div(&ratio)?).half()
        };
        let reciprocal = self.reciprocal()?;
        let power = reciprocal.square();
        let power = Self::new(power.real.half(), power.imaginary.half());
        // 1/|2z^2|; `bound` is the bound of theta / kappa after the coefficients collected so far,
        // which are those before the least term.
        let ratio = one.div(&size)?.half();
        let mut bound = one.clone();
        let mut coefficients = Vec::new();
        let mut coefficient = one;
        for k in 0..TERMS {
            let odd = self.integer(i64::from(2 * k + 1));
            let next = bound.mul(&ratio).mul(&odd);
            if next.upper() >= bound.upper() {
                break;
            }
            bound = next;
            let following = coefficient.mul(&odd).neg();
            coefficients.push(std::mem::replace(&mut coefficient, following));
        }
        let mut sum = Self::from_real(WideInterval::zero(precision));
        for coefficient in coefficients.iter().rev() {
            sum = sum.mul(&power).add_real(coefficient);
        }
        let remainder = bound.mul(&kappa).upper().clone();
        let deviation = around_zero(&remainder);
        let sum = Self::new(sum.real.add(&deviation), sum.imaginary.add(&deviation));
        let root = slope_at_zero(precision).half();
        Some((sum.mul(&reciprocal).scale(&root), remainder))
    }
}

/// w(x) = e^(x^2) erfc(x) at a real number x >= 0. One value of erfc, rounded up, serves for both
/// ends: the number below it is less than erfc(x).
fn scaled_at(x: &Float) -> WideInterval {
    if !x.is_finite() {
        // 0 < w <= 1.
        return WideInterval::zero(x.prec()).hull(&WideInterval::from_integer(1, x.prec()));
    }
    let mut above = x.clone();
    above.erfc_round(Round::Up);
    let mut below = above.clone();
    below.next_down();
    WideInterval::point(x)
        .square()
        .exp()
        .mul(&WideInterval::new(below, above))
}
