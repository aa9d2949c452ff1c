use rug::ops::Pow;

use super::*;

fn pair() -> impl Strategy<Value = (Ball, Ball)> {
    (precision(), precision(), any::<bool>()).prop_flat_map(|(first, second, equal)| {
        let second = if equal { first } else { second };
        (ball_of(first, -20..20), ball_of(second, -20..20))
    })
}

/// m 2^-p/2: what rounding to nearest may add, with a little for the radius.
fn rounding(value: &Ball) -> Rational {
    unit(value) / 2u32 * tight()
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(3000))]

    #[test]
    fn field_operations_enclose_and_are_tight((a, b) in pair(), c in ball()) {
        let (m, r) = (rational(&a.midpoint), exact(a.radius));
        let (n, s) = (rational(&b.midpoint), exact(b.radius));
        let (sum, difference, product) = (a.add(&b), a.sub(&b), a.mul(&b));
        let quotient = a.div(&b);
        let (mut plus, mut minus) = (c.clone(), c.clone());
        plus.add_product(&a, &b);
        minus.sub_product(&a, &b);
        let (mut sum_here, mut difference_here, mut product_here) = (a.clone(), a.clone(), a.clone());
        sum_here.add_assign(&b);
        difference_here.sub_assign(&b);
        product_here.mul_assign(&b);
        for x in points(&a) {
            for y in points(&b) {
                let (p, q) = (Rational::from(&x + &y), Rational::from(&x - &y));
                assert_contains(&sum, &p);
                assert_contains(&sum_here, &p);
                assert_contains(&difference, &q);
                assert_contains(&difference_here, &q);
                let p = Rational::from(&x * &y);
                assert_contains(&product, &p);
                assert_contains(&product_here, &p);
                for z in [&points(&c)[0], &points(&c)[6]] {
                    assert_contains(&plus, &Rational::from(z + &p));
                    assert_contains(&minus, &Rational::from(z - &p));
                }
                if let Some(quotient) = &quotient {
                    assert_contains(quotient, &Rational::from(&x / &y));
                }
            }
        }
        let sum_error = Rational::from(&r + &s) * tight();
        prop_assert!(exact(sum.radius) <= sum_error.clone() + rounding(&sum));
        prop_assert!(exact(sum_here.radius) <= sum_error.clone() + rounding(&sum_here));
        prop_assert!(exact(difference.radius) <= sum_error + rounding(&difference));
        let product_error = (m.clone().abs() * &s + n.clone().abs() * &r + r.clone() * &s) * tight();
        prop_assert!(exact(product.radius) <= product_error.clone() + rounding(&product));
        prop_assert!(exact(product_here.radius) <= product_error.clone() + rounding(&product_here));
        let inner = c.mul(&Ball::one(2)).precision();
        let product_unit = Rational::from(&m * &n).abs() >> (inner as i32 - 1);
        let both = (product_error + exact(c.radius)) * tight() + product_unit;
        prop_assert!(exact(plus.radius) <= both.clone() + rounding(&plus));
        prop_assert!(exact(minus.radius) <= both + rounding(&minus));
        prop_assert_eq!(quotient.is_none(), b.contains_zero());
        if let Some(quotient) = quotient {
            let ends: Vec<Rational> = [&points(&a)[0], &points(&a)[6]]
                .into_iter()
                .flat_map(|x| [&points(&b)[0], &points(&b)[6]].map(|y| Rational::from(x / y)))
                .collect();
            let width = ends.iter().max().unwrap().clone() - ends.iter().min().unwrap();
            let thousandth = Rational::from((1003, 1000));
            prop_assert!(exact(quotient.radius) * 2u32 <= width * thousandth + unit(&quotient) * 2u32);
        }
    }

    #[test]
    fn operations_with_numbers_enclose(a in ball(), factor: i64, small in -9i64..9, divisor in 1u64.., power in -70i64..70, f: f32) {
        let negative = a.neg();
        let square = a.square();
        let absolute = a.abs();
        let shifted = a.mul_power_of_two(power);
        let float = Float::with_val(24, if f.is_finite() { f } else { 1.5 });
        let scaled = a.mul_float(&float);
        for x in points(&a) {
            assert_contains(&negative, &Rational::from(-&x));
            assert_contains(&square, &Rational::from(x.square_ref()));
            assert_contains(&absolute, &Rational::from(x.abs_ref()));
            assert_contains(&shifted, &(x.clone() << power as i32));
            assert_contains(&scaled, &(rational(&float) * &x));
            for factor in [factor, small] {
                assert_contains(&a.mul_integer(factor), &(Rational::from(factor) * &x));
            }
            for divisor in [divisor, small.unsigned_abs() + 1] {
                assert_contains(&a.div_integer(divisor), &(x.clone() / Rational::from(divisor)));
            }
        }
        prop_assert_eq!(shifted.radius, a.radius.mul_power_of_two(power));
        let divided = a.div_integer(divisor);
        prop_assert!(exact(divided.radius) <= exact(a.radius) / Rational::from(divisor) * tight() + rounding(&divided));
        let multiple = a.mul_integer(factor);
        prop_assert!(exact(multiple.radius) <= exact(a.radius) * Rational::from(factor.unsigned_abs()) * tight() + rounding(&multiple));
        prop_assert!(rational(&absolute.upper()) <= exact(a.magnitude_upper()) * tight() + unit(&absolute) * 4u32);
        let image: Vec<Rational> = points(&a).iter().map(|x| Rational::from(x.square_ref())).collect();
        let least = if a.contains_zero() { &Rational::new() } else { image.iter().min().unwrap() };
        let width = image.iter().max().unwrap().clone() - least;
        prop_assert!(exact(square.radius) * 2u32 <= width * Rational::from((1003, 1000)) + unit(&square) * 2u32);
    }

    #[test]
    fn integer_powers_enclose_and_are_tight(a in ball(), exponent in -20i64..21) {
        let Some(power) = a.pow_integer(exponent) else {
            prop_assert!(exponent < 0 && a.contains_zero());
            return Ok(());
        };
        prop_assert!(exponent >= 0 || !a.contains_zero());
        let mut image: Vec<Rational> = points(&a).iter().map(|x| x.clone().pow(exponent as i32)).collect();
        if a.contains_zero() && exponent > 0 {
            image.push(Rational::new());
        }
        for value in &image {
            assert_contains(&power, value);
        }
        let width = image.iter().max().unwrap().clone() - image.iter().min().unwrap();
        prop_assert!(exact(power.radius) * 2u32 <= width * Rational::from((1003, 1000)) + unit(&power) * 2u32);
        prop_assert_eq!(power.precision(), a.precision());
    }
}

