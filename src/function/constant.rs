//! Constants of an audit: ends of pieces and claims, knots, origins and scales.

use rug::Rational;

use super::formula::{Formula, FormulaBuilder, Operation};
use super::parser::{SyntaxError, parse_formula};
use crate::number::literal;

#[cfg(test)]
mod tests;

/// Parts of a + b pi with more bits than this are not kept exactly.
const EXACT_BITS: u32 = 200_000;

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
