//! From an expression to the operations of a formula.

use std::collections::HashMap;
use std::ops::Range;

use rug::Rational;

use super::expression::{Element, Expression, shortened};
use super::names::{self, Callable, Predefined};
use super::{OPERATION_LIMIT, POWER_LIMIT, SyntaxError};
use crate::function::formula::{FormulaBuilder, Function, NodeId, Operation};

/// What a name that the user has defined stands for.
#[derive(Clone, Copy, Debug)]
pub(super) enum Binding<'a> {
    /// A value computed already.
    Node(NodeId),
    Number(&'a Rational),
    Array(&'a [Rational]),
}

/// The names that the user has defined.
pub(super) type Scope<'a> = HashMap<&'a str, Binding<'a>>;

/// An operand on the stack.
#[derive(Clone, Copy, Debug)]
enum Value<'a> {
    Node(NodeId),
    Array(&'a str, &'a [Rational]),
}

/// Appends expressions to a formula and counts the work.
pub(super) struct Lowering<'b> {
    builder: &'b mut FormulaBuilder,
    pushed: usize,
}

impl<'b> Lowering<'b> {
    pub(super) fn new(builder: &'b mut FormulaBuilder) -> Self {
        Self { builder, pushed: 0 }
    }

    /// Appends an expression; `offset` is where its text begins in the text of the formula. Spans
    /// of errors count from the beginning of the expression's own text.
    pub(super) fn lower(
        &mut self,
        expression: &Expression,
        scope: &Scope<'_>,
        offset: usize,
    ) -> Result<NodeId, SyntaxError> {
        let mut machine = Machine {
            lowering: self,
            scope,
            offset,
            stack: Vec::new(),
        };
        for (element, span) in expression.elements() {
            machine.step(element, span)?;
        }
        let span = expression
            .elements()
            .last()
            .map_or(0..0, |(_, span)| span.clone());
        machine.pop_node(&span)
    }

    pub(super) fn push(
        &mut self,
        operation: Operation,
        span: &Range<usize>,
        offset: usize,
    ) -> Result<NodeId, SyntaxError> {
        if self.pushed >= OPERATION_LIMIT {
            let message = format!("the formula has more than {OPERATION_LIMIT} operations");
            return Err(SyntaxError::new(span.clone(), message));
        }
        self.pushed += 1;
        Ok(self
            .builder
            .push(operation, span.start + offset..span.end + offset))
    }
}

/// The state while one expression is appended.
struct Machine<'m, 'b, 's> {
    lowering: &'m mut Lowering<'b>,
    scope: &'m Scope<'s>,
    offset: usize,
    stack: Vec<(Value<'s>, Range<usize>)>,
}

impl<'s> Machine<'_, '_, 's> {
    fn step(&mut self, element: &Element, span: &Range<usize>) -> Result<(), SyntaxError> {
        let value = match element {
            Element::Number(value) => self.node(Operation::Rational(value.clone()), span)?,
            Element::Name(name) => self.name(name, span)?,
            Element::Negate => {
                let a = self.pop_node(span)?;
                self.node(Operation::Negate(a), span)?
            }
            Element::Add => self.binary(Operation::Add, span)?,
            Element::Subtract => self.binary(Operation::Subtract, span)?,
            Element::Multiply => self.binary(Operation::Multiply, span)?,
            Element::Divide => self.binary(Operation::Divide, span)?,
            Element::Call(callable) => self.call(*callable, span)?,
            Element::Index => self.index(span)?,
        };
        self.stack.push((value, span.clone()));
        Ok(())
    }

    fn push(&mut self, operation: Operation, span: &Range<usize>) -> Result<NodeId, SyntaxError> {
        self.lowering.push(operation, span, self.offset)
    }

