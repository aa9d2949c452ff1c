use proptest::prelude::*;

use super::*;

fn constant(builder: &mut FormulaBuilder, value: impl Into<Rational>) -> NodeId {
    builder.push(Operation::Rational(value.into()), 0..0)
}

#[test]
fn equal_operations_are_one_node() {
    let mut builder = FormulaBuilder::new("x*x + x*x");
    let x = builder.push(Operation::Variable, 0..1);
    assert_eq!(builder.push(Operation::Variable, 2..3), x);
    let square = builder.push(Operation::Multiply(x, x), 0..3);
    assert_eq!(builder.push(Operation::Multiply(x, x), 6..9), square);
    let sum = builder.push(Operation::Add(square, square), 0..9);
    let formula = builder.finish(sum);
    assert_eq!(formula.operations().len(), 3);
    assert_eq!(formula.span(square), 0..3);
    assert_eq!(formula.root(), 2);
}

#[test]
fn arithmetic_of_constants_is_exact() {
    let mut builder = FormulaBuilder::new("");
    let a = constant(&mut builder, (2, 3));
    let b = constant(&mut builder, (-3, 4));
    for (operation, value) in [
        (Operation::Add(a, b), Rational::from((-1, 12))),
        (Operation::Subtract(a, b), Rational::from((17, 12))),
        (Operation::Multiply(a, b), Rational::from((-1, 2))),
        (Operation::Divide(a, b), Rational::from((-8, 9))),
        (Operation::Negate(a), Rational::from((-2, 3))),
        (Operation::PowerInteger(a, -3), Rational::from((27, 8))),
        (Operation::PowerInteger(b, 0), Rational::from(1)),
        (Operation::Apply(Function::Fabs, b), Rational::from((3, 4))),
    ] {
        let node = builder.push(operation.clone(), 0..0);
        assert_eq!(builder.rational(node), Some(&value), "{operation:?}");
    }
}

#[test]
fn what_has_no_value_or_no_rational_one_stays() {
    let mut builder = FormulaBuilder::new("");
    let zero = constant(&mut builder, 0);
    let four = constant(&mut builder, 4);
    for operation in [
        Operation::Divide(four, zero),
        Operation::Divide(zero, zero),
        Operation::PowerInteger(zero, -1),
        Operation::Apply(Function::Sqrt, four),
        Operation::PowerRational(four, Rational::from((1, 2))),
        Operation::Power(four, four),
    ] {
        let node = builder.push(operation.clone(), 0..0);
        assert_eq!(*builder.operation(node), operation);
    }
    let node = builder.push(Operation::PowerInteger(zero, 0), 0..0);
    assert_eq!(builder.rational(node), Some(&Rational::from(1)));
}

#[test]
fn large_constants_are_not_folded() {
    let mut builder = FormulaBuilder::new("");
    let two = constant(&mut builder, 2);
    let below = builder.push(Operation::PowerInteger(two, 19_998), 0..0);
    assert_eq!(
        builder.rational(below),
        Some(&(Rational::from(1) << 19_998))
    );
    let kept = Operation::PowerInteger(two, 19_999);
    let beyond = builder.push(kept.clone(), 0..0);
    assert_eq!(*builder.operation(beyond), kept);
    let enormous = Operation::PowerInteger(two, -i32::MAX);
    let node = builder.push(enormous.clone(), 0..0);
    assert_eq!(*builder.operation(node), enormous);
    let product = Operation::Multiply(below, two);
    let node = builder.push(product.clone(), 0..0);
    assert_eq!(*builder.operation(node), product);
    let minus_one = constant(&mut builder, -1);
    let power = builder.push(Operation::PowerInteger(minus_one, i32::MIN), 0..0);
    assert_eq!(builder.rational(power), Some(&Rational::from(1)));
    // The sign of a large literal is part of it.
    let literal = constant(&mut builder, Rational::from(1) << 60_000);
    let negative = builder.push(Operation::Negate(literal), 0..0);
    assert_eq!(
        builder.rational(negative),
        Some(&(Rational::from(-1) << 60_000))
    );
}

#[test]
fn unneeded_operations_are_dropped() {
    let mut builder = FormulaBuilder::new("pi, x, sin(x), cos(pi), x/x");
    let pi = builder.push(Operation::Pi, 0..2);
    let x = builder.push(Operation::Variable, 4..5);
    let sine = builder.push(Operation::Apply(Function::Sin, x), 7..13);
    builder.push(Operation::Apply(Function::Cos, pi), 15..22);
    let quotient = builder.push(Operation::Divide(sine, x), 24..27);
    let (formula, positions) = builder.finish_with_positions(quotient);
    assert_eq!(positions, [None, Some(0), Some(1), None, Some(2)]);
    assert_eq!(
        formula.operations(),
        [
            Operation::Variable,
            Operation::Apply(Function::Sin, 0),
            Operation::Divide(1, 0)
        ]
    );
    assert_eq!(formula.span(1), 7..13);
    let part = formula.with_root(1);
    assert_eq!(part.root(), 1);
    assert_eq!(part.operations(), &formula.operations()[..2]);
    assert_eq!(part.text(), formula.text());
}

proptest! {
    /// Folding at random agrees with arithmetic of fractions of machine integers.
    #[test]
    fn folding_is_arithmetic(a in -1000i64..1000, b in 1i64..1000, c in -1000i64..1000, d in 1i64..1000) {
        let mut builder = FormulaBuilder::new("");
        let u = constant(&mut builder, (a, b));
        let v = constant(&mut builder, (c, d));
        let sum = builder.push(Operation::Add(u, v), 0..0);
        prop_assert_eq!(builder.rational(sum), Some(&Rational::from((a * d + c * b, b * d))));
        let product = builder.push(Operation::Multiply(u, v), 0..0);
        prop_assert_eq!(builder.rational(product), Some(&Rational::from((a * c, b * d))));
        let quotient = builder.push(Operation::Divide(u, v), 0..0);
        let expected = (c != 0).then(|| Rational::from((a * d, b * c)));
        prop_assert_eq!(builder.rational(quotient), expected.as_ref());
    }
}
