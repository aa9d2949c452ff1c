//! Closed real intervals with MPFR endpoints and directed rounding.
//!
//! MPFR's exponents are so wide that neither exp(-1e5) nor erfc(108) underflows, which double
//! intervals cannot offer. An end may be infinite after an overflow; it is never NaN, and an
//! interval is never empty: an operation whose result would be empty, or that may leave the real
//! domain, returns `None`.

use std::cmp::Ordering;

use rug::float::{Constant, Round, Special};
use rug::ops::{AddAssignRound, DivAssignRound, MulAssignRound, SubAssignRound};
use rug::{Float, Integer, Rational};

/// The set of real numbers x with lower <= x <= upper.
#[derive(Clone, Debug, PartialEq)]
pub struct WideInterval {
    lower: Float,
    upper: Float,
}

fn infinite(precision: u32, special: Special) -> Float {
    Float::with_val(precision, special)
}

impl WideInterval {
    /// The interval from `lower` to `upper`; NaN ends become infinite, so that the result always
    /// encloses what the ends were meant to bound.
    pub fn new(lower: Float, upper: Float) -> Self {
        let lower = if lower.is_nan() {
            infinite(lower.prec(), Special::NegInfinity)
        } else {
            lower
        };
        let upper = if upper.is_nan() {
            infinite(upper.prec(), Special::Infinity)
        } else {
            upper
        };
        if lower > upper {
            Self {
                lower: upper,
                upper: lower,
            }
        } else {
            Self { lower, upper }
        }
    }

    /// The number 0.
    pub fn zero(precision: u32) -> Self {
        Self {
            lower: Float::new(precision),
            upper: Float::new(precision),
        }
    }

    /// Encloses a rational number.
    pub fn from_rational(x: &Rational, precision: u32) -> Self {
        Self::from_rationals(x, x, precision)
    }

    /// Encloses the interval between two rational numbers, `a` <= `b`.
    pub fn from_rationals(a: &Rational, b: &Rational, precision: u32) -> Self {
        Self {
            lower: Float::with_val_round(precision, a, Round::Down).0,
            upper: Float::with_val_round(precision, b, Round::Up).0,
        }
    }

    /// Encloses pi.
    pub fn pi(precision: u32) -> Self {
        Self {
            lower: Float::with_val_round(precision, Constant::Pi, Round::Down).0,
            upper: Float::with_val_round(precision, Constant::Pi, Round::Up).0,
        }
    }

    /// The lower end.
    pub fn lower(&self) -> &Float {
        &self.lower
    }

    /// The upper end.
    pub fn upper(&self) -> &Float {
        &self.upper
    }

    /// Bits of the ends.
    pub fn precision(&self) -> u32 {
        self.lower.prec()
    }

    /// An upper bound of |x|.
    pub fn magnitude(&self) -> Float {
        let (a, b) = (self.lower.clone().abs(), self.upper.clone().abs());
        if a >= b { a } else { b }
    }

    /// Some number of the interval (its rounded midpoint), 0 for the whole line.
    pub fn midpoint(&self) -> Float {
        if !self.lower.is_finite() || !self.upper.is_finite() {
            return Float::new(self.precision());
        }
        let middle = Float::with_val(self.precision(), &self.lower + &self.upper) / 2u32;
        middle.clamp(&self.lower, &self.upper)
    }

    /// True if 0 is in the interval.
    pub fn contains_zero(&self) -> bool {
        self.lower <= 0 && self.upper >= 0
    }

    /// True if every number is > 0.
    pub fn is_positive(&self) -> bool {
        self.lower > 0
    }

    /// True if every number is < 0.
    pub fn is_negative(&self) -> bool {
        self.upper < 0
    }

    /// True if both ends are finite.
    pub fn is_finite(&self) -> bool {
        self.lower.is_finite() && self.upper.is_finite()
    }

    /// True if the interval holds one number.
    pub fn is_exact(&self) -> bool {
        self.lower == self.upper
    }

    /// The smallest interval that holds both.
    #[must_use]
    pub fn hull(&self, other: &Self) -> Self {
        let lower = if self.lower <= other.lower {
            &self.lower
        } else {
            &other.lower
        };
        let upper = if self.upper >= other.upper {
            &self.upper
        } else {
            &other.upper
        };
        Self {
            lower: lower.clone(),
            upper: upper.clone(),
        }
    }

    /// The numbers in both; `None` if there are none.
    #[must_use]
    pub fn intersection(&self, other: &Self) -> Option<Self> {
        let lower = if self.lower >= other.lower {
            &self.lower
        } else {
            &other.lower
        };
        let upper = if self.upper <= other.upper {
            &self.upper
        } else {
            &other.upper
        };
        (lower <= upper).then(|| Self {
            lower: lower.clone(),
            upper: upper.clone(),
        })
    }

