//! A formula as a straight-line list of operations (a directed acyclic graph in which equal
//! subexpressions are one node), so that evaluation is a loop and never recursion.

use std::ops::Range;

use rug::Rational;

mod builder;

pub use builder::FormulaBuilder;

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

impl Function {
    pub const ALL: [Self; 24] = [
        Self::Sqrt,
        Self::Cbrt,
        Self::Exp,
        Self::Exp2,
        Self::Expm1,
        Self::Log,
        Self::Log2,
        Self::Log10,
        Self::Log1p,
        Self::Sin,
        Self::Cos,
        Self::Tan,
        Self::Asin,
        Self::Acos,
        Self::Atan,
        Self::Sinh,
        Self::Cosh,
        Self::Tanh,
        Self::Asinh,
        Self::Acosh,
        Self::Atanh,
        Self::Erf,
        Self::Erfc,
        Self::Fabs,
    ];

    /// The name in ISO C.
    pub fn name(self) -> &'static str {
        match self {
            Self::Sqrt => "sqrt",
            Self::Cbrt => "cbrt",
            Self::Exp => "exp",
            Self::Exp2 => "exp2",
            Self::Expm1 => "expm1",
            Self::Log => "log",
            Self::Log2 => "log2",
            Self::Log10 => "log10",
            Self::Log1p => "log1p",
            Self::Sin => "sin",
            Self::Cos => "cos",
            Self::Tan => "tan",
            Self::Asin => "asin",
            Self::Acos => "acos",
            Self::Atan => "atan",
            Self::Sinh => "sinh",
            Self::Cosh => "cosh",
            Self::Tanh => "tanh",
            Self::Asinh => "asinh",
            Self::Acosh => "acosh",
            Self::Atanh => "atanh",
            Self::Erf => "erf",
            Self::Erfc => "erfc",
            Self::Fabs => "fabs",
        }
    }
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

    /// The function that is 0 everywhere.
    pub fn zero() -> Self {
        let mut builder = FormulaBuilder::new("0");
        let root = builder.push(Operation::Rational(Rational::new()), 0..1);
        builder.finish(root)
    }

    /// The function g(f(x)) of this formula f and an elementary function g.
    #[must_use]
    pub fn followed_by(mut self, function: Function) -> Self {
        self.operations.push(Operation::Apply(function, self.root));
        self.spans.push(self.spans[self.root].clone());
        self.root = self.operations.len() - 1;
        self
    }

    /// True if the value does not depend on the variable.
    pub fn is_constant(&self) -> bool {
        !self
            .operations
            .iter()
            .any(|operation| matches!(operation, Operation::Variable))
    }

    /// The value of one operation as a formula, without the operations that it does not need. The
    /// text and the spans stay those of the whole.
    pub fn with_root(&self, node: NodeId) -> Self {
        let needed = builder::needed(&self.operations, node);
        self.clone().restricted(node, &needed).0
    }

    /// Keeps the operations marked in `needed`, which include the root and all operands, and tells
    /// where each of them stands then.
    fn restricted(self, root: NodeId, needed: &[bool]) -> (Self, Vec<Option<NodeId>>) {
        let mut operations = Vec::new();
        let mut spans = Vec::new();
        let mut positions = vec![None; self.operations.len()];
        let listed = self.operations.into_iter().zip(self.spans);
        for (position, (operation, span)) in listed.enumerate() {
            if needed[position] {
                positions[position] = Some(operations.len());
                operations.push(builder::moved(operation, |operand| {
                    positions[operand].unwrap_or(operand)
                }));
                spans.push(span);
            }
        }
        let root = positions[root].unwrap_or(root);
        let text = self.text;
        (
            Self {
                operations,
                spans,
                root,
                text,
            },
            positions,
        )
    }
}
