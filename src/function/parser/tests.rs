use rug::Rational;

use super::*;
use crate::function::formula::{Function, Operation};

fn operations(text: &str) -> Vec<Operation> {
    parse_formula(text)
        .unwrap_or_else(|error| panic!("{text}: {error}"))
        .operations()
        .to_vec()
}

#[test]
fn basics() {
    assert_eq!(
        operations("2/3"),
        [Operation::Rational(Rational::from((2, 3)))]
    );
    assert_eq!(
        operations("x*sin(x)"),
        [
            Operation::Variable,
            Operation::Apply(Function::Sin, 0),
            Operation::Multiply(0, 1)
        ]
    );
    for text in [
        "ln(x)",
        "x**2",
        "2x",
        "1.5f*x",
        "(x",
        "x)",
        "sin(x, x)",
        "x ? 1 : 2",
        "y+1",
        "",
        "x+",
        "010",
        "0,5*x",
    ] {
        println!(
            "{text:12} {:?} {}",
            parse_formula(text).map(|_| ()),
            parse_formula(text).unwrap_err()
        );
    }
}