    /// -x.
    #[must_use]
    pub fn neg(&self) -> Self {
        Self {
            lower: Float::with_val(self.precision(), -&self.upper),
            upper: Float::with_val(self.precision(), -&self.lower),
        }
    }

    /// x + y.
    #[must_use]
    pub fn add(&self, other: &Self) -> Self {
        let precision = self.precision().max(other.precision());
        let (mut lower, mut upper) = (self.lower.clone(), self.upper.clone());
        lower.set_prec(precision);
        upper.set_prec(precision);
        lower.add_assign_round(&other.lower, Round::Down);
        upper.add_assign_round(&other.upper, Round::Up);
        Self::new(lower, upper)
    }

    /// x - y.
    #[must_use]
    pub fn sub(&self, other: &Self) -> Self {
        let precision = self.precision().max(other.precision());
        let (mut lower, mut upper) = (self.lower.clone(), self.upper.clone());
        lower.set_prec(precision);
        upper.set_prec(precision);
        lower.sub_assign_round(&other.upper, Round::Down);
        upper.sub_assign_round(&other.lower, Round::Up);
        Self::new(lower, upper)
    }

    /// x y. The ends are picked by the signs of the factors; only two intervals around 0 need all
    /// four products. 0 times infinity is 0: an infinite end stands for arbitrarily large numbers.
    #[must_use]
    pub fn mul(&self, other: &Self) -> Self {
        let precision = self.precision().max(other.precision());
        let product = |a: &Float, b: &Float, round| {
            if a.is_zero() || b.is_zero() {
                return Float::new(precision);
            }
            let mut result = Float::with_val(precision, a);
            result.mul_assign_round(b, round);
            result
        };
        let down = |a, b| product(a, b, Round::Down);
        let up = |a, b| product(a, b, Round::Up);
        let (a, b, c, d) = (&self.lower, &self.upper, &other.lower, &other.upper);
        let (lower, upper) = if *a >= 0 {
            if *c >= 0 {
                (down(a, c), up(b, d))
            } else if *d <= 0 {
                (down(b, c), up(a, d))
            } else {
                (down(b, c), up(b, d))
            }
        } else if *b <= 0 {
            if *c >= 0 {
                (down(a, d), up(b, c))
            } else if *d <= 0 {
                (down(b, d), up(a, c))
            } else {
                (down(a, d), up(a, c))
            }
        } else if *c >= 0 {
            (down(a, d), up(b, d))
        } else if *d <= 0 {
            (down(b, c), up(a, c))
        } else {
            let (x, y) = (down(a, d), down(b, c));
            let (u, v) = (up(a, c), up(b, d));
            (if x <= y { x } else { y }, if u >= v { u } else { v })
        };
        Self::new(lower, upper)
    }

    /// x / y; `None` if y may be 0.
    #[must_use]
    pub fn div(&self, other: &Self) -> Option<Self> {
        if other.contains_zero() {
            return None;
        }
        let precision = self.precision().max(other.precision());
        let quotient = |a: &Float, b: &Float, round| {
            if a.is_zero() {
                return Float::new(precision);
            }
            let mut result = Float::with_val(precision, a);
            result.div_assign_round(b, round);
            result
        };
        let (a, b) = (&self.lower, &self.upper);
        let (c, d) = (&other.lower, &other.upper);
        let (low_by, high_by) = if *c > 0 {
            (
                (a, if *a >= 0 { d } else { c }),
                (b, if *b >= 0 { c } else { d }),
            )
        } else {
            (
                (b, if *b >= 0 { d } else { c }),
                (a, if *a >= 0 { c } else { d }),
            )
        };
        Some(Self::new(
            quotient(low_by.0, low_by.1, Round::Down),
            quotient(high_by.0, high_by.1, Round::Up),
        ))
    }

    /// |x|.
    #[must_use]
    pub fn abs(&self) -> Self {
        if self.lower >= 0 {
            self.clone()
        } else if self.upper <= 0 {
            self.neg()
        } else {
            Self {
                lower: Float::new(self.precision()),
                upper: self.magnitude(),
            }
        }
    }

    /// x^2.
    #[must_use]
    pub fn square(&self) -> Self {
        let a = self.abs();
        let (mut lower, mut upper) = (a.lower.clone(), a.upper.clone());
        lower.mul_assign_round(&a.lower, Round::Down);
        upper.mul_assign_round(&a.upper, Round::Up);
        Self::new(lower, upper)
    }

