use proptest::prelude::*;

use super::*;

/// Bits of the reference values: rounding them to nearest changes nothing that an interval of 200
/// bits could show.
const REFERENCE: u32 = 320;

type Enclosure = fn(&WideInterval) -> Option<WideInterval>;

/// An interval function, the function itself and its domain.
struct Case {
    name: &'static str,
    enclosure: Enclosure,
    value: fn(Float) -> Float,
    domain: fn(&Float) -> bool,
}

fn everywhere(_: &Float) -> bool {
    true
}

fn monotone_cases() -> Vec<Case> {
    let case = |name, enclosure: Enclosure, value, domain| Case {
        name,
        enclosure,
        value,
        domain,
    };
    vec![
        case("exp", |x| Some(x.exp()), Float::exp, everywhere),
        case("exp2", |x| Some(x.exp2()), Float::exp2, everywhere),
        case("expm1", |x| Some(x.expm1()), Float::exp_m1, everywhere),
        case("log", WideInterval::log, Float::ln, |x| *x > 0),
        case("log2", WideInterval::log2, Float::log2, |x| *x > 0),
        case("log10", WideInterval::log10, Float::log10, |x| *x > 0),
        case("log1p", WideInterval::log1p, Float::ln_1p, |x| *x > -1),
        case("sqrt", WideInterval::sqrt, Float::sqrt, |x| *x >= 0),
        case("cbrt", |x| Some(x.cbrt()), Float::cbrt, everywhere),
        case("asin", WideInterval::asin, Float::asin, |x| {
            *x >= -1 && *x <= 1
        }),
        case("acos", WideInterval::acos, Float::acos, |x| {
            *x >= -1 && *x <= 1
        }),
        case("atan", |x| Some(x.atan()), Float::atan, everywhere),
        case("sinh", |x| Some(x.sinh()), Float::sinh, everywhere),
        case("tanh", |x| Some(x.tanh()), Float::tanh, everywhere),
        case("asinh", |x| Some(x.asinh()), Float::asinh, everywhere),
        case("acosh", WideInterval::acosh, Float::acosh, |x| *x >= 1),
        case("atanh", WideInterval::atanh, Float::atanh, |x| {
            *x > -1 && *x < 1
        }),
        case("erf", |x| Some(x.erf()), Float::erf, everywhere),
        case("erfc", |x| Some(x.erfc()), Float::erfc, everywhere),
    ]
}

fn other_cases() -> Vec<Case> {
    let case = |name, enclosure: Enclosure, value, domain| Case {
        name,
        enclosure,
        value,
        domain,
    };
    vec![
        case("cosh", |x| Some(x.cosh()), Float::cosh, everywhere),
        case("sin", |x| Some(x.sin()), Float::sin, everywhere),
        case("cos", |x| Some(x.cos()), Float::cos, everywhere),
        case("abs", |x| Some(x.abs()), Float::abs, everywhere),
        case("square", |x| Some(x.square()), Float::square, everywhere),
        case("half", |x| Some(x.half()), |x| x / 2u32, everywhere),
        case("double", |x| Some(x.double()), |x| x * 2u32, everywhere),
        case("negative", |x| Some(x.neg()), |x| -x, everywhere),
    ]
}

fn float(x: f64) -> Float {
    Float::with_val(53, x)
}

fn interval(a: f64, b: f64) -> WideInterval {
    WideInterval::new(float(a), float(b))
}

/// Numbers of many sizes, and those at which functions change their behaviour.
fn number() -> impl Strategy<Value = f64> {
    prop_oneof![
        4 => -4.0f64..4.0,
        2 => (-1.0f64..1.0, -40i32..9).prop_map(|(m, e)| m * 2f64.powi(e)),
        1 => prop::sample::select(vec![-2.0, -1.0, -0.5, 0.0, 0.5, 1.0, 2.0, 3.0]),
    ]
}

