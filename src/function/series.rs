//! The reference function as a truncated power series in balls.
//!
//! Every operation of the formula becomes a power series in t, x = centre + scale t, by the
//! recurrences of the module `power_series`. A quotient whose denominator vanishes at the centre is
//! continued there if the zeros of numerator and denominator are proved by exact arithmetic
//! ([exact coefficients](crate::function::exact)): with d(t) = t^k D(t), D(0) != 0 and n(t) = t^k N(t) the
//! continuation is N/D. Such a quotient is k terms shorter than its operands, so the whole formula
//! is evaluated again with the missing terms.

use std::cmp::Ordering;
use std::collections::HashMap;

use rug::Float;

use crate::function::exact::{self, Centre, Exact, ExactCoefficients};
use crate::function::formula::{Formula, Function, NodeId, Operation};
use crate::function::refusal::{Refusal, RefusalKind};
use crate::function::series::elementary::Obstacle;
use crate::function::series::power_series::{Arithmetic, PowerSeries};
use crate::number::ball::Ball;

mod elementary;
mod power_series;

/// How many leading coefficients are known exactly for a quotient 0/0. A zero of this order or a
/// higher one is refused, and so are nested singularities whose orders add up to as much.
const EXACT_COUNT: usize = 8;

/// How many terms more than asked for are carried to make up for removable singularities, each of
/// which costs the order of its zero. A formula that nests so many that it needs more is refused.
const EXTRA_MAX: usize = 64;

/// The precision at which [`exact_coefficients`] proves coefficients to be different from zero.
const SIGN_PRECISION: u32 = 128;

/// The coefficients f^(k)(c) scale^k / k! for k < `terms` in balls, c the centre and `scale` > 0 an
/// exact number.
///
/// A success with more than one term proves f analytic at the centre (after continuation through
/// removable singularities). With one term it is an evaluation at a point, which also works where
/// only the value exists, such as sqrt(0) and asin(1).
///
/// `precision` is that of the arithmetic. On |t| <= 1 a few bits of it are lost; a coefficient that is
/// much smaller than the largest one may lose, relative to itself, up to about three bits times its
/// index in compound formulas.
///
/// # Errors
///
/// A [`Refusal`] names the operation that is not analytic at the centre, or not proved to be. It is
/// `proved` only if the formula is proved to be undefined at the centre.
pub fn series(
    formula: &Formula,
    centre: &Centre,
    scale: &Float,
    terms: usize,
    precision: u32,
) -> Result<Vec<Ball>, Refusal> {
    series_with_work(
        formula,
        centre,
        scale,
        terms,
        precision,
        &mut SeriesWork::default(),
    )
}

/// The work of an evaluation in units that do not depend on the machine.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct SeriesWork {
    /// The number of ball multiplications; a value of an elementary function counts as
    /// 20 of them.
    pub multiplications: u64,
}

/// [`series`], adding the work it took to `work`.
///
/// # Errors
///
/// As [`series`].
pub fn series_with_work(
    formula: &Formula,
    centre: &Centre,
    scale: &Float,
    terms: usize,
    precision: u32,
    work: &mut SeriesWork,
) -> Result<Vec<Ball>, Refusal> {
    let operations = formula.operations();
    let mut extra = 0;
    // Exact zeros are worth their price from the start where the centre suggests them.
    let mut exact = !centre.pi_multiple.is_zero();
    loop {
        let mut evaluation = Evaluation::new(
            operations,
            centre,
            scale,
            terms.saturating_add(extra),
            precision,
        );
        if exact {
            evaluation.exact = Some(ExactCoefficients::new(operations, centre, EXACT_COUNT));
        }
        let outcome = evaluation.run();
        work.multiplications = work
            .multiplications
            .saturating_add(evaluation.arithmetic.work);
        let short = match outcome {
            Ok(()) => {
                let root = evaluation.nodes.swap_remove(formula.root());
                if root.known() >= terms {
                    return Ok(root.into_coefficients(terms, precision));
                }
                extra += terms - root.known();
                formula.root()
            }
            Err(Stop::Refused(refusal)) => return Err(refusal),
            Err(Stop::TooFewTerms(node)) => {
                extra += extra.max(EXACT_COUNT);
                node
            }
        };
        if extra > EXTRA_MAX {
            let kind = RefusalKind::DivisionByZero;
            return Err(Refusal {
                node: short,
                kind,
                proved: false,
            });
        }
        exact = true;
    }
}