    /// x^n; `None` for a negative n if x may be 0. 0^0 = 1.
    #[must_use]
    pub fn pow_integer(&self, n: i32) -> Option<Self> {
        let one = Self {
            lower: Float::with_val(self.precision(), 1),
            upper: Float::with_val(self.precision(), 1),
        };
        let mut result = one.clone();
        let base = if n % 2 == 0 { self.abs() } else { self.clone() };
        // Even powers of |x| and odd powers of x are monotone: the ends suffice.
        let end = |x: &Float, round: Round| {
            let mut power = Float::with_val(self.precision(), 1);
            let negative = x.is_sign_negative();
            // |x|^m is rounded in the direction that its sign turns it to.
            let toward = match (round, negative) {
                (Round::Down, false) | (Round::Up, true) => Round::Down,
                _ => Round::Up,
            };
            let mut square = x.clone().abs();
            let mut m = n.unsigned_abs();
            while m > 0 {
                if m & 1 == 1 {
                    power.mul_assign_round(&square, toward);
                }
                m >>= 1;
                if m > 0 {
                    let copy = square.clone();
                    square.mul_assign_round(&copy, toward);
                }
            }
            if negative && n % 2 != 0 {
                -power
            } else {
                power
            }
        };
        if n != 0 {
            result = Self::new(end(&base.lower, Round::Down), end(&base.upper, Round::Up));
        }
        if n < 0 {
            one.div(&result)
        } else {
            Some(result)
        }
    }

    /// A rising function, evaluated at the ends with directed rounding.
    fn rising(&self, f: impl Fn(&mut Float, Round) -> Ordering) -> Self {
        let (mut lower, mut upper) = (self.lower.clone(), self.upper.clone());
        let _ = f(&mut lower, Round::Down);
        let _ = f(&mut upper, Round::Up);
        Self::new(lower, upper)
    }

    /// A falling function.
    fn falling(&self, f: impl Fn(&mut Float, Round) -> Ordering) -> Self {
        let (mut lower, mut upper) = (self.upper.clone(), self.lower.clone());
        let _ = f(&mut lower, Round::Down);
        let _ = f(&mut upper, Round::Up);
        Self::new(lower, upper)
    }

    /// e^x.
    #[must_use]
    pub fn exp(&self) -> Self {
        self.rising(Float::exp_round)
    }

    /// 2^x.
    #[must_use]
    pub fn exp2(&self) -> Self {
        self.rising(Float::exp2_round)
    }

    /// e^x - 1.
    #[must_use]
    pub fn expm1(&self) -> Self {
        self.rising(Float::exp_m1_round)
    }

    /// Natural logarithm; `None` unless x > 0.
    #[must_use]
    pub fn log(&self) -> Option<Self> {
        self.is_positive().then(|| self.rising(Float::ln_round))
    }

    /// log2; `None` unless x > 0.
    #[must_use]
    pub fn log2(&self) -> Option<Self> {
        self.is_positive().then(|| self.rising(Float::log2_round))
    }

    /// log10; `None` unless x > 0.
    #[must_use]
    pub fn log10(&self) -> Option<Self> {
        self.is_positive().then(|| self.rising(Float::log10_round))
    }

    /// log(1+x); `None` unless x > -1.
    #[must_use]
    pub fn log1p(&self) -> Option<Self> {
        (self.lower > -1).then(|| self.rising(Float::ln_1p_round))
    }

    /// Square root; `None` unless x >= 0.
    #[must_use]
    pub fn sqrt(&self) -> Option<Self> {
        (self.lower >= 0).then(|| self.abs().rising(Float::sqrt_round))
    }

    /// Real cube root.
    #[must_use]
    pub fn cbrt(&self) -> Self {
        self.rising(Float::cbrt_round)
    }

    /// Arcsine; `None` unless -1 <= x <= 1.
    #[must_use]
    pub fn asin(&self) -> Option<Self> {
        (self.lower >= -1 && self.upper <= 1).then(|| self.rising(Float::asin_round))
    }

    /// Arccosine; `None` unless -1 <= x <= 1.
    #[must_use]
    pub fn acos(&self) -> Option<Self> {
        (self.lower >= -1 && self.upper <= 1).then(|| self.falling(Float::acos_round))
    }

    /// Arctangent.
    #[must_use]
    pub fn atan(&self) -> Self {
        self.rising(Float::atan_round)
    }

    /// Hyperbolic sine.
    #[must_use]
    pub fn sinh(&self) -> Self {
        self.rising(Float::sinh_round)
    }

    /// Hyperbolic cosine: even, rising on x >= 0.
    #[must_use]
    pub fn cosh(&self) -> Self {
        self.abs().rising(Float::cosh_round)
    }

    /// Hyperbolic tangent.
    #[must_use]
    pub fn tanh(&self) -> Self {
        self.rising(Float::tanh_round)
    }

    /// Inverse hyperbolic sine.
    #[must_use]
    pub fn asinh(&self) -> Self {
        self.rising(Float::asinh_round)
    }

