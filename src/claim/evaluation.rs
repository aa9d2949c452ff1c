//! One claim on one piece: the tasks it makes, and how their results add up.

use rug::float::Special;
use rug::{Float, Rational};

use crate::approximant::piece::{Form, Piece};
use crate::approximant::polynomial::Polynomial;
use crate::bound::measure::Measure;
use crate::bound::patch::Remainder;
use crate::bound::point::Subject;
use crate::bound::search::supremum;
use crate::bound::task::{Supremum, Task, Undefined, Unfinished};
use crate::claim::domain::Part;
use crate::claim::judgement::{Verdict, judge};
use crate::function::exact::Centre;
use crate::function::formula::Formula;

/// How hard to try.
#[derive(Clone, Copy, Debug)]
pub struct Effort {
    /// Wanted upper/lower - 1 of a supremum.
    pub tightness: f64,
    /// Units of work allowed for one claim on one piece.
    pub budget: u64,
}

/// An argument of the set, and the order of the zero that both functions share there.
pub type Place = (Centre, usize);

/// The error of one claim on one piece.
#[derive(Clone, Debug)]
pub struct PieceOutcome {
    /// The supremum of the modulus lies in [lower, upper].
    pub enclosure: [Float; 2],
    /// Encloses the least signed error.
    pub minimum: [Float; 2],
    /// Encloses the greatest signed error.
    pub maximum: [Float; 2],
    /// Where the lower end is reached.
    pub at: Option<Place>,
    /// The relative error is proved to be unbounded near this zero of the reference.
    pub unbounded: Option<Centre>,
    /// Points taken by continuity.
    pub by_continuity: Vec<Centre>,
    /// Enclosure of the supremum before the coefficients were stored.
    pub truncation: [Float; 2],
    /// Enclosure of the largest change of the value by storing the coefficients.
    pub storage: [Float; 2],
    /// Remainder of the patch with the largest error.
    pub remainder: Option<Remainder>,
    /// Cells bounded by a series, and by plain interval extension.
    pub cells: [u64; 2],
    /// Set if the upper end is not as tight as asked.
    pub unfinished: Option<Unfinished>,
    /// Units of work.
    pub work: u64,
}

/// Tightness of the truncation's enclosure in the budget, which explains and decides nothing.
const BUDGET_TIGHTNESS: f64 = 1e-2;

/// Evaluates a claim on the parts of one piece that it is about (at least one).
///
/// # Errors
///
/// If a formula is proved to have no value at an argument of the set.
pub fn evaluate(
    reference: &Formula,
    piece: &Piece,
    parts: &[Part],
    measure: &Measure,
    bound: Option<&Rational>,
    effort: &Effort,
) -> Result<PieceOutcome, Undefined> {
    let run = |form: &Form,
               reference: &Formula,
               measure: &Measure,
               bound: Option<&Rational>,
               tightness| {
        let mut total: Option<Supremum> = None;
        for part in parts {
            let task = Task {
                subject: Subject {
                    reference,
                    form,
                    measure,
                },
                outer: part.outer.clone(),
                inner: part.inner.clone(),
                owned: part.owned,
                bound: bound.cloned(),
                tightness,
                budget: effort.budget,
            };
            let next = supremum(&task)?;
            total = Some(match total {
                None => next,
                Some(before) => joined(before, next),
            });
        }
        Ok(total.unwrap_or_else(nothing))
    };
    let stored = run(&piece.form, reference, measure, bound, effort.tightness)?;
    let (truncation, storage) = match (&piece.form, &piece.written) {
        (Form::Polynomial(polynomial), Some(written)) => {
            let before = Form::Polynomial(written.clone());
            let truncation = run(&before, reference, measure, None, BUDGET_TIGHTNESS)?;
            let change = Form::Polynomial(difference(polynomial, written));
            let zero = Formula::zero();
            let storage = run(&change, &zero, &Measure::Absolute, None, BUDGET_TIGHTNESS)?;
            (
                [truncation.lower, truncation.upper],
                [storage.lower, storage.upper],
            )
        }
        _ => (
            [stored.lower.clone(), stored.upper.clone()],
            [Float::new(64), Float::new(64)],
        ),
    };
    Ok(PieceOutcome {
        enclosure: [stored.lower, stored.upper],
        minimum: stored.minimum,
        maximum: stored.maximum,
        at: stored.at,
        unbounded: stored.unbounded,
        by_continuity: stored.by_continuity,
        truncation,
        storage,
        remainder: stored.remainder,
        cells: stored.cells,
        unfinished: stored.unfinished,
        work: stored.work,
    })
}

