//! Sine, cosine and tangent, which are not monotone.

use rug::Float;
use rug::float::Round;

use super::Ball;
use super::functions::Trend;
use crate::number::radius::{RADIUS_BITS, Radius};

/// Arguments from 2^EXPONENT_MAX on are not reduced by multiples of pi/2, which would take as many
/// bits of pi as their exponent: sine and cosine are only bounded by 1 there, a tangent is refused.
const EXPONENT_MAX: i32 = 1 << 17;

impl Ball {
    /// {sin x} and {cos x}.
    ///
    /// With |d| <= r, s = sin m, c = cos m: sin(m + d) - s = s (cos d - 1) + c sin d and
    /// cos(m + d) - c = c (cos d - 1) - s sin d, where |cos d - 1| <= d^2/2 and |sin d| <= |d|.
    /// So |sin(m + d) - s| <= |c| r + |s| r^2/2, and |cos(m + d) - c| <= |s| r + |c| r^2/2; both
    /// are also at most r by the mean value theorem. The balls are then intersected with [-1, 1],
    /// up to the rounding of the ball.
    #[must_use]
    pub fn sin_cos(&self) -> (Self, Self) {
        let precision = self.precision();
        if !self.is_finite() || self.is_huge() {
            return (
                Self::unit_interval(precision),
                Self::unit_interval(precision),
            );
        }
        let mut sine = self.midpoint.clone();
        let mut cosine = Float::new(precision);
        let (sine_ternary, cosine_ternary) = sine.sin_cos_round(&mut cosine, Round::Nearest);
        let mut sine = Self::rounded_to(sine, sine_ternary, Radius::ZERO);
        let mut cosine = Self::rounded_to(cosine, cosine_ternary, Radius::ZERO);
        if !self.is_exact() {
            let radius = self.radius;
            let half_square = radius.mul(radius).mul_power_of_two(-1);
            let (s, c) = (sine.magnitude_upper(), cosine.magnitude_upper());
            sine.add_error(c.mul(radius).add(s.mul(half_square)).min(radius));
            cosine.add_error(s.mul(radius).add(c.mul(half_square)).min(radius));
        }
        (sine.within_unit(), cosine.within_unit())
    }

    /// {sin x}, as in [`sin_cos`](Self::sin_cos); exact for an exact 0.
    #[must_use]
    pub fn sin(&self) -> Self {
        if self.is_exact() && !self.is_huge() {
            let mut value = self.midpoint.clone();
            let ternary = value.sin_round(Round::Nearest);
            return Self::rounded_to(value, ternary, Radius::ZERO).within_unit();
        }
        self.sin_cos().0
    }

    /// {cos x}, as in [`sin_cos`](Self::sin_cos); exactly 1 for an exact 0.
    #[must_use]
    pub fn cos(&self) -> Self {
        if self.is_exact() && !self.is_huge() {
            let mut value = self.midpoint.clone();
            let ternary = value.cos_round(Round::Nearest);
            return Self::rounded_to(value, ternary, Radius::ZERO).within_unit();
        }
        self.sin_cos().1
    }

    /// {sin x / cos x}, or `None` unless the ball is proved to contain no zero of the cosine.
    ///
    /// The zeros of the cosine are simple and pi apart. If the cosine has the same sign at both ends
    /// it has an even number of zeros between them, and none if the ends are less than pi apart.
    /// Then the tangent is increasing from end to end. MPFR rounds correctly, so the sign of the
    /// rounded cosine is proved.
    #[must_use]
    pub fn tan(&self) -> Option<Self> {
        if !self.is_finite() || self.is_huge() {
            return None;
        }
        let no_pole = |lower: &Float, upper: &Float| {
            let (width, _) = Float::with_val_round(RADIUS_BITS, upper - lower, Round::Up);
            if width > 3 {
                return false;
            }
            let (first, _) = Float::with_val_round(2, lower.cos_ref(), Round::Zero);
            let (last, _) = Float::with_val_round(2, upper.cos_ref(), Round::Zero);
            (first > 0 && last > 0) || (first < 0 && last < 0)
        };
        self.monotone_on(no_pole, Trend::Increasing, |value, round| {
            value.tan_round(round)
        })
    }

    /// The interval [-1, 1].
    fn unit_interval(precision: u32) -> Self {
        Self {
            midpoint: Float::new(precision),
            radius: Radius::ONE,
        }
    }

    /// Whether the midpoint is too large for a reduction by multiples of pi/2.
    fn is_huge(&self) -> bool {
        self.midpoint
            .get_exp()
            .is_some_and(|exponent| exponent > EXPONENT_MAX)
    }

    /// The intersection with [-1, 1] of a ball that meets it; the ball itself if it is exact.
    fn within_unit(self) -> Self {
        if self.magnitude_upper() <= Radius::ONE {
            return self;
        }
        let (lower, upper) = self.ends();
        if lower >= -1 && upper <= 1 {
            return self;
        }
        let precision = self.precision();
        let one = Float::with_val(precision, 1);
        let minus_one = Float::with_val(precision, -1);
        Self::from_bounds(&lower.max(&minus_one), &upper.min(&one), precision)
    }
}
