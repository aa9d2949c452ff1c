use proptest::prelude::*;
use rug::Rational;

use super::*;
use crate::function::parser::parse_formula;
use crate::number::literal;
use crate::number::radius::Radius;

fn rational(text: &str) -> Rational {
    literal::parse(text).unwrap_or_else(|error| panic!("{text}: {error:?}"))
}

/// "3/2", "pi", "1/4 pi"
fn exact(text: &str) -> Exact {
    match text.strip_suffix("pi") {
        Some("") => Exact::of_pi(Rational::from(1)),
        Some(factor) => Exact::of_pi(rational(factor.trim())),
        None => Exact::from(rational(text)),
    }
}

/// The known coefficients of the whole formula.
fn known(text: &str, at: &str, count: usize) -> Vec<Option<Exact>> {
    let formula = parse_formula(text).unwrap_or_else(|error| panic!("{text}: {error:?}"));
    let Exact {
        rational,
        pi_multiple,
    } = exact(at);
    let centre = Centre {
        rational,
        pi_multiple,
    };
    leading_coefficients(&formula, &centre, count).swap_remove(formula.root())
}

/// Compares with a list in which "?" is an unknown coefficient.
fn check(text: &str, at: &str, expected: &str) {
    let expected: Vec<Option<Exact>> = expected
        .split(", ")
        .map(|value| (value != "?").then(|| exact(value)))
        .collect();
    assert_eq!(known(text, at, expected.len()), expected, "{text} at {at}");
}

#[test]
fn functions_have_their_taylor_series() {
    check("exp(x)", "0", "1, 1, 1/2, 1/6, 1/24");
    check("expm1(x)", "0", "0, 1, 1/2, 1/6, 1/24");
    check("log(x)", "1", "0, 1, -1/2, 1/3, -1/4");
    check("log(x)", "2", "?, 1/2, -1/8, 1/24, -1/64");
    check("log1p(x)", "0", "0, 1, -1/2, 1/3, -1/4");
    check("sin(x)", "0", "0, 1, 0, -1/6, 0, 1/120");
    check("cos(x)", "0", "1, 0, -1/2, 0, 1/24, 0");
    check("tan(x)", "0", "0, 1, 0, 1/3, 0, 2/15");
    check("asin(x)", "0", "0, 1, 0, 1/6, 0, 3/40");
    check("acos(x)", "0", "1/2 pi, -1, 0, -1/6, 0, -3/40");
    check("atan(x)", "0", "0, 1, 0, -1/3, 0, 1/5");
    check("sinh(x)", "0", "0, 1, 0, 1/6, 0, 1/120");
    check("cosh(x)", "0", "1, 0, 1/2, 0, 1/24, 0");
    check("tanh(x)", "0", "0, 1, 0, -1/3, 0, 2/15");
    check("asinh(x)", "0", "0, 1, 0, -1/6, 0, 3/40");
    check("acosh(x)", "5/4", "?, 4/3, -40/27");
    check("atanh(x)", "0", "0, 1, 0, 1/3, 0, 1/5");
    check("erf(x)", "0", "0, ?, 0, ?, 0, ?");
    check("erfc(x)", "0", "1, ?, 0, ?, 0, ?");
    check("sqrt(x)", "9/4", "3/2, 1/3, -1/27");
    check("sqrt(x)", "2", "?, ?, ?");
    check("cbrt(x)", "-8", "-2, 1/12, 1/288");
    check("exp2(x)", "-3", "1/8, ?, ?");
    check("log2(x)", "1/8", "-3, ?, ?");
    check("log10(x)", "1000", "3, ?, ?");
    check("pow(x, 2.5)", "4", "32, 20, 15/4");
    check("pow(x, -2)", "2", "1/4, -1/4, 3/16");
    check("pow(x, 3)", "0", "0, 0, 0, 1, 0");
    check("pow(2, x)", "3", "8, ?");
    check("pow(x, x)", "1", "1, 1, 1, 1/2");
    check("fabs(x)", "-1/3", "1/3, -1, 0");
    check("fabs(cos(x)-2)", "1", "?, ?, ?");
    check("fabs(sin(x)-1-x)", "0", "1, 0, 0, 1/6");
}

#[test]
fn special_values_are_known() {
    check("sin(x)", "pi", "0, -1, 0, 1/6");
    check("sin(x)", "-7/2 pi", "1, 0, -1/2, 0");
    check("sin(x)", "1/6 pi", "1/2, ?, -1/4, ?");
    check("cos(x)", "1/2 pi", "0, -1, 0, 1/6");
    check("cos(x)", "2/3 pi", "-1/2, ?, 1/4");
    check("sin(x)", "1/4 pi", "?, ?");
    check("tan(x)", "1/4 pi", "1, 2, 2, 8/3");
    check("tan(x)", "7/4 pi", "-1, 2, -2, 8/3");
    check("asin(x)", "-1/2", "-1/6 pi, ?");
    check("asin(3/5+x)", "0", "?, 5/4");
    check("acos(x)", "1/2", "1/3 pi, ?");
    check("acos(-1)+x", "0", "pi, 1");
    check("asin(-1)*x", "0", "0, -1/2 pi, 0");
    check("atan(x)", "-1", "-1/4 pi, 1/2, 1/4");
    check("pi*x+x*x", "pi", "?, 3 pi, 1");
    check("pi*x/pi", "2", "2, 1, 0");
    check("sin(pi*x)", "2", "0, pi, 0, ?");
    check("exp(2+x*x)", "0", "?, 0, ?, 0");
    check("sin(1)", "0", "?, 0, 0");
}

