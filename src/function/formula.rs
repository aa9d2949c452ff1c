//! A formula as a straight-line list of operations (a directed acyclic graph in which equal
//! subexpressions are one node), so that evaluation is a loop and never recursion.

use std::collections::HashMap;
use std::ops::Range;

use rug::Rational;

/// Position of an operation in [`Formula::operations`].
pub type NodeId = usize;

/// The elementary functions of a formula, by their ISO C names.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Function {
    Sqrt,
    Cbrt,
    Exp,
    Exp2,
    Expm1,
    Log,
    Log2,
    Log10,
    Log1p,
    Sin,
    Cos,
    Tan,
    Asin,
    Acos,
    Atan,
    Sinh,
    Cosh,
    Tanh,
    Asinh,
    Acosh,
    Atanh,
    Erf,
    Erfc,
    Fabs,
}

/// One operation; operands are earlier positions in the list.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub enum Operation {
    /// The argument x.
    Variable,
    /// An exact rational constant.
    Rational(Rational),
    /// The circle constant.
    Pi,
    Negate(NodeId),
    Add(NodeId, NodeId),
    Subtract(NodeId, NodeId),
    Multiply(NodeId, NodeId),
    Divide(NodeId, NodeId),
    /// Integer power, any base (a negative exponent needs a base that is not 0; 0^0 = 1).
    PowerInteger(NodeId, i32),
    /// Rational exponent that is not an integer: base > 0, or base >= 0 for a positive exponent.
    PowerRational(NodeId, Rational),
    /// exp(exponent * log(base)), base > 0.
    Power(NodeId, NodeId),
    Apply(Function, NodeId),
}

/// A formula of one variable.
#[derive(Clone, Debug)]
pub struct Formula {
    operations: Vec<Operation>,
    spans: Vec<Range<usize>>,
    root: NodeId,
    text: String,
}

impl Formula {
    /// The operations in an order in which operands come first.
    pub fn operations(&self) -> &[Operation] {
        &self.operations
    }

    /// The operation whose value is the value of the formula.
    pub fn root(&self) -> NodeId {
        self.root
    }

    /// The text as the user wrote it.
    pub fn text(&self) -> &str {
        &self.text
    }

    /// The bytes of [`text`](Self::text) that gave rise to an operation.
    pub fn span(&self, node: NodeId) -> Range<usize> {
        self.spans[node].clone()
    }

    /// True if the value does not depend on the variable.
    pub fn is_constant(&self) -> bool {
        !self.operations.iter().any(|operation| matches!(operation, Operation::Variable))
    }
}
