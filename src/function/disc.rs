//! Upper bounds of |f| on complex discs, with a proof that f is analytic there.
//!
//! # Method
//!
//! Every operation is evaluated on rectangles that cover the upper half of the circle
//! |z - c| = r; the formulas are real on the real line, so the lower half is its mirror image.
//! If g is analytic in the open disc and continuous on the closed one, then Re(e^(ia) g) is
//! harmonic, so it takes its extremes on the circle (maximum principle), for every a: the values
//! of g on the disc lie in the convex hull of its values on the circle, hence in the rectangular
//! hull of the arcs' enclosures and their conjugates. The operations are proved analytic in
//! order, each from the hull of its operands:
//!
//! - a quotient u/v, a logarithm, a root or a real power needs to know the zeros of v (or u) in the
//!   disc. They are counted by the argument principle: following the argument of v along the upper
//!   half circle from c + r to c - r, it changes by pi N, N the number of zeros in the disc with
//!   their multiplicities (the lower half is the mirror image). On an arc whose rectangle does not
//!   contain 0 the argument varies by less than pi, and neighbouring arcs share a point, so the
//!   branch is carried from arc to arc without ambiguity;
//! - log u is analytic if u has no zero (the disc is simply connected), and on the arcs it is
//!   log|u| plus i times the argument so followed, from 0 at c + r, where u > 0. Roots and real
//!   powers are exp(q log u);
//! - u/v is analytic if v has no zero, or if it has exactly k zeros, k leading Taylor coefficients
//!   of v at c are proved to be exactly zero (so that all its zeros are at c), and k leading
//!   coefficients of u are too: then the singularity at c is removable;
//! - the inverse trigonometric and hyperbolic functions need a hull off their cuts, fabs a hull on
//!   one side of the imaginary axis.

use std::cell::RefCell;
use std::collections::HashMap;

use rug::{Float, Rational};

use crate::function::exact::{Centre, Exact, leading_coefficients};
use crate::function::formula::{Formula, Function, NodeId, Operation};
use crate::function::refusal::{Refusal, RefusalKind};
use crate::number::radius::Radius;
use crate::number::rectangle::Rectangle;
use crate::number::wide_interval::WideInterval;

/// Bits of the rectangles: the bound needs few.
const PRECISION: u32 = 53;

/// Leading coefficients examined at a removable singularity.
const LEADING: usize = 8;

/// Proves f analytic in the open disc |z - c| < radius and continuous on the closed one, and
/// bounds |f| there. `arcs` (at least 1) rectangles cover the upper half circle: more of them give
/// a smaller bound and fewer refusals.
///
/// # Errors
///
/// The operation that could not be shown to be analytic, or whose enclosure was unbounded.
pub fn magnitude_on_disc(
    formula: &Formula,
    centre: &Centre,
    radius: &Float,
    arcs: usize,
) -> Result<Radius, Refusal> {
    let mut circle = Circle {
        formula,
        centre,
        offsets: offsets(radius, arcs.max(1)),
        values: Vec::with_capacity(formula.operations().len()),
        values_at_centre: None,
        leading: None,
    };
    for (node, operation) in formula.operations().iter().enumerate() {
        let refuse = |kind| Refusal {
            node,
            kind,
            proved: false,
        };
        let arcs = circle.operation(operation).map_err(refuse)?;
        if !arcs.iter().all(Rectangle::is_finite) {
            return Err(refuse(RefusalKind::Unbounded));
        }
        circle.values.push(Values { arcs });
    }
    let root = &circle.values[formula.root()];
    Ok(root
        .arcs
        .iter()
        .map(Rectangle::magnitude)
        .max()
        .unwrap_or(Radius::INFINITY))
}

/// An operation on the circle: one enclosure an arc, or a single one where it is constant.
struct Values {
    arcs: Vec<Rectangle>,
}

impl Values {
    fn at(&self, arc: usize) -> &Rectangle {
        // A constant has one entry for every arc.
        &self.arcs[arc.min(self.arcs.len() - 1)]
    }

    /// Encloses the values on the closed disc.
    fn hull(&self) -> Rectangle {
        let mut hull = self.arcs[0].clone();
        for arc in &self.arcs[1..] {
            hull = hull.hull(arc);
        }
        hull.imaginary = hull.imaginary.hull(&hull.imaginary.neg());
        hull
    }
}

