//! What every ball has to satisfy, and the random balls and points of the tests.

mod arithmetic;
mod extremes;
mod functions;
mod powers;

use proptest::prelude::*;
use rug::Integer;

use super::*;

/// The radius as a rational number.
fn exact(radius: Radius) -> Rational {
    radius
        .to_float_upper(RADIUS_BITS)
        .to_rational()
        .expect("a finite radius")
}

fn rational(value: &Float) -> Rational {
    value.to_rational().expect("a finite number")
}

/// A unit in the last place of the midpoint; 0 for a midpoint 0.
fn unit(ball: &Ball) -> Rational {
    match ball.midpoint.get_exp() {
        None => Rational::new(),
        Some(exponent) => Rational::from(1) << (exponent - ball.precision() as i32),
    }
}

fn lower_end(ball: &Ball) -> Rational {
    rational(&ball.midpoint) - exact(ball.radius)
}

fn upper_end(ball: &Ball) -> Rational {
    rational(&ball.midpoint) + exact(ball.radius)
}

/// Points of the ball, the two ends among them.
fn points(ball: &Ball) -> Vec<Rational> {
    let (midpoint, radius) = (rational(&ball.midpoint), exact(ball.radius));
    [(-1, 1), (-1, 2), (-1, 1000), (0, 1), (1, 3), (7, 8), (1, 1)]
        .into_iter()
        .map(|position| &midpoint + Rational::from(position) * &radius)
        .collect()
}

/// Precisions at which MPFR uses different code, and the least one.
fn precision() -> impl Strategy<Value = u32> {
    prop_oneof![
        Just(2u32),
        Just(3),
        Just(31),
        Just(53),
        Just(63),
        Just(64),
        Just(65),
        Just(130)
    ]
}

/// Midpoints with few and with many bits; radii that are 0, below the last place, narrow and wide.
fn ball_of(precision: u32, exponents: std::ops::Range<i32>) -> impl Strategy<Value = Ball> {
    let significand = prop_oneof![
        4 => any::<i128>().prop_map(Integer::from),
        2 => (-9i32..10).prop_map(Integer::from),
    ];
    let mantissa = prop_oneof![
        (1u32 << 29)..(1 << 30),
        Just(1u32 << 29),
        Just((1u32 << 30) - 1),
    ];
    let distance = prop_oneof![
        2 => Just(None),
        2 => (-170i32..-60).prop_map(Some),
        2 => (-60i32..-9).prop_map(Some),
        3 => (-9i32..4).prop_map(Some),
    ];
    (significand, exponents, mantissa, distance).prop_map(
        move |(significand, exponent, mantissa, distance)| {
            let mut midpoint = Float::with_val(precision, &significand);
            if let Some(own) = midpoint.get_exp() {
                midpoint <<= exponent - own;
            }
            let radius = distance.map_or(Radius::ZERO, |distance| {
                Radius::from_u64_upper(u64::from(mantissa))
                    .mul_power_of_two(i64::from(exponent + distance) - 30)
            });
            Ball::from_midpoint(midpoint, radius)
        },
    )
}

fn ball() -> impl Strategy<Value = Ball> {
    precision().prop_flat_map(|precision| ball_of(precision, -20..20))
}

