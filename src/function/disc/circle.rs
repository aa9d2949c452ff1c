//! Evaluation of a formula along the arcs of a circle.

use rug::{Float, Rational};

use crate::function::disc::arc::{Arc, exact_radius};
use crate::function::disc::turning::Turning;
use crate::function::exact::{Centre, leading_coefficients, leading_zeros};
use crate::function::formula::{Formula, Function, NodeId, Operation};
use crate::function::range::interval_operation;
use crate::function::refusal::{Refusal, RefusalKind};
use crate::number::radius::Radius;
use crate::number::rectangle::Rectangle;
use crate::number::wide_interval::WideInterval;

/// An arc is halved so often before it is given up.
const HALVINGS: u32 = 4;

/// Zeros of a denominator at the centre at most.
const MOST_ZEROS: i64 = 64;

/// The value of an operation on the current arc.
enum Value {
    /// A constant, the same on every arc.
    Real(WideInterval),
    Complex(Rectangle),
}

impl Value {
    fn add(&self, other: &Self) -> Rectangle {
        match (self, other) {
            (Self::Complex(z), Self::Complex(w)) => z.add(w),
            (Self::Complex(z), Self::Real(x)) | (Self::Real(x), Self::Complex(z)) => z.add_real(x),
            (Self::Real(x), Self::Real(y)) => Rectangle::from_real(x.add(y)),
        }
    }

    fn mul(&self, other: &Self) -> Rectangle {
        match (self, other) {
            (Self::Complex(z), Self::Complex(w)) => z.mul(w),
            (Self::Complex(z), Self::Real(x)) | (Self::Real(x), Self::Complex(z)) => z.scale(x),
            (Self::Real(x), Self::Real(y)) => Rectangle::from_real(x.mul(y)),
        }
    }

    fn neg(&self) -> Self {
        match self {
            Self::Real(x) => Self::Real(x.neg()),
            Self::Complex(z) => Self::Complex(z.neg()),
        }
    }
}

/// A formula on a circle.
pub(super) struct Circle<'a> {
    formula: &'a Formula,
    centre: &'a Centre,
    place: WideInterval,
    radius: WideInterval,
    /// Operations that depend on the variable.
    varying: Vec<NodeId>,
    /// Values of the constants, and of the other operations on the latest arc.
    values: Vec<Value>,
    /// The argument of the operand (or of another function of it) whose zeros matter, followed up
    /// to the arc before the latest one.
    turnings: Vec<Turning>,
    /// The same including the latest arc.
    advanced: Vec<Turning>,
}

impl<'a> Circle<'a> {
    /// Evaluates the constants.
    ///
    /// # Errors
    ///
    /// A constant without a value.
    pub(super) fn new(
        formula: &'a Formula,
        centre: &'a Centre,
        radius: &Float,
        precision: u32,
    ) -> Result<Self, Refusal> {
        let mut varying = Vec::new();
        let mut values: Vec<Value> = Vec::with_capacity(formula.operations().len());
        let nothing = WideInterval::zero(precision);
        for (node, operation) in formula.operations().iter().enumerate() {
            let is_real = |operand: NodeId| matches!(values[operand], Value::Real(_));
            let constant = match operation {
                Operation::Variable => false,
                Operation::Rational(_) | Operation::Pi => true,
                Operation::Negate(a)
                | Operation::PowerInteger(a, _)
                | Operation::PowerRational(a, _)
                | Operation::Apply(_, a) => is_real(*a),
                Operation::Add(a, b)
                | Operation::Subtract(a, b)
                | Operation::Multiply(a, b)
                | Operation::Divide(a, b)
                | Operation::Power(a, b) => is_real(*a) && is_real(*b),
            };
            if !constant {
                varying.push(node);
                values.push(Value::Complex(Rectangle::from_real(nothing.clone())));
                continue;
            }
            let value =
                interval_operation(operation, precision, |operand| match &values[operand] {
                    Value::Real(x) => x,
                    // Operands of constants are constants.
                    Value::Complex(z) => &z.real,
                });
            let value = value.map_err(|undefined| Refusal {
                node,
                kind: undefined.kind,
                proved: undefined.proved,
            })?;
            values.push(Value::Real(value));
        }
        let turnings = vec![Turning::default(); values.len()];
        Ok(Self {
            formula,
            centre,
            place: centre.wide_interval(precision),
            radius: exact_radius(radius, precision),
            varying,
            values,
            advanced: turnings.clone(),
            turnings,
        })
    }

