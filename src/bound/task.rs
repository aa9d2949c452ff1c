//! What is asked of a search, and what it answers.

use rug::{Float, Rational};

use crate::bound::patch::{Part, Remainder};
use crate::bound::point::Subject;
use crate::function::exact::Centre;
use crate::function::refusal::Refusal;

/// One piece (or the part of it that a claim is about) and what is asked of it.
#[derive(Clone, Debug)]
pub struct Task<'a> {
    /// What is compared, and how.
    pub subject: Subject<'a>,
    /// Upper bounds hold on all of this.
    pub outer: [Rational; 2],
    /// Arguments for lower bounds come from here; inside `outer`.
    pub inner: [Rational; 2],
    /// Whether each end belongs to the set (a piece that does not own its end may not use it).
    pub owned: [bool; 2],
    /// The bound that is claimed: refinement goes on past the tightness while it is undecided.
    pub bound: Option<Rational>,
    /// Wanted upper/lower - 1.
    pub tightness: f64,
    /// Units of work allowed.
    pub budget: u64,
}

/// Why the upper end is not as tight as asked.
#[derive(Clone, Debug, PartialEq)]
pub enum Unfinished {
    /// The budget of work ran out.
    Budget,
    /// A function could not be shown to be defined, or continuous, near `at`.
    Refused {
        at: Rational,
        refusal: Refusal,
        part: Part,
    },
    /// The reference vanishes near `at`, and the approximant is not proved to share the zero.
    ZeroOfReference { at: Rational },
    /// The most bits allowed do not resolve the error near `at`.
    Precision { at: Rational },
}

/// The proved result for one piece.
#[derive(Clone, Debug)]
pub struct Supremum {
    /// The modulus of the error reaches at least this (at `at`).
    pub lower: Float,
    /// The modulus of the error is at most this everywhere; may be infinite.
    pub upper: Float,
    /// Enclosure of the least signed error.
    pub minimum: [Float; 2],
    /// Enclosure of the greatest signed error.
    pub maximum: [Float; 2],
    /// An argument of the set where the lower end is reached, and the order of the zero that
    /// both functions share there.
    pub at: Option<(Centre, usize)>,
    /// The relative error is proved to be unbounded near this zero of the reference, which the
    /// approximant does not share.
    pub unbounded: Option<Centre>,
    /// Removable singularities and shared zeros that were taken by continuity.
    pub by_continuity: Vec<Centre>,
    /// Remainder of the patch with the largest error.
    pub remainder: Option<Remainder>,
    /// Patches that cover the piece, and cells bounded by plain interval extension.
    pub cells: [u64; 2],
    /// Set if `upper` is not as tight as asked.
    pub unfinished: Option<Unfinished>,
    /// Units of work done.
    pub work: u64,
}

/// A formula that is proved to have no value at an argument of the domain.
#[derive(Clone, Debug)]
pub struct Undefined {
    /// Where.
    pub at: Rational,
    /// Why.
    pub refusal: Refusal,
    /// Which function.
    pub part: Part,
}
