//! Elementary functions of a power series: the value at the centre by the function of a ball, the
//! rest by the recurrence that belongs to the function's differential equation.

use rug::Rational;

use crate::function::formula::Function;
use crate::function::refusal::RefusalKind;
use crate::function::series::power_series::{Arithmetic, PowerSeries};
use crate::number::ball::Ball;

/// The cost of a value of an elementary function in ball multiplications, roughly.
const ELEMENTARY_WORK: u64 = 20;

/// Why a function has no power series at the centre.
#[derive(Clone, Copy, Debug)]
pub(super) struct Obstacle {
    pub(super) kind: RefusalKind,
    /// True only if the function is proved to be undefined there.
    pub(super) proved: bool,
}

impl Obstacle {
    pub(super) fn new(kind: RefusalKind, proved: bool) -> Self {
        Obstacle { kind, proved }
    }

    pub(super) fn unproved(kind: RefusalKind) -> Self {
        Obstacle {
            kind,
            proved: false,
        }
    }

    fn outside_domain(proved: bool) -> Self {
        Obstacle {
            kind: RefusalKind::OutsideDomain,
            proved,
        }
    }

    /// A radicand or base u_0 that is not proved to be positive. Exactly 0 is an end of the domain
    /// where the function is defined, but not analytic.
    fn at_branch_point(base: &Ball) -> Self {
        if base.is_exact_zero() {
            Obstacle::unproved(RefusalKind::NotAnalytic)
        } else {
            Obstacle::outside_domain(base.is_negative())
        }
    }
}

/// A series and, where it comes for free, that of another function of the same operand.
type WithCompanion = (PowerSeries, Option<(Function, PowerSeries)>);

impl Arithmetic {
    /// A function of a power series.
    ///
    /// Where only the value is asked for, or the operand is constant, it is a value of the function
    /// of a ball, and an end of the domain is no obstacle.
    pub(super) fn apply(
        &mut self,
        function: Function,
        u: &PowerSeries,
    ) -> Result<WithCompanion, Obstacle> {
        self.work += ELEMENTARY_WORK;
        let operand = u.coefficient(0, self.precision);
        if matches!(
            function,
            Function::Sin | Function::Cos | Function::Sinh | Function::Cosh
        ) && !u.is_constant()
        {
            return Ok(self.rotations(function, u, &operand));
        }
        let value = value(function, &operand)
            .ok_or_else(|| Obstacle::outside_domain(is_outside(function, &operand)))?;
        let result = if u.is_constant() {
            PowerSeries::constant(value)
        } else if self.terms == 1 {
            PowerSeries::value_only(value)
        } else {
            self.analytic(function, u, value)?
        };
        Ok((result, None))
    }

    /// sin and cos, or sinh and cosh, together.
    fn rotations(&mut self, function: Function, u: &PowerSeries, operand: &Ball) -> WithCompanion {
        let circular = matches!(function, Function::Sin | Function::Cos);
        let values = if circular {
            operand.sin_cos()
        } else {
            (operand.sinh(), operand.cosh())
        };
        let (sine, cosine) = self.rotation(u, values, circular);
        match function {
            Function::Sin => (sine, Some((Function::Cos, cosine))),
            Function::Cos => (cosine, Some((Function::Sin, sine))),
            Function::Sinh => (sine, Some((Function::Cosh, cosine))),
            _ => (cosine, Some((Function::Sinh, sine))),
        }
    }

