//! Exact zeros: of a denominator, where a singularity may be removable, and of the reference,
//! where a relative error needs a shared zero.
//!
//! Candidates are found by bisection and guesses; each is accepted only when the leading Taylor
//! coefficients there are known exactly and are zero.

use rug::{Complete, Float, Integer, Rational};

use crate::approximant::piece::Form;
use crate::bound::shift::shifted;
use crate::function::exact::{Centre, Exact, leading_coefficients};
use crate::function::formula::{Formula, NodeId};
use crate::function::range::range;
use crate::function::series::series;
use crate::number::ball::Ball;
use crate::number::wide_interval::WideInterval;

/// Zeros are sought as far beside an interval as this part of its width.
const BESIDE: u32 = 16;

/// Leading coefficients examined for a zero.
const MOST_ORDER: usize = 8;

/// A zero at `centre`, proved to be of exactly this order where `order` is given.
#[derive(Clone, Debug)]
pub struct ExactZero {
    /// The zero.
    pub centre: Centre,
    /// Its order, if the first non-vanishing coefficient is proved not to vanish.
    pub order: Option<usize>,
}

/// Looks in [left, right], and a little beside it, for a zero of the value of `node`
/// that can be proved exactly: a kernel may begin one ulp beside its removable singularity, and a
/// cell is then best expanded around the point that it does not contain.
pub fn exact_zero(
    formula: &Formula,
    node: NodeId,
    left: &Rational,
    right: &Rational,
) -> Option<ExactZero> {
    let function = formula.with_root(node);
    let width = (right - left).complete();
    let margin = width / BESIDE;
    let (left, right) = (&(left - &margin).complete(), &(right + &margin).complete());
    // Most refusals come from a zero elsewhere, off the real line or beyond the margin.
    let over = WideInterval::from_rationals(left, right, 64);
    if range(&function, &over).is_ok_and(|values| !values.contains_zero()) {
        return None;
    }
    candidates(&function, left, right)
        .into_iter()
        .find_map(|centre| {
            let known = leading_zeros(&function, &centre);
            (known > 0).then(|| ExactZero {
                order: order_of(&function, &centre, known),
                centre,
            })
        })
}

/// Number of leading Taylor coefficients at `centre` that are proved to be exactly zero.
pub fn leading_zeros(formula: &Formula, centre: &Centre) -> usize {
    let root = formula.root();
    // The value alone is cheap and settles most candidates.
    let value = leading_coefficients(formula, centre, 1).swap_remove(root);
    if !value
        .first()
        .is_some_and(|c| c.as_ref().is_some_and(Exact::is_zero))
    {
        return 0;
    }
    let all = leading_coefficients(formula, centre, MOST_ORDER);
    all[root]
        .iter()
        .take_while(|c| c.as_ref().is_some_and(Exact::is_zero))
        .count()
}

/// As [`leading_zeros`], for the approximant.
pub fn leading_zeros_of_form(form: &Form, centre: &Centre) -> usize {
    match form {
        Form::Formula(formula) => leading_zeros(formula, centre),
        Form::Polynomial(polynomial) => leading_zeros(&polynomial.to_formula(), centre),
    }
}

/// The first `count` Taylor coefficients of the approximant at `centre`, in balls.
pub fn coefficients_of_form(form: &Form, centre: &Centre, count: usize) -> Option<Vec<Ball>> {
    let unit = Float::with_val(2, 1);
    match form {
        Form::Formula(formula) => series(formula, centre, &unit, count, PROBE_PRECISION).ok(),
        Form::Polynomial(polynomial) => {
            let mut all = shifted(polynomial, centre, &unit, PROBE_PRECISION);
            all.resize(count, Ball::zero(PROBE_PRECISION));
            Some(all)
        }
    }
}

const PROBE_PRECISION: u32 = 256;

/// `known` as the order of the zero at `centre`, if its first `known` coefficients are zero and the
/// next one is proved not to be.
pub fn order_of(function: &Formula, centre: &Centre, known: usize) -> Option<usize> {
    let terms = series(
        function,
        centre,
        &Float::with_val(2, 1),
        known + 1,
        PROBE_PRECISION,
    )
    .ok()?;
    let first = terms.get(known)?;
    (!first.contains_zero()).then_some(known)
}

fn candidates(function: &Formula, left: &Rational, right: &Rational) -> Vec<Centre> {
    let mut found: Vec<Centre> = Vec::new();
    let inside = |x: &Rational| x >= left && x <= right;
    for x in [left, right] {
        found.push(Centre::rational(x.clone()));
    }
    for x in [0, 1, -1] {
        let x = Rational::from(x);
        if inside(&x) {
            found.push(Centre::rational(x));
        }
    }
    if let Some((low, high)) = bracket(function, left, right) {
        found.push(Centre::rational(simplest_between(&low, &high)));
        found.extend(pi_multiple_between(&low, &high));
    }
    // Ends such as pi/2 are given as enclosures; a zero of even order shows no change of sign.
    for end in [left, right] {
        let margin = Rational::from((1, Integer::from(1) << 100));
        let (low, high) = ((end - &margin).complete(), (end + &margin).complete());
        found.extend(pi_multiple_between(&low, &high));
    }
    found
}

