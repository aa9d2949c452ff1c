//! Extremes against dense exact sampling: bounds from above by inclusion, from below by tightness.

use proptest::prelude::*;
use rug::Rational;

use super::*;

fn polynomial(coefficients: &[f64]) -> DoublePolynomial {
    DoublePolynomial::new(coefficients.iter().map(|&c| singleton(c)).collect())
}

fn region(tightness: f64) -> Region {
    Region {
        outer: [-1.0, 1.0],
        inner: Some([-1.0, 1.0]),
        known: 0.0,
        tightness,
        budget: 1_000_000,
    }
}

/// Exact value of the polynomial at t.
fn exact_value(coefficients: &[f64], t: f64) -> Rational {
    let t = Rational::from_f64(t).unwrap();
    coefficients.iter().rev().fold(Rational::new(), |sum, &c| {
        sum * &t + Rational::from_f64(c).unwrap()
    })
}

fn check_absolute(coefficients: &[f64], tail: f64, tightness: f64) -> Extremes {
    let target = Target {
        numerator: polynomial(coefficients),
        tail,
        divisor: Divisor::One,
    };
    let found = extremes(&target, &region(tightness)).unwrap();
    for k in 0..=400 {
        let t = -1.0 + f64::from(k) / 200.0;
        let value = exact_value(coefficients, t);
        let above = &value + Rational::from_f64(tail).unwrap();
        let below = &value - Rational::from_f64(tail).unwrap();
        assert!(
            above <= found.maximum.upper,
            "{coefficients:?} exceeds its maximum at {t}"
        );
        assert!(
            below >= found.minimum.lower,
            "{coefficients:?} is below its minimum at {t}"
        );
    }
    // What is said to be reached is reached.
    let reached = exact_value(coefficients, found.maximum.at) - Rational::from_f64(tail).unwrap();
    assert!(reached >= found.maximum.lower);
    let reached = exact_value(coefficients, found.minimum.at) + Rational::from_f64(tail).unwrap();
    assert!(reached <= found.minimum.upper);
    found
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(200))]

    #[test]
    fn polynomials_are_enclosed_tightly(
        coefficients in proptest::collection::vec(-1.0f64..1.0, 1..14),
        scale in -40i32..40,
    ) {
        let coefficients: Vec<f64> = coefficients.iter().map(|c| c * 2f64.powi(scale)).collect();
        let found = check_absolute(&coefficients, 0.0, 1e-6);
        let modulus = found.maximum.lower.max(-found.minimum.upper);
        prop_assert!(found.maximum.upper - found.maximum.lower <= 1.1e-6 * modulus);
        prop_assert!(found.minimum.upper - found.minimum.lower <= 1.1e-6 * modulus);
    }

    #[test]
    fn the_tail_widens_both_ends(coefficients in proptest::collection::vec(-1.0f64..1.0, 1..8)) {
        check_absolute(&coefficients, 0.25, 1e-3);
    }

    #[test]
    fn quotients_are_enclosed(
        numerator in proptest::collection::vec(-1.0f64..1.0, 1..8),
        divisor in proptest::collection::vec(-0.2f64..0.2, 1..5),
        negative in any::<bool>(),
    ) {
        let mut divisor = divisor;
        divisor.insert(0, if negative { -1.5 } else { 1.5 });
        let (tail, divisor_tail) = (1e-5, 1e-6);
        let target = Target {
            numerator: polynomial(&numerator),
            tail,
            divisor: Divisor::Reference { polynomial: polynomial(&divisor), tail: divisor_tail },
        };
        let found = extremes(&target, &region(1e-4)).unwrap();
        for k in 0..=100 {
            let t = -1.0 + f64::from(k) / 50.0;
            for (a, b) in [(tail, divisor_tail), (-tail, divisor_tail), (tail, -divisor_tail), (-tail, -divisor_tail)] {
                let value = (exact_value(&numerator, t) + Rational::from_f64(a).unwrap())
                    / (exact_value(&divisor, t) + Rational::from_f64(b).unwrap());
                prop_assert!(value <= found.maximum.upper && value >= found.minimum.lower);
            }
        }
    }

    #[test]
    fn mixed_errors_are_enclosed_across_a_zero_of_the_reference(
        numerator in proptest::collection::vec(-1.0f64..1.0, 1..8),
        reference in proptest::collection::vec(-1.0f64..1.0, 2..5),
        absolute in 0.01f64..2.0,
    ) {
        let target = Target {
            numerator: polynomial(&numerator),
            tail: 0.0,
            divisor: Divisor::Mixed {
                absolute: singleton(absolute),
                scaled: polynomial(&reference),
                tail: 0.0,
            },
        };
        let found = extremes(&target, &region(1e-3)).unwrap();
        let modulus = found.maximum.lower.max(-found.minimum.upper);
        prop_assert!(found.maximum.upper - found.maximum.lower <= 1.1e-3 * modulus);
        for k in 0..=100 {
            let t = -1.0 + f64::from(k) / 50.0;
            let weight = exact_value(&reference, t).abs() + Rational::from_f64(absolute).unwrap();
            let value = exact_value(&numerator, t) / weight;
            prop_assert!(value <= found.maximum.upper && value >= found.minimum.lower);
        }
    }
}

#[test]
fn a_vanishing_divisor_is_found_and_not_divided_by() {
    let target = Target {
        numerator: polynomial(&[1.0]),
        tail: 0.0,
        divisor: Divisor::Reference {
            polynomial: polynomial(&[-0.25, 1.0]),
            tail: 0.0,
        },
    };
    let outcome = extremes(&target, &region(1e-3));
    let Err(NoExtremes::DivisorMayVanish(t)) = outcome else {
        panic!("{outcome:?}")
    };
    assert!((t - 0.25).abs() < 1e-9);
}

#[test]
fn samples_stay_inside_the_inner_region() {
    // Rising on the whole: the maximum over the outer region is at 1, which the set does not hold.
    let last = 1.0 - 2f64.powi(-20);
    let target = Target {
        numerator: polynomial(&[0.0, 1.0]),
        tail: 0.0,
        divisor: Divisor::One,
    };
    let region = Region {
        inner: Some([-1.0, last]),
        ..region(1e-3)
    };
    let found = extremes(&target, &region).unwrap();
    assert!(found.maximum.lower <= last && found.maximum.at <= last);
    assert!(found.maximum.upper >= 1.0);
}
