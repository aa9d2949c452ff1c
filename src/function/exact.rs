//! Taylor coefficients that are known exactly, to prove that a function has a zero of exactly
//! order k at a point.
//!
//! A ball can prove that a coefficient is not zero, never that it is zero. Here the coefficients
//! are numbers a + b pi with rational a and b, or unknown: enough for the points at which the
//! zeros of real formulas lie (sin(x) at a multiple of pi, log1p(x) at 0, exp(x) - 1 at 0), and
//! nothing is ever rounded. The two directions meet in [`leading_coefficients`]: what is zero is
//! proved here, what is not zero is proved by the balls of a [power series](crate::function::series).

use std::cmp::Ordering;
use std::f64::consts::PI;

use rug::float::Round;
use rug::{Float, Rational};

use crate::function::exact::taylor::{Known, Taylor};
use crate::function::formula::{Formula, Function, NodeId, Operation};
use crate::function::series;
use crate::number::ball::Ball;
use crate::number::wide_interval::WideInterval;

mod taylor;
mod values;

/// An exact expansion point `rational + pi_multiple * pi`.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Centre {
    /// The rational part.
    pub rational: Rational,
    /// The factor of pi.
    pub pi_multiple: Rational,
}

impl Centre {
    /// A rational expansion point.
    pub fn rational(rational: Rational) -> Self {
        Centre {
            rational,
            pi_multiple: Rational::new(),
        }
    }

    /// The point in a ball.
    pub fn ball(&self, precision: u32) -> Ball {
        ball_of(&self.rational, &self.pi_multiple, precision)
    }

    /// The point between two numbers, the nearest ones of the precision unless a + b pi is smaller
    /// than its parts by more than a factor of 2^64.
    pub fn wide_interval(&self, precision: u32) -> WideInterval {
        if self.pi_multiple.is_zero() {
            return WideInterval::from_rational(&self.rational, precision);
        }
        let bits = precision.saturating_add(64);
        let pi_part =
            WideInterval::from_rational(&self.pi_multiple, bits).mul(&WideInterval::pi(bits));
        let sum = pi_part.add(&WideInterval::from_rational(&self.rational, bits));
        let (lower, _) = Float::with_val_round(precision, sum.lower(), Round::Down);
        let (upper, _) = Float::with_val_round(precision, sum.upper(), Round::Up);
        WideInterval::new(lower, upper)
    }

    /// A double near the point, to steer a search with.
    pub fn to_f64(&self) -> f64 {
        self.rational.to_f64() + self.pi_multiple.to_f64() * PI
    }
}

/// An exactly known number `rational + pi_multiple * pi`. The representation is unique, because
/// pi is irrational.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Exact {
    /// The rational part.
    pub rational: Rational,
    /// The factor of pi.
    pub pi_multiple: Rational,
}

impl Exact {
    /// The number 0.
    pub fn zero() -> Self {
        Exact::from(Rational::new())
    }

    /// A rational multiple of pi.
    pub fn of_pi(pi_multiple: Rational) -> Self {
        Exact {
            rational: Rational::new(),
            pi_multiple,
        }
    }

    /// True if the number is 0.
    pub fn is_zero(&self) -> bool {
        self.rational.is_zero() && self.pi_multiple.is_zero()
    }

    /// The number, if it is rational.
    pub fn as_rational(&self) -> Option<&Rational> {
        self.pi_multiple.is_zero().then_some(&self.rational)
    }

    /// The number in a ball.
    pub fn ball(&self, precision: u32) -> Ball {
        ball_of(&self.rational, &self.pi_multiple, precision)
    }

    /// b, if the number is b pi.
    fn as_pi_multiple(&self) -> Option<&Rational> {
        self.rational.is_zero().then_some(&self.pi_multiple)
    }
}

impl From<Rational> for Exact {
    fn from(rational: Rational) -> Self {
        Exact {
            rational,
            pi_multiple: Rational::new(),
        }
    }
}