fn any_interval() -> impl Strategy<Value = WideInterval> {
    let precision = prop::sample::select(vec![8u32, 53, 64, 200]);
    let narrow = (number(), 0.0f64..1.0, -50i32..2).prop_map(|(x, w, e)| (x, x + w * 2f64.powi(e)));
    let ends = prop_oneof![(number(), number()), narrow];
    (ends, precision).prop_map(|((a, b), precision)| interval(a, b).with_precision(precision))
}

/// A place in an interval; the ends are where roundings show.
fn share() -> impl Strategy<Value = f64> {
    prop_oneof![Just(0.0), Just(1.0), 0.0f64..1.0]
}

/// A point of the interval, to the precision of the reference.
fn point_of(x: &WideInterval, share: f64) -> Float {
    let width = Float::with_val(REFERENCE, &x.upper - &x.lower);
    let point = Float::with_val(REFERENCE, &x.lower) + width * share;
    point.clamp(&x.lower, &x.upper)
}

/// True if a number whose rounding to nearest is `value` may lie in the interval.
fn holds(x: &WideInterval, value: &Float) -> bool {
    let slack = Float::with_val(REFERENCE, value.abs_ref()) >> (REFERENCE - 2);
    x.lower <= Float::with_val(REFERENCE, value + &slack)
        && Float::with_val(REFERENCE, value - &slack) <= x.upper
}

fn is_valid(x: &WideInterval) -> bool {
    x.lower.prec() == x.upper.prec()
        && x.lower <= x.upper
        && x.lower < f64::INFINITY
        && x.upper > f64::NEG_INFINITY
}

/// True if the ends are neighbours of the numbers given, or these numbers.
fn is_tight(x: &WideInterval, least: &Float, greatest: &Float) -> bool {
    let (mut lower, mut upper) = (x.lower.clone(), x.upper.clone());
    lower.next_up();
    upper.next_down();
    lower >= *least && upper <= *greatest
}

