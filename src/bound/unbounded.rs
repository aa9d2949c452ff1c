//! Relative errors around a zero of the reference: shared, or not.
//!
//! # Theorem
//!
//! Let f be continuous with f(a) f(b) < 0 and let p have no zero on [a, b]. Then f has a zero z in
//! (a, b), and |p(z) - f(z)| = |p(z)| > 0 = E |f(z)| for every E: no finite E bounds the relative
//! error on a set that contains z. The same holds at an exact zero z of f where p(z) != 0, and
//! (for arguments near z) where p vanishes there to a lower order than f.

use std::cmp::Ordering;

use rug::float::Round;
use rug::{Complete, Float, Rational};

use crate::bound::cell::{Anchor, Cell};
use crate::bound::plain::range_of_form;
use crate::bound::point::{exactly, values_at};
use crate::bound::task::Task;
use crate::bound::zeros::{bracket, coefficients_of_form, exact_zero, leading_zeros_of_form};
use crate::function::exact::Centre;
use crate::function::range::range;
use crate::number::wide_interval::WideInterval;

/// What is known about a zero of the reference.
#[derive(Clone, Debug)]
pub enum Shared {
    /// The approximant shares it: expand there and divide it out.
    Anchor(Anchor),
    /// Not shared: the relative error is unbounded.
    Unbounded {
        /// The zero, or a point next to it.
        zero: Centre,
        /// An argument near the zero.
        at: Rational,
        /// The signed error there, proved and rounded toward zero.
        error: Float,
    },
    /// Nothing is proved here; smaller cells may help.
    Unknown,
    /// There is an exact zero, but of an order that is not known (the reference may vanish
    /// identically): smaller cells cannot help.
    OrderUnknown,
}

/// Examines the zero of the reference in a cell.
pub fn around_zero(task: &Task, cell: &Cell) -> Shared {
    let reference = task.subject.reference;
    let form = task.subject.form;
    let [left, right] = &cell.ends;
    if let Some(zero) = exact_zero(reference, reference.root(), left, right) {
        let Some(order) = zero.order else {
            return Shared::OrderUnknown;
        };
        let shared = leading_zeros_of_form(form, &zero.centre);
        if shared >= order {
            return Shared::Anchor(Anchor {
                centre: zero.centre,
                shared_zero: order,
            });
        }
        let lower = coefficients_of_form(form, &zero.centre, shared + 1)
            .and_then(|coefficients| coefficients.into_iter().nth(shared))
            .is_some_and(|first| !first.contains_zero());
        if lower && inside(task, &zero.centre) {
            return witness(task, &zero.centre);
        }
        return Shared::Unknown;
    }
    if let Some((low, high)) = bracket(reference, left, right)
        && low >= task.inner[0]
        && high <= task.inner[1]
    {
        let around = WideInterval::from_rationals(&low, &high, 512);
        // Every operation is continuous where it is defined, so a reference that can be enclosed is
        // continuous here: a pole changes the sign too, without a zero.
        if range(reference, &around).is_ok()
            && range_of_form(form, &around).is_ok_and(|range| !range.contains_zero())
        {
            return witness(task, &Centre::rational(low));
        }
    }
    Shared::Unknown
}

/// True if the point is proved to belong to the closure of the set.
fn inside(task: &Task, point: &Centre) -> bool {
    let place = point.wide_interval(1024);
    *place.lower() >= task.inner[0] && *place.upper() <= task.inner[1]
}

/// Approaches the zero from inside the set until the error is large enough to convince.
fn witness(task: &Task, zero: &Centre) -> Shared {
    let place = zero
        .wide_interval(256)
        .midpoint()
        .to_rational()
        .unwrap_or_default();
    let [left, right] = &task.inner;
    let width = (right - left).complete();
    let enough = match &task.bound {
        Some(bound) => Float::with_val(64, bound) * 2u32,
        None => Float::with_val(64, 1024),
    };
    let convincing = |error: &Float| error.cmp_abs(&enough).is_some_and(Ordering::is_gt);
    let mut best: Option<(Rational, Float)> = None;
    for halvings in 1..=400u32 {
        let step = width.clone() >> halvings;
        for x in [(&place + &step).complete(), (&place - &step).complete()] {
            let [left_owned, right_owned] = task.owned;
            let after_left = x > *left || left_owned && x == *left;
            let before_right = x < *right || right_owned && x == *right;
            if !(after_left && before_right) {
                continue;
            }
            let Ok(values) = values_at(&task.subject, &exactly(&x), 0, 1024) else {
                continue;
            };
            let error = values.error;
            let error = if error.is_positive() {
                error.lower()
            } else if error.is_negative() {
                error.upper()
            } else {
                continue;
            };
            let error = Float::with_val_round(64, error, Round::Zero).0;
            if best
                .as_ref()
                .is_none_or(|(_, value)| error.cmp_abs(value).is_some_and(Ordering::is_gt))
            {
                best = Some((x, error));
            }
        }
        if best.as_ref().is_some_and(|(_, error)| convincing(error)) {
            break;
        }
    }
    match best {
        Some((at, error)) if convincing(&error) => Shared::Unbounded {
            zero: zero.clone(),
            at,
            error,
        },
        _ => Shared::Unknown,
    }
}