/// a + b pi, with enough guard bits that a cancellation costs no precision unless a + b pi is
/// smaller than its parts by more than a factor of 2^64.
fn ball_of(rational: &Rational, pi_multiple: &Rational, precision: u32) -> Ball {
    let rational_part = |bits| Ball::from_rational(rational, bits);
    if pi_multiple.is_zero() {
        return rational_part(precision);
    }
    let bits = precision.saturating_add(64);
    let pi_part = Ball::from_rational(pi_multiple, bits).mul(&Ball::pi(bits));
    pi_part.add(&rational_part(bits)).with_precision(precision)
}

/// For every operation of the formula the first `count` Taylor coefficients in powers of
/// (x - centre); `None` is a coefficient that is not known. Quotients are continued through
/// removable singularities.
///
/// A coefficient that is `Some` is the true one. The rules use 0 * unknown = 0, which would be false
/// where the unknown factor has a pole (x * (1/x)); so the operations are evaluated as power series
/// in balls beside, which refuses an operation that is not proved analytic at the centre, and from
/// that operation on nothing is known.
pub fn leading_coefficients(
    formula: &Formula,
    centre: &Centre,
    count: usize,
) -> Vec<Vec<Option<Exact>>> {
    let operations = formula.operations();
    let mut coefficients = series::exact_coefficients(operations, centre, count);
    coefficients.resize(operations.len(), vec![None; count]);
    coefficients
}

/// The exactly known leading coefficients of the operations of a formula, computed in order and
/// only as far as they are asked for.
pub(crate) struct ExactCoefficients<'a> {
    operations: &'a [Operation],
    centre: &'a Centre,
    count: usize,
    varies: Vec<bool>,
    nodes: Vec<Taylor>,
}

impl<'a> ExactCoefficients<'a> {
    pub(crate) fn new(operations: &'a [Operation], centre: &'a Centre, count: usize) -> Self {
        ExactCoefficients {
            operations,
            centre,
            count,
            varies: Vec::new(),
            nodes: Vec::new(),
        }
    }

    /// The coefficients of all operations so far.
    pub(crate) fn into_nodes(self) -> Vec<Vec<Option<Exact>>> {
        self.nodes
    }

    /// The coefficients of an operation before the end of the last [`extend_to`](Self::extend_to).
    pub(crate) fn node(&self, node: NodeId) -> &[Option<Exact>] {
        &self.nodes[node]
    }

    /// Computes the coefficients of the operations before `end`.
    ///
    /// `sign(node, k)` is the sign of the k-th coefficient of an operation where it is proved to
    /// be different from zero. Every operation before `end` must be analytic at the centre (see
    /// [`leading_coefficients`]).
    pub(crate) fn extend_to(
        &mut self,
        end: NodeId,
        sign: &dyn Fn(NodeId, usize) -> Option<Ordering>,
    ) {
        for node in self.nodes.len()..end {
            let operation = &self.operations[node];
            let varies = match operation {
                Operation::Variable => true,
                Operation::Rational(_) | Operation::Pi => false,
                Operation::Negate(operand)
                | Operation::PowerInteger(operand, _)
                | Operation::PowerRational(operand, _)
                | Operation::Apply(_, operand) => self.varies[*operand],
                Operation::Add(left, right)
                | Operation::Subtract(left, right)
                | Operation::Multiply(left, right)
                | Operation::Divide(left, right)
                | Operation::Power(left, right) => self.varies[*left] || self.varies[*right],
            };
            let mut coefficients = if self.count == 0 {
                Vec::new()
            } else {
                self.operation(operation, sign)
            };
            if !varies {
                coefficients
                    .iter_mut()
                    .skip(1)
                    .for_each(|known| *known = Some(Exact::zero()));
            }
            self.varies.push(varies);
            self.nodes.push(coefficients);
        }
    }