proptest! {
    #[test]
    fn functions_hold_their_values(x in any_interval(), share in share()) {
        for case in monotone_cases().iter().chain(&other_cases()) {
            let inside = (case.domain)(&x.lower) && (case.domain)(&x.upper);
            let result = (case.enclosure)(&x);
            prop_assert_eq!(result.is_some(), inside, "{} {:?}", case.name, x);
            let Some(result) = result else { continue };
            prop_assert!(is_valid(&result));
            prop_assert_eq!(result.precision(), x.precision());
            let value = (case.value)(point_of(&x, share));
            prop_assert!(holds(&result, &value), "{} {:?} {:?}", case.name, x, result);
        }
    }

    #[test]
    fn monotone_functions_are_tight(x in any_interval()) {
        for case in monotone_cases() {
            let Some(result) = (case.enclosure)(&x) else { continue };
            let first = (case.value)(Float::with_val(REFERENCE, &x.lower));
            let last = (case.value)(Float::with_val(REFERENCE, &x.upper));
            let (least, greatest) = if first <= last { (first, last) } else { (last, first) };
            prop_assert!(is_tight(&result, &least, &greatest), "{} {:?} {:?}", case.name, x, result);
        }
    }

    /// The extremes of sine and cosine by another method: multiples of pi/2 between the ends.
    #[test]
    fn sinusoids_are_tight(x in any_interval()) {
        let (sine, cosine) = x.sin_cos();
        if x.width() >= 3 {
            return Ok(());
        }
        let pi = Float::with_val(REFERENCE, rug::float::Constant::Pi);
        for (result, value, maximum) in [
            (&sine, Float::sin as fn(Float) -> Float, 0.5),
            (&cosine, Float::cos, 0.0),
        ] {
            let turns = |x: &Float| -> Float { Float::with_val(REFERENCE, x / &pi) - maximum };
            // Integers n between the ends: maxima at even, minima at odd n.
            let (first, last) = (turns(&x.lower).ceil(), turns(&x.upper).floor());
            let mut extremes = vec![
                value(Float::with_val(REFERENCE, &x.lower)),
                value(Float::with_val(REFERENCE, &x.upper)),
            ];
            if first <= last {
                let even = first.to_integer().unwrap_or_default().is_even();
                extremes.push(Float::with_val(REFERENCE, if even { 1 } else { -1 }));
            }
            let least = extremes.iter().cloned().fold(Float::with_val(REFERENCE, 2), smaller);
            let greatest = extremes.into_iter().fold(Float::with_val(REFERENCE, -2), larger);
            prop_assert!(is_tight(result, &least, &greatest), "{:?} {:?}", x, result);
        }
    }

    #[test]
    fn tangent_holds_its_values_and_avoids_poles(x in any_interval(), share in share()) {
        let cosine = x.cos();
        match x.tan() {
            Some(result) => {
                prop_assert!(!cosine.contains_zero());
                prop_assert!(holds(&result, &point_of(&x, share).tan()), "{:?} {:?}", x, result);
            }
            None => prop_assert!(cosine.contains_zero(), "{:?}", x),
        }
    }

    #[test]
    fn field_operations_hold_their_values(
        x in any_interval(),
        y in any_interval(),
        shares in (share(), share()),
    ) {
        // Doubles and their shares are rational numbers: the values are exact.
        let exact = |x: &WideInterval, share: f64| {
            let (a, b) = (x.lower.to_rational().unwrap(), x.upper.to_rational().unwrap());
            let share = Rational::from_f64(share).unwrap();
            Rational::from(&b - &a) * share + a
        };
        let (a, b) = (exact(&x, shares.0), exact(&y, shares.1));
        prop_assert!(x.add(&y).contains_rational(&Rational::from(&a + &b)));
        prop_assert!(x.sub(&y).contains_rational(&Rational::from(&a - &b)));
        prop_assert!(x.mul(&y).contains_rational(&Rational::from(&a * &b)));
        match x.div(&y) {
            Some(quotient) => prop_assert!(quotient.contains_rational(&Rational::from(&a / &b))),
            None => prop_assert!(y.contains_zero()),
        }
        for n in [-5, -2, -1, 0, 1, 2, 3, 7] {
            match x.pow_integer(n) {
                Some(power) => {
                    use rug::ops::Pow;
                    prop_assert!(power.contains_rational(&Rational::from((&a).pow(n))));
                }
                None => prop_assert!(n < 0 && x.contains_zero()),
            }
        }
    }

    /// The ends of sums, products and quotients are attained, up to one rounding, at corners.
    #[test]
    fn field_operations_are_tight(x in any_interval(), y in any_interval()) {
        let corners = |f: &dyn Fn(&Float, &Float) -> Float| {
            let mut values = Vec::new();
            for a in [&x.lower, &x.upper] {
                for b in [&y.lower, &y.upper] {
                    values.push(f(a, b));
                }
            }
            let least = values.iter().cloned().reduce(smaller).unwrap();
            (least, values.into_iter().reduce(larger).unwrap())
        };
        let (least, greatest) = corners(&|a, b| Float::with_val(REFERENCE, a + b));
        prop_assert!(is_tight(&x.add(&y), &least, &greatest));
        let (least, greatest) = corners(&|a, b| Float::with_val(REFERENCE, a - b));
        prop_assert!(is_tight(&x.sub(&y), &least, &greatest));
        let (least, greatest) = corners(&|a, b| Float::with_val(REFERENCE, a * b));
        prop_assert!(is_tight(&x.mul(&y), &least, &greatest));
        if let Some(quotient) = x.div(&y) {
            let (least, greatest) = corners(&|a, b| Float::with_val(REFERENCE, a / b));
            prop_assert!(is_tight(&quotient, &least, &greatest));
        }
    }

    #[test]
    fn rational_powers_hold_their_values(
        x in any_interval(),
        share in share(),
        numerator in -30i64..30,
        denominator in 2u32..12,
    ) {
        let q = Rational::from((numerator, denominator));
        let inside = x.lower > 0 || (x.lower.is_zero() && q >= 0);
        let result = x.pow_rational(&q);
        prop_assert_eq!(result.is_some(), inside);
        let Some(result) = result else { return Ok(()) };
        prop_assert!(is_valid(&result));
        let power = |x: &Float| {
            if x.is_zero() && !q.is_zero() {
                return Float::new(REFERENCE);
            }
            // Guard bits for the factor |q log x| of the relative error.
            let logarithm = if q.is_zero() {
                Float::new(REFERENCE)
            } else {
                Float::with_val(REFERENCE + 64, x).ln() * &q
            };
            Float::with_val(REFERENCE, logarithm.exp())
        };
        prop_assert!(holds(&result, &power(&point_of(&x, share))), "{:?} {} {:?}", x, q, result);
        let (first, last) = (power(&x.lower), power(&x.upper));
        let (least, greatest) = if first <= last { (first, last) } else { (last, first) };
        prop_assert!(is_tight(&result, &least, &greatest), "{:?} {} {:?}", x, q, result);
    }

    #[test]
    fn arguments_are_those_of_the_corners(
        x in any_interval(),
        y in any_interval(),
        shares in (share(), share()),
    ) {
        let meets_cut = x.lower <= 0 && y.contains_zero();
        let result = WideInterval::argument(&x, &y);
        prop_assert_eq!(result.is_none(), meets_cut);
        let Some(result) = result else { return Ok(()) };
        let angle = point_of(&y, shares.1).atan2(&point_of(&x, shares.0));
        prop_assert!(holds(&result, &angle), "{:?} {:?} {:?}", x, y, result);
        let mut corners = Vec::new();
        for a in [&x.lower, &x.upper] {
            for b in [&y.lower, &y.upper] {
                corners.push(Float::with_val(REFERENCE, b).atan2(a));
            }
        }
        let least = corners.iter().cloned().reduce(smaller).unwrap();
        let greatest = corners.into_iter().reduce(larger).unwrap();
        prop_assert!(is_tight(&result, &least, &greatest), "{:?} {:?} {:?}", x, y, result);
    }

    #[test]
    fn sets_behave_as_sets(x in any_interval(), y in any_interval(), share in share()) {
        let point = point_of(&x, share);
        prop_assert!(x.contains(&x.midpoint()));
        prop_assert!(x.hull(&y).contains(&point));
        prop_assert_eq!(
            x.intersection(&y).is_some_and(|both| both.contains(&point)),
            y.contains(&point)
        );
        prop_assert!(x.mignitude() <= point.clone().abs() && point.clone().abs() <= x.magnitude());
        prop_assert!(x.with_precision(20).contains(&point));
        prop_assert!(x.width() >= Float::with_val(REFERENCE, &x.upper - &x.lower));
    }
}

