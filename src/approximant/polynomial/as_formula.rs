//! A polynomial piece as a list of operations.

use crate::approximant::polynomial::Polynomial;
use crate::function::constant::Constant;
use crate::function::formula::{Formula, FormulaBuilder, NodeId, Operation};

impl Polynomial {
    /// The same exact function as a formula: u = (x - origin)/scale, then Horner's rule. Serves
    /// where exact Taylor coefficients are wanted at a point that may not be rational.
    pub fn to_formula(&self) -> Formula {
        let mut builder = FormulaBuilder::new("");
        let variable = builder.push(Operation::Variable, 0..0);
        let origin = embedded(&mut builder, &self.origin);
        let scale = embedded(&mut builder, &self.scale);
        let distance = builder.push(Operation::Subtract(variable, origin), 0..0);
        let local = builder.push(Operation::Divide(distance, scale), 0..0);
        let mut sum = None;
        for coefficient in self.coefficients.iter().rev() {
            let term = builder.push(Operation::Rational(coefficient.clone()), 0..0);
            sum = Some(match sum {
                None => term,
                Some(sum) => {
                    let product = builder.push(Operation::Multiply(sum, local), 0..0);
                    builder.push(Operation::Add(product, term), 0..0)
                }
            });
        }
        match sum {
            Some(root) => builder.finish(root),
            None => Formula::zero(),
        }
    }
}

/// Repeats the operations of a constant in another formula.
fn embedded(builder: &mut FormulaBuilder, constant: &Constant) -> NodeId {
    let formula = constant.formula();
    let mut places: Vec<NodeId> = Vec::with_capacity(formula.operations().len());
    for operation in formula.operations() {
        let at = |node: &NodeId| places[*node];
        let operation = match operation {
            Operation::Variable => Operation::Variable,
            Operation::Rational(value) => Operation::Rational(value.clone()),
            Operation::Pi => Operation::Pi,
            Operation::Negate(a) => Operation::Negate(at(a)),
            Operation::Add(a, b) => Operation::Add(at(a), at(b)),
            Operation::Subtract(a, b) => Operation::Subtract(at(a), at(b)),
            Operation::Multiply(a, b) => Operation::Multiply(at(a), at(b)),
            Operation::Divide(a, b) => Operation::Divide(at(a), at(b)),
            Operation::PowerInteger(a, n) => Operation::PowerInteger(at(a), *n),
            Operation::PowerRational(a, q) => Operation::PowerRational(at(a), q.clone()),
            Operation::Power(a, b) => Operation::Power(at(a), at(b)),
            Operation::Apply(function, a) => Operation::Apply(*function, at(a)),
        };
        places.push(builder.push(operation, 0..0));
    }
    places[formula.root()]
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::function::exact::{Centre, leading_coefficients};
    use rug::Rational;

    #[test]
    fn the_formula_is_the_polynomial() {
        let constant = |text: &str| Constant::parse(text).unwrap();
        let polynomial = Polynomial {
            origin: constant("pi/4"),
            scale: constant("1/3"),
            coefficients: [5, -2, 0, 7].map(Rational::from).to_vec(),
        };
        let formula = polynomial.to_formula();
        let quarter = Centre {
            rational: Rational::new(),
            pi_multiple: Rational::from((1, 4)),
        };
        let all = leading_coefficients(&formula, &quarter, 4);
        let found = &all[formula.root()];
        // In powers of x - pi/4 = u/3: c_k 3^k.
        for (k, expected) in [5, -6, 0, 189].into_iter().enumerate() {
            let exact = found[k].as_ref().and_then(|c| c.as_rational().cloned());
            assert_eq!(exact, Some(Rational::from(expected)), "coefficient {k}");
        }
    }
}