    fn node(
        &mut self,
        operation: Operation,
        span: &Range<usize>,
    ) -> Result<Value<'s>, SyntaxError> {
        Ok(Value::Node(self.push(operation, span)?))
    }

    fn binary(
        &mut self,
        operation: fn(NodeId, NodeId) -> Operation,
        span: &Range<usize>,
    ) -> Result<Value<'s>, SyntaxError> {
        let b = self.pop_node(span)?;
        let a = self.pop_node(span)?;
        self.node(operation(a, b), span)
    }

    fn pop(&mut self, span: &Range<usize>) -> Result<(Value<'s>, Range<usize>), SyntaxError> {
        self.stack
            .pop()
            .ok_or_else(|| SyntaxError::new(span.clone(), "an operand is missing"))
    }

    fn pop_node(&mut self, span: &Range<usize>) -> Result<NodeId, SyntaxError> {
        match self.pop(span)? {
            (Value::Node(node), _) => Ok(node),
            (Value::Array(name, entries), span) => {
                let message = format!("`{name}` is an array of {} numbers", entries.len());
                Err(SyntaxError::new(span, message)
                    .advise(format!("write {name}[0] for its first")))
            }
        }
    }

    fn pop_array(
        &mut self,
        span: &Range<usize>,
        purpose: &str,
    ) -> Result<(&'s str, &'s [Rational]), SyntaxError> {
        match self.pop(span)? {
            (Value::Array(name, entries), _) => Ok((name, entries)),
            (Value::Node(_), span) => Err(SyntaxError::new(
                span,
                format!("{purpose} needs the name of an array"),
            )),
        }
    }

    fn name(&mut self, name: &str, span: &Range<usize>) -> Result<Value<'s>, SyntaxError> {
        if let Some(predefined) = names::predefined(name) {
            return match predefined {
                Predefined::Variable => self.node(Operation::Variable, span),
                Predefined::Pi => self.node(Operation::Pi, span),
                Predefined::Euler => {
                    let one = self.push(Operation::Rational(Rational::from(1)), span)?;
                    self.node(Operation::Apply(Function::Exp, one), span)
                }
            };
        }
        match self.scope.get_key_value(name) {
            Some((_, Binding::Node(node))) => Ok(Value::Node(*node)),
            Some((_, Binding::Number(value))) => {
                self.node(Operation::Rational((*value).clone()), span)
            }
            Some((name, Binding::Array(entries))) => Ok(Value::Array(name, entries)),
            None => {
                let message = format!("there is no number `{}`", shortened(name));
                let mut known: Vec<&str> = self.scope.keys().copied().collect();
                known.sort_unstable();
                let advice = names::advise_number(name, known.into_iter());
                Err(SyntaxError {
                    span: span.clone(),
                    message,
                    advice,
                })
            }
        }
    }

    fn call(&mut self, callable: Callable, span: &Range<usize>) -> Result<Value<'s>, SyntaxError> {
        match callable {
            Callable::Function(function) => {
                let a = self.pop_node(span)?;
                self.node(Operation::Apply(function, a), span)
            }
            Callable::Power => {
                let exponent_span = self.stack.last().map_or(span.clone(), |(_, at)| at.clone());
                let exponent = self.pop_node(span)?;
                let base = self.pop_node(span)?;
                let operation = self.power(base, exponent, exponent_span)?;
                self.node(operation, span)
            }
            Callable::FusedMultiplyAdd => {
                let c = self.pop_node(span)?;
                let b = self.pop_node(span)?;
                let a = self.pop_node(span)?;
                let product = self.push(Operation::Multiply(a, b), span)?;
                self.node(Operation::Add(product, c), span)
            }
            Callable::Horner => {
                let argument = self.pop_node(span)?;
                let (_, entries) = self.pop_array(span, "the first argument of horner")?;
                self.horner(entries, argument, span)
            }
            Callable::Clenshaw => {
                let argument = self.pop_node(span)?;
                let (_, entries) = self.pop_array(span, "the first argument of clenshaw")?;
                self.clenshaw(entries, argument, span)
            }
        }
    }

    fn power(
        &self,
        base: NodeId,
        exponent: NodeId,
        exponent_span: Range<usize>,
    ) -> Result<Operation, SyntaxError> {
        let Some(value) = self.lowering.builder.rational(exponent) else {
            return Ok(Operation::Power(base, exponent));
        };
        if *value > POWER_LIMIT || *value < -POWER_LIMIT {
            let message = format!("the exponent exceeds {POWER_LIMIT} in modulus");
            return Err(SyntaxError::new(exponent_span, message));
        }
        match value.numer().to_i32() {
            Some(whole) if value.is_integer() => Ok(Operation::PowerInteger(base, whole)),
            _ => Ok(Operation::PowerRational(base, value.clone())),
        }
    }

    fn index(&mut self, span: &Range<usize>) -> Result<Value<'s>, SyntaxError> {
        let index_span = self.stack.last().map_or(span.clone(), |(_, at)| at.clone());
        let index = self.pop_node(span)?;
        let (name, entries) = self.pop_array(span, "an index")?;
        let whole = self
            .lowering
            .builder
            .rational(index)
            .filter(|value| value.is_integer())
            .ok_or_else(|| {
                SyntaxError::new(index_span.clone(), "an index is a constant whole number")
            })?;
        let entry = whole
            .numer()
            .to_usize()
            .and_then(|index| entries.get(index));
        let Some(entry) = entry else {
            let message = format!("`{name}` has {} entries, counted from 0", entries.len());
            return Err(SyntaxError::new(index_span, message));
        };
        self.node(Operation::Rational(entry.clone()), span)
    }

    /// a_0 + t (a_1 + t (a_2 + ...)).
    fn horner(
        &mut self,
        entries: &[Rational],
        argument: NodeId,
        span: &Range<usize>,
    ) -> Result<Value<'s>, SyntaxError> {
        let mut descending = entries.iter().rev();
        let last = descending.next().cloned().unwrap_or_default();
        let mut sum = self.push(Operation::Rational(last), span)?;
        for entry in descending {
            let product = self.push(Operation::Multiply(sum, argument), span)?;
            let entry = self.push(Operation::Rational(entry.clone()), span)?;
            sum = self.push(Operation::Add(product, entry), span)?;
        }
        Ok(Value::Node(sum))
    }

    /// Clenshaw's recurrence: with b_{n+1} = b_{n+2} = 0 and b_k = c_k + 2 t b_{k+1} - b_{k+2} down
    /// to k = 1, the sum of c_k T_k(t) is c_0 + t b_1 - b_2. It follows from
    /// T_{k+1} = 2 t T_k - T_{k-1} by summation by parts (Clenshaw, Math. Tables Aids Comput. 9,
    /// 1955; from memory).
    fn clenshaw(
        &mut self,
        entries: &[Rational],
        argument: NodeId,
        span: &Range<usize>,
    ) -> Result<Value<'s>, SyntaxError> {
        let Some((first, rest)) = entries.split_first() else {
            return self.node(Operation::Rational(Rational::new()), span);
        };
        let two = self.push(Operation::Rational(Rational::from(2)), span)?;
        let doubled = self.push(Operation::Multiply(two, argument), span)?;
        // b_{k+1} and b_{k+2}; `None` is the exact zero at the start of the recurrence.
        let (mut next, mut after_next) = (None, None);
        for entry in rest.iter().rev() {
            let entry = self.push(Operation::Rational(entry.clone()), span)?;
            let current = self.clenshaw_step(entry, doubled, next, after_next, span)?;
            (next, after_next) = (Some(current), next);
        }
        let first = self.push(Operation::Rational(first.clone()), span)?;
        Ok(Value::Node(
            self.clenshaw_step(first, argument, next, after_next, span)?,
        ))
    }

    /// entry + factor next - after_next.
    fn clenshaw_step(
        &mut self,
        entry: NodeId,
        factor: NodeId,
        next: Option<NodeId>,
        after_next: Option<NodeId>,
        span: &Range<usize>,
    ) -> Result<NodeId, SyntaxError> {
        let mut sum = entry;
        if let Some(next) = next {
            let product = self.push(Operation::Multiply(factor, next), span)?;
            sum = self.push(Operation::Add(sum, product), span)?;
        }
        if let Some(after_next) = after_next {
            sum = self.push(Operation::Subtract(sum, after_next), span)?;
        }
        Ok(sum)
    }
}