struct Circle<'a> {
    formula: &'a Formula,
    centre: &'a Centre,
    /// t = z - c on the arcs.
    offsets: Vec<Rectangle>,
    values: Vec<Values>,
    /// Exactly known values at the centre, once they are asked for.
    values_at_centre: Option<Vec<Vec<Option<Exact>>>>,
    /// Exactly known leading coefficients there.
    leading: Option<Vec<Vec<Option<Exact>>>>,
}

/// Rectangles that cover radius * e^(i theta), theta in [j pi/arcs, (j+1) pi/arcs].
fn offsets(radius: &Float, arcs: usize) -> Vec<Rectangle> {
    let radius = WideInterval::new(radius.clone(), radius.clone());
    with_unit_arcs(arcs, |unit| unit.iter().map(|z| z.scale(&radius)).collect())
}

/// The arcs of the unit circle, kept for the numbers of arcs that were asked for: they are the
/// same for every disc.
fn with_unit_arcs<T>(arcs: usize, f: impl FnOnce(&[Rectangle]) -> T) -> T {
    thread_local! {
        static KEPT: RefCell<HashMap<usize, Vec<Rectangle>>> = RefCell::new(HashMap::new());
    }
    KEPT.with_borrow_mut(|kept| {
        f(kept.entry(arcs).or_insert_with(|| {
            let pi = WideInterval::pi(PRECISION);
            let angle = |k: usize| {
                pi.mul(&WideInterval::from_rational(&Rational::from((k, arcs)), PRECISION))
            };
            let arc = |j: usize| {
                let angles = angle(j).hull(&angle(j + 1));
                Rectangle { real: angles.cos(), imaginary: angles.sin() }
            };
            (0..arcs).map(arc).collect()
        }))
    })
}

type Outcome = Result<Vec<Rectangle>, RefusalKind>;

