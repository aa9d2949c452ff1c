//! The error over a whole interval by natural interval extension.
//!
//! Converges only linearly, and slower at a singularity, but needs nothing of the functions
//! beyond being defined: the fallback next to an endpoint singularity, on a geometrically graded
//! mesh.

use rug::Float;
use rug::float::Round;

use crate::approximant::piece::Form;
use crate::bound::measure::Measure;
use crate::bound::point::Subject;
use crate::function::range::range;
use crate::function::refusal::{Refusal, RefusalKind};
use crate::number::wide_interval::WideInterval;

/// Bounds of the signed error over `over`.
pub fn plain_bounds(subject: &Subject, over: &WideInterval) -> Result<[Float; 2], Refusal> {
    let reference = range(subject.reference, over)?;
    let approximant = range_of_form(subject.form, over)?;
    let difference = approximant.sub(&reference);
    let refusal = Refusal {
        node: subject.reference.root(),
        kind: RefusalKind::DivisionByZero,
        proved: false,
    };
    let error = match subject.measure {
        Measure::Absolute => difference,
        Measure::Relative => difference.div(&reference).ok_or(refusal)?,
        Measure::Mixed { absolute, relative } => {
            let precision = over.precision();
            let constant = |x| WideInterval::from_rational(x, precision);
            let weight = constant(absolute).add(&constant(relative).mul(&reference.abs()));
            difference.div(&weight).ok_or(refusal)?
        }
    };
    const PRECISION: u32 = 64;
    Ok([
        Float::with_val_round(PRECISION, error.lower(), Round::Down).0,
        Float::with_val_round(PRECISION, error.upper(), Round::Up).0,
    ])
}

/// Encloses the range of the approximant over `over` (Horner for a polynomial).
pub fn range_of_form(form: &Form, over: &WideInterval) -> Result<WideInterval, Refusal> {
    let polynomial = match form {
        Form::Formula(formula) => return range(formula, over),
        Form::Polynomial(polynomial) => polynomial,
    };
    let precision = over.precision();
    let origin = polynomial.origin.wide_interval(precision);
    let scale = polynomial.scale.wide_interval(precision);
    let refusal = Refusal {
        node: 0,
        kind: RefusalKind::Unbounded,
        proved: false,
    };
    let u = over.sub(&origin).div(&scale).ok_or(refusal)?;
    let mut sum = WideInterval::zero(precision);
    for c in polynomial.coefficients.iter().rev() {
        sum = sum.mul(&u).add(&WideInterval::from_rational(c, precision));
    }
    Ok(sum)
}
