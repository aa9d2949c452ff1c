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
//! - a logarithm, root or real power needs a hull off (-inf, 0]; the inverse functions, off their
//!   cuts; fabs, a hull on one side of the imaginary axis;
//! - a quotient u/v needs a v without zeros: either its hull does not contain 0, or
//!   Re(s v(z)/t^k) > 0 on every arc, with t = z - c, a fixed sign s, and k the number of leading
//!   Taylor coefficients of v at c that are proved to be exactly zero. Then v/t^k maps the circle
//!   into a half plane, so its winding number about 0 is 0, and by the argument principle v has
//!   exactly k zeros in the disc, all of them at c. With k leading coefficients of u proved to be
//!   zero as well, u/v has a removable singularity there and is analytic in the disc.

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
/// bounds |f| there. `arcs` rectangles cover the upper half circle; four times as many are tried
/// before a refusal.
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
    evaluate(formula, centre, radius, arcs).or_else(|_| evaluate(formula, centre, radius, 4 * arcs))
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
    leading: Option<Vec<Vec<Option<Exact>>>>,
}

fn evaluate(formula: &Formula, centre: &Centre, radius: &Float, arcs: usize) -> Result<Radius, Refusal> {
    let mut circle = Circle {
        formula,
        centre,
        offsets: offsets(radius, arcs.max(1)),
        values: Vec::with_capacity(formula.operations().len()),
        leading: None,
    };
    for (node, operation) in formula.operations().iter().enumerate() {
        let refuse = |kind| Refusal { node, kind, proved: false };
        let arcs = circle.operation(operation).map_err(refuse)?;
        if !arcs.iter().all(Rectangle::is_finite) {
            return Err(refuse(RefusalKind::Unbounded));
        }
        circle.values.push(Values { arcs });
    }
    let root = &circle.values[formula.root()];
    Ok(root.arcs.iter().map(Rectangle::magnitude).max().unwrap_or(Radius::INFINITY))
}

/// Rectangles that cover radius * e^(i theta), theta in [j pi/arcs, (j+1) pi/arcs].
fn offsets(radius: &Float, arcs: usize) -> Vec<Rectangle> {
    let pi = WideInterval::pi(PRECISION);
    let radius = WideInterval::new(radius.clone(), radius.clone());
    (0..arcs)
        .map(|j| {
            let share = |k: usize| WideInterval::from_rational(&Rational::from((k, arcs)), PRECISION);
            let angle = pi.mul(&share(j)).hull(&pi.mul(&share(j + 1)));
            Rectangle { real: radius.mul(&angle.cos()), imaginary: radius.mul(&angle.sin()) }
        })
        .collect()
}

type Outcome = Result<Vec<Rectangle>, RefusalKind>;

