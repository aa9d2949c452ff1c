//! Formulas and straight-line code in the syntax of C expressions, with real arithmetic.
//!
//! - The argument is `x`; `pi` and `e` (also `M_PI` and `M_E`) are the real constants.
//! - Numbers are decimal or C99 hex-floats and exact: `0.1` is one tenth, `2/3` two thirds.
//! - Operators `+`, `-`, `*`, `/` and parentheses bind as in C; powers are written `pow(a, b)`.
//! - The functions have the names of ISO C: see [`Function`](super::formula::Function), and
//!   `pow(a, b)` and `fma(a, b, c)`, which is a*b + c.
//!
//! Powers with an exponent that is a rational constant are roots and powers in the real sense:
//! `pow(x, 3)` is x*x*x, `pow(x, 1/3)` needs x >= 0. Any other power is exp(b log(a)), a > 0.
//!
//! Reading is a loop with an explicit stack, never recursion, and its work is bounded by
//! [`TEXT_LIMIT`], [`DEPTH_LIMIT`] and [`OPERATION_LIMIT`].

use std::ops::Range;

use super::formula::{Formula, FormulaBuilder};

mod expression;
mod lowering;
mod names;
mod steps;
mod token;

pub use expression::{Element, Expression};
pub use names::{Callable, is_reserved};
pub use steps::{ConstantTable, ConstantValue, ParsedSteps, Step, StepError, parse_steps};

use lowering::{Lowering, Scope};

#[cfg(test)]
mod tests;

/// Most bytes of a formula, or of all steps together: 1 MiB.
pub const TEXT_LIMIT: usize = 1 << 20;
/// Most parentheses, calls and signs inside one another.
pub const DEPTH_LIMIT: usize = 1_000;
/// Most numbers, names, operators and calls of a formula, or of all steps together; `horner` and
/// `clenshaw` count with the operations that they stand for.
pub const OPERATION_LIMIT: usize = 100_000;
/// Largest exponent in `pow(a, b)` in modulus, where it is a rational constant.
pub const POWER_LIMIT: i32 = 1_000_000;

/// A text that is not a formula: where, why, and what to write instead.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
#[error("{message}{}", .advice.as_ref().map(|advice| format!("; {advice}")).unwrap_or_default())]
pub struct SyntaxError {
    /// The bytes of the text that the message is about, always whole characters; empty at the end
    /// of the text where something is missing.
    pub span: Range<usize>,
    pub message: String,
    /// What to write instead, as an order.
    pub advice: Option<String>,
}

impl SyntaxError {
    fn new(span: Range<usize>, message: impl Into<String>) -> Self {
        Self {
            span,
            message: message.into(),
            advice: None,
        }
    }

    fn advise(self, advice: impl Into<String>) -> Self {
        Self {
            advice: Some(advice.into()),
            ..self
        }
    }
}

/// Reads a formula in `x`.
///
/// # Errors
///
/// The text does not follow the syntax of this module or exceeds one of its limits. Whether the
/// formula has a value is not asked: `1/0` and `sqrt(-1)` are read, and refused by evaluation.
pub fn parse_formula(text: &str) -> Result<Formula, SyntaxError> {
    let expression = Expression::parse(text)?;
    let mut builder = FormulaBuilder::new(text);
    let root = Lowering::new(&mut builder).lower(&expression, &Scope::default(), 0)?;
    Ok(builder.finish(root))
}