/// stored - written; both have the same local variable.
fn difference(stored: &Polynomial, written: &Polynomial) -> Polynomial {
    let length = stored.coefficients.len().max(written.coefficients.len());
    let zero = Rational::new();
    let coefficients = (0..length)
        .map(|k| {
            let s = stored.coefficients.get(k).unwrap_or(&zero);
            let w = written.coefficients.get(k).unwrap_or(&zero);
            Rational::from(s - w)
        })
        .collect();
    Polynomial {
        coefficients,
        ..stored.clone()
    }
}

/// The result on the union of two sets.
fn joined(a: Supremum, b: Supremum) -> Supremum {
    let (first, second) = if b.lower > a.lower { (b, a) } else { (a, b) };
    let larger = |x: &Float, y: &Float| if x >= y { x.clone() } else { y.clone() };
    let smaller = |x: &Float, y: &Float| if x <= y { x.clone() } else { y.clone() };
    Supremum {
        upper: larger(&first.upper, &second.upper),
        minimum: [0, 1].map(|k| smaller(&first.minimum[k], &second.minimum[k])),
        maximum: [0, 1].map(|k| larger(&first.maximum[k], &second.maximum[k])),
        unbounded: first.unbounded.clone().or(second.unbounded),
        by_continuity: first
            .by_continuity
            .iter()
            .chain(&second.by_continuity)
            .cloned()
            .collect(),
        cells: [0, 1].map(|k| first.cells[k] + second.cells[k]),
        unfinished: first.unfinished.clone().or(second.unfinished),
        work: first.work + second.work,
        ..first
    }
}

/// The result on no set at all: nothing is reached, nothing is exceeded.
fn nothing() -> Supremum {
    let zero = || Float::new(64);
    Supremum {
        lower: zero(),
        upper: zero(),
        minimum: [Special::Infinity, Special::Infinity].map(|x| Float::with_val(64, x)),
        maximum: [Special::NegInfinity, Special::NegInfinity].map(|x| Float::with_val(64, x)),
        at: None,
        unbounded: None,
        by_continuity: Vec::new(),
        remainder: None,
        cells: [0, 0],
        unfinished: None,
        work: 0,
    }
}

/// A claim on the whole of its set.
#[derive(Clone, Debug)]
pub struct Summary {
    /// The verdict.
    pub verdict: Verdict,
    /// Encloses the supremum of the modulus.
    pub enclosure: [Float; 2],
    /// Encloses the least signed error.
    pub minimum: [Float; 2],
    /// Encloses the greatest signed error.
    pub maximum: [Float; 2],
    /// Position (in the list given) of the piece with the largest lower end.
    pub worst: Option<usize>,
    /// Position of the first piece that is not finished, if that is why nothing was decided.
    pub unfinished: Option<usize>,
}

/// Adds up the pieces of a claim: suprema are maxima, and the bound is judged against the whole.
pub fn summary(pieces: &[PieceOutcome], bound: Option<&Rational>) -> Summary {
    let infinite = |special| Float::with_val(64, special);
    let (above, below) = (Special::Infinity, Special::NegInfinity);
    let mut total = Summary {
        verdict: Verdict::Undecided,
        enclosure: [Float::new(64), Float::new(64)],
        minimum: [infinite(above), infinite(above)],
        maximum: [infinite(below), infinite(below)],
        worst: None,
        unfinished: None,
    };
    for (index, piece) in pieces.iter().enumerate() {
        if total.worst.is_none() || piece.enclosure[0] > total.enclosure[0] {
            total.worst = Some(index);
            total.enclosure[0] = piece.enclosure[0].clone();
        }
        // A NaN would pass a comparison unseen: it counts as infinite.
        if piece.enclosure[1].is_nan() {
            total.enclosure[1] = infinite(above);
        } else if piece.enclosure[1] > total.enclosure[1] {
            total.enclosure[1] = piece.enclosure[1].clone();
        }
        for k in 0..2 {
            if piece.minimum[k] < total.minimum[k] {
                total.minimum[k] = piece.minimum[k].clone();
            }
            if piece.maximum[k] > total.maximum[k] {
                total.maximum[k] = piece.maximum[k].clone();
            }
        }
        if total.unfinished.is_none() && piece.unfinished.is_some() {
            total.unfinished = Some(index);
        }
    }
    total.verdict = judge(&total.enclosure[0], &total.enclosure[1], bound);
    total
}
