//! Two-point Hermite pieces over shared knots, converted exactly to powers of s = (x-a)/(b-a).

use rug::ops::NegAssign;
use rug::{Integer, Rational};

use crate::approximant::common_denominator::{
    ConversionTooLarge, check_work, over_common_denominator, reduce,
};

/// What the stored numbers of a knot are.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Scaling {
    /// Taylor coefficients f^(j)/j! in powers of (x - knot); the program multiplies them by
    /// powers of the width.
    RunTime,
    /// Taylor coefficients already multiplied by w^j, where w is the width of the piece: f^(j)
    /// w^j / j!, the coefficients in powers of (x - knot)/w. A knot that two pieces share has
    /// one list only, so its neighbours must be equally wide.
    Stored,
}

impl Scaling {
    /// The word of the audit file.
    pub fn name(self) -> &'static str {
        match self {
            Self::RunTime => "run-time",
            Self::Stored => "stored",
        }
    }
}

/// The data in the unit variable: `taylor[j]` w^j, exactly.
pub fn multiply_by_powers_of_width(
    taylor: &[Rational],
    width: &Rational,
) -> Result<Vec<Rational>, ConversionTooLarge> {
    let order = taylor.len().saturating_sub(1) as u64;
    let width_bits = u64::from(width.numer().significant_bits() + width.denom().significant_bits());
    check_work(taylor.len(), width_bits.saturating_mul(order))?;
    let mut power = Rational::from(1);
    let mut scaled = Vec::with_capacity(taylor.len());
    for (order, coefficient) in taylor.iter().enumerate() {
        if order > 0 {
            power *= width;
        }
        scaled.push(Rational::from(coefficient * &power));
    }
    Ok(scaled)
}

/// The coefficients in powers of s of the polynomial H of degree at most m + n + 1 with
/// H(s) = p_0 + p_1 s + ... + p_m s^m + O(s^(m+1)) at s = 0 and
/// H(s) = q_0 + q_1 (s-1) + ... + q_n (s-1)^n + O((s-1)^(n+1)) at s = 1.
///
/// With u = 1 - s, take
///
///   A(s) = p(s) / (1-s)^(n+1) cut off after s^m,      B(u) = q(-u) / (1-u)^(m+1) cut off after u^n,
///   H = (1-s)^(n+1) A(s) + s^(m+1) B(1-s).
///
/// The second term is O(s^(m+1)) and the first one is p(s) + O(s^(m+1)), so H has the data at 0;
/// in the same way it has the data at 1, where (s-1)^j = (-u)^j. Both terms have degree at most
/// m + n + 1, and two polynomials of that degree with the same m + n + 2 data are equal. Since
/// 1/(1-s)^(n+1) = sum_k C(n+k,k) s^k, this is the sum of p_j phi_j + q_j psi_j with
/// phi_j(s) = s^j (1-s)^(n+1) sum_{k<=m-j} C(n+k,k) s^k and psi_j(s) = (-1)^j phi_j^{n,m}(1-s).
///
/// Division by 1-s is a running sum and multiplication by it a difference, so that everything is
/// O((m+n)^2) additions of integers over the common denominator of the data.
pub fn to_powers(
    left: &[Rational],
    right: &[Rational],
) -> Result<Vec<Rational>, ConversionTooLarge> {
    let data: Vec<Rational> = left.iter().chain(right).cloned().collect();
    let (mut left_numerators, denominator) = over_common_denominator(&data)?;
    let mut right_numerators = left_numerators.split_off(left.len());
    for numerator in right_numerators.iter_mut().skip(1).step_by(2) {
        numerator.neg_assign();
    }
    for _ in 0..right.len() {
        divide_truncated_by_one_minus(&mut left_numerators);
    }
    for _ in 0..left.len() {
        divide_truncated_by_one_minus(&mut right_numerators);
    }
    let mut sum = left_numerators;
    for _ in 0..right.len() {
        multiply_by_one_minus(&mut sum);
    }
    // B(1-s) by Horner's rule in the factor 1-s; its powers begin at s^(m+1).
    let mut reflected: Vec<Integer> = Vec::with_capacity(right.len());
    for numerator in right_numerators.into_iter().rev() {
        if reflected.is_empty() {
            reflected.push(numerator);
        } else {
            multiply_by_one_minus(&mut reflected);
            reflected[0] += numerator;
        }
    }
    for (total, part) in sum[left.len()..].iter_mut().zip(reflected) {
        *total += part;
    }
    Ok(reduce(sum, &denominator))
}

/// Replaces a(s) by the part of a(s)/(1-s) of the same length: sums of all earlier coefficients.
fn divide_truncated_by_one_minus(coefficients: &mut [Integer]) {
    for index in 1..coefficients.len() {
        let (before, from) = coefficients.split_at_mut(index);
        from[0] += &before[index - 1];
    }
}