    /// Follows the arcs and returns the largest modulus of the formula.
    pub(super) fn magnitude(mut self, arcs: usize) -> Result<Radius, Refusal> {
        let root = self.formula.root();
        let level = arcs.clamp(1, 256).next_power_of_two().ilog2();
        let deepest = (level + HALVINGS).min(Arc::LAST_LEVEL);
        if let Value::Real(x) = &self.values[root] {
            if !x.is_finite() {
                return Err(Refusal {
                    node: root,
                    kind: RefusalKind::Unbounded,
                    proved: false,
                });
            }
            return Ok(Radius::of_float_upper(&x.magnitude()));
        }
        let mut largest = Radius::ZERO;
        let mut pending: Vec<Arc> = (0..1 << level)
            .rev()
            .map(|index| Arc { level, index })
            .collect();
        while let Some(arc) = pending.pop() {
            match self.follow(arc) {
                Ok(()) => std::mem::swap(&mut self.turnings, &mut self.advanced),
                Err(_) if arc.level < deepest => {
                    let [first, second] = arc.halves();
                    pending.extend([second, first]);
                    continue;
                }
                Err(refusal) => return Err(refusal),
            }
            if let Value::Complex(z) = &self.values[root] {
                largest = largest.max(z.magnitude());
            }
        }
        self.conclude()?;
        Ok(largest)
    }

    /// Evaluates all operations on an arc.
    fn follow(&mut self, arc: Arc) -> Result<(), Refusal> {
        for position in 0..self.varying.len() {
            let node = self.varying[position];
            let refuse = |kind| Refusal {
                node,
                kind,
                proved: false,
            };
            let value = self.operation(node, arc).map_err(refuse)?;
            if !value.is_finite() {
                return Err(refuse(RefusalKind::Unbounded));
            }
            self.values[node] = Value::Complex(value);
        }
        Ok(())
    }

    /// Follows the argument of a function that belongs to an operation.
    fn turn(&mut self, node: NodeId, enclosure: &Rectangle) -> Option<Turning> {
        let advanced = self.turnings[node].next(enclosure)?;
        self.advanced[node] = advanced;
        Some(advanced)
    }

    /// The quarter turns of a function that must be positive on the diameter.
    fn turns(&mut self, node: NodeId, enclosure: &Rectangle) -> Result<i64, RefusalKind> {
        let turning = self.turn(node, enclosure).ok_or(RefusalKind::NotAnalytic)?;
        if turning.starts_negative() {
            return Err(RefusalKind::OutsideDomain);
        }
        Ok(turning.turns())
    }

    fn complex(&self, node: NodeId) -> Rectangle {
        match &self.values[node] {
            Value::Real(x) => Rectangle::from_real(x.clone()),
            Value::Complex(z) => z.clone(),
        }
    }

    fn operation(&mut self, node: NodeId, arc: Arc) -> Result<Rectangle, RefusalKind> {
        let values = &self.values;
        Ok(match &self.formula.operations()[node] {
            Operation::Variable => arc.scaled(&self.radius).add_real(&self.place),
            Operation::Rational(_) | Operation::Pi => self.complex(node),
            Operation::Negate(a) => self.complex(*a).neg(),
            Operation::Add(a, b) => values[*a].add(&values[*b]),
            Operation::Subtract(a, b) => values[*a].add(&values[*b].neg()),
            Operation::Multiply(a, b) if a == b => self.complex(*a).square(),
            Operation::Multiply(a, b) => values[*a].mul(&values[*b]),
            Operation::Divide(a, b) => self.quotient(node, *a, *b)?,
            Operation::PowerInteger(a, n) => {
                let base = self.complex(*a);
                if *n < 0 {
                    self.turn(node, &base).ok_or(RefusalKind::DivisionByZero)?;
                }
                base.pow_integer(*n).ok_or(RefusalKind::DivisionByZero)?
            }
            Operation::PowerRational(a, q) => {
                let base = self.complex(*a);
                let turns = self.turns(node, &base)?;
                base.pow_rational_turned(q, turns)
                    .ok_or(RefusalKind::NotAnalytic)?
            }
            Operation::Power(a, b) => self.power(node, *a, *b)?,
            Operation::Apply(function, a) => {
                let operand = self.complex(*a);
                self.apply(node, *function, &operand)?
            }
        })
    }

    fn quotient(&mut self, node: NodeId, a: NodeId, b: NodeId) -> Result<Rectangle, RefusalKind> {
        let divided = match &self.values[b] {
            Value::Real(x) => self.complex(a).div_real(x),
            Value::Complex(_) => {
                let divisor = self.complex(b);
                self.turn(node, &divisor)
                    .ok_or(RefusalKind::DivisionByZero)?;
                match &self.values[a] {
                    Value::Real(x) => divisor.reciprocal().map(|inverse| inverse.scale(x)),
                    Value::Complex(z) => z.div(&divisor),
                }
            }
        };
        divided.ok_or(RefusalKind::DivisionByZero)
    }