#[test]
fn exact_operands_give_exact_results_where_they_fit() {
    let three = Ball::from_i64(3, 64);
    let half = Ball::from_rational(&Rational::from((1, 2)), 64);
    let mut sum = three.clone();
    sum.add_product(&three, &half);
    for (value, expected) in [
        (three.add(&half), 3.5),
        (three.sub(&half), 2.5),
        (three.mul(&half), 1.5),
        (three.div(&half).unwrap(), 6.0),
        (three.square(), 9.0),
        (three.pow_integer(-1).unwrap().mul(&Ball::zero(64)), 0.0),
        (half.pow_integer(-3).unwrap(), 8.0),
        (three.mul_integer(-7), -21.0),
        (three.div_integer(2), 1.5),
        (sum, 4.5),
        (three.neg(), -3.0),
        (three.neg().abs(), 3.0),
    ] {
        assert!(
            value.is_exact() && *value.midpoint() == expected,
            "{value:?} != {expected}"
        );
    }
    assert!(!Ball::one(64).div(&three).unwrap().is_exact());
    assert!(three.div(&Ball::zero(64)).is_none() && three.pow_integer(-1).is_some());
    assert!(!three.div_integer(0).is_finite());
}

#[test]
fn zero_and_the_whole_line() {
    let (zero, one, whole) = (Ball::zero(64), Ball::one(64), Ball::whole(64));
    let around_zero = Ball::from_midpoint(Float::new(64), Radius::power_of_two(-9));
    assert!(zero.mul(&whole).is_exact_zero() && whole.mul(&zero).is_exact_zero());
    assert!(zero.div(&one).unwrap().is_exact_zero());
    assert!(whole.mul_integer(0).is_exact_zero());
    for unbounded in [
        whole.add(&one),
        one.sub(&whole),
        whole.mul(&whole),
        whole.mul(&around_zero),
        around_zero.mul(&whole),
        whole.square(),
        whole.neg(),
        whole.abs(),
        whole.div(&one).unwrap(),
        whole.mul_integer(3),
        whole.div_integer(3),
        whole.mul_power_of_two(-99),
        whole.mul_float(&Float::with_val(53, 0.5)),
        whole.with_precision(20),
        one.mul_float(&Float::with_val(53, f64::INFINITY)),
        zero.add(&one).mul_float(&Float::with_val(53, f64::NAN)),
    ] {
        assert!(
            !unbounded.is_finite() && unbounded.midpoint.is_zero(),
            "{unbounded:?}"
        );
    }
    assert!(one.div(&whole).is_none());
    let mut sum = one.clone();
    sum.add_product(&whole, &zero);
    assert!(sum.is_exact());
    sum.add_product(&whole, &around_zero);
    assert!(!sum.is_finite());
    sum.mul_assign(&zero);
    assert!(sum.is_exact_zero());
}