/// The first `count` exactly known coefficients of the operations before the first one that is not
/// proved analytic at the centre.
pub(crate) fn exact_coefficients(
    operations: &[Operation],
    centre: &Centre,
    count: usize,
) -> Vec<Vec<Option<Exact>>> {
    let scale = Float::with_val(2, 1);
    let mut extra = EXACT_COUNT;
    loop {
        // Two terms at least, because a value alone does not prove analyticity.
        let terms = count.max(2).saturating_add(extra);
        let mut evaluation = Evaluation::new(operations, centre, &scale, terms, SIGN_PRECISION);
        evaluation.exact = Some(ExactCoefficients::new(operations, centre, terms));
        let outcome = evaluation.run();
        extra *= 2;
        if matches!(outcome, Err(Stop::TooFewTerms(_))) && extra <= EXTRA_MAX {
            continue;
        }
        let mut nodes = evaluation
            .exact
            .map(ExactCoefficients::into_nodes)
            .unwrap_or_default();
        nodes
            .iter_mut()
            .for_each(|coefficients| coefficients.truncate(count));
        return nodes;
    }
}

/// Why an evaluation ended before the last operation.
enum Stop {
    Refused(Refusal),
    /// A removable singularity at this operation leaves no term.
    TooFewTerms(NodeId),
}

/// One pass over the operations with a fixed number of terms.
struct Evaluation<'a> {
    operations: &'a [Operation],
    centre: &'a Centre,
    scale: &'a Float,
    arithmetic: Arithmetic,
    nodes: Vec<PowerSeries>,
    /// Results that came with another: the cosine with the sine and the like.
    companions: HashMap<(Function, NodeId), PowerSeries>,
    exact: Option<ExactCoefficients<'a>>,
}

impl<'a> Evaluation<'a> {
    fn new(
        operations: &'a [Operation],
        centre: &'a Centre,
        scale: &'a Float,
        terms: usize,
        precision: u32,
    ) -> Self {
        Evaluation {
            operations,
            centre,
            scale,
            arithmetic: Arithmetic {
                precision,
                terms: terms.max(1),
                work: 0,
            },
            nodes: Vec::with_capacity(operations.len()),
            companions: HashMap::new(),
            exact: None,
        }
    }

    fn run(&mut self) -> Result<(), Stop> {
        for node in 0..self.operations.len() {
            let mut result = self.operation(node)?;
            if !result.is_finite() {
                return Err(refused(node, Obstacle::unproved(RefusalKind::Unbounded)));
            }
            if self.exact.is_some() {
                self.nodes.push(result);
                self.extend_exact(node + 1);
                result = self.nodes.remove(node);
                self.set_exact_zeros(node, &mut result);
            }
            self.nodes.push(result);
        }
        Ok(())
    }

    /// Computes the exact coefficients of the operations before `end`, which are all evaluated.
    fn extend_exact(&mut self, end: NodeId) {
        let nodes = &self.nodes;
        let sign = |node: NodeId, k: usize| {
            let coefficient = nodes.get(node)?.coefficients().get(k)?;
            if coefficient.is_positive() {
                Some(Ordering::Greater)
            } else if coefficient.is_negative() {
                Some(Ordering::Less)
            } else {
                None
            }
        };
        self.exact
            .get_or_insert_with(|| {
                ExactCoefficients::new(self.operations, self.centre, EXACT_COUNT)
            })
            .extend_to(end, &sign);
    }

    /// With one term nothing is proved about derivatives, so that only the value may be replaced:
    /// the rules for it use values alone.
    fn set_exact_zeros(&self, node: NodeId, result: &mut PowerSeries) {
        let Some(exact) = &self.exact else { return };
        for (k, known) in exact
            .node(node)
            .iter()
            .enumerate()
            .take(self.arithmetic.terms)
        {
            if matches!(known, Some(value) if value.is_zero()) {
                result.set_zero(k);
            }
        }
    }