#[test]
fn removable_singularities_are_continued() {
    check("sin(x)/x", "0", "1, 0, -1/6, 0");
    check("(x-log1p(x))/(x*x)", "0", "1/2, -1/3, 1/4");
    check("(1-cos(x))/(x*x)", "0", "1/2, 0, -1/24");
    check("sin(x)/(x-pi)", "pi", "-1, 0, 1/6");
    check("pow(x, 8)/pow(x, 7)", "0", "0, 1, 0");
    // The divisor is not known, but its ball is not zero.
    check("log1p(x)/log(2)", "0", "0, ?");
    check("x*x/(1+exp(1+x))", "0", "0, 0, ?");
    check("x*x/(x*log(2+x))", "0", "0, ?");
    check("x*pow(cos(1), -2)", "0", "0, ?");
}

#[test]
fn nothing_is_known_beyond_a_singularity() {
    // 0 * unknown = 0 would give 0 for a function that is 1.
    check("x*(1/x)", "0", "?, ?");
    check("x*x*pow(x, -2)", "0", "?, ?");
    check("x*log(x)", "0", "?, ?");
    check("x*sqrt(x)", "0", "?, ?");
    check("0*fabs(x)", "0", "?, ?");
    check("sin(x)*(1/tan(x))", "pi", "?, ?");
}

#[test]
fn long_numbers_are_given_up() {
    assert_eq!(known("pow(1/3, 4000)", "0", 1), [None]);
    assert_eq!(
        known("x*pow(1/3, 4000)", "0", 2),
        [Some(Exact::zero()), None]
    );
    assert_eq!(known("exp2(x)", "1e6", 1), [None]);
    assert_eq!(
        known("pow(x, 1000000)", "0", 3),
        vec![Some(Exact::zero()); 3]
    );
}

#[test]
fn no_coefficients_are_asked_for() {
    assert!(known("sin(x)/x", "0", 0).is_empty());
    assert_eq!(
        known("sin(x)/x", "0", 1),
        [Some(Exact::from(Rational::from(1)))]
    );
}

#[test]
fn a_centre_is_enclosed() {
    let centre = Centre {
        rational: rational("22/7"),
        pi_multiple: Rational::from(-1),
    };
    let ball = centre.ball(100);
    assert!(ball.is_positive() && (ball.midpoint().to_f64() - 1.2644892673496187e-3).abs() < 1e-17);
    assert!(ball.overlaps(&centre.ball(1000)) && ball.radius().to_f64_upper() < 1e-32);
    let interval = centre.wide_interval(100);
    let width = interval.upper().clone() - interval.lower();
    assert!(*interval.lower() >= ball.lower() && *interval.upper() <= ball.upper());
    assert!(width > 0 && width <= Radius::power_of_two(-109).to_float_upper(10));
    assert!(
        Centre::rational(rational("3/8"))
            .wide_interval(53)
            .is_exact()
    );
    assert!((centre.to_f64() - 1.2644892673496187e-3).abs() < 1e-15);
    assert!(Centre::rational(rational("3/8")).ball(53).is_exact());
}

proptest! {
    /// The product rule and the quotient rule are inverse to each other.
    #[test]
    fn quotients_undo_products(numbers in proptest::collection::vec((-9i32..9, 1i32..9), 10)) {
        let numbers: Vec<Option<Exact>> =
            numbers.iter().map(|pair| Some(Exact::from(Rational::from(*pair)))).collect();
        let (u, v) = numbers.split_at(5);
        let (u, v) = (u.to_vec(), v.to_vec());
        prop_assume!(!matches!(&v[0], Some(value) if value.is_zero()));
        prop_assert_eq!(taylor::quotient(&taylor::product(&u, &v), &v), u);
    }

    /// u^(a/b) to the power b is u^a.
    #[test]
    fn powers_multiply(
        numbers in proptest::collection::vec((-9i32..9, 1i32..9), 4),
        a in -5i32..6,
        b in 1u32..5,
    ) {
        let mut u = vec![Some(Exact::from(Rational::from(1)))];
        u.extend(numbers.iter().map(|pair| Some(Exact::from(Rational::from(*pair)))));
        let exponent = Rational::from((a, b));
        let root = taylor::power(&u, &exponent, Some(Exact::from(Rational::from(1))));
        let positive = taylor::power_integer(&u, a.unsigned_abs());
        let one = taylor::constant(5, Some(Exact::from(Rational::from(1))));
        let expected = if a < 0 { taylor::quotient(&one, &positive) } else { positive };
        prop_assert_eq!(taylor::power_integer(&root, b), expected);
    }
}
