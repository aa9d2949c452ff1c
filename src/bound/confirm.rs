//! Confirms a lower end by evaluating the error at a named argument.

use rug::float::Round;
use rug::{Float, Rational};

use crate::bound::point::precise_values_at;
use crate::bound::task::Task;
use crate::function::exact::Centre;
use crate::number::ball::Ball;

/// An argument and what is proved of the error there.
#[derive(Clone, Debug)]
pub struct Confirmed {
    /// The argument, and the order of the zero that both functions share there.
    pub at: (Centre, usize),
    /// Lower bound of the modulus of the error.
    pub modulus: Float,
    /// Encloses the signed error.
    pub error: Ball,
}

/// Bits of the modulus.
const PRECISION: u32 = 64;

/// Evaluates the error at `at`, and at the double nearest to it: of two arguments of the set that
/// prove about the same, the shorter one is the better witness.
pub fn confirmed(
    task: &Task,
    at: &(Centre, usize),
    start: u32,
    floor: &Float,
) -> Option<Confirmed> {
    let exact = evaluated(task, at.clone(), start, floor)?;
    let double =
        short(task, &at.0).and_then(|x| evaluated(task, (Centre::rational(x), 0), start, floor));
    let Some(double) = double else {
        return Some(exact);
    };
    let nearly = Float::with_val_round(PRECISION, &exact.modulus * (1.0 - 1e-9), Round::Up).0;
    let decides = |found: &Confirmed| {
        task.bound
            .as_ref()
            .is_some_and(|bound| found.modulus > *bound)
    };
    let as_good = double.modulus >= nearly && decides(&double) == decides(&exact);
    Some(if as_good && at.1 == 0 { double } else { exact })
}

fn evaluated(task: &Task, at: (Centre, usize), start: u32, floor: &Float) -> Option<Confirmed> {
    let values = precise_values_at(&task.subject, &at.0, at.1, start, floor).ok()?;
    let error = values.error;
    let modulus = if error.is_positive() {
        error.lower()
    } else if error.is_negative() {
        -error.upper()
    } else {
        Float::new(PRECISION)
    };
    let modulus = Float::with_val_round(PRECISION, modulus, Round::Down).0;
    Some(Confirmed { at, modulus, error })
}

/// The double nearest to the point, if it is another argument that certainly belongs to the set.
fn short(task: &Task, at: &Centre) -> Option<Rational> {
    let double = at.ball(128).midpoint().to_f64();
    let x = Rational::from_f64(double)?;
    if at.pi_multiple.is_zero() && at.rational == x {
        return None;
    }
    let [left, right] = &task.inner;
    let after_left = x > *left || (task.owned[0] && x == *left);
    let before_right = x < *right || (task.owned[1] && x == *right);
    (after_left && before_right).then_some(x)
}