    fn operation(&mut self, node: NodeId) -> Result<PowerSeries, Stop> {
        let precision = self.arithmetic.precision;
        let result = match &self.operations[node] {
            Operation::Variable => self.variable(),
            Operation::Rational(value) => {
                PowerSeries::constant(Ball::from_rational(value, precision))
            }
            Operation::Pi => PowerSeries::constant(Ball::pi(precision)),
            Operation::Negate(operand) => self.arithmetic.negate(&self.nodes[*operand]),
            Operation::Add(left, right) => {
                self.arithmetic.add(&self.nodes[*left], &self.nodes[*right])
            }
            Operation::Subtract(left, right) => self
                .arithmetic
                .subtract(&self.nodes[*left], &self.nodes[*right]),
            Operation::Multiply(left, right) if left == right => {
                self.arithmetic.square(&self.nodes[*left])
            }
            Operation::Multiply(left, right) => self
                .arithmetic
                .product(&self.nodes[*left], &self.nodes[*right]),
            Operation::Divide(left, right) => return self.divide(node, *left, *right),
            Operation::PowerInteger(base, exponent) if *exponent >= 0 => self
                .arithmetic
                .power_integer(&self.nodes[*base], exponent.unsigned_abs()),
            Operation::PowerInteger(base, exponent) => self
                .arithmetic
                .power_negative(&self.nodes[*base], *exponent)
                .map_err(|obstacle| refused(node, obstacle))?,
            Operation::PowerRational(base, exponent) => self
                .arithmetic
                .power_rational(&self.nodes[*base], exponent)
                .map_err(|obstacle| refused(node, obstacle))?,
            Operation::Power(base, exponent) => self
                .arithmetic
                .power_of_series(&self.nodes[*base], &self.nodes[*exponent])
                .map_err(|obstacle| refused(node, obstacle))?,
            Operation::Apply(function, operand) => {
                if let Some(result) = self.companions.remove(&(*function, *operand)) {
                    result
                } else {
                    let (result, companion) = self
                        .arithmetic
                        .apply(*function, &self.nodes[*operand])
                        .map_err(|obstacle| refused(node, obstacle))?;
                    if let Some((other, series)) = companion {
                        self.companions.insert((other, *operand), series);
                    }
                    result
                }
            }
        };
        Ok(result)
    }

    fn variable(&self) -> PowerSeries {
        let precision = self.arithmetic.precision;
        let scale = Ball::from_float(self.scale.clone()).with_precision(precision);
        PowerSeries::line(self.centre.ball(precision), scale)
    }

    /// A quotient, also through a removable singularity.
    fn divide(&mut self, node: NodeId, left: NodeId, right: NodeId) -> Result<PowerSeries, Stop> {
        let precision = self.arithmetic.precision;
        let pole = |proved| refused(node, Obstacle::new(RefusalKind::DivisionByZero, proved));
        let denominator = &self.nodes[right];
        if denominator.is_zero() {
            return Err(pole(true));
        }
        if let Some(quotient) = self.arithmetic.quotient(&self.nodes[left], denominator) {
            return Ok(quotient);
        }
        if self.arithmetic.terms == 1 {
            return Err(Stop::TooFewTerms(node));
        }
        self.extend_exact(node);
        let Some(exact) = &self.exact else {
            return Err(pole(false));
        };
        let zeros = exact::leading_zeros(exact.node(right));
        let (numerator, denominator) = (&self.nodes[left], &self.nodes[right]);
        let shared = exact::leading_zeros(exact.node(left)).min(zeros);
        if shared < zeros && shared < numerator.known() {
            // The numerator has a zero of lower order: a pole, if that is proved.
            let lowest = numerator.coefficient(shared, precision);
            return Err(pole(!lowest.contains_zero()));
        }
        if zeros == 0 || zeros == exact.node(right).len() {
            return Err(pole(false));
        }
        if zeros >= numerator.known().min(denominator.known()) {
            return Err(Stop::TooFewTerms(node));
        }
        let (numerator, denominator) = (
            numerator.without_leading(zeros),
            denominator.without_leading(zeros),
        );
        self.arithmetic
            .quotient(&numerator, &denominator)
            .ok_or_else(|| pole(false))
    }
}

fn refused(node: NodeId, obstacle: Obstacle) -> Stop {
    Stop::Refused(Refusal {
        node,
        kind: obstacle.kind,
        proved: obstacle.proved,
    })
}

#[cfg(test)]
mod tests;
