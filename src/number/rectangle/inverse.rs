//! Inverse circular and hyperbolic functions of complex rectangles.
//!
//! # The inverse sine in elliptic coordinates
//!
//! With r = |z + 1|, s = |z - 1|, A = (r + s)/2 >= 1 and B = (r - s)/2 = x/A, the curves of constant A
//! and B are the ellipses and hyperbolas with foci 1 and -1, and (the classical formulas)
//!
//! ```text
//! asin z  = asin B + i sign(y) acosh A        acos z = acos B - i sign(y) acosh A
//! acosh z = acosh A + i sign(y) acos B
//! ```
//!
//! A rises with |x| and with |y|: it is convex and even in each. B rises with x, because
//! (x + 1)/r >= (x - 1)/s (t/sqrt(t^2 + y^2) rises with t); and |B| = |x|/A falls with |y|. So the
//! extremes on a rectangle are at corners (or at the axes), and each is evaluated there in
//! intervals around the exact corner.

use rug::Float;

use super::{Rectangle, reciprocal_part};
use crate::number::wide_interval::WideInterval;

/// Bits of the evaluation at a corner beyond those of the rectangle.
const GUARD_BITS: u32 = 16;

/// A corner x + iy of the first quadrant, in intervals.
struct Corner {
    x: WideInterval,
    square: WideInterval,
    one: WideInterval,
    /// |z + 1|.
    far: WideInterval,
    /// |z - 1|.
    near: WideInterval,
}

impl Corner {
    /// The corner |x| + i|y|.
    fn new(x: &Float, y: &Float) -> Option<Self> {
        let precision = x.prec() + GUARD_BITS;
        let x = WideInterval::point(x).abs().with_precision(precision);
        let one = WideInterval::from_integer(1, precision);
        let square = WideInterval::point(y).with_precision(precision).square();
        let distance = |x: WideInterval| x.square().add(&square).sqrt();
        let (far, near) = (distance(x.add(&one))?, distance(x.sub(&one))?);
        Some(Self {
            x,
            square,
            one,
            far,
            near,
        })
    }

    /// A.
    fn semi_axis(&self) -> WideInterval {
        self.far.add(&self.near).half()
    }

    /// y^2 / (|w| + Re w), which is |w| - Re w without cancellation, for Re w >= 0. `None` where
    /// both are 0.
    fn excess(&self, modulus: &WideInterval, real: &WideInterval) -> Option<WideInterval> {
        self.square.div(&modulus.add(real))
    }

    /// A - 1 >= 0 without cancellation: half the sum of |z + 1| - (x + 1) and |z - 1| - (1 - x).
    fn semi_axis_minus_one(&self) -> Option<WideInterval> {
        let beyond = self.x.sub(&self.one);
        let first = self.excess(&self.far, &self.x.add(&self.one))?;
        let second = if beyond.is_negative() {
            self.excess(&self.near, &beyond.neg())?
        } else {
            self.near.add(&beyond)
        };
        Some(first.add(&second).half())
    }

    /// acosh A = log(1 + t + sqrt(t (t + 2))), t = A - 1.
    fn acosh(&self) -> Option<WideInterval> {
        // The exact t is >= 0, and so are the bounds of sums of numbers >= 0.
        let t = self.semi_axis_minus_one()?;
        let two = WideInterval::from_integer(2, t.precision());
        t.add(&t.mul(&t.add(&two)).sqrt()?).log1p()
    }

    /// acos |B| = 2 asin(sqrt((1 - |B|)/2)), and 1 - |B| = (A - x)/A without cancellation: A - x is
    /// half the sum of |z + 1| - (x + 1) and |z - 1| - (x - 1).
    fn acos(&self) -> Option<WideInterval> {
        let beyond = self.x.sub(&self.one);
        let first = self.excess(&self.far, &self.x.add(&self.one))?;
        let second = if beyond.is_negative() {
            self.near.sub(&beyond)
        } else if self.square.is_exact_zero() {
            self.square.clone()
        } else {
            self.excess(&self.near, &beyond)?
        };
        let deficit = first.add(&second).half().div(&self.semi_axis())?;
        let unit = WideInterval::zero(self.one.precision()).hull(&self.one);
        let sine = deficit.half().sqrt()?.intersection(&unit)?;
        Some(sine.asin()?.double())
    }

    /// asin |B|.
    fn asin(&self) -> Option<WideInterval> {
        let ratio = self.x.div(&self.semi_axis())?;
        if *ratio.upper() < 0.75 {
            return ratio.asin();
        }
        // The inverse sine is steep near 1.
        Some(
            WideInterval::pi(self.one.precision())
                .half()
                .sub(&self.acos()?),
        )
    }
}

/// The interval from the lower bound of one interval to the upper bound of another.
fn between(low: &WideInterval, high: &WideInterval, precision: u32) -> WideInterval {
    WideInterval::new(low.lower().clone(), high.upper().clone()).with_precision(precision)
}

/// An odd function of a coordinate at a number whose modulus gave `value`.
fn signed(value: WideInterval, of: &Float) -> WideInterval {
    if *of < 0 { value.neg() } else { value }
}

impl Rectangle {
    /// True if the rectangle meets (-inf, -1] or [1, inf).
    fn meets_outer_axis(&self) -> bool {
        self.imaginary.contains_zero() && (*self.real.lower() <= -1 || *self.real.upper() >= 1)
    }

