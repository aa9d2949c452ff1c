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
    /// (p - f)/(A + R |f|) with A > 0 and R >= 0.
    Mixed {
        /// A.
        absolute: Rational,
        /// R.
        relative: Rational,
    },
}
