//! Exponentials, logarithms and roots of complex rectangles.

use rug::float::Round;
use rug::{Float, Rational};

use super::Rectangle;
use crate::number::wide_interval::WideInterval;

impl Rectangle {
    /// e^z = e^x (cos y + i sin y).
    #[must_use]
    pub fn exp(&self) -> Self {
        let size = self.real.exp();
        let (sine, cosine) = self.imaginary.sin_cos();
        Self::new(size.mul(&cosine), size.mul(&sine))
    }

    /// 2^z = e^(z log 2).
    #[must_use]
    pub fn exp2(&self) -> Self {
        let size = self.real.exp2();
        let angle = self
            .imaginary
            .mul(&WideInterval::log_of_two(self.precision()));
        let (sine, cosine) = angle.sin_cos();
        Self::new(size.mul(&cosine), size.mul(&sine))
    }

    /// e^z - 1, with relative accuracy near 0 by
    /// Re(e^z - 1) = (e^x - 1) cos y - 2 sin^2(y/2).
    #[must_use]
    pub fn expm1(&self) -> Self {
        let value = self.exp();
        let direct = value.real.sub(&self.integer(1));
        if self.real.magnitude() > 0.125 || self.imaginary.magnitude() > 0.125 {
            return Self::new(direct, value.imaginary);
        }
        let deficit = self.imaginary.half().sin().square().double();
        let real = self.real.expm1().mul(&self.imaginary.cos()).sub(&deficit);
        Self::new(real.intersection(&direct).unwrap_or(real), value.imaginary)
    }

    /// Principal logarithm log|z| + i arg z; `None` if the rectangle meets (-inf, 0].
    ///
    /// log|z| = log(x^2 + y^2)/2.
    #[must_use]
    pub fn log(&self) -> Option<Self> {
        let argument = WideInterval::argument(&self.real, &self.imaginary)?;
        let square = self.real.square().add(&self.imaginary.square());
        Some(Self::new(square.log()?.half(), argument))
    }

    /// The branch of the logarithm that has the argument `turns` pi/2 + arg(i^-turns z), where
    /// the rotated rectangle must lie in the half plane Re > 0; otherwise `None`.
    #[must_use]
    pub fn log_turned(&self, turns: i64) -> Option<Self> {
        if turns == 0 {
            return self.log();
        }
        let turned = self.turned(turns.checked_neg()?);
        if !turned.real.is_positive() {
            return None;
        }
        let value = turned.log()?;
        let angle = WideInterval::pi(self.precision())
            .mul(&self.integer(turns))
            .half();
        Some(Self::new(value.real, value.imaginary.add(&angle)))
    }

    /// log(1 + z); `None` if the rectangle meets (-inf, -1].
    ///
    /// With relative accuracy near 0: |1 + z|^2 = 1 + x (2 + x) + y^2, where x (2 + x) rises on
    /// x >= -1.
    #[must_use]
    pub fn log1p(&self) -> Option<Self> {
        let sum = self.add_real(&self.integer(1));
        if *self.real.lower() < -0.5 {
            return sum.log();
        }
        let argument = WideInterval::argument(&sum.real, &self.imaginary)?;
        let precision = self.precision();
        // The product of a negative x is rounded outward by a factor rounded the other way.
        let end = |x: &Float, round: Round, opposite: Round| {
            let towards = if *x < 0 { opposite } else { round };
            let factor = Float::with_val_round(precision, x + 2u32, towards).0;
            Float::with_val_round(precision, x * &factor, round).0
        };
        let shift = WideInterval::new(
            end(self.real.lower(), Round::Down, Round::Up),
            end(self.real.upper(), Round::Up, Round::Down),
        );
        let logarithm = shift.add(&self.imaginary.square()).log1p()?;
        Some(Self::new(logarithm.half(), argument))
    }

    /// The principal square root; `None` if the rectangle meets (-inf, 0].
    ///
    /// With r = |z| the root is sqrt((r + x)/2) + i sign(y) sqrt((r - x)/2). Its real part rises
    /// with x and with |y| (the derivative of r with x is >= -1). Its imaginary part rises with y,
    /// and its modulus falls with x.
    #[must_use]
    pub fn sqrt(&self) -> Option<Self> {
        if self.meets_negative_axis() {
            return None;
        }
        let (x, y) = (&self.real, &self.imaginary);
        let real = WideInterval::new(
            root_real(x.lower(), &y.mignitude(), Round::Down),
            root_real(x.upper(), &y.magnitude(), Round::Up),
        );
        let at = |y: &Float, round: Round| {
            // Upward for a positive imaginary part means to the left, for a negative one to the
            // right.
            let outward = (round == Round::Up) == (*y >= 0);
            let x = if outward { x.lower() } else { x.upper() };
            let towards = if outward { Round::Up } else { Round::Down };
            let size = root_imaginary(x, &Float::with_val(y.prec(), y.abs_ref()), towards);
            if *y < 0 { -size } else { size }
        };
        let imaginary = WideInterval::new(at(y.lower(), Round::Down), at(y.upper(), Round::Up));
        Some(Self::new(real, imaginary))
    }