/// Narrows a change of sign to about 100 bits; `None` where no change of sign is seen.
pub fn bracket(
    function: &Formula,
    left: &Rational,
    right: &Rational,
) -> Option<(Rational, Rational)> {
    let sign = |x: &Rational| sign_at(function, x);
    const PARTS: u32 = 16;
    let width = (right - left).complete();
    let node = |k: u32| left + (&width * Rational::from((k, PARTS)));
    let mut ends: Option<(Rational, Rational)> = None;
    let mut previous: Option<(Rational, i32)> = None;
    for k in 0..=PARTS {
        let x = node(k);
        let Some(s) = sign(&x).filter(|&s| s != 0) else {
            continue;
        };
        if let Some((before, seen)) = &previous
            && *seen != s
        {
            ends = Some((before.clone(), x));
            break;
        }
        previous = Some((x, s));
    }
    let (mut low, mut high) = ends?;
    let low_sign = sign(&low)?;
    for _ in 0..110 {
        let middle = short_middle(&low, &high);
        match sign(&middle) {
            Some(s) if s == low_sign => low = middle,
            Some(0) | None => break,
            Some(_) => high = middle,
        }
    }
    Some((low, high))
}

/// Proved sign of the function at x, 0 if the enclosure contains zero, `None` where undefined.
fn sign_at(function: &Formula, x: &Rational) -> Option<i32> {
    let terms = series(
        function,
        &Centre::rational(x.clone()),
        &Float::with_val(2, 1),
        1,
        PROBE_PRECISION,
    )
    .ok()?;
    let value = terms.first()?;
    Some(if value.is_positive() {
        1
    } else if value.is_negative() {
        -1
    } else {
        0
    })
}

/// A point between a and b, near the middle, with few digits.
pub fn short_middle(a: &Rational, b: &Rational) -> Rational {
    let width = Float::with_val(32, (b - a).complete());
    let middle = (a + b).complete() / 2u32;
    if width.is_zero() {
        return middle;
    }
    // A multiple of the power of two 12 bits below the width, nearest to the middle.
    let exponent = width.get_exp().unwrap_or(0).clamp(-1_000_000, 1_000_000) - 12;
    let grain = if exponent >= 0 {
        Rational::from(Integer::from(1) << exponent.unsigned_abs())
    } else {
        Rational::from((1, Integer::from(1) << exponent.unsigned_abs()))
    };
    let count = (&middle / &grain).complete().round();
    count * grain
}

/// The rational number with the smallest denominator in [low, high] (Stern-Brocot, by continued
/// fractions; Knuth, TAOCP vol. 2, exercise 4.5.3-39).
pub fn simplest_between(low: &Rational, high: &Rational) -> Rational {
    if *low <= 0 && *high >= 0 {
        return Rational::new();
    }
    if *high < 0 {
        let mirrored = simplest_between(&Rational::from(-high), &Rational::from(-low));
        return -mirrored;
    }
    let (mut low, mut high) = (low.clone(), high.clone());
    let mut quotients: Vec<Integer> = Vec::new();
    // Each step shortens both fractions; the number of steps is bounded by their lengths.
    loop {
        let floor = low.clone().floor();
        if floor == low {
            quotients.push(floor.into_numer_denom().0);
            break;
        }
        let next = (&floor + 1u32).complete();
        if next <= high {
            quotients.push(next.into_numer_denom().0);
            break;
        }
        let whole = floor.clone();
        quotients.push(floor.into_numer_denom().0);
        let inverse_high = (high - &whole).recip();
        high = (low - whole).recip();
        low = inverse_high;
    }
    let mut value = Rational::from(quotients.pop().unwrap_or_default());
    while let Some(quotient) = quotients.pop() {
        value = Rational::from(quotient) + value.recip();
    }
    value
}

/// The simplest q with q pi in [low, high], if its denominator is at most 1000.
fn pi_multiple_between(low: &Rational, high: &Rational) -> Option<Centre> {
    let precision = 512;
    let pi = Ball::pi(precision);
    let quotient = |x: &Rational| Ball::from_rational(x, precision).div(&pi);
    let (low, high) = (
        quotient(low)?.lower().to_rational()?,
        quotient(high)?.upper().to_rational()?,
    );
    let simplest = simplest_between(&low, &high);
    let short = *simplest.denom() <= 1000 && simplest != 0;
    short.then(|| Centre {
        rational: Rational::new(),
        pi_multiple: simplest,
    })
}
