//! Monotone elementary functions: MPFR rounds the value at each end correctly in its direction.

use std::cmp::Ordering;

use rug::Float;
use rug::float::Round;

use super::WideInterval;

impl WideInterval {
    /// A function that does not fall.
    #[inline]
    pub(super) fn rising(&self, f: impl Fn(&mut Float, Round) -> Ordering) -> Self {
        let (mut lower, mut upper) = (self.lower.clone(), self.upper.clone());
        f(&mut lower, Round::Down);
        f(&mut upper, Round::Up);
        Self { lower, upper }
    }

    /// A function that does not rise.
    #[inline]
    pub(super) fn falling(&self, f: impl Fn(&mut Float, Round) -> Ordering) -> Self {
        let (mut lower, mut upper) = (self.upper.clone(), self.lower.clone());
        f(&mut lower, Round::Down);
        f(&mut upper, Round::Up);
        Self { lower, upper }
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

    /// Binary logarithm; `None` unless x > 0.
    #[must_use]
    pub fn log2(&self) -> Option<Self> {
        self.is_positive().then(|| self.rising(Float::log2_round))
    }

    /// Decimal logarithm; `None` unless x > 0.
    #[must_use]
    pub fn log10(&self) -> Option<Self> {
        self.is_positive().then(|| self.rising(Float::log10_round))
    }

    /// log(1 + x); `None` unless x > -1.
    #[must_use]
    pub fn log1p(&self) -> Option<Self> {
        (self.lower > -1).then(|| self.rising(Float::ln_1p_round))
    }

    /// Square root; `None` unless x >= 0.
    #[must_use]
    pub fn sqrt(&self) -> Option<Self> {
        (self.lower >= 0).then(|| self.rising(Float::sqrt_round))
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
}
