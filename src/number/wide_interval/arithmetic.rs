//! Field operations, moduli and powers of intervals.

use rug::float::Round;
use rug::ops::PowAssignRound;
use rug::{Float, Rational};

use super::{WideInterval, larger, smaller};

/// a b rounded; 0 times infinity is 0: the infinite end stands for arbitrarily large numbers, and
/// 0 times each of them is 0.
#[inline]
fn product(precision: u32, a: &Float, b: &Float, round: Round) -> Float {
    if a.is_zero() || b.is_zero() {
        return Float::new(precision);
    }
    Float::with_val_round(precision, a * b, round).0
}

/// a / b rounded, b != 0.
#[inline]
fn quotient(precision: u32, a: &Float, b: &Float, round: Round) -> Float {
    if a.is_zero() {
        return Float::new(precision);
    }
    Float::with_val_round(precision, a / b, round).0
}

#[allow(
    clippy::should_implement_trait,
    reason = "an operator would hide that the result is rounded outward"
)]
impl WideInterval {
    /// -x, exact.
    #[must_use]
    pub fn neg(&self) -> Self {
        let precision = self.precision();
        Self {
            lower: Float::with_val(precision, -&self.upper),
            upper: Float::with_val(precision, -&self.lower),
        }
    }

    /// x + y.
    #[must_use]
    #[inline]
    pub fn add(&self, other: &Self) -> Self {
        let precision = self.precision().max(other.precision());
        Self {
            lower: Float::with_val_round(precision, &self.lower + &other.lower, Round::Down).0,
            upper: Float::with_val_round(precision, &self.upper + &other.upper, Round::Up).0,
        }
    }

    /// x - y.
    #[must_use]
    #[inline]
    pub fn sub(&self, other: &Self) -> Self {
        let precision = self.precision().max(other.precision());
        Self {
            lower: Float::with_val_round(precision, &self.lower - &other.upper, Round::Down).0,
            upper: Float::with_val_round(precision, &self.upper - &other.lower, Round::Up).0,
        }
    }

    /// x y.
    ///
    /// The ends by the signs of the factors [a, b] and [c, d]; only where both straddle 0 are there
    /// two candidates for each end.
    ///
    /// | | c >= 0 | d <= 0 | c < 0 < d |
    /// |---|---|---|---|
    /// | a >= 0 | ac, bd | bc, ad | bc, bd |
    /// | b <= 0 | ad, bc | bd, ac | ad, ac |
    /// | a < 0 < b | ad, bd | bc, ac | min(ad, bc), max(ac, bd) |
    #[must_use]
    pub fn mul(&self, other: &Self) -> Self {
        let precision = self.precision().max(other.precision());
        let down = |x: &Float, y: &Float| product(precision, x, y, Round::Down);
        let up = |x: &Float, y: &Float| product(precision, x, y, Round::Up);
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
            (smaller(down(a, d), down(b, c)), larger(up(a, c), up(b, d)))
        };
        Self { lower, upper }
    }

    /// x / y; `None` if y may be 0.
    ///
    /// For [c, d] > 0 the lower end a/d (a >= 0) or a/c (a < 0) and the upper end b/c or b/d; for
    /// [c, d] < 0 the quotient of the negatives.
    #[must_use]
    pub fn div(&self, other: &Self) -> Option<Self> {
        if other.contains_zero() {
            return None;
        }
        let precision = self.precision().max(other.precision());
        let (a, b, c, d) = (&self.lower, &self.upper, &other.lower, &other.upper);
        let (low, high) = if *c > 0 {
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
        Some(Self {
            lower: quotient(precision, low.0, low.1, Round::Down),
            upper: quotient(precision, high.0, high.1, Round::Up),
        })
    }

    /// x / 2, exact but for an underflow.
    #[must_use]
    pub fn half(&self) -> Self {
        let precision = self.precision();
        Self {
            lower: Float::with_val_round(precision, &self.lower >> 1u32, Round::Down).0,
            upper: Float::with_val_round(precision, &self.upper >> 1u32, Round::Up).0,
        }
    }

    /// 2 x, exact but for an overflow.
    #[must_use]
    pub fn double(&self) -> Self {
        let precision = self.precision();
        Self {
            lower: Float::with_val_round(precision, &self.lower << 1u32, Round::Down).0,
            upper: Float::with_val_round(precision, &self.upper << 1u32, Round::Up).0,
        }
    }

    /// |x|.
    #[must_use]
    pub fn abs(&self) -> Self {
        Self {
            lower: self.mignitude(),
            upper: self.magnitude(),
        }
    }

    /// x^2.
    #[must_use]
    pub fn square(&self) -> Self {
        let Self {
            mut lower,
            mut upper,
        } = self.abs();
        lower.square_round(Round::Down);
        upper.square_round(Round::Up);
        Self { lower, upper }
    }

    /// x^n; `None` for a negative n if x may be 0. 0^0 = 1.
    ///
    /// x^n is |x|^n for an even n, so that the base can be taken monotone: t^n rises on t >= 0
    /// (on the real line for an odd n) for n > 0, and falls on each side of 0 for n < 0. MPFR
    /// rounds the power of each end correctly.
    #[must_use]
    pub fn pow_integer(&self, n: i32) -> Option<Self> {
        let precision = self.precision();
        match n {
            0 => return Some(Self::from_integer(1, precision)),
            1 => return Some(self.clone()),
            2 => return Some(self.square()),
            _ => {}
        }
        if n < 0 && self.contains_zero() {
            return None;
        }
        let Self {
            mut lower,
            mut upper,
        } = if n % 2 == 0 { self.abs() } else { self.clone() };
        if n < 0 {
            std::mem::swap(&mut lower, &mut upper);
        }
        lower.pow_assign_round(n, Round::Down);
        upper.pow_assign_round(n, Round::Up);
        Some(Self { lower, upper })
    }

    /// x^q for x >= 0 and q > 0, or x > 0; otherwise `None`.
    ///
    /// For q > 0 the power rises with the base, for q < 0 it falls. In the exponent it rises where
    /// the base is >= 1 and falls where it is <= 1: so each end is the power of one end of the
    /// base by one end of an enclosure of q, rounded correctly by MPFR. The enclosure of q has
    /// guard bits because the power multiplies its relative error by |q log(base)|.
    #[must_use]
    pub fn pow_rational(&self, q: &Rational) -> Option<Self> {
        const GUARD_BITS: u32 = 64;
        if q.is_zero() {
            return (self.lower >= 0).then(|| Self::from_integer(1, self.precision()));
        }
        let rises = *q > 0;
        if self.lower < 0 || (self.lower.is_zero() && !rises) {
            return None;
        }
        if *q == Rational::from((1, 2)) {
            return self.sqrt();
        }
        let exponent = Self::from_rational(q, self.precision() + GUARD_BITS);
        let power = |base: &Float, round: Round| {
            let mut result = base.clone();
            let large = *base >= 1;
            let low = matches!(round, Round::Down) == large;
            let end = if low {
                &exponent.lower
            } else {
                &exponent.upper
            };
            result.pow_assign_round(end, round);
            result
        };
        let (low, high) = if rises {
            (&self.lower, &self.upper)
        } else {
            (&self.upper, &self.lower)
        };
        Some(Self {
            lower: power(low, Round::Down),
            upper: power(high, Round::Up),
        })
    }
}
