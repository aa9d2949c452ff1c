//! Constants of an audit: ends of pieces and claims, knots, origins and scales.

use rug::float::{Round, Special};
use rug::{Float, Rational};

use super::formula::{Formula, FormulaBuilder, Operation};
use super::parser::{SyntaxError, parse_formula};
use super::range::range;
use crate::number::ball::Ball;
use crate::number::literal;
use crate::number::wide_interval::WideInterval;

#[cfg(test)]
mod tests;

/// Parts of a + b pi with more bits than this are not kept exactly.
const EXACT_BITS: u32 = 200_000;

/// Largest exponent of a bound in modulus; above that of any a + b pi that is kept exactly.
const EXPONENT_LIMIT: i64 = 400_000;

/// Bits beyond a ball's precision in which its ends are computed, so that its radius stays a few
/// units in the last place.
const GUARD_BITS: u32 = 16;

/// A real number given by a literal such as `2^-58` or a constant formula such as `pi/4`.
#[derive(Clone, Debug)]
pub struct Constant {
    formula: Formula,
    /// `a` and `b` where the value is known to be a + b pi.
    exact: Option<(Rational, Rational)>,
}

impl Constant {
    /// Reads a literal of [`literal`] or else a formula without `x`.
    ///
    /// # Errors
    ///
    /// The text is neither. Whether the formula has a value is not asked: `1/0` is read.
    pub fn parse(text: &str) -> Result<Self, SyntaxError> {
        if let Ok(value) = literal::parse(text) {
            return Ok(Self::with_text(text, value));
        }
        let formula = parse_formula(text)?;
        let variable = formula
            .operations()
            .iter()
            .position(|o| *o == Operation::Variable);
        if let Some(node) = variable {
            let message = "a constant does not depend on x".to_string();
            return Err(SyntaxError {
                span: formula.span(node),
                message,
                advice: None,
            });
        }
        let exact = combination_with_pi(&formula);
        Ok(Self { formula, exact })
    }

    /// The text as the user wrote it.
    pub fn text(&self) -> &str {
        self.formula.text()
    }

    /// The value as a formula without `x`.
    pub fn formula(&self) -> &Formula {
        &self.formula
    }

    /// The value where it is known to be rational. `None` does not mean that it is irrational.
    pub fn as_rational(&self) -> Option<&Rational> {
        self.exact
            .as_ref()
            .filter(|(_, b)| b.is_zero())
            .map(|(a, _)| a)
    }

    /// Rational `a` and `b` where the value is known to be exactly a + b pi.
    pub fn pi_multiple(&self) -> Option<(Rational, Rational)> {
        self.exact.clone()
    }

    /// Rational bounds of the value, or `None` where it could not be shown to exist (`1/0`).
    ///
    /// A rational value that is known gives two equal bounds. Otherwise every operation of the
    /// formula is enclosed with ends of `precision` bits rounded outward, so the bounds contain the
    /// value whatever its operations lose; the usual width is a few units in the last place of
    /// the largest intermediate result. There are no bounds either where they would be beyond
    /// 2^400000, and a bound within 2^-400000 of zero moves outward to zero or to that number.
    pub fn enclosure(&self, precision: u32) -> Option<(Rational, Rational)> {
        if let Some(value) = self.as_rational() {
            return Some((value.clone(), value.clone()));
        }
        let value = self.interval(precision)?;
        Some((
            outward(value.lower(), Round::Down)?,
            outward(value.upper(), Round::Up)?,
        ))
    }

    /// A ball that contains the value, or `None` where it could not be shown to exist.
    pub fn ball(&self, precision: u32) -> Option<Ball> {
        if let Some(value) = self.as_rational() {
            return Some(Ball::from_rational(value, precision));
        }
        let value = self.interval(precision.saturating_add(GUARD_BITS))?;
        Some(Ball::from_bounds(value.lower(), value.upper(), precision))
    }

    /// Encloses the value, rounded outward; the whole line where it could not be shown to exist.
    pub fn wide_interval(&self, precision: u32) -> WideInterval {
        match self.as_rational() {
            Some(value) => WideInterval::from_rational(value, precision),
            None => self.interval(precision).unwrap_or_else(|| {
                let end = |special| Float::with_val(precision, special);
                WideInterval::new(end(Special::NegInfinity), end(Special::Infinity))
            }),
        }
    }

