//! Taylor coefficients that are known exactly, to prove that a function has a zero of exactly
//! order k at a point.
//!
//! A ball can prove that a coefficient is not zero, never that it is zero. Here the coefficients
//! are numbers a + b pi with rational a and b, or unknown: enough for the points at which the
//! zeros of real formulas lie (sin(x) at a multiple of pi, log1p(x) at 0, exp(x) - 1 at 0), and
//! nothing is ever rounded. The two directions meet in [`leading_coefficients`]: what is zero is
//! proved here, what is not zero is proved by the balls of [`series`](crate::function::series).

use std::cmp::Ordering;
use std::f64::consts::PI;

use rug::{Integer, Rational};

use crate::function::exact::taylor::{Known, Taylor};
use crate::function::formula::{Formula, Function, NodeId, Operation};
use crate::function::series;
use crate::number::ball::Ball;
use crate::number::wide_interval::WideInterval;

mod taylor;

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

    /// Encloses the point.
    pub fn wide_interval(&self, precision: u32) -> WideInterval {
        let rational = WideInterval::from_rational(&self.rational, precision);
        if self.pi_multiple.is_zero() {
            return rational;
        }
        let multiple = WideInterval::from_rational(&self.pi_multiple, precision);
        rational.add(&multiple.mul(&WideInterval::pi(precision)))
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
                taylor::power(base, exponent, rational_power(&base[0], exponent))
            }
            Operation::Power(base, exponent) => {
                let base = &self.nodes[*base];
                let exponent = &self.nodes[*exponent];
                let logarithm = taylor::logarithm(base, logarithm_value(&base[0]));
                let argument = taylor::product(exponent, &logarithm);
                let value = match &exponent[0] {
                    Some(exponent) if exponent.as_rational().is_some() => {
                        rational_power(&base[0], &exponent.rational)
                    }
                    _ => None,
                };
                let value = value.or_else(|| exponential_value(&argument[0]));
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
            let root = rational_power(&radicand[0], &Rational::from((-1, 2)));
            taylor::power(&radicand, &Rational::from((-1, 2)), root)
        };
        match function {
            Function::Sqrt => {
                let half = Rational::from((1, 2));
                taylor::power(u, &half, rational_power(value, &half))
            }
            Function::Cbrt => {
                let third = Rational::from((1, 3));
                let root = match value {
                    Some(number) if number.rational < 0 => {
                        taylor::negated(&rational_power(&taylor::negated(value), &third))
                    }
                    _ => rational_power(value, &third),
                };
                taylor::power(u, &third, root)
            }
            Function::Exp => taylor::exponential(u, exponential_value(value)),
            Function::Exp2 => {
                let integer = value
                    .as_ref()
                    .and_then(Exact::as_rational)
                    .filter(|exponent| exponent.is_integer());
                let power =
                    integer.and_then(|exponent| rational_power(&known_integer(2), exponent));
                taylor::exponential(&taylor::times_unknown(u), power)
            }
            Function::Expm1 => {
                let mut result = taylor::exponential(u, exponential_value(value));
                result[0] = odd_value(value);
                result
            }
            Function::Log => taylor::logarithm(u, logarithm_value(value)),
            Function::Log2 => taylor::with_value(
                taylor::times_unknown(&taylor::logarithm(u, None)),
                power_of(2, value),
            ),
            Function::Log10 => taylor::with_value(
                taylor::times_unknown(&taylor::logarithm(u, None)),
                power_of(10, value),
            ),
            Function::Log1p => taylor::logarithm(&taylor::add(&one(), u), odd_value(value)),
            Function::Sin => {
                let (sine, cosine) = (sine_value(value), cosine_value(value));
                taylor::rotation(u, sine, cosine, true).0
            }
            Function::Cos => {
                let (sine, cosine) = (sine_value(value), cosine_value(value));
                taylor::rotation(u, sine, cosine, true).1
            }
            Function::Sinh => {
                taylor::rotation(u, odd_value(value), exponential_value(value), false).0
            }
            Function::Cosh => {
                taylor::rotation(u, odd_value(value), exponential_value(value), false).1
            }
            Function::Tan => taylor::tangent(u, tangent_value(value), true),
            Function::Tanh => taylor::tangent(u, odd_value(value), false),
            Function::Asin => taylor::integral(
                u,
                &inverse_root(taylor::subtract(&one(), &square())),
                arcsine_value(value),
            ),
            Function::Acos => {
                let arcsine = taylor::integral(
                    u,
                    &inverse_root(taylor::subtract(&one(), &square())),
                    arcsine_value(value),
                );
                let quarter = Some(Exact::of_pi(Rational::from((1, 2))));
                taylor::subtract(&taylor::constant(self.count, quarter), &arcsine)
            }
            Function::Atan => {
                let derivative = taylor::quotient(&one(), &taylor::add(&one(), &square()));
                taylor::integral(u, &derivative, arctangent_value(value))
            }
            Function::Asinh => taylor::integral(
                u,
                &inverse_root(taylor::add(&one(), &square())),
                odd_value(value),
            ),
            Function::Acosh => taylor::integral(
                u,
                &inverse_root(taylor::subtract(&square(), &one())),
                logarithm_value(value),
            ),
            Function::Atanh => {
                let derivative = taylor::quotient(&one(), &taylor::subtract(&one(), &square()));
                taylor::integral(u, &derivative, odd_value(value))
            }
            Function::Erf => taylor::integral(u, &gaussian(&square()), odd_value(value)),
            Function::Erfc => {
                let error = taylor::integral(u, &gaussian(&square()), odd_value(value));
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
    let value = exponential_value(&exponent[0]);
    taylor::times_unknown(&taylor::exponential(&exponent, value))
}

fn known_integer(value: i32) -> Known {
    Some(Exact::from(Rational::from(value)))
}

/// f(u) where f(0) = 0 is the only value that is known.
fn odd_value(u: &Known) -> Known {
    u.as_ref().filter(|value| value.is_zero()).cloned()
}

/// exp(u), and cosh(u): 1 at 0.
fn exponential_value(u: &Known) -> Known {
    odd_value(u).and(known_integer(1))
}

/// log(u), and acosh(u): 0 at 1.
fn logarithm_value(u: &Known) -> Known {
    u.as_ref()
        .filter(|value| value.as_rational().is_some_and(|value| *value == 1))?;
    Some(Exact::zero())
}

/// sin(b pi) = sin((b mod 2) pi), rational for b a multiple of 1/2 and for some multiples of 1/6
/// (and for no other rational b, by Niven's theorem).
fn sine_of_pi_multiple(multiple: &Rational) -> Known {
    let turn = Rational::from(multiple / 2u32);
    let sixths = (turn.clone() - turn.floor()) * 12u32;
    let value = match sixths.is_integer().then(|| sixths.numer().to_u32())?? {
        0 | 6 => Rational::new(),
        1 | 5 => Rational::from((1, 2)),
        3 => Rational::from(1),
        7 | 11 => Rational::from((-1, 2)),
        9 => Rational::from(-1),
        _ => return None,
    };
    Some(Exact::from(value))
}

fn sine_value(u: &Known) -> Known {
    sine_of_pi_multiple(u.as_ref()?.as_pi_multiple()?)
}

/// cos(y) = sin(y + pi/2).
fn cosine_value(u: &Known) -> Known {
    let multiple = u.as_ref()?.as_pi_multiple()?;
    sine_of_pi_multiple(&(multiple.clone() + Rational::from((1, 2))))
}

/// tan(b pi): 0 at integers b, 1 and -1 a quarter beyond and before them.
fn tangent_value(u: &Known) -> Known {
    let multiple = u.as_ref()?.as_pi_multiple()?;
    let quarters = (multiple.clone() - multiple.clone().floor()) * 4u32;
    match quarters.is_integer().then(|| quarters.numer().to_u32())?? {
        0 => known_integer(0),
        1 => known_integer(1),
        3 => known_integer(-1),
        _ => None,
    }
}

/// asin(u) for u in {0, 1/2, -1/2, 1, -1}.
fn arcsine_value(u: &Known) -> Known {
    let doubled = Rational::from(u.as_ref()?.as_rational()? * 2u32);
    let sixths = match doubled.is_integer().then(|| doubled.numer().to_i32())?? {
        0 => 0,
        1 => 1,
        -1 => -1,
        2 => 3,
        -2 => -3,
        _ => return None,
    };
    Some(Exact::of_pi(Rational::from((sixths, 6))))
}

/// atan(u) for u in {0, 1, -1}.
fn arctangent_value(u: &Known) -> Known {
    let value = u.as_ref()?.as_rational()?;
    let quarters = value.is_integer().then(|| value.numer().to_i32())??;
    (-1..=1)
        .contains(&quarters)
        .then(|| Exact::of_pi(Rational::from((quarters, 4))))
}

/// log_b(u), where u is an integer power of b.
fn power_of(base: u32, u: &Known) -> Known {
    let value = u.as_ref()?.as_rational()?;
    if *value <= 0 {
        return None;
    }
    let (large, small, sign) = if *value.denom() == 1 {
        (value.numer(), value.denom(), 1)
    } else {
        (value.denom(), value.numer(), -1)
    };
    let mut rest = large.clone();
    let exponent = rest.remove_factor_mut(&Integer::from(base));
    (rest == 1 && *small == 1).then(|| Exact::from(Rational::from(sign * i64::from(exponent))))
}

/// u^r for a rational u > 0 where it is rational (and 0^r = 0 for r > 0).
fn rational_power(u: &Known, exponent: &Rational) -> Known {
    let base = u.as_ref()?.as_rational()?;
    if *base < 0 || (base.is_zero() && *exponent <= 0) {
        return None;
    }
    if base.is_zero() || *base == 1 {
        return u.clone();
    }
    let degree = exponent.denom().to_u32()?;
    let numerator = taylor::integer_root(base.numer(), degree)?;
    let denominator = taylor::integer_root(base.denom(), degree)?;
    taylor::number_power(
        &Rational::from((numerator, denominator)),
        exponent.numer().to_i32()?,
    )
}