    fn power(&mut self, node: NodeId, a: NodeId, b: NodeId) -> Result<Rectangle, RefusalKind> {
        let logarithm = match &self.values[a] {
            Value::Real(x) => Value::Real(x.log().ok_or(RefusalKind::OutsideDomain)?),
            Value::Complex(_) => {
                let base = self.complex(a);
                let turns = self.turns(node, &base)?;
                Value::Complex(base.log_turned(turns).ok_or(RefusalKind::NotAnalytic)?)
            }
        };
        Ok(logarithm.mul(&self.values[b]).exp())
    }

    fn apply(
        &mut self,
        node: NodeId,
        function: Function,
        z: &Rectangle,
    ) -> Result<Rectangle, RefusalKind> {
        let one = || WideInterval::from_integer(1, z.precision());
        let value = match function {
            Function::Exp => Some(z.exp()),
            Function::Exp2 => Some(z.exp2()),
            Function::Expm1 => Some(z.expm1()),
            Function::Sin => Some(z.sin()),
            Function::Cos => Some(z.cos()),
            Function::Sinh => Some(z.sinh()),
            Function::Cosh => Some(z.cosh()),
            Function::Erf => Some(z.erf()),
            Function::Erfc => Some(z.erfc()),
            Function::Sqrt => z.sqrt_turned(self.turns(node, z)?),
            Function::Log => z.log_turned(self.turns(node, z)?),
            Function::Log2 => {
                let divisor = WideInterval::log_of_two(z.precision());
                z.log_turned(self.turns(node, z)?)
                    .and_then(|value| value.div_real(&divisor))
            }
            Function::Log10 => {
                let divisor = WideInterval::from_integer(10, z.precision()).log();
                let value = z.log_turned(self.turns(node, z)?);
                value
                    .zip(divisor)
                    .and_then(|(value, divisor)| value.div_real(&divisor))
            }
            Function::Log1p => {
                let sum = z.add_real(&one());
                match self.turns(node, &sum)? {
                    0 => z.log1p(),
                    turns => sum.log_turned(turns),
                }
            }
            Function::Cbrt => {
                let turning = self.turn(node, z).ok_or(RefusalKind::NotAnalytic)?;
                let third = Rational::from((1, 3));
                if turning.starts_negative() {
                    let root = z.neg().pow_rational_turned(&third, turning.turns() - 2);
                    root.map(|root| root.neg())
                } else {
                    z.pow_rational_turned(&third, turning.turns())
                }
            }
            Function::Fabs => {
                let turning = self.turn(node, z).ok_or(RefusalKind::NotAnalytic)?;
                Some(if turning.starts_negative() {
                    z.neg()
                } else {
                    z.clone()
                })
            }
            Function::Tan => {
                self.turn(node, &z.cos()).ok_or(RefusalKind::NotAnalytic)?;
                z.tan()
            }
            Function::Tanh => {
                self.turn(node, &z.cosh()).ok_or(RefusalKind::NotAnalytic)?;
                z.tanh()
            }
            Function::Asin => z.asin(),
            Function::Acos => z.acos(),
            Function::Atan => z.atan(),
            Function::Asinh => z.asinh(),
            Function::Acosh => z.acosh(),
            Function::Atanh => z.atanh(),
        };
        value.ok_or(RefusalKind::NotAnalytic)
    }

    /// After the last arc: the number of zeros of every function that was followed must be what
    /// its operation allows.
    fn conclude(&self) -> Result<(), Refusal> {
        for &node in &self.varying {
            let zeros = self.turnings[node].zeros();
            if zeros == 0 {
                continue;
            }
            let (kind, allowed) = match &self.formula.operations()[node] {
                Operation::Divide(a, b) => (
                    RefusalKind::DivisionByZero,
                    self.vanish_at_centre(&[*a, *b], zeros),
                ),
                Operation::Apply(Function::Fabs, a) => (
                    RefusalKind::NotAnalytic,
                    zeros % 2 == 0 && self.vanish_at_centre(&[*a], zeros),
                ),
                Operation::PowerInteger(..) => (RefusalKind::DivisionByZero, false),
                _ => (RefusalKind::NotAnalytic, false),
            };
            if !allowed {
                return Err(Refusal {
                    node,
                    kind,
                    proved: false,
                });
            }
        }
        Ok(())
    }

    /// True if the first `order` Taylor coefficients at the centre are proved to be exactly zero
    /// for all these operations, which are analytic.
    fn vanish_at_centre(&self, nodes: &[NodeId], order: i64) -> bool {
        let Some(count) = usize::try_from(order).ok().filter(|_| order <= MOST_ZEROS) else {
            return false;
        };
        let leading = leading_coefficients(self.formula, self.centre, count);
        nodes
            .iter()
            .all(|&node| leading_zeros(&leading[node]) >= count)
    }
}