    /// Inverse hyperbolic cosine; `None` unless x >= 1.
    #[must_use]
    pub fn acosh(&self) -> Option<Self> {
        (self.lower >= 1).then(|| self.rising(Float::acosh_round))
    }

    /// Inverse hyperbolic tangent; `None` unless -1 < x < 1.
    #[must_use]
    pub fn atanh(&self) -> Option<Self> {
        (self.lower > -1 && self.upper < 1).then(|| self.rising(Float::atanh_round))
    }

    /// Error function.
    #[must_use]
    pub fn erf(&self) -> Self {
        self.rising(Float::erf_round)
    }

    /// Complementary error function.
    #[must_use]
    pub fn erfc(&self) -> Self {
        self.falling(Float::erfc_round)
    }

    /// x^q for a rational q that is not an integer: exp(q log x) for x > 0; with q > 0 also x = 0,
    /// where the power is 0.
    #[must_use]
    pub fn pow_rational(&self, q: &Rational) -> Option<Self> {
        if self.lower < 0 || (self.lower == 0 && *q <= 0) {
            return None;
        }
        let exponent = Self::from_rational(q, self.precision());
        if self.lower > 0 {
            return Some(exponent.mul(&self.log()?).exp());
        }
        if self.upper == 0 {
            return Some(Self::zero(self.precision()));
        }
        // Rising from 0.
        let top = Self {
            lower: self.upper.clone(),
            upper: self.upper.clone(),
        };
        let top = exponent.mul(&top.log()?).exp();
        Some(Self {
            lower: Float::new(self.precision()),
            upper: top.upper,
        })
    }

    /// Cosine.
    ///
    /// With q = x/pi enclosed outward, the extremes of cos on [a, b] are at integers between the
    /// lower end of q(a) and the upper end of q(b): an even one gives 1, an odd one -1. Counting
    /// one too many only widens the result. Without any, cos is monotone on [a, b] and its values
    /// at the ends enclose it.
    #[must_use]
    pub fn cos(&self) -> Self {
        self.trigonometric(&Rational::new(), Float::cos_round)
    }

    /// Sine: cos(x - pi/2), so its extremes are where x/pi - 1/2 is an integer.
    #[must_use]
    pub fn sin(&self) -> Self {
        self.trigonometric(&Rational::from((1, 2)), Float::sin_round)
    }

    fn trigonometric(&self, shift: &Rational, f: impl Fn(&mut Float, Round) -> Ordering) -> Self {
        let precision = self.precision();
        let one = Self {
            lower: Float::with_val(precision, -1),
            upper: Float::with_val(precision, 1),
        };
        if !self.is_finite() {
            return one;
        }
        let exponent = [&self.lower, &self.upper]
            .iter()
            .filter_map(|x| x.get_exp())
            .max()
            .unwrap_or(0);
        if exponent > 4096 {
            return one;
        }
        // Enough bits that the quotient is known to a small fraction of 1.
        let working = precision + exponent.max(0).unsigned_abs() + 16;
        let widened = Self {
            lower: Float::with_val(working, &self.lower),
            upper: Float::with_val(working, &self.upper),
        };
        let Some(turns) = widened.div(&Self::pi(working)) else {
            return one;
        };
        let turns = turns.sub(&Self::from_rational(shift, working));
        let first = turns.lower.clone().ceil().to_integer();
        let last = turns.upper.clone().floor().to_integer();
        let (Some(first), Some(last)) = (first, last) else {
            return one;
        };
        let (mut minus, mut plus) = (false, false);
        if first <= last {
            if Integer::from(&last - &first) >= 1 {
                (minus, plus) = (true, true);
            } else if first.is_even() {
                plus = true;
            } else {
                minus = true;
            }
        }
        let value = |x: &Float, round| {
            let mut y = x.clone();
            let _ = f(&mut y, round);
            y
        };
        let lower = if minus {
            Float::with_val(precision, -1)
        } else {
            let (a, b) = (
                value(&self.lower, Round::Down),
                value(&self.upper, Round::Down),
            );
            if a <= b { a } else { b }
        };
        let upper = if plus {
            Float::with_val(precision, 1)
        } else {
            let (a, b) = (value(&self.lower, Round::Up), value(&self.upper, Round::Up));
            if a >= b { a } else { b }
        };
        Self::new(lower, upper)
    }

    /// Tangent; `None` unless no pole (x/pi - 1/2 an integer) may lie in the interval; then it
    /// rises.
    #[must_use]
    pub fn tan(&self) -> Option<Self> {
        if !self.is_finite() {
            return None;
        }
        if self.cos().contains_zero() {
            return None;
        }
        Some(self.rising(Float::tan_round))
    }
}
