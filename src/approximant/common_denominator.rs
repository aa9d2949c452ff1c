//! Rational lists as integers over one denominator.
//!
//! The conversions between bases take O(n^2) additions and multiplications by small integers.
//! In rationals each of them pays for a greatest common divisor; over a common denominator they
//! are plain integer operations, and the fractions are reduced once at the end.

use rug::{Integer, Rational};

/// The most word operations that one conversion may take (about a minute).
const MAXIMUM_WORK: u128 = 1 << 37;

/// A conversion that would take unreasonably much exact arithmetic.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
#[error(
    "{coefficients} coefficients over a common denominator of {bits} bits or more are too much \
     for an exact conversion to powers"
)]
pub struct ConversionTooLarge {
    /// How many coefficients the piece has.
    pub coefficients: usize,
    /// Size of the common denominator, as far as it was computed.
    pub bits: u64,
}

/// Refuses a conversion of `coefficients` numbers of `bits` bits that takes O(n^2) operations.
///
/// The intermediate numbers gain at most two bits per coefficient (the factor 2 in the Chebyshev
/// recurrence, binomials below 2^n), so an operation handles (bits + 2 n) / 64 words.
pub fn check_work(coefficients: usize, bits: u64) -> Result<(), ConversionTooLarge> {
    let count = coefficients as u128;
    let words = (u128::from(bits) + 2 * count) / 64 + 1;
    if count * count * words > MAXIMUM_WORK {
        return Err(ConversionTooLarge { coefficients, bits });
    }
    Ok(())
}

/// Integers `numerators` and a positive integer `denominator` such that
/// `values[k] = numerators[k] / denominator` exactly.
pub fn over_common_denominator(
    values: &[Rational],
) -> Result<(Vec<Integer>, Integer), ConversionTooLarge> {
    let numerator_bits = values
        .iter()
        .map(|value| u64::from(value.numer().significant_bits()))
        .max()
        .unwrap_or(0);
    let mut denominator = Integer::from(1);
    for value in values {
        denominator.lcm_mut(value.denom());
        let bits = u64::from(denominator.significant_bits()) + numerator_bits;
        check_work(values.len(), bits)?;
    }
    let numerators = values
        .iter()
        .map(|value| Integer::from(denominator.div_exact_ref(value.denom())) * value.numer())
        .collect();
    Ok((numerators, denominator))
}

/// The reduced fractions `numerators[k] / denominator`.
pub fn reduce(numerators: Vec<Integer>, denominator: &Integer) -> Vec<Rational> {
    numerators
        .into_iter()
        .map(|numerator| Rational::from((numerator, denominator.clone())))
        .collect()
}

#[cfg(test)]
mod tests {
    use proptest::prelude::*;
    use rug::Complete;

    use super::*;

    proptest! {
        #[test]
        fn reducing_undoes_the_common_denominator(
            pairs in prop::collection::vec((any::<i64>(), 1_i64..1_000_000), 0..20)
        ) {
            let values: Vec<Rational> = pairs.iter().map(|&pair| Rational::from(pair)).collect();
            let (numerators, denominator) = over_common_denominator(&values).unwrap();
            prop_assert!(denominator > 0);
            prop_assert_eq!(reduce(numerators, &denominator), values);
        }
    }

    #[test]
    fn unreasonable_denominators_are_refused_before_they_are_built() {
        let denominators = 10_000_u32;
        let values: Vec<Rational> = (0..denominators)
            .map(|index| {
                let denominator = Integer::u_pow_u(10, 20_000).complete() + (2 * index + 1);
                Rational::from((Integer::from(1), denominator))
            })
            .collect();
        let error = over_common_denominator(&values).unwrap_err();
        assert_eq!(error.coefficients, 10_000);
        assert!(error.bits < 1_000_000, "stopped at {} bits", error.bits);
    }

    #[test]
    fn ten_thousand_binary64_coefficients_are_allowed() {
        assert!(check_work(10_000, 2_200).is_ok());
    }
}