    /// The branch of the square root with half the argument of
    /// [`log_turned`](Self::log_turned); `None` where that is.
    ///
    /// With the argument brought to (-pi, 3 pi/2) by m full turns, each of which changes the sign
    /// of the root, the principal root serves up to a quarter turn, and sqrt(z) = i sqrt(-z) for a
    /// half turn.
    #[must_use]
    pub fn sqrt_turned(&self, turns: i64) -> Option<Self> {
        if turns != 0 && !self.turned(turns.checked_neg()?).real.is_positive() {
            return None;
        }
        let quarter = turns.rem_euclid(4);
        let full = turns.div_euclid(4) + i64::from(quarter == 3);
        let root = if quarter == 2 {
            self.neg().sqrt()?.turned(1)
        } else {
            self.sqrt()?
        };
        Some(root.turned(2 * (full % 2)))
    }

    /// Principal power z^q = exp(q log z); `None` if the rectangle meets (-inf, 0].
    #[must_use]
    pub fn pow_rational(&self, q: &Rational) -> Option<Self> {
        self.pow_rational_turned(q, 0)
    }

    /// exp(q L) with the branch L of [`log_turned`](Self::log_turned); `None` where that is.
    #[must_use]
    pub fn pow_rational_turned(&self, q: &Rational, turns: i64) -> Option<Self> {
        let q = WideInterval::from_rational(q, self.precision());
        Some(self.log_turned(turns)?.scale(&q).exp())
    }

    /// The analytic continuation of the real cube root from the positive real numbers to the
    /// plane without (-inf, 0], or from the negative ones to the plane without [0, inf), as
    /// -cbrt(-z): the former if the rectangle fits, the latter if it only fits there (and wherever
    /// the rectangle lies in Re z < 0). `None` if it fits neither.
    #[must_use]
    pub fn cbrt(&self) -> Option<Self> {
        let third = Rational::from((1, 3));
        if self.real.is_negative() || self.meets_negative_axis() {
            return Some(self.neg().pow_rational(&third)?.neg());
        }
        self.pow_rational(&third)
    }

    /// Binary logarithm, on the domain of [`log`](Self::log).
    #[must_use]
    pub fn log2(&self) -> Option<Self> {
        self.log()?
            .div_real(&WideInterval::log_of_two(self.precision()))
    }

    /// Decimal logarithm, on the domain of [`log`](Self::log).
    #[must_use]
    pub fn log10(&self) -> Option<Self> {
        self.log()?.div_real(&self.integer(10).log()?)
    }
}

/// sqrt((r + x)/2), y >= 0, r = |x + iy|; for x < 0 as y / (2 sqrt((r - x)/2)), which does not
/// cancel. The result is NaN only where y is infinite, which leaves an interval unbounded.
fn root_real(x: &Float, y: &Float, round: Round) -> Float {
    if *x >= 0 {
        return half_sum_root(x, y, round);
    }
    cofactor(&Float::with_val(x.prec(), -x), y, round)
}

/// sqrt((r - x)/2), y >= 0.
fn root_imaginary(x: &Float, y: &Float, round: Round) -> Float {
    if *x >= 0 {
        return cofactor(x, y, round);
    }
    half_sum_root(&Float::with_val(x.prec(), -x), y, round)
}

/// sqrt((r + x)/2) for x >= 0 and y >= 0.
fn half_sum_root(x: &Float, y: &Float, round: Round) -> Float {
    let mut result = y.clone();
    result.hypot_round(x, round);
    result = Float::with_val_round(x.prec(), &result + x, round).0;
    result = Float::with_val_round(x.prec(), &result >> 1u32, round).0;
    result.sqrt_round(round);
    result
}

/// y / (2 sqrt((r + x)/2)) for x >= 0 and y >= 0: 0 for y = 0.
fn cofactor(x: &Float, y: &Float, round: Round) -> Float {
    if y.is_zero() {
        return Float::new(x.prec());
    }
    let opposite = if round == Round::Down {
        Round::Up
    } else {
        Round::Down
    };
    let root = half_sum_root(x, y, opposite);
    let divisor = Float::with_val_round(x.prec(), &root << 1u32, opposite).0;
    Float::with_val_round(x.prec(), y / &divisor, round).0
}