    /// A function with a given value at the centre, two terms or more.
    fn analytic(
        &mut self,
        function: Function,
        u: &PowerSeries,
        value: Ball,
    ) -> Result<PowerSeries, Obstacle> {
        let precision = self.precision;
        let one = PowerSeries::constant(Ball::one(precision));
        let operand = u.coefficient(0, precision);
        let branch_point = || Obstacle::at_branch_point(&operand);
        let not_analytic = || Obstacle::unproved(RefusalKind::NotAnalytic);
        match function {
            Function::Sqrt => {
                if !operand.is_positive() {
                    return Err(branch_point());
                }
                self.square_root(u, value).ok_or_else(branch_point)
            }
            // y^3 = u, so 3 u y' = u' y for either sign.
            Function::Cbrt => {
                let third = Ball::from_rational(&Rational::from((1, 3)), precision);
                self.power(u, &third, value).ok_or_else(not_analytic)
            }
            Function::Exp => Ok(self.exponential(u, value)),
            // 2^u = exp(u log 2)
            Function::Exp2 => {
                let exponent = self.product(u, &self.logarithm_of(2)?);
                Ok(self.exponential(&exponent, value))
            }
            Function::Expm1 => Ok(self.exponential(u, operand.exp()).with_value(value)),
            // y' = u'/u
            Function::Log => self
                .integral_of_quotient(u, u, value)
                .ok_or_else(branch_point),
            Function::Log2 | Function::Log10 => {
                let base = self.logarithm_of(if function == Function::Log2 { 2 } else { 10 })?;
                let natural = self
                    .integral_of_quotient(u, u, Ball::zero(precision))
                    .ok_or_else(branch_point)?;
                let scaled = self.quotient(&natural, &base).ok_or_else(not_analytic)?;
                Ok(scaled.with_value(value))
            }
            // y' = u'/(1 + u)
            Function::Log1p => {
                let argument = self.add(&one, u);
                self.integral_of_quotient(u, &argument, value)
                    .ok_or_else(not_analytic)
            }
            // g_0 = 1 + y_0^2
            Function::Tan => {
                let derivative = Ball::one(precision).add(&value.square());
                Ok(self.tangent(u, value, derivative, true))
            }
            // g_0 = 1/cosh(u_0)^2
            Function::Tanh => {
                let derivative = Ball::one(precision)
                    .div(&operand.cosh().square())
                    .ok_or(Obstacle::unproved(RefusalKind::Unbounded))?;
                Ok(self.tangent(u, value, derivative, false))
            }
            // y' = u'/sqrt((1 - u)(1 + u)); the product does not cancel near the ends.
            Function::Asin | Function::Acos => {
                let (below, above) = (self.subtract(&one, u), self.add(&one, u));
                let radicand = self.product(&below, &above);
                let root = self.positive_root(&radicand)?;
                let arcsine = self
                    .integral_of_quotient(u, &root, value.clone())
                    .ok_or_else(not_analytic)?;
                Ok(if function == Function::Asin {
                    arcsine
                } else {
                    self.negate(&arcsine).with_value(value)
                })
            }
            // y' = u'/(sqrt(u - 1) sqrt(u + 1)): the powers -1/2 of the two factors and their
            // product lose less than a root of the product and a division by it.
            Function::Acosh => {
                let below = self.inverse_root(&self.subtract(u, &one))?;
                let above = self.inverse_root(&self.add(u, &one))?;
                let derivative = self.product(&below, &above);
                Ok(self.integral_of_product(u, &derivative, value))
            }
            // y' = u'/(1 + u^2)
            Function::Atan => {
                let square = self.square(u);
                let denominator = self.add(&one, &square);
                self.integral_of_quotient(u, &denominator, value)
                    .ok_or_else(not_analytic)
            }
            // y' = u'/sqrt(1 + u^2)
            Function::Asinh => {
                let square = self.square(u);
                let root = self.positive_root(&self.add(&one, &square))?;
                self.integral_of_quotient(u, &root, value)
                    .ok_or_else(not_analytic)
            }
            // y' = u'/((1 - u)(1 + u))
            Function::Atanh => {
                let (below, above) = (self.subtract(&one, u), self.add(&one, u));
                let denominator = self.product(&below, &above);
                self.integral_of_quotient(u, &denominator, value)
                    .ok_or_else(not_analytic)
            }
            Function::Erf => {
                let gaussian = self.gaussian(u)?;
                Ok(self.integral_of_product(u, &gaussian, value))
            }
            Function::Erfc => {
                let gaussian = self.gaussian(u)?;
                let negative = self.negate(u);
                Ok(self.integral_of_product(&negative, &gaussian, value))
            }
            Function::Fabs if operand.is_positive() => Ok(u.clone()),
            Function::Fabs if operand.is_negative() => Ok(self.negate(u)),
            Function::Fabs => Err(not_analytic()),
            Function::Sin | Function::Cos | Function::Sinh | Function::Cosh => {
                Ok(self.rotations(function, u, &operand).0)
            }
        }
    }

    /// u^n for an integer n < 0.
    pub(super) fn power_negative(
        &mut self,
        u: &PowerSeries,
        exponent: i32,
    ) -> Result<PowerSeries, Obstacle> {
        let base = u.coefficient(0, self.precision);
        let pole = || Obstacle::new(RefusalKind::DivisionByZero, base.is_exact_zero());
        let value = base.pow_integer(i64::from(exponent)).ok_or_else(pole)?;
        if u.is_constant() {
            return Ok(PowerSeries::constant(value));
        }
        let exponent = Ball::from_i64(i64::from(exponent), self.precision);
        self.power(u, &exponent, value).ok_or_else(pole)
    }

    /// u^r for a rational r that is not an integer, u > 0; its value also for u = 0 and r > 0.
    pub(super) fn power_rational(
        &mut self,
        u: &PowerSeries,
        exponent: &Rational,
    ) -> Result<PowerSeries, Obstacle> {
        self.work += ELEMENTARY_WORK;
        let base = u.coefficient(0, self.precision);
        let value = base.pow_rational(exponent).ok_or_else(|| {
            Obstacle::outside_domain(base.is_negative() || (base.is_exact_zero() && *exponent < 0))
        })?;
        if u.is_constant() {
            return Ok(PowerSeries::constant(value));
        }
        if self.terms == 1 {
            return Ok(PowerSeries::value_only(value));
        }
        if !base.is_positive() {
            return Err(Obstacle::at_branch_point(&base));
        }
        let exponent = Ball::from_rational(exponent, self.precision);
        self.power(u, &exponent, value)
            .ok_or_else(|| Obstacle::at_branch_point(&base))
    }