impl Circle<'_> {
    fn each(&self, node: NodeId, f: impl Fn(&Rectangle) -> Option<Rectangle>) -> Outcome {
        let arcs = self.values[node].arcs.iter();
        arcs.map(|z| f(z).ok_or(RefusalKind::NotAnalytic)).collect()
    }

    fn pairs(
        &self,
        a: NodeId,
        b: NodeId,
        f: impl Fn(&Rectangle, &Rectangle) -> Option<Rectangle>,
    ) -> Outcome {
        let count = self.values[a].arcs.len().max(self.values[b].arcs.len());
        (0..count)
            .map(|arc| {
                f(self.values[a].at(arc), self.values[b].at(arc)).ok_or(RefusalKind::NotAnalytic)
            })
            .collect()
    }

    fn operation(&mut self, operation: &Operation) -> Outcome {
        match operation {
            Operation::Variable => {
                let centre = self.centre.wide_interval(PRECISION);
                Ok(self.offsets.iter().map(|t| t.add_real(&centre)).collect())
            }
            Operation::Rational(x) => Ok(vec![Rectangle::from_real(WideInterval::from_rational(
                x, PRECISION,
            ))]),
            Operation::Pi => Ok(vec![Rectangle::from_real(WideInterval::pi(PRECISION))]),
            Operation::Negate(a) => self.each(*a, |z| Some(z.neg())),
            Operation::Add(a, b) => self.pairs(*a, *b, |z, w| Some(z.add(w))),
            Operation::Subtract(a, b) => self.pairs(*a, *b, |z, w| Some(z.sub(w))),
            Operation::Multiply(a, b) if a == b => self.each(*a, |z| Some(z.square())),
            Operation::Multiply(a, b) => self.pairs(*a, *b, |z, w| Some(z.mul(w))),
            Operation::Divide(a, b) => self.quotient(*a, *b),
            Operation::PowerInteger(a, n) => {
                if *n < 0 && !self.has_zeros(*a, 0) {
                    return Err(RefusalKind::DivisionByZero);
                }
                self.each(*a, |z| z.pow_integer(*n))
            }
            Operation::PowerRational(a, q) => Self::power(&self.values[*a], q),
            Operation::Power(a, b) => {
                let logarithm = Values {
                    arcs: Self::logarithm(&self.values[*a])?,
                };
                let count = logarithm.arcs.len().max(self.values[*b].arcs.len());
                let exponents = &self.values[*b];
                Ok((0..count)
                    .map(|arc| logarithm.at(arc).mul(exponents.at(arc)).exp())
                    .collect())
            }
            Operation::Apply(function, a) => self.apply(*function, *a),
        }
    }

    /// Encloses log u on the arcs, u = `values`; refused unless u is proved to have no zero in the
    /// disc and to be positive at both real points of the circle.
    fn logarithm(values: &Values) -> Outcome {
        let arguments = arguments(values).ok_or(RefusalKind::NotAnalytic)?;
        // One arc (a constant) is real; otherwise the argument starts and ends at a multiple of pi.
        // It is 0 where 0 is the only multiple of pi in the arc's range.
        let only_zero = |argument: Option<&WideInterval>| {
            argument.is_some_and(|a| a.contains_zero() && *a.lower() > -3 && *a.upper() < 3)
        };
        if !only_zero(arguments.first()) || !only_zero(arguments.last()) {
            return Err(RefusalKind::NotAnalytic);
        }
        let half = WideInterval::from_rational(&Rational::from((1, 2)), PRECISION);
        let logarithms = values.arcs.iter().zip(arguments).map(|(z, argument)| {
            let size = z.real.square().add(&z.imaginary.square()).log();
            Some(Rectangle {
                real: size?.mul(&half),
                imaginary: argument,
            })
        });
        logarithms
            .collect::<Option<_>>()
            .ok_or(RefusalKind::NotAnalytic)
    }

    /// Encloses u^q = exp(q log u) on the arcs.
    fn power(values: &Values, q: &Rational) -> Outcome {
        let q = WideInterval::from_rational(q, PRECISION);
        Ok(Self::logarithm(values)?
            .iter()
            .map(|z| z.scale(&q).exp())
            .collect())
    }

    fn quotient(&mut self, a: NodeId, b: NodeId) -> Outcome {
        if !self.has_zeros(b, 0) {
            let zeros = self.exact_zeros(b);
            if zeros == 0 || !self.has_zeros(b, zeros) || self.exact_zeros(a) < zeros {
                return Err(RefusalKind::DivisionByZero);
            }
        }
        self.pairs(a, b, Rectangle::div)
    }

    /// Number of leading Taylor coefficients at the centre that are proved to be exactly zero. The
    /// first coefficient alone is cheap and settles most cases.
    /// The operand is analytic, being evaluated already, as `leading_coefficients` demands.
    fn exact_zeros(&mut self, node: NodeId) -> usize {
        let zeros = |all: &[Vec<Option<Exact>>]| {
            all[node].iter().take_while(|c| c.as_ref().is_some_and(Exact::is_zero)).count()
        };
        let values =
            self.values_at_centre.get_or_insert_with(|| leading_coefficients(self.formula, self.centre, 1));
        if zeros(values) == 0 {
            return 0;
        }
        zeros(self.leading.get_or_insert_with(|| leading_coefficients(self.formula, self.centre, LEADING)))
    }

    /// Proves that the function has exactly `zeros` zeros in the disc.
    fn has_zeros(&self, node: NodeId, zeros: usize) -> bool {
        let values = &self.values[node];
        if zeros == 0 && !values.hull().contains_zero() {
            return true;
        }
        let Some(arguments) = arguments(values) else {
            return false;
        };
        let (Some(first), Some(last)) = (arguments.first(), arguments.last()) else {
            return false;
        };
        // At both ends the function is real: the argument is a multiple of pi there, 0 or pi at
        // the first. The change is pi N with N between the bounds below.
        let Some(change) = last.sub(first).div(&WideInterval::pi(PRECISION)) else {
            return false;
        };
        let zeros = i64::try_from(zeros).unwrap_or(i64::MAX - 1);
        *change.lower() > zeros - 1 && *change.upper() < zeros + 1
    }

    fn apply(&self, function: Function, a: NodeId) -> Outcome {
        let values = &self.values[a];
        let constant = |x: i32| WideInterval::from_rational(&Rational::from(x), PRECISION);
        let one = constant(1);
        let logarithm_of = |base: i32| constant(base).log().ok_or(RefusalKind::NotAnalytic);
        let in_base = |base: i32| {
            let factor = one
                .div(&logarithm_of(base)?)
                .ok_or(RefusalKind::NotAnalytic)?;
            Ok(Self::logarithm(values)?
                .iter()
                .map(|z| z.scale(&factor))
                .collect())
        };
        match function {
            Function::Log => return Self::logarithm(values),
            Function::Log2 => return in_base(2),
            Function::Log10 => return in_base(10),
            Function::Log1p => {
                let shifted = values.arcs.iter().map(|z| z.add_real(&one)).collect();
                return Self::logarithm(&Values { arcs: shifted });
            }
            Function::Sqrt => return Self::power(values, &Rational::from((1, 2))),
            Function::Cbrt => {
                let third = Rational::from((1, 3));
                let negative = values.arcs.iter().map(Rectangle::neg).collect();
                return Self::power(values, &third).or_else(|_| {
                    let root = Self::power(&Values { arcs: negative }, &third)?;
                    Ok(root.iter().map(Rectangle::neg).collect())
                });
            }
            _ => {}
        }
        let hull = values.hull();
        let (x, y) = (&hull.real, &hull.imaginary);
        let within = |part: &WideInterval| *part.lower() > -1 && *part.upper() < 1;
        let analytic = match function {
            Function::Fabs => x.is_positive() || x.is_negative(),
            Function::Tan => x.tan().is_some(),
            Function::Tanh => y.tan().is_some(),
            Function::Asin | Function::Acos | Function::Atanh => within(x),
            Function::Atan | Function::Asinh => within(y) || !x.contains_zero(),
            Function::Acosh => *x.lower() > 1,
            _ => true,
        };
        if !analytic {
            return Err(RefusalKind::NotAnalytic);
        }
        let two = logarithm_of(2)?;
        let negative = x.is_negative();
        self.each(a, |z| match function {
            Function::Exp => Some(z.exp()),
            Function::Exp2 => Some(z.scale(&two).exp()),
            Function::Expm1 => Some(z.exp().add_real(&one.neg())),
            Function::Sin => Some(z.sin()),
            Function::Cos => Some(z.cos()),
            Function::Tan => z.tan(),
            Function::Asin => z.asin(),
            Function::Acos => z.acos(),
            Function::Atan => z.atan(),
            Function::Sinh => Some(z.sinh()),
            Function::Cosh => Some(z.cosh()),
            Function::Tanh => z.tanh(),
            Function::Asinh => z.asinh(),
            Function::Acosh => z.acosh(),
            Function::Atanh => z.atanh(),
            Function::Erf => Some(z.erf()),
            Function::Erfc => Some(z.erfc()),
            Function::Fabs => Some(if negative { z.neg() } else { z.clone() }),
            Function::Log
            | Function::Log2
            | Function::Log10
            | Function::Log1p
            | Function::Sqrt
            | Function::Cbrt => None,
        })
    }
}

