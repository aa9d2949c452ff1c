//! The value of a constant in the sets that proofs are made of.

use rug::{Float, Rational};

use crate::function::constant::Constant;
use crate::function::exact::Centre;
use crate::function::series::series;
use crate::number::ball::Ball;
use crate::number::wide_interval::WideInterval;

/// Bits beyond those asked for, lost to the operations of a formula.
const GUARD_BITS: u32 = 32;

impl Constant {
    /// Encloses the value; the whole line where the formula has none, as in `1/0`.
    pub fn ball(&self, precision: u32) -> Ball {
        if let Some(value) = self.as_rational() {
            return Ball::from_rational(value, precision);
        }
        // A constant formula is its own series of one term, at any centre.
        let centre = Centre::rational(Rational::new());
        let terms =
            series(self.formula(), &centre, &Float::with_val(2, 1), 1, precision + GUARD_BITS);
        match terms.ok().and_then(|mut terms| terms.pop()) {
            Some(value) => value.with_precision(precision),
            None => Ball::whole(precision),
        }
    }

    /// Encloses the value, rounded outward.
    pub fn wide_interval(&self, precision: u32) -> WideInterval {
        match self.as_rational() {
            Some(value) => WideInterval::from_rational(value, precision),
            None => {
                let ball = self.ball(precision);
                WideInterval::new(ball.lower(), ball.upper())
            }
        }
    }

    /// Rational numbers with the value between them, to about `precision` bits (both equal to it
    /// where it is rational); `None` where the formula has no value.
    pub fn enclosure(&self, precision: u32) -> Option<(Rational, Rational)> {
        if let Some(value) = self.as_rational() {
            return Some((value.clone(), value.clone()));
        }
        let ball = self.ball(precision);
        Some((ball.lower().to_rational()?, ball.upper().to_rational()?))
    }
}