impl Circle<'_> {
    fn each(&self, node: NodeId, f: impl Fn(&Rectangle) -> Option<Rectangle>) -> Outcome {
        let arcs = self.values[node].arcs.iter();
        arcs.map(|z| f(z).ok_or(RefusalKind::NotAnalytic)).collect()
    }

    fn pairs(&self, a: NodeId, b: NodeId, f: impl Fn(&Rectangle, &Rectangle) -> Option<Rectangle>) -> Outcome {
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
            Operation::Rational(x) => {
                Ok(vec![Rectangle::from_real(WideInterval::from_rational(x, PRECISION))])
            }
            Operation::Pi => Ok(vec![Rectangle::from_real(WideInterval::pi(PRECISION))]),
            Operation::Negate(a) => self.each(*a, |z| Some(z.neg())),
            Operation::Add(a, b) => self.pairs(*a, *b, |z, w| Some(z.add(w))),
            Operation::Subtract(a, b) => self.pairs(*a, *b, |z, w| Some(z.sub(w))),
            Operation::Multiply(a, b) if a == b => self.each(*a, |z| Some(z.square())),
            Operation::Multiply(a, b) => self.pairs(*a, *b, |z, w| Some(z.mul(w))),
            Operation::Divide(a, b) => self.quotient(*a, *b),
            Operation::PowerInteger(a, n) => {
                if *n < 0 && !self.free_of_zeros(*a, 0) {
                    return Err(RefusalKind::DivisionByZero);
                }
                self.each(*a, |z| z.pow_integer(*n))
            }
            Operation::PowerRational(a, q) => {
                self.off_negative_axis(*a)?;
                self.each(*a, |z| z.pow_rational(q))
            }
            Operation::Power(a, b) => {
                self.off_negative_axis(*a)?;
                self.pairs(*a, *b, |z, w| Some(z.log()?.mul(w).exp()))
            }
            Operation::Apply(function, a) => self.apply(*function, *a),
        }
    }

    fn off_negative_axis(&self, node: NodeId) -> Result<(), RefusalKind> {
        if self.values[node].hull().meets_negative_axis() { Err(RefusalKind::NotAnalytic) } else { Ok(()) }
    }

    fn quotient(&mut self, a: NodeId, b: NodeId) -> Outcome {
        if self.values[b].hull().contains_zero() {
            let zeros = self.exact_zeros(b);
            if !self.free_of_zeros(b, zeros) || self.exact_zeros(a) < zeros {
                return Err(RefusalKind::DivisionByZero);
            }
        }
        self.pairs(a, b, Rectangle::div)
    }

    /// Number of leading Taylor coefficients at the centre that are proved to be exactly zero.
    /// The operand is analytic, being evaluated already, as `leading_coefficients` demands.
    fn exact_zeros(&mut self, node: NodeId) -> usize {
        let leading = self
            .leading
            .get_or_insert_with(|| leading_coefficients(self.formula, self.centre, LEADING));
        leading[node].iter().take_while(|c| c.as_ref().is_some_and(Exact::is_zero)).count()
    }

    /// Proves that the function has no zero in the disc but one of order `zeros` at the centre.
    fn free_of_zeros(&self, node: NodeId, zeros: usize) -> bool {
        let values = &self.values[node];
        if zeros == 0 && !values.hull().contains_zero() {
            return true;
        }
        if values.arcs.len() < self.offsets.len() {
            return false;
        }
        let exponent = i32::try_from(zeros).unwrap_or(i32::MAX);
        let mut sign = None;
        values.arcs.iter().zip(&self.offsets).all(|(value, offset)| {
            let Some(quotient) = offset.pow_integer(exponent).and_then(|power| value.div(&power)) else {
                return false;
            };
            let positive = quotient.real.is_positive();
            if !positive && !quotient.real.is_negative() {
                return false;
            }
            *sign.get_or_insert(positive) == positive
        })
    }

    fn apply(&self, function: Function, a: NodeId) -> Outcome {
        let hull = self.values[a].hull();
        let (x, y) = (&hull.real, &hull.imaginary);
        let within = |part: &WideInterval| *part.lower() > -1 && *part.upper() < 1;
        let analytic = match function {
            Function::Exp | Function::Exp2 | Function::Expm1 | Function::Sin | Function::Cos
            | Function::Sinh | Function::Cosh | Function::Erf | Function::Erfc => true,
            Function::Log | Function::Log2 | Function::Log10 | Function::Sqrt => *x.lower() > 0 || !hull.meets_negative_axis(),
            Function::Log1p => *x.lower() > -1,
            Function::Cbrt | Function::Fabs => x.is_positive() || x.is_negative(),
            Function::Tan => x.tan().is_some(),
            Function::Tanh => y.tan().is_some(),
            Function::Asin | Function::Acos | Function::Atanh => within(x),
            Function::Atan | Function::Asinh => within(y) || !x.contains_zero(),
            Function::Acosh => *x.lower() > 1,
        };
        if !analytic {
            return Err(RefusalKind::NotAnalytic);
        }
        let constant = |x: i32| WideInterval::from_rational(&Rational::from(x), PRECISION);
        let one = constant(1);
        let logarithm_of = |base: i32| constant(base).log();
        let negative = x.is_negative();
        self.each(a, |z| match function {
            Function::Exp => Some(z.exp()),
            Function::Exp2 => Some(z.scale(&logarithm_of(2)?).exp()),
            Function::Expm1 => Some(z.exp().add_real(&one.neg())),
            Function::Log => z.log(),
            Function::Log2 => Some(z.log()?.scale(&one.div(&logarithm_of(2)?)?)),
            Function::Log10 => Some(z.log()?.scale(&one.div(&logarithm_of(10)?)?)),
            Function::Log1p => z.add_real(&one).log(),
            Function::Sqrt => z.sqrt(),
            Function::Cbrt if negative => Some(z.neg().pow_rational(&Rational::from((1, 3)))?.neg()),
            Function::Cbrt => z.pow_rational(&Rational::from((1, 3))),
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
        })
    }
}