    /// Encloses a value that is not known to be rational.
    fn interval(&self, precision: u32) -> Option<WideInterval> {
        let value = match &self.exact {
            // One sum instead of all operations, so nothing cancels twice.
            Some((a, b)) => WideInterval::pi(precision)
                .mul(&WideInterval::from_rational(b, precision))
                .add(&WideInterval::from_rational(a, precision)),
            // The formula does not use its argument.
            None => range(&self.formula, &WideInterval::zero(precision)).ok()?,
        };
        value.is_finite().then_some(value)
    }

    fn with_text(text: &str, value: Rational) -> Self {
        let mut builder = FormulaBuilder::new(text);
        let root = builder.push(Operation::Rational(value.clone()), 0..text.len());
        Self {
            formula: builder.finish(root),
            exact: Some((value, Rational::new())),
        }
    }
}

impl From<Rational> for Constant {
    /// The text is that of a whole number or a ratio.
    fn from(value: Rational) -> Self {
        Self::with_text(&value.to_string(), value)
    }
}

/// A bound as a rational number, moved outward where its exponent would fill the memory.
fn outward(bound: &Float, direction: Round) -> Option<Rational> {
    let exponent = i64::from(bound.get_exp().unwrap_or(0));
    if exponent > EXPONENT_LIMIT {
        return None;
    }
    if exponent >= -EXPONENT_LIMIT {
        return bound.to_rational();
    }
    let least = Rational::from(1) >> EXPONENT_LIMIT as usize;
    Some(match (bound.is_sign_negative(), direction) {
        (true, Round::Down) => -least,
        (false, Round::Up) => least,
        _ => Rational::new(),
    })
}

/// The value of a constant formula as a + b pi, computed exactly from operand to operation.
///
/// Such numbers form a vector space over the rational ones, which covers sums, differences,
/// negatives, and products and quotients by rational numbers. Since pi is irrational, a and b are
/// unique, and a + b pi = 0 only if a = b = 0: division by 0 is recognised exactly.
fn combination_with_pi(formula: &Formula) -> Option<(Rational, Rational)> {
    let mut values: Vec<Option<(Rational, Rational)>> = Vec::new();
    for operation in formula.operations() {
        let value = combination(operation, &values).filter(|(a, b)| is_small(a) && is_small(b));
        values.push(value);
    }
    values.swap_remove(formula.root())
}

fn combination(
    operation: &Operation,
    values: &[Option<(Rational, Rational)>],
) -> Option<(Rational, Rational)> {
    let known = |node: usize| values[node].as_ref();
    let scaled = |(a, b): &(Rational, Rational), factor: &Rational| {
        (Rational::from(a * factor), Rational::from(b * factor))
    };
    Some(match operation {
        Operation::Rational(value) => (value.clone(), Rational::new()),
        Operation::Pi => (Rational::new(), Rational::from(1)),
        Operation::Negate(u) => scaled(known(*u)?, &Rational::from(-1)),
        Operation::Add(u, v) => {
            let ((a, b), (c, d)) = (known(*u)?, known(*v)?);
            (Rational::from(a + c), Rational::from(b + d))
        }
        Operation::Subtract(u, v) => {
            let ((a, b), (c, d)) = (known(*u)?, known(*v)?);
            (Rational::from(a - c), Rational::from(b - d))
        }
        Operation::Multiply(u, v) => {
            let (u, v) = (known(*u)?, known(*v)?);
            match (u.1.is_zero(), v.1.is_zero()) {
                (true, _) => scaled(v, &u.0),
                (false, true) => scaled(u, &v.0),
                (false, false) => return None,
            }
        }
        Operation::Divide(u, v) => {
            let (u, v) = (known(*u)?, known(*v)?);
            match (v.0.is_zero(), v.1.is_zero()) {
                (false, true) => scaled(u, &Rational::from(v.0.recip_ref())),
                (true, false) if u.0.is_zero() => (Rational::from(&u.1 / &v.1), Rational::new()),
                _ => return None,
            }
        }
        Operation::PowerInteger(u, 1) => known(*u)?.clone(),
        _ => return None,
    })
}

fn is_small(value: &Rational) -> bool {
    value.numer().significant_bits() < EXACT_BITS && value.denom().significant_bits() < EXACT_BITS
}
