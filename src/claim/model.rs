//! A claim: what is compared, by which measure, on which arguments, and how large it may be.

use rug::Rational;

use crate::bound::measure::Measure;
use crate::function::constant::Constant;

/// Which function is compared with the reference f.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Subject {
    /// The exact real function p that the stored coefficients define, for all real arguments.
    Exact,
    /// What the declared program computes in the declared arithmetic, for the numbers of the
    /// argument format.
    Computed,
}

/// How the difference from the reference f is measured.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum ErrorMeasure {
    /// |p - f|.
    Absolute,
    /// The least E with |p - f| <= E |f|, which is defined at a zero that p and f share.
    Relative,
    /// |p - f| / (A + R |f|).
    Mixed {
        /// A >= 0.
        absolute_part: Rational,
        /// R >= 0; A and R are not both 0.
        relative_part: Rational,
    },
}

/// The largest allowed value of the error measure.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Bound {
    /// The exact value, >= 0.
    pub value: Rational,
    /// As the user wrote it.
    pub text: String,
}

/// A claim about one approximation: the arguments it speaks of.
#[derive(Clone, Debug)]
pub struct Target {
    /// Position of the approximation in the audit file.
    pub approximant: usize,
    /// The closed interval of arguments; the whole domain where the claim names none.
    pub on: [Constant; 2],
    /// Closed intervals that are left out (both ends may be equal: a single point).
    pub except: Vec<[Constant; 2]>,
}

/// A claim as it stands in the audit file.
#[derive(Clone, Debug)]
pub struct Claim {
    /// Unique in its file.
    pub id: String,
    /// What is compared with the reference.
    pub subject: Subject,
    /// How the difference is measured.
    pub measure: ErrorMeasure,
    /// None: the error is measured and no verdict is asked for.
    pub at_most: Option<Bound>,
    /// Every approximation that the claim is about; never empty.
    pub targets: Vec<Target>,
}

impl ErrorMeasure {
    /// The measure as the bounds know it.
    pub fn bound_measure(&self) -> Measure {
        match self {
            Self::Absolute => Measure::Absolute,
            Self::Relative => Measure::Relative,
            Self::Mixed {
                absolute_part,
                relative_part,
            } => Measure::Mixed {
                absolute: absolute_part.clone(),
                relative: relative_part.clone(),
            },
        }
    }

    /// The word of the audit file.
    pub fn name(&self) -> &'static str {
        match self {
            Self::Absolute => "absolute",
            Self::Relative => "relative",
            Self::Mixed { .. } => "mixed",
        }
    }
}

impl Subject {
    /// The word of the audit file.
    pub fn name(self) -> &'static str {
        match self {
            Self::Exact => "exact",
            Self::Computed => "computed",
        }
    }
}
