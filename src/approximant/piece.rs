//! An approximation and its pieces.

use std::sync::Arc;

use rug::Rational;

use crate::approximant::chebyshev::FirstCoefficient;
use crate::approximant::hermite::Scaling;
use crate::approximant::polynomial::Polynomial;
use crate::approximant::power::{Order, Parity, Variable};
use crate::function::constant::Constant;
use crate::function::formula::Formula;
use crate::function::parser::{ConstantValue, Step};
use crate::number::format::Format;

/// The function of a piece, exactly.
#[allow(
    clippy::large_enum_variant,
    reason = "nearly every piece is the larger variant"
)]
#[derive(Clone, Debug)]
pub enum Form {
    Polynomial(Polynomial),
    /// Straight-line steps.
    Formula(Formula),
}

/// The stored numbers of a piece, in the order of the file and after rounding to the storage
/// format.
#[derive(Clone, Debug)]
pub enum Stored {
    /// The coefficients of a power, Chebyshev or Bernstein piece.
    Coefficients(Arc<[Rational]>),
    /// The Taylor data at both ends of a Hermite piece; neighbours share a knot's list.
    Ends {
        left: Arc<[Rational]>,
        right: Arc<[Rational]>,
    },
    /// The constants of the steps stand in [`Basis::Steps`].
    Steps,
}

/// One function on one interval.
#[derive(Clone, Debug)]
pub struct Piece {
    /// The ends, the left one proved to be the smaller one.
    pub on: [Constant; 2],
    /// The function that the stored coefficients define.
    pub form: Form,
    /// The polynomial before the coefficients were rounded to the storage format, where rounding
    /// changed one of them.
    pub written: Option<Polynomial>,
    /// What is stored.
    pub stored: Stored,
}

/// Which piece a shared boundary belongs to.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Owner {
    /// The piece that ends there (the first boundary belongs to the first piece).
    Left,
    /// The piece that begins there (the last boundary belongs to the last piece).
    Right,
}

/// How the stored numbers define the pieces.
#[derive(Clone, Debug)]
pub enum Basis {
    Power {
        variable: Variable,
        order: Order,
        parity: Option<Parity>,
    },
    Chebyshev {
        variable: Variable,
        order: Order,
        parity: Option<Parity>,
        first: FirstCoefficient,
    },
    Bernstein {
        variable: Variable,
        order: Order,
    },
    Hermite {
        scaling: Scaling,
    },
    /// The constants as stored, in the order of the file, and the code.
    Steps {
        constants: Vec<(String, ConstantValue)>,
        steps: Vec<Step>,
    },
}

/// What rounding to the storage format did.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct StorageRounding {
    /// How many stored numbers there are.
    pub numbers: u64,
    /// How many of them differ from the number written.
    pub changed: u64,
    /// How many of them became 0 or lost digits below the least normal number.
    pub underflowed: u64,
}

/// A shipped approximation.
#[derive(Clone, Debug)]
pub struct Approximant {
    /// Unique in its file.
    pub id: String,
    pub basis: Basis,
    /// The storage format of the coefficients; `None` keeps them as written.
    pub stored_as: Option<Format>,
    /// The storage format of knots and ends; `None` keeps them as written.
    pub ends_stored_as: Option<Format>,
    pub storage_rounding: StorageRounding,
    pub owner: Owner,
    /// At least one; each begins where the one before it ends.
    pub pieces: Vec<Piece>,
}

impl Basis {
    /// The word of the audit file.
    pub fn name(&self) -> &'static str {
        match self {
            Self::Power { .. } => "power",
            Self::Chebyshev { .. } => "chebyshev",
            Self::Bernstein { .. } => "bernstein",
            Self::Hermite { .. } => "hermite",
            Self::Steps { .. } => "steps",
        }
    }
}

impl Approximant {
    /// The first and the last end; `None` only where there are no pieces.
    pub fn domain(&self) -> Option<[&Constant; 2]> {
        Some([&self.pieces.first()?.on[0], &self.pieces.last()?.on[1]])
    }
}