    /// u^v = exp(v log u), u > 0.
    pub(super) fn power_of_series(
        &mut self,
        u: &PowerSeries,
        v: &PowerSeries,
    ) -> Result<PowerSeries, Obstacle> {
        self.work += 2 * ELEMENTARY_WORK;
        let base = u.coefficient(0, self.precision);
        let exponent = v.coefficient(0, self.precision);
        let logarithm = base
            .log()
            .ok_or_else(|| Obstacle::outside_domain(is_outside(Function::Log, &base)))?;
        let value = exponent.mul(&logarithm).exp();
        if u.is_constant() && v.is_constant() {
            return Ok(PowerSeries::constant(value));
        }
        if self.terms == 1 {
            return Ok(PowerSeries::value_only(value));
        }
        let branch_point = || Obstacle::at_branch_point(&base);
        if v.is_constant() {
            return self.power(u, &exponent, value).ok_or_else(branch_point);
        }
        let logarithm = if u.is_constant() {
            PowerSeries::constant(logarithm)
        } else {
            self.integral_of_quotient(u, u, logarithm)
                .ok_or_else(branch_point)?
        };
        let argument = self.product(v, &logarithm);
        Ok(self.exponential(&argument, value))
    }

    /// log(n), a constant different from zero for n > 1.
    fn logarithm_of(&self, integer: i64) -> Result<PowerSeries, Obstacle> {
        Ball::from_i64(integer, self.precision)
            .log()
            .map(PowerSeries::constant)
            .ok_or(Obstacle::outside_domain(false))
    }

    /// 2/sqrt(pi) exp(-u^2), the derivative of erf.
    fn gaussian(&mut self, u: &PowerSeries) -> Result<PowerSeries, Obstacle> {
        let square = self.square(u);
        let exponent = self.negate(&square);
        let value = exponent.coefficient(0, self.precision).exp();
        let factor = Ball::pi(self.precision)
            .sqrt()
            .and_then(|root| Ball::from_i64(2, self.precision).div(&root))
            .ok_or(Obstacle::outside_domain(false))?;
        let value = value.mul(&factor);
        Ok(self.exponential(&exponent, value))
    }

    /// sqrt(u) for u that is positive at the centre.
    fn positive_root(&mut self, u: &PowerSeries) -> Result<PowerSeries, Obstacle> {
        let obstacle = Obstacle::unproved(RefusalKind::NotAnalytic);
        let radicand = u.coefficient(0, self.precision);
        if !radicand.is_positive() {
            return Err(obstacle);
        }
        let value = radicand.sqrt().ok_or(obstacle)?;
        self.square_root(u, value).ok_or(obstacle)
    }

    /// 1/sqrt(u) for u that is positive at the centre.
    fn inverse_root(&mut self, u: &PowerSeries) -> Result<PowerSeries, Obstacle> {
        let obstacle = Obstacle::unproved(RefusalKind::NotAnalytic);
        let radicand = u.coefficient(0, self.precision);
        if !radicand.is_positive() {
            return Err(obstacle);
        }
        let one = Ball::one(self.precision);
        let value = radicand
            .sqrt()
            .and_then(|root| one.div(&root))
            .ok_or(obstacle)?;
        let exponent = one.mul_power_of_two(-1).neg();
        self.power(u, &exponent, value).ok_or(obstacle)
    }
}

/// The function of a ball, `None` where the ball is not inside the real domain.
fn value(function: Function, operand: &Ball) -> Option<Ball> {
    match function {
        Function::Sqrt => operand.sqrt(),
        Function::Cbrt => Some(operand.cbrt()),
        Function::Exp => Some(operand.exp()),
        Function::Exp2 => Some(operand.exp2()),
        Function::Expm1 => Some(operand.expm1()),
        Function::Log => operand.log(),
        Function::Log2 => operand.log2(),
        Function::Log10 => operand.log10(),
        Function::Log1p => operand.log1p(),
        Function::Sin => Some(operand.sin()),
        Function::Cos => Some(operand.cos()),
        Function::Tan => operand.tan(),
        Function::Asin => operand.asin(),
        Function::Acos => operand.acos(),
        Function::Atan => Some(operand.atan()),
        Function::Sinh => Some(operand.sinh()),
        Function::Cosh => Some(operand.cosh()),
        Function::Tanh => Some(operand.tanh()),
        Function::Asinh => Some(operand.asinh()),
        Function::Acosh => operand.acosh(),
        Function::Atanh => operand.atanh(),
        Function::Erf => Some(operand.erf()),
        Function::Erfc => Some(operand.erfc()),
        Function::Fabs => Some(operand.abs()),
    }
}

/// True only if the whole ball is proved to lie outside the real domain of the function.
fn is_outside(function: Function, operand: &Ball) -> bool {
    let one = Ball::one(operand.precision());
    match function {
        Function::Sqrt => operand.is_negative(),
        Function::Log | Function::Log2 | Function::Log10 => operand.upper() <= 0,
        Function::Log1p => operand.upper() <= -1,
        Function::Asin | Function::Acos => {
            one.sub(operand).is_negative() || one.add(operand).is_negative()
        }
        Function::Acosh => operand.sub(&one).is_negative(),
        Function::Atanh => operand.lower() >= 1 || operand.upper() <= -1,
        _ => false,
    }
}
