//! Why an evaluation was refused, and at which node of the formula.

use crate::function::formula::NodeId;

/// What the set of arguments touched.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum RefusalKind {
    /// The denominator may be (or is) zero and the quotient is not known to have a limit there.
    DivisionByZero,
    /// The argument may leave (or is outside) the real domain of the function: a logarithm of a
    /// number <= 0, a square root of a negative number, an arcsine beyond 1.
    OutsideDomain,
    /// The function is defined, but not analytic, on the set: a branch cut or a corner.
    NotAnalytic,
    /// The enclosure became unbounded or too wide to say anything.
    Unbounded,
}

impl RefusalKind {
    /// What the operation would have to be, to end the sentence "is not ...".
    pub fn requirement(self) -> &'static str {
        match self {
            RefusalKind::DivisionByZero => "free of a division by zero",
            RefusalKind::OutsideDomain => "inside its real domain",
            RefusalKind::NotAnalytic => "analytic",
            RefusalKind::Unbounded => "bounded",
        }
    }
}

/// An evaluation that could not be carried out on the whole set.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Refusal {
    /// The operation that refused.
    pub node: NodeId,
    /// What it met.
    pub kind: RefusalKind,
    /// True only if the function is proved to be undefined at EVERY argument of the set; false
    /// means "not proved to be defined", never "proved to be undefined".
    pub proved: bool,
}
