//! Proves that a formula has no value somewhere in a cell: a pole that no refinement can resolve.
//!
//! # Theorem
//!
//! Let u and v be continuous on [a, b], v(a) v(b) < 0 and u without a zero there. Then v has a zero
//! in (a, b), and u/v has no value at it. The same holds at an exact zero of v of order k at which u
//! vanishes to a lower order. tan(w) is sin(w)/cos(w), and a negative power of w is 1/w^n.

use rug::Rational;

use crate::bound::cell::Cell;
use crate::bound::zeros::{bracket, exact_zero, leading_zeros, order_of};
use crate::function::formula::{Formula, Function, NodeId, Operation};
use crate::function::range::range;
use crate::number::wide_interval::WideInterval;

/// An argument of the cell (or next to a zero that is bracketed to about 100 bits) where the
/// operation `node` is proved to have no value; `inner` is the set of arguments.
pub fn undefined_near(
    formula: &Formula,
    node: NodeId,
    cell: &Cell,
    inner: &[Rational; 2],
) -> Option<Rational> {
    let (numerator, denominator) = match &formula.operations()[node] {
        Operation::Divide(u, v) => (Some(formula.with_root(*u)), formula.with_root(*v)),
        Operation::PowerInteger(w, n) if *n < 0 => (None, formula.with_root(*w)),
        Operation::Apply(Function::Tan, w) => {
            (None, formula.with_root(*w).followed_by(Function::Cos))
        }
        _ => return None,
    };
    let [left, right] = [
        (&cell.ends[0]).max(&inner[0]),
        (&cell.ends[1]).min(&inner[1]),
    ];
    if left > right {
        return None;
    }
    let over = WideInterval::from_rationals(left, right, 64);
    if range(&denominator, &over).is_ok_and(|values| !values.contains_zero()) {
        return None;
    }
    if let Some(zero) = exact_zero(&denominator, denominator.root(), left, right)
        && let Some(order) = zero.order
    {
        let place = zero.centre.wide_interval(1024);
        let inside = *place.lower() >= *left && *place.upper() <= *right;
        let lower = match &numerator {
            None => true,
            Some(u) => {
                let shared = leading_zeros(u, &zero.centre);
                shared < order && order_of(u, &zero.centre, shared).is_some()
            }
        };
        return (inside && lower)
            .then(|| place.midpoint().to_rational())
            .flatten();
    }
    let (low, high) = bracket(&denominator, left, right)?;
    let over = WideInterval::from_rationals(&low, &high, 256);
    // The range exists only if the function is defined, hence continuous, on the bracket.
    let continuous = range(&denominator, &over).is_ok();
    let nonzero =
        numerator.is_none_or(|u| range(&u, &over).is_ok_and(|values| !values.contains_zero()));
    (continuous && nonzero).then_some(low)
}