/// Replaces a(s) by (1-s) a(s), one coefficient longer.
fn multiply_by_one_minus(coefficients: &mut Vec<Integer>) {
    coefficients.push(Integer::new());
    for index in (1..coefficients.len()).rev() {
        let (before, from) = coefficients.split_at_mut(index);
        from[0] -= &before[index - 1];
    }
}

#[cfg(test)]
mod tests {
    use proptest::prelude::*;

    use super::*;
    use crate::approximant::test_numbers::{horner, rational};

    /// Taylor coefficients at `point` by repeated synthetic division.
    fn taylor_at(powers: &[Rational], point: &Rational) -> Vec<Rational> {
        let mut coefficients = powers.to_vec();
        for start in 0..coefficients.len() {
            for index in (start..coefficients.len() - 1).rev() {
                let carried = Rational::from(&coefficients[index + 1] * point);
                coefficients[index] += carried;
            }
        }
        coefficients
    }

    /// One end of the sum, as a program evaluates it: t_{k+1} = t_k s (n+k+1)/(k+1),
    /// c_i = t_0 + ... + t_i, Horner over j of p_j c_{m-j}, times (1-s)^(n+1).
    fn one_end(data: &[Rational], other_count: usize, s: &Rational) -> Rational {
        let mut term = Rational::from(1);
        let mut running = Rational::new();
        let mut sums = Vec::new();
        for k in 0..data.len() {
            running += &term;
            sums.push(running.clone());
            term = term * s * Rational::from((other_count + k, k + 1));
        }
        let mut value = Rational::new();
        for (j, coefficient) in data.iter().enumerate().rev() {
            value = value * s + Rational::from(coefficient * &sums[data.len() - 1 - j]);
        }
        for _ in 0..other_count {
            value *= Rational::from(1 - s);
        }
        value
    }

    fn two_ended_horner(left: &[Rational], right: &[Rational], s: &Rational) -> Rational {
        let mirrored: Vec<Rational> = right
            .iter()
            .enumerate()
            .map(|(j, q)| {
                if j % 2 == 0 {
                    q.clone()
                } else {
                    Rational::from(-q)
                }
            })
            .collect();
        let reflected = Rational::from(1 - s);
        one_end(left, right.len(), s) + one_end(&mirrored, left.len(), &reflected)
    }

    proptest! {
        #[test]
        fn has_the_data_at_both_ends(
            left in prop::collection::vec(rational(), 1..8),
            right in prop::collection::vec(rational(), 1..8),
            s in rational(),
        ) {
            let powers = to_powers(&left, &right).unwrap();
            prop_assert_eq!(powers.len(), left.len() + right.len());
            prop_assert_eq!(&powers[..left.len()], &left[..]);
            let at_one = taylor_at(&powers, &Rational::from(1));
            prop_assert_eq!(&at_one[..right.len()], &right[..]);
            prop_assert_eq!(horner(&powers, &s), two_ended_horner(&left, &right, &s));
        }

        #[test]
        fn reproduces_a_polynomial_of_the_grade_from_its_own_data(
            powers in prop::collection::vec(rational(), 2..10),
            split in 1_usize..9,
        ) {
            let split = split.min(powers.len() - 1);
            let left = powers[..split].to_vec();
            let right = taylor_at(&powers, &Rational::from(1))[..powers.len() - split].to_vec();
            prop_assert_eq!(to_powers(&left, &right).unwrap(), powers);
        }

        #[test]
        fn the_width_enters_by_its_powers(
            taylor in prop::collection::vec(rational(), 1..6),
            width in rational(),
            s in rational(),
        ) {
            let scaled = multiply_by_powers_of_width(&taylor, &width).unwrap();
            let x = Rational::from(&width * &s);
            prop_assert_eq!(horner(&scaled, &s), horner(&taylor, &x));
        }
    }

    #[test]
    fn values_alone_give_the_chord() {
        let powers = to_powers(&[Rational::from(2)], &[Rational::from(5)]).unwrap();
        assert_eq!(powers, [Rational::from(2), Rational::from(3)]);
    }

    #[test]
    fn a_grade_of_a_thousand_is_quick() {
        let data = |count: u32| -> Vec<Rational> {
            (0..count)
                .map(|j| Rational::from((2 * j + 1, 1_u64 << 52)))
                .collect()
        };
        let powers = to_powers(&data(369), &data(631)).unwrap();
        assert_eq!(powers.len(), 1000);
        assert_eq!(horner(&powers, &Rational::from(1)), data(1)[0]);
    }
}