fn assert_contains(ball: &Ball, value: &Rational) {
    assert!(
        ball.contains_rational(value),
        "{ball:?} does not contain {}",
        value.to_f64()
    );
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(2000))]

    #[test]
    fn predicates_and_ends_are_exact(a in ball(), b in ball(), shift in -2i32..3) {
        let (m, r) = (rational(&a.midpoint), exact(a.radius));
        let (low, high) = (lower_end(&a), upper_end(&a));
        prop_assert!(rational(&a.lower()) <= low && rational(&a.upper()) >= high);
        let slack = Rational::from(low.abs_ref()).max(high.clone().abs()) >> (a.precision() as i32 - 1);
        prop_assert!(rational(&a.lower()) + &slack >= low && rational(&a.upper()) - &slack <= high);
        prop_assert_eq!(a.contains_zero(), low <= 0 && high >= 0);
        prop_assert_eq!(a.is_positive(), low > 0);
        prop_assert_eq!(a.is_negative(), high < 0);
        let largest = Rational::from(low.abs_ref()).max(high.clone().abs());
        prop_assert!(exact(a.magnitude_upper()) >= largest);
        let least = if a.contains_zero() { Rational::new() } else { Rational::from(low.abs_ref()).min(high.clone().abs()) };
        prop_assert!(exact(a.magnitude_lower()) <= least);
        for point in points(&a) {
            prop_assert!(a.contains_rational(&point));
            let float = Float::with_val(400, &point);
            prop_assert_eq!(a.contains_float(&float), Rational::from(&rational(&float) - &m).abs() <= r);
        }
        let step = Rational::from(1) >> 300;
        prop_assert!(!a.contains_rational(&Rational::from(&high + &step)));
        prop_assert!(!a.contains_rational(&Rational::from(&low - &step)));
        // A ball that touches this one, overlaps it a little or misses it a little.
        let mut c = Ball::from_midpoint(Float::with_val(400, &high), b.radius);
        c.midpoint += b.radius.to_float_upper(30);
        c.midpoint += (c.midpoint.clone() >> 40) * shift;
        let distance = (rational(&c.midpoint) - &m).abs();
        let reach = Rational::from(&r + &exact(b.radius));
        prop_assert!(distance > reach || a.overlaps(&c) && c.overlaps(&a));
        prop_assert!(distance <= reach * tight() || !a.overlaps(&c) && !c.overlaps(&a));
        let both = a.union(&b);
        let width = high.clone().max(upper_end(&b)) - low.clone().min(lower_end(&b));
        prop_assert!(exact(both.radius) * 2u32 <= width * tight() + unit(&both));
        prop_assert!(!a.contains(&b) || points(&b).iter().all(|point| a.contains_rational(point)));
        let mut larger = a.clone();
        larger.add_error(a.radius);
        larger.add_error(Radius::power_of_two(-200));
        prop_assert!(larger.contains(&a) && !a.contains(&larger));
        for point in points(&a).iter().chain(&points(&b)) {
            assert_contains(&both, point);
        }
    }

    #[test]
    fn constructors_enclose(numerator: i64, denominator in 1u64.., integer: i64, a in ball(), b in ball(), p in precision()) {
        let quotient = Rational::from((numerator, denominator));
        let ball = Ball::from_rational(&quotient, p);
        assert_contains(&ball, &quotient);
        prop_assert!(exact(ball.radius) <= unit(&ball) / 2u32);
        let ball = Ball::from_i64(integer, p);
        assert_contains(&ball, &Rational::from(integer));
        prop_assert!(Ball::from_i64(integer, 64).is_exact());
        let (first, second) = (&a.midpoint, &b.midpoint);
        let hull = Ball::from_bounds(first, second, p);
        for bound in [first, second] {
            assert_contains(&hull, &rational(bound));
        }
        let width = (rational(first) - rational(second)).abs();
        prop_assert!(exact(hull.radius) <= width / 2u32 * tight() + unit(&hull));
        let rounded = a.with_precision(p);
        for point in points(&a) {
            assert_contains(&rounded, &point);
        }
    }
}

/// 1 + 2^-26: a few roundings of 30 bits.
fn tight() -> Rational {
    Rational::from(1) + (Rational::from(1) >> 26)
}

#[test]
fn circle_constant_and_limits_of_precision() {
    for precision in [0, 1, 2, 3, 53, 64, 128, 1000] {
        let pi = Ball::pi(precision);
        assert_eq!(pi.precision(), precision.max(2));
        assert!(pi.contains_float(&Float::with_val(2000, Constant::Pi)));
        assert!(!pi.is_exact() && exact(pi.radius) <= unit(&pi) / 2u32);
        assert!(Ball::one(precision).is_exact() && Ball::zero(precision).is_exact_zero());
    }
    assert!(Ball::from_float(Float::with_val(1, 0.5)).is_exact());
}

#[test]
fn nothing_finite_stands_for_the_whole_line() {
    for value in [f64::NAN, f64::INFINITY, f64::NEG_INFINITY] {
        let ball = Ball::from_float(Float::with_val(53, value));
        assert!(!ball.is_finite() && ball.midpoint.is_zero());
        let one = Float::with_val(53, 1);
        let other = Float::with_val(53, value);
        assert!(!Ball::from_bounds(&one, &other, 64).is_finite());
        assert!(!Ball::from_bounds(&other, &one, 64).is_finite());
    }
    let whole = Ball::whole(64);
    assert!(whole.contains_zero() && !whole.is_positive() && !whole.is_negative());
    assert!(whole.lower().is_infinite() && whole.upper().is_infinite());
    assert!(whole.contains_rational(&Rational::from(7)) && whole.overlaps(&Ball::one(9)));
    assert!(whole.contains(&whole) && !Ball::one(64).contains(&whole));
    assert!(!Ball::one(64).union(&whole).is_finite());
    assert!(
        !Ball::from_float(-Float::new(64))
            .midpoint
            .is_sign_negative()
    );
}
