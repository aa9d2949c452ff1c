//! How the difference of approximant and reference is measured.

use rug::Rational;

/// An error measure of p against f.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Measure {
    /// p - f.
    Absolute,
    /// (p - f)/f; at a zero of f the least E with |p - f| <= E |f| nearby, so it is defined at a
    /// shared zero by continuity and unbounded at a zero that p does not share.
    Relative,
    /// (p - f)/(A + R |f|) with A, R >= 0, not both 0. With A = 0 it has the zeros of f, like the
    /// relative error.
    Mixed {
        /// A.
        absolute: Rational,
        /// R.
        relative: Rational,
    },
}
