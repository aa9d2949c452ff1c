use super::*;

/// 2^power, or MPFR's nearest to it inside its exponent range.
fn power_of_two(power: i32) -> Float {
    Float::with_val(64, 1.25) << power
}

fn all_functions(x: &Ball) -> Vec<(&'static str, Option<Ball>)> {
    let (sine, cosine) = x.sin_cos();
    vec![
        ("sqrt", x.sqrt()),
        ("cbrt", Some(x.cbrt())),
        ("exp", Some(x.exp())),
        ("exp2", Some(x.exp2())),
        ("expm1", Some(x.expm1())),
        ("log", x.log()),
        ("log2", x.log2()),
        ("log10", x.log10()),
        ("log1p", x.log1p()),
        ("sin", Some(x.sin())),
        ("cos", Some(x.cos())),
        ("sin_cos 0", Some(sine)),
        ("sin_cos 1", Some(cosine)),
        ("tan", x.tan()),
        ("asin", x.asin()),
        ("acos", x.acos()),
        ("atan", Some(x.atan())),
        ("sinh", Some(x.sinh())),
        ("cosh", Some(x.cosh())),
        ("tanh", Some(x.tanh())),
        ("asinh", Some(x.asinh())),
        ("acosh", x.acosh()),
        ("atanh", x.atanh()),
        ("erf", Some(x.erf())),
        ("erfc", Some(x.erfc())),
        ("square", Some(x.square())),
        ("reciprocal", Ball::one(64).div(x)),
        ("cube", x.pow_integer(3)),
        ("pow -4", x.pow_integer(-4)),
        ("pow 10^18", x.pow_integer(1_000_000_000_000_000_000)),
        ("pow -10^18", x.pow_integer(-1_000_000_000_000_000_000)),
        ("pow 2/3", x.pow_rational(&Rational::from((2, 3)))),
        ("pow -2/3", x.pow_rational(&Rational::from((-2, 3)))),
        (
            "pow 1001/3000",
            x.pow_rational(&Rational::from((1001, 3000))),
        ),
        (
            "pow 10^30/7",
            x.pow_rational(&Rational::from((10i128.pow(30), 7))),
        ),
        (
            "pow 7/10^30",
            x.pow_rational(&Rational::from((-7, 10i128.pow(30)))),
        ),
    ]
}

#[test]
fn the_ends_of_the_exponent_range_give_no_wrong_bound() {
    let powers = [float::exp_max() - 2, 1 << 29, 70_000, 31, 15, 0];
    let radii = [
        Radius::ZERO,
        Radius::power_of_two(-(1 << 40)),
        Radius::power_of_two(-(1 << 29)),
        Radius::power_of_two(-40),
        Radius::ONE,
        Radius::power_of_two(1 << 29),
        Radius::power_of_two(1 << 40),
        Radius::INFINITY,
    ];
    for power in powers {
        for midpoint in [
            power_of_two(power),
            -power_of_two(power),
            power_of_two(-power),
            -power_of_two(-power),
            Float::new(64),
        ] {
            for radius in radii {
                let x = Ball::from_midpoint(midpoint.clone(), radius);
                let inner = Ball::from_midpoint(midpoint.clone(), Radius::ZERO);
                for ((name, wide), (_, value)) in
                    all_functions(&x).into_iter().zip(all_functions(&inner))
                {
                    let Some(wide) = wide else { continue };
                    assert!(
                        wide.midpoint.is_finite() && (wide.is_finite() || wide.midpoint.is_zero())
                    );
                    let value = value.expect("a part of the domain");
                    assert!(
                        value.overlaps(&wide),
                        "{name} of {x:?}: {wide:?} against {value:?}"
                    );
                }
            }
        }
    }
}

#[test]
fn overflow_is_unbounded_and_underflow_is_not_lost() {
    let huge = Ball::from_float(power_of_two(float::exp_max() - 2));
    let tiny = Ball::from_float(power_of_two(float::exp_min() + 2));
    let least = Radius::power_of_two(least_positive_exponent());
    for unbounded in [
        huge.square(),
        huge.mul(&huge),
        huge.exp(),
        huge.div(&tiny).unwrap(),
        huge.mul_integer(9),
        huge.mul_power_of_two(i64::MAX),
    ] {
        assert!(!unbounded.is_finite());
    }
    let mut sum = Ball::one(64);
    sum.add_product(&huge, &huge);
    assert!(!sum.is_finite());
    for small in [
        tiny.square(),
        tiny.mul(&tiny),
        huge.neg().exp(),
        tiny.div(&huge).unwrap(),
        tiny.div_integer(99),
        tiny.mul_power_of_two(i64::MIN),
        huge.erfc(),
    ] {
        assert!(
            small.midpoint.is_zero() && small.radius >= least && small.radius < Radius::ONE,
            "{small:?}"
        );
    }
    // 5/4 2^k - 2^k underflows to nothing without a subnormal number.
    let bottom = Float::with_val(64, 1) << (float::exp_min() - 1);
    let above = Ball::from_float(Float::with_val(64, &bottom * 1.25f64));
    let difference = above.sub(&Ball::from_float(bottom));
    assert!(difference.radius >= Radius::power_of_two(least_positive_exponent() - 2));
    let mut sum = Ball::zero(64);
    sum.add_product(&tiny, &tiny);
    assert!(sum.contains_zero() && !sum.is_exact());
    // Between half of the least positive number and the number itself, rounding goes up to it.
    let product = tiny
        .mul_float(&Float::with_val(64, 0.5))
        .mul_float(&Float::with_val(64, 0.12));
    assert!(product.radius >= least.mul_power_of_two(-1), "{product:?}");
}

#[test]
fn bounded_functions_of_the_whole_line_stay_bounded() {
    let whole = Ball::whole(64);
    for (image, low, high) in [
        (whole.sin(), -1.0, 1.0),
        (whole.cos(), -1.0, 1.0),
        (whole.tanh(), -1.0, 1.0),
        (whole.erf(), -1.0, 1.0),
        (whole.erfc(), 0.0, 2.0),
        (whole.atan(), -1.5707964, 1.5707964),
        (Ball::from_float(power_of_two(200_000)).sin(), -1.0, 1.0),
    ] {
        assert!(image.lower() >= low && image.upper() <= high, "{image:?}");
        assert!(image.upper() - image.lower() > 1.99, "{image:?}");
    }
    for unbounded in [
        whole.exp(),
        whole.cosh(),
        whole.sinh(),
        whole.asinh(),
        whole.cbrt(),
        whole.expm1(),
    ] {
        assert!(!unbounded.is_finite());
    }
    for refused in [
        whole.sqrt(),
        whole.log(),
        whole.tan(),
        whole.asin(),
        whole.acosh(),
        whole.atanh(),
        whole.log1p(),
        whole.pow_integer(-1),
    ] {
        assert!(refused.is_none());
    }
    assert!(whole.pow_integer(0).is_some_and(|one| one.is_exact()));
}