#[test]
fn odd_ends_become_enclosures() {
    let nan = Float::with_val(53, Special::Nan);
    assert_eq!(
        WideInterval::new(nan.clone(), float(1.0)),
        interval(f64::NEG_INFINITY, 1.0)
    );
    assert_eq!(
        WideInterval::new(float(1.0), nan.clone()),
        interval(1.0, f64::INFINITY)
    );
    assert_eq!(WideInterval::new(nan.clone(), nan), WideInterval::whole(53));
    assert_eq!(interval(2.0, 1.0), interval(1.0, 2.0));
    assert_eq!(
        WideInterval::point(&float(f64::INFINITY)),
        WideInterval::whole(53)
    );
    assert_eq!(
        WideInterval::new(Float::with_val(53, 0.1), Float::with_val(90, 0.2)).precision(),
        90
    );
}

/// Infinite ends come from overflows; every operation on them keeps the invariant, and what it
/// would give for arbitrarily large numbers.
#[test]
fn infinite_ends_stay_outward() {
    let infinity = f64::INFINITY;
    let sets = [
        interval(-infinity, infinity),
        interval(-infinity, -1.0),
        interval(-infinity, 0.0),
        interval(-infinity, 2.0),
        interval(1.0, infinity),
        interval(0.0, infinity),
        interval(-2.0, infinity),
        interval(0.0, 0.0),
        interval(-1.0, 3.0),
        interval(-4.0, -3.0),
    ];
    let points = [-1e6, -3.5, -1.0, 0.0, 1.5, 1e6];
    for x in &sets {
        for case in monotone_cases().iter().chain(&other_cases()) {
            let Some(result) = (case.enclosure)(x) else {
                continue;
            };
            assert!(is_valid(&result), "{} {x:?} {result:?}", case.name);
            for a in points.map(float).iter().filter(|a| x.contains(a)) {
                let value = (case.value)(Float::with_val(REFERENCE, a));
                assert!(holds(&result, &value), "{} {x:?} {result:?}", case.name);
            }
        }
        for n in [-3, -2, 2, 3] {
            assert!(x.pow_integer(n).is_none_or(|power| is_valid(&power)));
        }
        for q in [(-3, 2), (1, 3), (7, 2)] {
            assert!(
                x.pow_rational(&Rational::from(q))
                    .is_none_or(|power| is_valid(&power))
            );
        }
        for y in &sets {
            let (sum, difference, product) = (x.add(y), x.sub(y), x.mul(y));
            assert!(is_valid(&sum) && is_valid(&difference) && is_valid(&product));
            let quotient = x.div(y);
            assert!(quotient.as_ref().is_none_or(is_valid));
            assert!(
                WideInterval::argument(x, y).as_ref().is_none_or(is_valid),
                "{x:?} {y:?}"
            );
            for a in points.iter().filter(|&&a| x.contains(&float(a))) {
                for b in points.iter().filter(|&&b| y.contains(&float(b))) {
                    let (a, b) = (
                        Rational::from_f64(*a).unwrap(),
                        Rational::from_f64(*b).unwrap(),
                    );
                    assert!(sum.contains_rational(&Rational::from(&a + &b)));
                    assert!(difference.contains_rational(&Rational::from(&a - &b)));
                    assert!(
                        product.contains_rational(&Rational::from(&a * &b)),
                        "{x:?} {y:?}"
                    );
                    if let Some(quotient) = &quotient {
                        assert!(quotient.contains_rational(&Rational::from(&a / &b)));
                    }
                }
            }
        }
    }
}

