//! Builds a formula operation by operation, each of them once.

use std::collections::HashMap;
use std::ops::Range;

use rug::Rational;
use rug::ops::Pow;

use super::{Formula, Function, NodeId, Operation};

#[cfg(test)]
mod tests;

/// Numerators and denominators of folded constants stay below this many bits: beyond it the exact
/// value would cost more than the enclosure that an evaluator computes from the operations.
const FOLDED_BITS: u32 = 20_000;

/// Collects the operations of a formula. An operation that is already there is not added again,
/// and an operation on rational constants becomes the constant that it gives, if that is small.
#[derive(Debug)]
pub struct FormulaBuilder {
    text: String,
    operations: Vec<Operation>,
    spans: Vec<Range<usize>>,
    /// Where the value of each operation stands, folded ones included.
    positions: HashMap<Operation, NodeId>,
}

impl FormulaBuilder {
    /// A formula without operations; `text` is what the spans refer to.
    pub fn new(text: impl Into<String>) -> Self {
        Self {
            text: text.into(),
            operations: Vec::new(),
            spans: Vec::new(),
            positions: HashMap::new(),
        }
    }

    /// Adds an operation whose operands are there already, and returns where its value stands.
    ///
    /// The bytes `span` of the text are kept for an operation that is new. Sums, differences,
    /// products, quotients, integer powers, negatives and moduli of rational constants are computed
    /// exactly while numerator and denominator stay below 20,000 bits. Divisions by zero stay as
    /// they are, for the evaluator to refuse. No other law of algebra is applied: `x - x` keeps
    /// the domain of `x`.
    pub fn push(&mut self, operation: Operation, span: Range<usize>) -> NodeId {
        if let Some(&position) = self.positions.get(&operation) {
            return position;
        }
        let Some(value) = self.fold(&operation) else {
            return self.append(operation, span);
        };
        let constant = Operation::Rational(value);
        let position = match self.positions.get(&constant) {
            Some(&position) => position,
            None => self.append(constant, span),
        };
        // The same arithmetic is not done twice.
        self.positions.insert(operation, position);
        position
    }

    fn append(&mut self, operation: Operation, span: Range<usize>) -> NodeId {
        let position = self.operations.len();
        self.positions.insert(operation.clone(), position);
        self.operations.push(operation);
        self.spans.push(span);
        position
    }

    /// The operation at a position that [`push`](Self::push) returned.
    pub fn operation(&self, node: NodeId) -> &Operation {
        &self.operations[node]
    }

    /// The value of a node that is a rational constant.
    pub fn rational(&self, node: NodeId) -> Option<&Rational> {
        match &self.operations[node] {
            Operation::Rational(value) => Some(value),
            _ => None,
        }
    }

    /// The formula with the value `root`, without the operations that it does not need.
    pub fn finish(self, root: NodeId) -> Formula {
        self.finish_with_positions(root).0
    }

    /// The same, and for each position that [`push`](Self::push) returned the position in the
    /// formula, or `None` if the operation was not needed.
    pub fn finish_with_positions(self, root: NodeId) -> (Formula, Vec<Option<NodeId>>) {
        let needed = needed(&self.operations, root);
        let everything = Formula {
            operations: self.operations,
            spans: self.spans,
            root,
            text: self.text,
        };
        everything.restricted(root, &needed)
    }

    /// The exact value of an operation on rational constants, if it has one that is kept.
    fn fold(&self, operation: &Operation) -> Option<Rational> {
        let small = |node: NodeId| self.rational(node).filter(|value| is_small(value));
        let value = match *operation {
            Operation::Negate(a) => Rational::from(-self.rational(a)?),
            Operation::Add(a, b) => Rational::from(small(a)? + small(b)?),
            Operation::Subtract(a, b) => Rational::from(small(a)? - small(b)?),
            Operation::Multiply(a, b) => Rational::from(small(a)? * small(b)?),
            Operation::Divide(a, b) => {
                let divisor = small(b).filter(|divisor| !divisor.is_zero())?;
                Rational::from(small(a)? / divisor)
            }
            Operation::PowerInteger(base, exponent) => integer_power(small(base)?, exponent)?,
            Operation::Apply(Function::Fabs, a) => Rational::from(self.rational(a)?.abs_ref()),
            _ => return None,
        };
        let sign_only = matches!(operation, Operation::Negate(_) | Operation::Apply(..));
        (sign_only || is_small(&value)).then_some(value)
    }
}

fn is_small(value: &Rational) -> bool {
    value.numer().significant_bits() < FOLDED_BITS && value.denom().significant_bits() < FOLDED_BITS
}

/// base^exponent with 0^0 = 1; `None` if it does not exist or is certainly too large to keep.
fn integer_power(base: &Rational, exponent: i32) -> Option<Rational> {
    if base.is_zero() && exponent < 0 {
        return None;
    }
    // A whole number of b bits is at least 2^(b-1), so its n-th power has more than (b-1) n bits.
    let bits = base
        .numer()
        .significant_bits()
        .max(base.denom().significant_bits());
    let least_bits = u64::from(bits.saturating_sub(1)) * u64::from(exponent.unsigned_abs());
    (least_bits < u64::from(FOLDED_BITS)).then(|| base.pow(exponent).into())
}

/// Which operations the value of `root` needs, itself included.
pub(super) fn needed(operations: &[Operation], root: NodeId) -> Vec<bool> {
    let mut needed = vec![false; operations.len()];
    needed[root] = true;
    // Operands come first, so one pass from the end reaches everything.
    for position in (0..=root).rev() {
        if needed[position] {
            for operand in operands(&operations[position]) {
                needed[operand] = true;
            }
        }
    }
    needed
}

/// The operands of an operation.
fn operands(operation: &Operation) -> impl Iterator<Item = NodeId> {
    let (first, second) = match *operation {
        Operation::Variable | Operation::Rational(_) | Operation::Pi => (None, None),
        Operation::Negate(a)
        | Operation::PowerInteger(a, _)
        | Operation::PowerRational(a, _)
        | Operation::Apply(_, a) => (Some(a), None),
        Operation::Add(a, b)
        | Operation::Subtract(a, b)
        | Operation::Multiply(a, b)
        | Operation::Divide(a, b)
        | Operation::Power(a, b) => (Some(a), Some(b)),
    };
    first.into_iter().chain(second)
}

/// The operation with other positions of its operands.
pub(super) fn moved(operation: Operation, to: impl Fn(NodeId) -> NodeId) -> Operation {
    match operation {
        Operation::Variable | Operation::Rational(_) | Operation::Pi => operation,
        Operation::Negate(a) => Operation::Negate(to(a)),
        Operation::Add(a, b) => Operation::Add(to(a), to(b)),
        Operation::Subtract(a, b) => Operation::Subtract(to(a), to(b)),
        Operation::Multiply(a, b) => Operation::Multiply(to(a), to(b)),
        Operation::Divide(a, b) => Operation::Divide(to(a), to(b)),
        Operation::PowerInteger(a, exponent) => Operation::PowerInteger(to(a), exponent),
        Operation::PowerRational(a, exponent) => Operation::PowerRational(to(a), exponent),
        Operation::Power(a, b) => Operation::Power(to(a), to(b)),
        Operation::Apply(function, a) => Operation::Apply(function, to(a)),
    }
}
