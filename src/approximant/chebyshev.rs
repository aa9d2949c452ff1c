//! Chebyshev coefficients, converted exactly to powers of the local variable.

use rug::{Integer, Rational};

use crate::approximant::common_denominator::{ConversionTooLarge, over_common_denominator, reduce};

/// How the first coefficient counts.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum FirstCoefficient {
    /// c_0 T_0 + c_1 T_1 + ...
    Full,
    /// c_0 / 2 + c_1 T_1 + ... (the convention of sums with a prime).
    Halved,
}

impl FirstCoefficient {
    /// The word of the audit file.
    pub fn name(self) -> &'static str {
        match self {
            Self::Full => "full",
            Self::Halved => "halved",
        }
    }
}

/// The coefficients a_k with sum_k a_k t^k = sum_k c_k T_k(t) exactly (c_0 / 2 where halved).
///
/// Clenshaw's recurrence carried out on polynomials: with b_{n+1} = b_{n+2} = 0 and
/// b_k = c_k + 2 t b_{k+1} - b_{k+2}, the sum is b_0 - t b_1. It follows from
/// T_{k+1} = 2 t T_k - T_{k-1}: substituting c_k = b_k - 2 t b_{k+1} + b_{k+2} into the sum, the
/// factor of b_k is T_k - 2 t T_{k-1} + T_{k-2} = 0 for every k >= 2; the factor of b_0 is
/// T_0 = 1 and that of b_1 is T_1 - 2 t T_0 = -t. Every step multiplies by 2, shifts by one power
/// and subtracts, so the common denominator of the c_k is one of the a_k too. O(n^2) additions.
/// (Recurrence: C. W. Clenshaw, 1955, from memory.)
pub fn to_powers(
    coefficients: &[Rational],
    first: FirstCoefficient,
) -> Result<Vec<Rational>, ConversionTooLarge> {
    let (mut numerators, denominator) = over_common_denominator(coefficients)?;
    let denominator = match first {
        FirstCoefficient::Full => denominator,
        FirstCoefficient::Halved => {
            for numerator in numerators.iter_mut().skip(1) {
                *numerator <<= 1;
            }
            denominator << 1
        }
    };
    let count = numerators.len();
    let mut later = vec![Integer::new(); count + 1];
    let mut latest = vec![Integer::new(); count + 1];
    for (index, numerator) in numerators.into_iter().enumerate().rev() {
        // `latest` is b_{k+1} and `later` is b_{k+2}, both of degree at most n - k - 1; the new
        // polynomial replaces b_{k+2}.
        let degree = count - 1 - index;
        for power in 0..=degree {
            let negated = -std::mem::take(&mut later[power]);
            later[power] = negated;
            if power > 0 {
                // The sum ends with b_0 - t b_1 = c_0 + t b_1 - b_2: its last step has the
                // factor 1 in the place of 2.
                let shift = u32::from(index > 0);
                later[power] += Integer::from(&latest[power - 1] << shift);
            }
        }
        later[0] += numerator;
        std::mem::swap(&mut later, &mut latest);
    }
    latest.truncate(count);
    Ok(reduce(latest, &denominator))
}

#[cfg(test)]
mod tests {
    use proptest::prelude::*;

    use super::*;
    use crate::approximant::test_numbers::{horner, rational};

    /// The sum by the three-term recurrence for the values T_k(t).
    fn by_recurrence(coefficients: &[Rational], first: FirstCoefficient, t: &Rational) -> Rational {
        let mut previous = t.clone();
        let mut current = Rational::from(1);
        let mut sum = Rational::new();
        for (index, coefficient) in coefficients.iter().enumerate() {
            let mut term = Rational::from(coefficient * &current);
            if index == 0 && first == FirstCoefficient::Halved {
                term /= 2;
            }
            sum += term;
            // T_{-1} = T_1 = t starts the recurrence at k = 0.
            let next = Rational::from(t * &current) * 2 - &previous;
            previous = std::mem::replace(&mut current, next);
        }
        sum
    }

    #[test]
    fn the_first_polynomials_are_the_known_ones() {
        let known: [&[i32]; 6] = [
            &[1],
            &[0, 1],
            &[-1, 0, 2],
            &[0, -3, 0, 4],
            &[1, 0, -8, 0, 8],
            &[0, 5, 0, -20, 0, 16],
        ];
        for (degree, powers) in known.iter().enumerate() {
            let mut coefficients = vec![Rational::new(); degree + 1];
            coefficients[degree] = Rational::from(1);
            let expected: Vec<Rational> =
                powers.iter().map(|&power| Rational::from(power)).collect();
            assert_eq!(
                to_powers(&coefficients, FirstCoefficient::Full).unwrap(),
                expected
            );
        }
    }

    #[test]
    fn halving_concerns_the_first_coefficient_only() {
        let coefficients = [Rational::from(3), Rational::from(5)];
        let powers = to_powers(&coefficients, FirstCoefficient::Halved).unwrap();
        assert_eq!(powers, [Rational::from((3, 2)), Rational::from(5)]);
        assert!(to_powers(&[], FirstCoefficient::Halved).unwrap().is_empty());
    }

    proptest! {
        #[test]
        fn agrees_with_the_recurrence(
            coefficients in prop::collection::vec(rational(), 1..14),
            halved in any::<bool>(),
            t in rational(),
        ) {
            let first = if halved { FirstCoefficient::Halved } else { FirstCoefficient::Full };
            let powers = to_powers(&coefficients, first).unwrap();
            prop_assert_eq!(powers.len(), coefficients.len());
            prop_assert_eq!(horner(&powers, &t), by_recurrence(&coefficients, first, &t));
        }
    }
}