#[test]
fn nothing_under_or_overflows_in_practice() {
    let small = interval(-1e5, -1e5).exp();
    assert!(small.is_positive() && small.is_finite());
    let tail = interval(108.0, 109.0).erfc();
    assert!(tail.is_positive());
    assert!(interval(1e6, 1e6).exp().is_finite());
    // Beyond MPFR's exponents, outward.
    let none = interval(-1e12, -1e12).exp();
    assert!(none.lower().is_zero() && *none.upper() > 0);
    let huge = interval(1e12, 1e12).exp();
    assert!(huge.lower().is_finite() && huge.upper().is_infinite());
}

#[test]
fn closed_ends_of_domains_are_inside() {
    assert_eq!(interval(0.0, 1.0).sqrt(), Some(interval(0.0, 1.0)));
    assert!(interval(-1.0, 1.0).asin().is_some() && interval(-1.0, 1.0).acos().is_some());
    assert_eq!(interval(1.0, 1.0).acosh(), Some(interval(0.0, 0.0)));
    assert!(interval(0.0, 1.0).log().is_none() && interval(-1.0, 1.0).log1p().is_none());
    assert!(interval(0.0, 1.0).atanh().is_none() && interval(-1.0, 0.0).atanh().is_none());
    assert_eq!(interval(0.0, 0.0).cos(), interval(1.0, 1.0));
    assert_eq!(interval(0.0, 0.0).sin(), interval(0.0, 0.0));
    assert_eq!(interval(0.0, 4.0).pow_integer(0), Some(interval(1.0, 1.0)));
}

#[test]
fn far_arguments_of_sinusoids() {
    let far = interval(1e22, 1e22).sin_cos();
    // sin(1e22) = -0.8522008497671888..., cos(1e22) = 0.5232147853951389...
    assert!(far.0.contains(&Float::with_val(53, -0.8522008497671888)));
    assert!(far.1.width() < 1e-15);
    let out_of_range = WideInterval::point(&(Float::with_val(53, 1) << 3000));
    assert_eq!(out_of_range.sin(), interval(-1.0, 1.0));
    assert!(out_of_range.tan().is_none());
}
