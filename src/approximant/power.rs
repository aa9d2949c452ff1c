//! Powers of a local variable, and the local variables of pieces.

use rug::Rational;

use crate::function::constant::Constant;
use crate::function::parser::SyntaxError;

/// The local variable of a piece [l, r].
#[allow(
    clippy::large_enum_variant,
    reason = "there is one for a whole approximation"
)]
#[derive(Clone, Debug)]
pub enum Variable {
    /// x itself.
    X,
    /// x - l.
    XLeft,
    /// (x - l)/(r - l), from 0 to 1.
    Unit,
    /// (2x - l - r)/(r - l), from -1 to 1.
    Centred,
    /// (x - origin)/scale, the same for every piece.
    Linear { origin: Constant, scale: Constant },
}

/// Which coefficient comes first.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Order {
    /// The constant term.
    Ascending,
    /// The highest power.
    Descending,
}

impl Order {
    /// The word of the audit file.
    pub fn name(self) -> &'static str {
        match self {
            Self::Ascending => "ascending",
            Self::Descending => "descending",
        }
    }
}

/// Which powers are listed, where only every second one is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Parity {
    Odd,
    Even,
}

impl Parity {
    /// The word of the audit file.
    pub fn name(self) -> &'static str {
        match self {
            Self::Odd => "odd",
            Self::Even => "even",
        }
    }
}

/// The origin and the scale of a local variable on a piece: it is (x - origin)/scale.
///
/// x: 0 and 1. x - l: l and 1. (x - l)/(r - l): l and r - l. (2x - l - r)/(r - l) is
/// (x - (l+r)/2) / ((r-l)/2). Rational ends give rational constants; otherwise the constant is a
/// formula made of theirs, so that nothing is rounded.
pub fn origin_and_scale(
    variable: &Variable,
    on: &[Constant; 2],
) -> Result<(Constant, Constant), SyntaxError> {
    let [left, right] = on;
    match variable {
        Variable::X => Ok((Constant::from(Rational::new()), one())),
        Variable::XLeft => Ok((left.clone(), one())),
        Variable::Unit => Ok((left.clone(), combine(right, "-", left, 1)?)),
        Variable::Centred => Ok((combine(right, "+", left, 2)?, combine(right, "-", left, 2)?)),
        Variable::Linear { origin, scale } => Ok((origin.clone(), scale.clone())),
    }
}

fn one() -> Constant {
    Constant::from(Rational::from(1))
}

/// (first + second)/divisor or (first - second)/divisor.
fn combine(
    first: &Constant,
    sign: &str,
    second: &Constant,
    divisor: u32,
) -> Result<Constant, SyntaxError> {
    if let (Some(first), Some(second)) = (first.as_rational(), second.as_rational()) {
        let sum = match sign {
            "-" => Rational::from(first - second),
            _ => Rational::from(first + second),
        };
        return Ok(Constant::from(sum / divisor));
    }
    let (first, second) = (as_operand(first), as_operand(second));
    let text = match divisor {
        1 => format!("{first} {sign} {second}"),
        _ => format!("({first} {sign} {second})/{divisor}"),
    };
    Constant::parse(&text)
}

/// A constant in parentheses; literals such as 2^-3 or hex are no formulas, fractions are.
fn as_operand(constant: &Constant) -> String {
    match constant.as_rational() {
        Some(value) => format!("({value})"),
        None => format!("({})", constant.text()),
    }
}

/// The ascending list with every power.
///
/// With `parity` the list holds only the powers 1, 3, 5, ... (odd) or 0, 2, 4, ... (even) of the
/// variable; the others are 0.
pub fn to_ascending(
    coefficients: &[Rational],
    order: Order,
    parity: Option<Parity>,
) -> Vec<Rational> {
    let mut ascending = coefficients.to_vec();
    if order == Order::Descending {
        ascending.reverse();
    }
    let Some(parity) = parity else {
        return ascending;
    };
    let mut spread = Vec::with_capacity(2 * ascending.len());
    for coefficient in ascending {
        match parity {
            Parity::Odd => spread.extend([Rational::new(), coefficient]),
            Parity::Even => spread.extend([coefficient, Rational::new()]),
        }
    }
    if parity == Parity::Even {
        spread.pop();
    }
    spread
}

#[cfg(test)]
mod tests {
    use proptest::prelude::*;

    use super::*;
    use crate::approximant::polynomial::Polynomial;
    use crate::approximant::test_numbers::{horner, rational};

    fn constant(text: &str) -> Constant {
        Constant::parse(text).expect("a constant")
    }

    fn numbers(values: &[i32]) -> Vec<Rational> {
        values.iter().map(|&value| Rational::from(value)).collect()
    }

    #[test]
    fn the_order_is_reversed_before_powers_are_left_out() {
        let listed = numbers(&[7, 5, 3]);
        for (order, parity, expected) in [
            (Order::Ascending, None, vec![7, 5, 3]),
            (Order::Descending, None, vec![3, 5, 7]),
            (Order::Ascending, Some(Parity::Odd), vec![0, 7, 0, 5, 0, 3]),
            (Order::Descending, Some(Parity::Odd), vec![0, 3, 0, 5, 0, 7]),
            (Order::Ascending, Some(Parity::Even), vec![7, 0, 5, 0, 3]),
        ] {
            assert_eq!(to_ascending(&listed, order, parity), numbers(&expected));
        }
        assert!(to_ascending(&[], Order::Ascending, Some(Parity::Even)).is_empty());
    }

    #[test]
    fn irrational_ends_give_formulas() {
        let on = [constant("-pi/4"), constant("pi/4")];
        let (_, scale) = origin_and_scale(&Variable::Centred, &on).unwrap();
        let (lower, upper) = scale.enclosure(64).unwrap();
        assert!(lower > Rational::from((785, 1000)) && upper < Rational::from((786, 1000)));
        let on = [constant("2^-3"), constant("pi/4")];
        let (origin, scale) = origin_and_scale(&Variable::Unit, &on).unwrap();
        assert_eq!(origin.as_rational(), Some(&Rational::from((1, 8))));
        assert!(scale.enclosure(64).unwrap().1 < Rational::from((661, 1000)));
    }

    proptest! {
        #[test]
        fn every_variable_agrees_with_its_formula(
            coefficients in prop::collection::vec(rational(), 1..8),
            left in rational(),
            width in rational(),
            x in rational(),
        ) {
            prop_assume!(width != 0);
            let right = Rational::from(&left + &width);
            let on = [constant(&left.to_string()), constant(&right.to_string())];
            let from_left = Rational::from(&x - &left);
            let cases = [
                (Variable::X, x.clone()),
                (Variable::XLeft, from_left.clone()),
                (Variable::Unit, Rational::from(&from_left / &width)),
                (Variable::Centred, (from_left * 2 - &width) / &width),
                (
                    Variable::Linear { origin: constant("-3/7"), scale: constant("2^-2") },
                    (&x + Rational::from((3, 7))) * 4,
                ),
            ];
            for (variable, local) in cases {
                let (origin, scale) = origin_and_scale(&variable, &on).unwrap();
                let polynomial =
                    Polynomial { origin, scale, coefficients: coefficients.clone() };
                prop_assert_eq!(polynomial.evaluate(&x), Some(horner(&coefficients, &local)));
            }
        }
    }
}