    fn operation(
        &self,
        operation: &Operation,
        sign: &dyn Fn(NodeId, usize) -> Option<Ordering>,
    ) -> Taylor {
        match operation {
            Operation::Variable => {
                let mut coefficients = taylor::constant(self.count, self.centre_value());
                if let Some(first) = coefficients.get_mut(1) {
                    *first = Some(Exact::from(Rational::from(1)));
                }
                coefficients
            }
            Operation::Rational(value) => {
                taylor::constant(self.count, taylor::capped(Exact::from(value.clone())))
            }
            Operation::Pi => taylor::constant(self.count, Some(Exact::of_pi(Rational::from(1)))),
            Operation::Negate(operand) => taylor::negate(&self.nodes[*operand]),
            Operation::Add(left, right) => taylor::add(&self.nodes[*left], &self.nodes[*right]),
            Operation::Subtract(left, right) => {
                taylor::subtract(&self.nodes[*left], &self.nodes[*right])
            }
            Operation::Multiply(left, right) => {
                taylor::product(&self.nodes[*left], &self.nodes[*right])
            }
            Operation::Divide(left, right) => {
                let zeros = leading_zeros(&self.nodes[*right]);
                let nonzero = match self.nodes[*right].get(zeros) {
                    Some(Some(_)) => true,
                    Some(None) => sign(*right, zeros).is_some(),
                    None => false,
                };
                if nonzero && leading_zeros(&self.nodes[*left]) >= zeros {
                    let mut quotient =
                        taylor::quotient(&self.nodes[*left][zeros..], &self.nodes[*right][zeros..]);
                    quotient.resize(self.count, None);
                    quotient
                } else {
                    vec![None; self.count]
                }
            }
            Operation::PowerInteger(base, exponent) => {
                let power = taylor::power_integer(&self.nodes[*base], exponent.unsigned_abs());
                let nonzero = matches!(&self.nodes[*base][0], Some(value) if !value.is_zero())
                    || sign(*base, 0).is_some();
                if *exponent >= 0 {
                    power
                } else if nonzero {
                    let one = taylor::constant(self.count, Some(Exact::from(Rational::from(1))));
                    taylor::quotient(&one, &power)
                } else {
                    vec![None; self.count]
                }
            }
            Operation::PowerRational(base, exponent) => {
                let base = &self.nodes[*base];
                taylor::power(base, exponent, values::rational_power(&base[0], exponent))
            }
            Operation::Power(base, exponent) => {
                let base = &self.nodes[*base];
                let exponent = &self.nodes[*exponent];
                let logarithm = taylor::logarithm(base, values::logarithm_value(&base[0]));
                let argument = taylor::product(exponent, &logarithm);
                let value = match &exponent[0] {
                    Some(exponent) if exponent.as_rational().is_some() => {
                        values::rational_power(&base[0], &exponent.rational)
                    }
                    _ => None,
                };
                let value = value.or_else(|| values::exponential_value(&argument[0]));
                taylor::exponential(&argument, value)
            }
            Operation::Apply(function, operand) => {
                self.apply(*function, &self.nodes[*operand], sign(*operand, 0))
            }
        }
    }

    fn centre_value(&self) -> Known {
        taylor::capped(Exact {
            rational: self.centre.rational.clone(),
            pi_multiple: self.centre.pi_multiple.clone(),
        })
    }

