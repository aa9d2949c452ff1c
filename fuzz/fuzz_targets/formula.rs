//! A formula is read into operations whose operands come first, or refused at a place in the text.

#![no_main]

use boundmark::function::formula::{NodeId, Operation};
use boundmark::function::parser::parse_formula;
use libfuzzer_sys::fuzz_target;

fn operands(operation: &Operation) -> Vec<NodeId> {
    match operation {
        Operation::Variable | Operation::Rational(_) | Operation::Pi => vec![],
        Operation::Negate(a)
        | Operation::PowerInteger(a, _)
        | Operation::PowerRational(a, _)
        | Operation::Apply(_, a) => vec![*a],
        Operation::Add(a, b)
        | Operation::Subtract(a, b)
        | Operation::Multiply(a, b)
        | Operation::Divide(a, b)
        | Operation::Power(a, b) => vec![*a, *b],
    }
}

fuzz_target!(|text: &str| match parse_formula(text) {
    Ok(formula) => {
        assert!(formula.root() < formula.operations().len());
        for (node, operation) in formula.operations().iter().enumerate() {
            assert!(operands(operation).iter().all(|&operand| operand < node));
            assert!(formula.text().get(formula.span(node)).is_some());
        }
        let again = parse_formula(formula.text()).expect("the text of a formula is a formula");
        assert_eq!(again.operations(), formula.operations());
    }
    Err(error) => {
        assert!(
            text.get(error.span.clone()).is_some(),
            "{:?} in {text:?}",
            error.span
        );
        assert!(!error.message.is_empty());
    }
});