/// The argument of a function on the arcs, followed continuously from a value in (-pi, 2 pi) on the
/// first; `None` if some arc's rectangle contains 0.
///
/// A rectangle without 0 that meets the negative axis lies in the left half plane, where the
/// argument is pi + arg(-z). Each range is narrower than pi, so of all its shifts by multiples of
/// 2 pi exactly one can overlap the range before it, with which it shares the value at the common
/// point of the two arcs.
fn arguments(values: &Values) -> Option<Vec<WideInterval>> {
    let pi = WideInterval::pi(PRECISION);
    let turn = pi.add(&pi);
    let mut found: Vec<WideInterval> = Vec::with_capacity(values.arcs.len());
    for arc in &values.arcs {
        if arc.contains_zero() {
            return None;
        }
        let principal = match arc.argument() {
            Some(argument) => argument,
            None => arc.neg().argument()?.add(&pi),
        };
        // Two ranges narrower than 3 < pi can overlap in one shift only, whatever the rounding.
        if Float::with_val(PRECISION, principal.upper() - principal.lower()) > 3 {
            return None;
        }
        let Some(before) = found.last() else {
            found.push(principal);
            continue;
        };
        let distance = before.midpoint() - principal.midpoint();
        let turns = (distance / turn.midpoint()).round().to_integer()?;
        let shift = turn.mul(&WideInterval::from_rational(
            &Rational::from(turns),
            PRECISION,
        ));
        let shifted = principal.add(&shift);
        // The true argument at the common point lies in both.
        before.intersection(&shifted)?;
        found.push(shifted);
    }
    Some(found)
}
