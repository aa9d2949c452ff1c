//! The error at one exact argument.

use rug::{Float, Rational};

use crate::approximant::piece::Form;
use crate::bound::measure::Measure;
use crate::bound::shift::{shifted, value_at};
use crate::function::exact::Centre;
use crate::function::formula::Formula;
use crate::function::refusal::{Refusal, RefusalKind};
use crate::function::series::series;
use crate::number::ball::Ball;

/// What is compared, and how.
#[derive(Clone, Copy, Debug)]
pub struct Subject<'a> {
    /// f.
    pub reference: &'a Formula,
    /// p.
    pub form: &'a Form,
    /// The error measure.
    pub measure: &'a Measure,
}

/// Values at one argument.
#[derive(Clone, Debug)]
pub struct PointValues {
    /// Encloses p.
    pub approximant: Ball,
    /// Encloses f.
    pub reference: Ball,
    /// Encloses the signed error in the measure of the subject.
    pub error: Ball,
}

/// Most bits that a point evaluation uses.
pub const MOST_PRECISION: u32 = 8192;

/// The error at `at`, where reference and approximant are proved to share a zero of order
/// `shared_zero` (0: no zero).
///
/// At a shared zero z of order k of f, p/f tends to p^(k)(z)/f^(k)(z), so the relative error by
/// continuity is (p_k - f_k)/f_k with the k-th Taylor coefficients.
pub fn values_at(
    subject: &Subject,
    at: &Centre,
    shared_zero: usize,
    precision: u32,
) -> Result<PointValues, Refusal> {
    let unit = Float::with_val(2, 1);
    let last = |mut terms: Vec<Ball>| terms.pop().unwrap_or_else(|| Ball::zero(precision));
    let of_formula =
        |formula: &Formula| series(formula, at, &unit, shared_zero + 1, precision).map(last);
    let reference = of_formula(subject.reference)?;
    let approximant = match subject.form {
        Form::Formula(formula) => of_formula(formula)?,
        Form::Polynomial(polynomial) if shared_zero == 0 => value_at(polynomial, at, precision),
        Form::Polynomial(polynomial) => shifted(polynomial, at, &unit, precision)
            .into_iter()
            .nth(shared_zero)
            .unwrap_or_else(|| Ball::zero(precision)),
    };
    let difference = approximant.sub(&reference);
    let error = match subject.measure {
        Measure::Absolute => difference,
        Measure::Relative => difference.div(&reference).ok_or(Refusal {
            node: subject.reference.root(),
            kind: RefusalKind::DivisionByZero,
            proved: false,
        })?,
        Measure::Mixed { absolute, relative } => {
            let mut weight = Ball::from_rational(absolute, precision);
            weight.add_product(
                &Ball::from_rational(relative, precision),
                &absolute_value(&reference),
            );
            difference.div(&weight).ok_or(Refusal {
                node: subject.reference.root(),
                kind: RefusalKind::Unbounded,
                proved: false,
            })?
        }
    };
    Ok(PointValues {
        approximant,
        reference,
        error,
    })
}

/// As [`values_at`], with the precision raised from `start` until the error is known to about 40
/// bits, or is below `floor`, or [`MOST_PRECISION`] is reached (the last enclosure is returned).
pub fn precise_values_at(
    subject: &Subject,
    at: &Centre,
    shared_zero: usize,
    start: u32,
    floor: &Float,
) -> Result<PointValues, Refusal> {
    let mut precision = start.clamp(64, MOST_PRECISION);
    loop {
        let outcome = values_at(subject, at, shared_zero, precision);
        let last = precision >= MOST_PRECISION;
        match outcome {
            Ok(values) => {
                let size = values.error.magnitude_upper();
                let sharp = values.error.radius() <= size.mul_power_of_two(-40);
                let small = size.to_float_upper(53) <= *floor;
                if sharp || small || last {
                    return Ok(values);
                }
            }
            Err(refusal) if refusal.proved || last => return Err(refusal),
            Err(_) => {}
        }
        precision = (precision * 2).min(MOST_PRECISION);
    }
}

fn absolute_value(ball: &Ball) -> Ball {
    if ball.is_positive() {
        ball.clone()
    } else if ball.is_negative() {
        ball.neg()
    } else {
        // |x| of a ball around 0 lies in [0, max |x|].
        let precision = ball.precision();
        let top = ball.magnitude_upper().to_float_upper(precision);
        Ball::from_bounds(&Float::new(precision), &top, precision)
    }
}

/// The exact argument `at` as a centre.
pub fn exactly(at: &Rational) -> Centre {
    Centre::rational(at.clone())
}
