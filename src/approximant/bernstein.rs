//! Bernstein coefficients on the unit interval, converted exactly to powers.

use rug::{Integer, Rational};

use crate::approximant::common_denominator::{ConversionTooLarge, over_common_denominator, reduce};

/// The coefficients a_k with sum_k a_k s^k = sum_i b_i C(n,i) s^i (1-s)^(n-i) exactly, where
/// n + 1 is the number of coefficients and index 0 comes first.
///
/// Let E b_i = b_{i+1} be the shift. The sum is ((1-s) + s E)^n b_0 = (1 + s Delta)^n b_0 with the
/// forward difference Delta = E - 1, so a_k = C(n,k) Delta^k b_0. The differences take n(n+1)/2
/// subtractions of integers over the common denominator.
pub fn to_powers(coefficients: &[Rational]) -> Result<Vec<Rational>, ConversionTooLarge> {
    let (mut differences, denominator) = over_common_denominator(coefficients)?;
    let count = differences.len();
    for order in 1..count {
        for index in (order..count).rev() {
            let (before, from) = differences.split_at_mut(index);
            from[0] -= &before[index - 1];
        }
    }
    let mut binomial = Integer::from(1);
    for (power, difference) in differences.iter_mut().enumerate() {
        *difference *= &binomial;
        // C(n, k+1) = C(n, k) (n - k) / (k + 1), an exact division.
        binomial *= (count - 1 - power) as u64;
        binomial.div_exact_u_mut(power as u32 + 1);
    }
    Ok(reduce(differences, &denominator))
}

#[cfg(test)]
mod tests {
    use proptest::prelude::*;

    use super::*;
    use crate::approximant::test_numbers::{horner, rational};

    fn de_casteljau(coefficients: &[Rational], s: &Rational) -> Rational {
        let mut points = coefficients.to_vec();
        let other = Rational::from(1 - s);
        while points.len() > 1 {
            points = points
                .windows(2)
                .map(|pair| Rational::from(&pair[0] * &other) + Rational::from(&pair[1] * s))
                .collect();
        }
        points[0].clone()
    }

    proptest! {
        #[test]
        fn agrees_with_repeated_linear_interpolation(
            coefficients in prop::collection::vec(rational(), 1..14),
            s in rational(),
        ) {
            let powers = to_powers(&coefficients).unwrap();
            prop_assert_eq!(powers.len(), coefficients.len());
            prop_assert_eq!(horner(&powers, &s), de_casteljau(&coefficients, &s));
        }
    }

    #[test]
    fn equal_coefficients_are_a_constant() {
        let powers = to_powers(&vec![Rational::from((1, 3)); 40]).unwrap();
        assert_eq!(powers[0], Rational::from((1, 3)));
        assert!(powers[1..].iter().all(Rational::is_zero));
    }
}
