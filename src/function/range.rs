//! The range of a formula over a real interval: the natural interval extension.

use crate::function::formula::{Formula, Function, Operation};
use crate::function::refusal::{Refusal, RefusalKind};
use crate::number::wide_interval::WideInterval;

/// Encloses f(x) for every x in `over`; every operation is replaced by its interval version.
///
/// # Errors
///
/// The first operation that may leave its real domain; `proved` if its operand lies wholly
/// outside, so that the formula has no value at any argument of `over`.
pub fn range(formula: &Formula, over: &WideInterval) -> Result<WideInterval, Refusal> {
    let precision = over.precision();
    let mut values: Vec<WideInterval> = Vec::with_capacity(formula.operations().len());
    for (node, operation) in formula.operations().iter().enumerate() {
        let refuse = |kind, proved| Refusal { node, kind, proved };
        let outside = |proved| refuse(RefusalKind::OutsideDomain, proved);
        let value = match operation {
            Operation::Variable => over.clone(),
            Operation::Rational(x) => WideInterval::from_rational(x, precision),
            Operation::Pi => WideInterval::pi(precision),
            Operation::Negate(a) => values[*a].neg(),
            Operation::Add(a, b) => values[*a].add(&values[*b]),
            Operation::Subtract(a, b) => values[*a].sub(&values[*b]),
            Operation::Multiply(a, b) if a == b => values[*a].square(),
            Operation::Multiply(a, b) => values[*a].mul(&values[*b]),
            Operation::Divide(a, b) => {
                let proved = values[*b].is_exact() && !values[*a].contains_zero();
                values[*a]
                    .div(&values[*b])
                    .ok_or(refuse(RefusalKind::DivisionByZero, proved))?
            }
            Operation::PowerInteger(a, n) => {
                let proved = values[*a].is_exact();
                values[*a]
                    .pow_integer(*n)
                    .ok_or(refuse(RefusalKind::DivisionByZero, proved))?
            }
            Operation::PowerRational(a, q) => {
                let x = &values[*a];
                x.pow_rational(q).ok_or(outside(x.is_negative()))?
            }
            Operation::Power(a, b) => {
                let x = &values[*a];
                let logarithm = x.log().ok_or(outside(x.is_negative()))?;
                logarithm.mul(&values[*b]).exp()
            }
            Operation::Apply(function, a) => {
                let x = &values[*a];
                apply(*function, x).ok_or_else(|| outside(wholly_outside(*function, x)))?
            }
        };
        values.push(value);
    }
    values.into_iter().nth(formula.root()).ok_or(Refusal {
        node: formula.root(),
        kind: RefusalKind::Unbounded,
        proved: false,
    })
}

fn apply(function: Function, x: &WideInterval) -> Option<WideInterval> {
    match function {
        Function::Sqrt => x.sqrt(),
        Function::Cbrt => Some(x.cbrt()),
        Function::Exp => Some(x.exp()),
        Function::Exp2 => Some(x.exp2()),
        Function::Expm1 => Some(x.expm1()),
        Function::Log => x.log(),
        Function::Log2 => x.log2(),
        Function::Log10 => x.log10(),
        Function::Log1p => x.log1p(),
        Function::Sin => Some(x.sin()),
        Function::Cos => Some(x.cos()),
        Function::Tan => x.tan(),
        Function::Asin => x.asin(),
        Function::Acos => x.acos(),
        Function::Atan => Some(x.atan()),
        Function::Sinh => Some(x.sinh()),
        Function::Cosh => Some(x.cosh()),
        Function::Tanh => Some(x.tanh()),
        Function::Asinh => Some(x.asinh()),
        Function::Acosh => x.acosh(),
        Function::Atanh => x.atanh(),
        Function::Erf => Some(x.erf()),
        Function::Erfc => Some(x.erfc()),
        Function::Fabs => Some(x.abs()),
    }
}

/// True if the function has a value at no number of the interval.
fn wholly_outside(function: Function, x: &WideInterval) -> bool {
    match function {
        Function::Sqrt => *x.upper() < 0,
        Function::Log | Function::Log2 | Function::Log10 => *x.upper() <= 0,
        Function::Log1p => *x.upper() <= -1,
        Function::Asin | Function::Acos => *x.lower() > 1 || *x.upper() < -1,
        Function::Atanh => *x.lower() >= 1 || *x.upper() <= -1,
        Function::Acosh => *x.upper() < 1,
        _ => false,
    }
}
