//! The exact polynomial that every polynomial basis becomes.

mod as_formula;

use rug::Rational;

use crate::function::constant::Constant;

/// x -> sum_k `coefficients[k]` ((x - origin)/scale)^k, exactly. The scale is not 0.
#[derive(Clone, Debug)]
pub struct Polynomial {
    /// Where the local variable is 0.
    pub origin: Constant,
    /// The length that the local variable counts in.
    pub scale: Constant,
    /// Ascending; an empty list is the zero polynomial.
    pub coefficients: Vec<Rational>,
}

impl Polynomial {
    /// The exact value at `x`; `None` where the origin or the scale is not rational.
    pub fn evaluate(&self, x: &Rational) -> Option<Rational> {
        let origin = self.origin.as_rational()?;
        let scale = self.scale.as_rational()?;
        if scale.is_zero() {
            return None;
        }
        Some(self.evaluate_local(&(Rational::from(x - origin) / scale)))
    }

    /// The exact value where the local variable (x - origin)/scale is `t`, by Horner's rule.
    pub fn evaluate_local(&self, t: &Rational) -> Rational {
        self.coefficients
            .iter()
            .rev()
            .fold(Rational::new(), |sum, coefficient| sum * t + coefficient)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn constant(text: &str) -> Constant {
        Constant::parse(text).expect("a constant")
    }

    #[test]
    fn the_local_variable_is_shifted_and_scaled() {
        let polynomial = Polynomial {
            origin: constant("1/3"),
            scale: constant("0.5"),
            coefficients: vec![Rational::from(1), Rational::from(2), Rational::from(3)],
        };
        // t = (4/3 - 1/3)/0.5 = 2, and 1 + 2*2 + 3*4 = 17.
        assert_eq!(
            polynomial.evaluate(&Rational::from((4, 3))),
            Some(Rational::from(17))
        );
        assert_eq!(polynomial.evaluate_local(&Rational::from(2)), 17);
    }

    #[test]
    fn an_irrational_origin_has_no_rational_value() {
        let polynomial = Polynomial {
            origin: constant("pi/4"),
            scale: constant("1"),
            coefficients: vec![Rational::from(1)],
        };
        assert_eq!(polynomial.evaluate(&Rational::new()), None);
    }
}