    /// A function of a series u, by its value at u_0 and its differential equation.
    fn apply(&self, function: Function, u: &[Known], sign: Option<Ordering>) -> Taylor {
        let one = || taylor::constant(self.count, Some(Exact::from(Rational::from(1))));
        let square = || taylor::product(u, u);
        let value = &u[0];
        let inverse_root = |radicand: Taylor| {
            let root = values::rational_power(&radicand[0], &Rational::from((-1, 2)));
            taylor::power(&radicand, &Rational::from((-1, 2)), root)
        };
        match function {
            Function::Sqrt => {
                let half = Rational::from((1, 2));
                taylor::power(u, &half, values::rational_power(value, &half))
            }
            Function::Cbrt => {
                let third = Rational::from((1, 3));
                let root = match value {
                    Some(number) if number.rational < 0 => {
                        taylor::negated(&values::rational_power(&taylor::negated(value), &third))
                    }
                    _ => values::rational_power(value, &third),
                };
                taylor::power(u, &third, root)
            }
            Function::Exp => taylor::exponential(u, values::exponential_value(value)),
            Function::Exp2 => {
                let integer = value
                    .as_ref()
                    .and_then(Exact::as_rational)
                    .filter(|exponent| exponent.is_integer());
                let power = integer.and_then(|exponent| {
                    values::rational_power(&values::known_integer(2), exponent)
                });
                taylor::exponential(&taylor::times_unknown(u), power)
            }
            Function::Expm1 => {
                let mut result = taylor::exponential(u, values::exponential_value(value));
                result[0] = values::odd_value(value);
                result
            }
            Function::Log => taylor::logarithm(u, values::logarithm_value(value)),
            Function::Log2 => taylor::with_value(
                taylor::times_unknown(&taylor::logarithm(u, None)),
                values::power_of(2, value),
            ),
            Function::Log10 => taylor::with_value(
                taylor::times_unknown(&taylor::logarithm(u, None)),
                values::power_of(10, value),
            ),
            Function::Log1p => taylor::logarithm(&taylor::add(&one(), u), values::odd_value(value)),
            Function::Sin => {
                let (sine, cosine) = (values::sine_value(value), values::cosine_value(value));
                taylor::rotation(u, sine, cosine, true).0
            }
            Function::Cos => {
                let (sine, cosine) = (values::sine_value(value), values::cosine_value(value));
                taylor::rotation(u, sine, cosine, true).1
            }
            Function::Sinh => {
                taylor::rotation(
                    u,
                    values::odd_value(value),
                    values::exponential_value(value),
                    false,
                )
                .0
            }
            Function::Cosh => {
                taylor::rotation(
                    u,
                    values::odd_value(value),
                    values::exponential_value(value),
                    false,
                )
                .1
            }
            Function::Tan => taylor::tangent(u, values::tangent_value(value), true),
            Function::Tanh => taylor::tangent(u, values::odd_value(value), false),
            Function::Asin => taylor::integral(
                u,
                &inverse_root(taylor::subtract(&one(), &square())),
                values::arcsine_value(value),
            ),
            Function::Acos => {
                let arcsine = taylor::integral(
                    u,
                    &inverse_root(taylor::subtract(&one(), &square())),
                    values::arcsine_value(value),
                );
                let quarter = Some(Exact::of_pi(Rational::from((1, 2))));
                taylor::subtract(&taylor::constant(self.count, quarter), &arcsine)
            }
            Function::Atan => {
                let derivative = taylor::quotient(&one(), &taylor::add(&one(), &square()));
                taylor::integral(u, &derivative, values::arctangent_value(value))
            }
            Function::Asinh => taylor::integral(
                u,
                &inverse_root(taylor::add(&one(), &square())),
                values::odd_value(value),
            ),
            Function::Acosh => taylor::integral(
                u,
                &inverse_root(taylor::subtract(&square(), &one())),
                values::logarithm_value(value),
            ),
            Function::Atanh => {
                let derivative = taylor::quotient(&one(), &taylor::subtract(&one(), &square()));
                taylor::integral(u, &derivative, values::odd_value(value))
            }
            Function::Erf => taylor::integral(u, &gaussian(&square()), values::odd_value(value)),
            Function::Erfc => {
                let error = taylor::integral(u, &gaussian(&square()), values::odd_value(value));
                taylor::subtract(&one(), &error)
            }
            Function::Fabs => match sign {
                Some(Ordering::Less) => taylor::negate(u),
                Some(_) => u.to_vec(),
                None => vec![None; self.count],
            },
        }
    }
}

/// The number of leading coefficients that are proved to be zero.
pub(crate) fn leading_zeros(coefficients: &[Option<Exact>]) -> usize {
    coefficients
        .iter()
        .take_while(|known| matches!(known, Some(value) if value.is_zero()))
        .count()
}

/// 2/sqrt(pi) exp(-u^2) from u^2; the factor is not in Q + Q pi.
fn gaussian(square: &[Known]) -> Taylor {
    let exponent = taylor::negate(square);
    let value = values::exponential_value(&exponent[0]);
    taylor::times_unknown(&taylor::exponential(&exponent, value))
}

#[cfg(test)]
mod tests;
