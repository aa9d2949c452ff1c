//! The range of a formula over a real interval: the natural interval extension.

use crate::function::formula::{Formula, Function, Operation};
use crate::function::refusal::{Refusal, RefusalKind};
use crate::number::wide_interval::WideInterval;

#[cfg(test)]
mod tests;

/// Encloses f(x) for every x in `over`, at the precision of `over`.
///
/// Every operation is replaced by its interval version, whose value contains all values that the
/// operation takes on the values of its operands (fundamental theorem of interval arithmetic, by
/// induction over the operations). A variable that occurs twice counts as two, so that the result
/// is wider than the range by an amount of the order of the width of `over`.
///
/// # Errors
///
/// The first operation that may leave its real domain; `proved` if its operand lies wholly
/// outside, so that the formula has no value at any argument of `over`. A quotient 0/0 is never
/// proved to be undefined, because a formula is continued through a removable singularity.
pub fn range(formula: &Formula, over: &WideInterval) -> Result<WideInterval, Refusal> {
    let precision = over.precision();
    let mut values: Vec<WideInterval> = Vec::with_capacity(formula.operations().len());
    for (node, operation) in formula.operations().iter().enumerate() {
        let value = match operation {
            Operation::Variable => over.clone(),
            _ => interval_operation(operation, precision, |operand| &values[operand])
                .map_err(|Undefined { kind, proved }| Refusal { node, kind, proved })?,
        };
        if node == formula.root() {
            return Ok(value);
        }
        values.push(value);
    }
    // A formula has its root among its operations.
    Err(Refusal {
        node: formula.root(),
        kind: RefusalKind::Unbounded,
        proved: false,
    })
}

/// Why an operation has no interval value.
pub(super) struct Undefined {
    pub(super) kind: RefusalKind,
    /// True if it is undefined at all values of its operands.
    pub(super) proved: bool,
}

/// The interval version of an operation; the variable is the whole line.
pub(super) fn interval_operation<'a>(
    operation: &Operation,
    precision: u32,
    value: impl Fn(usize) -> &'a WideInterval,
) -> Result<WideInterval, Undefined> {
    let undefined = |kind, proved| Undefined { kind, proved };
    let outside = |proved| undefined(RefusalKind::OutsideDomain, proved);
    Ok(match operation {
        Operation::Variable => WideInterval::whole(precision),
        Operation::Rational(x) => WideInterval::from_rational(x, precision),
        Operation::Pi => WideInterval::pi(precision),
        Operation::Negate(a) => value(*a).neg(),
        Operation::Add(a, b) => value(*a).add(value(*b)),
        Operation::Subtract(a, b) => value(*a).sub(value(*b)),
        Operation::Multiply(a, b) if a == b => value(*a).square(),
        Operation::Multiply(a, b) => value(*a).mul(value(*b)),
        Operation::Divide(a, b) => {
            let (u, v) = (value(*a), value(*b));
            let proved = v.is_exact_zero() && !u.contains_zero();
            u.div(v)
                .ok_or(undefined(RefusalKind::DivisionByZero, proved))?
        }
        Operation::PowerInteger(a, n) => {
            let x = value(*a);
            x.pow_integer(*n)
                .ok_or(undefined(RefusalKind::DivisionByZero, x.is_exact_zero()))?
        }
        Operation::PowerRational(a, q) => {
            let x = value(*a);
            let proved = *x.upper() < 0 || (*x.upper() <= 0 && *q < 0);
            x.pow_rational(q).ok_or(outside(proved))?
        }
        Operation::Power(a, b) => {
            let x = value(*a);
            x.log()
                .ok_or(outside(*x.upper() <= 0))?
                .mul(value(*b))
                .exp()
        }
        Operation::Apply(function, a) => {
            let x = value(*a);
            apply(*function, x).ok_or(outside(lies_outside(*function, x)))?
        }
    })
}

fn apply(function: Function, x: &WideInterval) -> Option<WideInterval> {
    Some(match function {
        Function::Sqrt => x.sqrt()?,
        Function::Cbrt => x.cbrt(),
        Function::Exp => x.exp(),
        Function::Exp2 => x.exp2(),
        Function::Expm1 => x.expm1(),
        Function::Log => x.log()?,
        Function::Log2 => x.log2()?,
        Function::Log10 => x.log10()?,
        Function::Log1p => x.log1p()?,
        Function::Sin => x.sin(),
        Function::Cos => x.cos(),
        Function::Tan => x.tan()?,
        Function::Asin => x.asin()?,
        Function::Acos => x.acos()?,
        Function::Atan => x.atan(),
        Function::Sinh => x.sinh(),
        Function::Cosh => x.cosh(),
        Function::Tanh => x.tanh(),
        Function::Asinh => x.asinh(),
        Function::Acosh => x.acosh()?,
        Function::Atanh => x.atanh()?,
        Function::Erf => x.erf(),
        Function::Erfc => x.erfc(),
        Function::Fabs => x.abs(),
    })
}

/// True if the function has a value at no number of the interval.
fn lies_outside(function: Function, x: &WideInterval) -> bool {
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