    /// Principal inverse sine; `None` if the rectangle meets (-inf, -1] or [1, inf).
    #[must_use]
    pub fn asin(&self) -> Option<Self> {
        if self.meets_outer_axis() || !self.is_finite() {
            return None;
        }
        let (x, y) = (&self.real, &self.imaginary);
        let (least_x, most_x) = (x.mignitude(), x.magnitude());
        let (least_y, most_y) = (y.mignitude(), y.magnitude());
        let sine = |x: &Float, y: &Float| Some(signed(Corner::new(x, y)?.asin()?, x));
        let real = between(
            &sine(x.lower(), if *x.lower() >= 0 { &most_y } else { &least_y })?,
            &sine(x.upper(), if *x.upper() >= 0 { &least_y } else { &most_y })?,
            self.precision(),
        );
        let cosine = |x: &Float, y: &Float| Some(signed(Corner::new(x, y)?.acosh()?, y));
        let imaginary = between(
            &cosine(if *y.lower() >= 0 { &least_x } else { &most_x }, y.lower())?,
            &cosine(if *y.upper() >= 0 { &most_x } else { &least_x }, y.upper())?,
            self.precision(),
        );
        Some(Self::new(real, imaginary))
    }

    /// Principal inverse cosine pi/2 - asin z, on the domain of [`asin`](Self::asin).
    #[must_use]
    pub fn acos(&self) -> Option<Self> {
        let quarter = WideInterval::pi(self.precision()).half();
        Some(self.asin()?.neg().add_real(&quarter))
    }

    /// Principal inverse hyperbolic cosine; `None` if the rectangle meets (-inf, 1].
    ///
    /// On y > 0 the imaginary part acos B falls with x; with y it rises where x > 0 and falls where
    /// x < 0; on y < 0 it is the mirror image: the corners are those of the argument.
    #[must_use]
    pub fn acosh(&self) -> Option<Self> {
        let (x, y) = (&self.real, &self.imaginary);
        if (y.contains_zero() && *x.lower() <= 1) || !self.is_finite() {
            return None;
        }
        let real = between(
            &Corner::new(&x.mignitude(), &y.mignitude())?.acosh()?,
            &Corner::new(&x.magnitude(), &y.magnitude())?.acosh()?,
            self.precision(),
        );
        let angle = |y: &Float, x: &Float| {
            let angle = Corner::new(x, y)?.acos()?;
            let angle = if *x < 0 {
                WideInterval::pi(angle.precision()).sub(&angle)
            } else {
                angle
            };
            Some(signed(angle, y))
        };
        let low = if *y.lower() >= 0 {
            angle(
                if *x.upper() > 0 { y.lower() } else { y.upper() },
                x.upper(),
            )?
        } else {
            angle(
                if *x.lower() > 0 { y.lower() } else { y.upper() },
                x.lower(),
            )?
        };
        let high = if *y.upper() <= 0 {
            angle(
                if *x.upper() > 0 { y.upper() } else { y.lower() },
                x.upper(),
            )?
        } else {
            angle(
                if *x.lower() > 0 { y.upper() } else { y.lower() },
                x.lower(),
            )?
        };
        Some(Self::new(real, between(&low, &high, self.precision())))
    }

    /// Principal inverse tangent; `None` if the rectangle meets i[1, inf) or i(-inf, -1].
    ///
    /// From 2i atan z = log(1 + iz) - log(1 - iz): twice the real part is the sum of the arguments
    /// of (1 - y) + ix and (1 + y) + ix, or the argument of their product 1 - x^2 - y^2 + 2ix (both
    /// lie in (-pi, pi), and the sum of the former does as well); the single argument is tighter, but may
    /// seem to meet the cut where the two do not. The imaginary part is
    /// log((x^2 + (1 + y)^2)/(x^2 + (1 - y)^2))/4 = atanh(2y/(1 + x^2 + y^2))/2, whose quotient
    /// is enclosed tightly as y/(y^2 + q^2) with q^2 = 1 + x^2.
    #[must_use]
    pub fn atan(&self) -> Option<Self> {
        if !self.is_finite() {
            return None;
        }
        let (x, y) = (&self.real, &self.imaginary);
        let one = self.integer(1);
        let (above, below) = (one.sub(y), one.add(y));
        let product = one.sub(&x.square()).sub(&y.square());
        let angle = match WideInterval::argument(&product, &x.double()) {
            Some(angle) => angle,
            None => WideInterval::argument(&above, x)?.add(&WideInterval::argument(&below, x)?),
        };
        let real = angle.half();
        let distance = x.square().add(&one).sqrt()?;
        let quotient = reciprocal_part(y, &distance).double();
        let short = quotient.atanh().map(|value| value.half());
        if quotient.magnitude() < 0.75 {
            return Some(Self::new(real, short?));
        }
        // Near i and -i the quotient comes near 1 and loses its digits.
        let size = |part: &WideInterval| x.square().add(&part.square()).log();
        let long = size(&below)?.sub(&size(&above)?).half().half();
        let imaginary = match short {
            Some(short) => short.intersection(&long).unwrap_or(long),
            None => long,
        };
        Some(Self::new(real, imaginary))
    }

    /// Principal inverse hyperbolic sine -i asin(iz); `None` if the rectangle meets i[1, inf) or
    /// i(-inf, -1].
    #[must_use]
    pub fn asinh(&self) -> Option<Self> {
        Some(self.turned(1).asin()?.turned(-1))
    }

    /// Principal inverse hyperbolic tangent -i atan(iz); `None` if the rectangle meets (-inf, -1]
    /// or [1, inf).
    #[must_use]
    pub fn atanh(&self) -> Option<Self> {
        Some(self.turned(1).atan()?.turned(-1))
    }
}
