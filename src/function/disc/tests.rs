use proptest::prelude::*;
use rug::float::Special;
use rug::{Float, Rational};
use serde_json::Value;

use super::magnitude_on_disc;
use crate::function::exact::Centre;
use crate::function::formula::{Formula, FormulaBuilder, Function, Operation};
use crate::function::parser::parse_formula;
use crate::function::random::formula_text;
use crate::function::range::range;
use crate::function::refusal::{Refusal, RefusalKind};
use crate::function::series::series;
use crate::number::literal;
use crate::number::radius::Radius;
use crate::number::wide_interval::WideInterval;

fn formula(text: &str) -> Formula {
    parse_formula(text).unwrap_or_else(|error| panic!("{text}: {error:?}"))
}

fn bound(text: &str, at: &str, radius: f64, arcs: usize) -> Result<Radius, Refusal> {
    let centre = Centre::rational(literal::parse(at).unwrap());
    magnitude_on_disc(&formula(text), &centre, &Float::with_val(53, radius), arcs)
}

/// Bounds against maxima of another implementation, see tests/data/make_complex_values.py.
#[test]
fn bounds_exceed_independent_maxima_by_little() {
    let text = include_str!("../../../tests/data/complex_values.json");
    let file: Value = serde_json::from_str(text).unwrap();
    let discs = file["discs"].as_array().unwrap();
    assert!(discs.len() > 80);
    for row in discs {
        let field = |k: usize| row[k].as_str().unwrap();
        let maximum: f64 = field(3).parse().unwrap();
        for (arcs, factor) in [(8, 9.0), (16, 6.0), (128, 2.9)] {
            let result = bound(field(0), field(1), field(2).parse().unwrap(), arcs);
            let result = result.unwrap_or_else(|refusal| panic!("{row} {arcs}: {refusal:?}"));
            let ratio = result.to_f64_upper() / maximum;
            assert!(ratio >= 1.0, "{row} {arcs}: {ratio}");
            // Hard for few rectangles: a large factor against a small one, and a cancellation.
            let hard = ["exp(x*x)*erfc(x)", "pow(x,3)/(x-sin(x))"].contains(&field(0));
            if !hard {
                assert!(ratio < factor, "{row} {arcs}: {ratio}");
            }
        }
    }
}

#[test]
fn simple_functions_are_bounded_within_a_factor_of_two() {
    for (text, at, radius, maximum) in [
        ("exp(x)", "1", 2.0, 20.0855),
        ("log1p(x)", "0", 0.875, 2.07944),
        ("1/(1+25*x*x)", "1/2", 0.375, 0.721),
        ("1/(1+25*x*x)", "0", 0.1875, 8.2577),
        ("sin(x)/x", "0", 3.0, 3.3392),
    ] {
        let result = bound(text, at, radius, 16).unwrap().to_f64_upper();
        assert!(
            result >= maximum && result < 2.0 * maximum,
            "{text}: {result}"
        );
    }
}

/// Discs that contain a singularity or touch one.
#[test]
fn singularities_are_refused() {
    use RefusalKind::{DivisionByZero, NotAnalytic, OutsideDomain};
    for (text, at, radius, kind) in [
        ("log(x)", "1/2", 1.0, NotAnalytic),
        ("log(x)", "1", 1.0, NotAnalytic),
        ("log(x)", "-3", 1.0, OutsideDomain),
        ("log(x*x)", "0", 1.0, NotAnalytic),
        ("log1p(x)", "0", 1.0, NotAnalytic),
        ("log2(x)", "3", 4.0, NotAnalytic),
        ("log10(x)", "3", 4.0, NotAnalytic),
        ("1/x", "1", 2.0, DivisionByZero),
        ("1/x", "0", 2.0, DivisionByZero),
        ("1/x", "1", 1.0, DivisionByZero),
        ("pow(x,-2)", "1", 2.0, DivisionByZero),
        ("x*pow(x,-1)", "0", 2.0, DivisionByZero),
        ("1/(1+25*x*x)", "0", 0.25, DivisionByZero),
        ("1/(x*x-2)", "0", 2.0, DivisionByZero),
        ("sin(x)/(x*x)", "0", 1.0, DivisionByZero),
        ("(1-cos(x))/pow(x,3)", "0", 1.0, DivisionByZero),
        ("sin(x)/(x-1/1024)", "0", 1.0, DivisionByZero),
        ("sin(x)/x", "1", 2.0, DivisionByZero),
        ("x*x/(x*(x-1))", "0", 2.0, DivisionByZero),
        ("x/tanh(x)", "0", 2.0, NotAnalytic),
        ("sqrt(x)", "1", 1.0, NotAnalytic),
        ("sqrt(x)", "1", 2.0, NotAnalytic),
        ("sqrt(x*x)", "0", 1.0, NotAnalytic),
        ("sqrt(1-cos(x))", "0", 1.0, NotAnalytic),
        ("pow(x,1/3)", "1", 1.5, NotAnalytic),
        ("pow(x,x)", "1", 1.5, NotAnalytic),
        ("cbrt(x)", "0", 1.0, NotAnalytic),
        ("cbrt(x)", "-1", 1.5, NotAnalytic),
        ("cbrt(x*x)", "0", 1.0, NotAnalytic),
        ("fabs(x)", "0", 1.0, NotAnalytic),
        ("fabs(x)", "1", 1.5, NotAnalytic),
        ("fabs(pow(x,3))", "0", 1.0, NotAnalytic),
        ("fabs(4*x*x+1)", "0", 1.0, NotAnalytic),
        ("fabs(x*(x-1))", "0", 2.0, NotAnalytic),
        ("tan(x)", "0", 2.0, NotAnalytic),
        ("tan(x)", "0", 5.0, NotAnalytic),
        ("tanh(x)", "0", 2.0, NotAnalytic),
        ("asin(x)", "0", 1.0, NotAnalytic),
        ("asin(x)", "0", 2.0, NotAnalytic),
        ("acos(x)", "1/2", 1.0, NotAnalytic),
        ("atan(x)", "0", 1.0, NotAnalytic),
        ("atan(x)", "0", 3.0, NotAnalytic),
        ("asinh(x)", "0", 2.0, NotAnalytic),
        ("acosh(x)", "2", 1.0, NotAnalytic),
        ("acosh(x)", "0", 0.5, NotAnalytic),
        ("atanh(x)", "0", 1.0, NotAnalytic),
        ("log(sin(x))", "1", 2.0, NotAnalytic),
    ] {
        for arcs in [1, 8, 32] {
            let refusal = bound(text, at, radius, arcs).expect_err(text);
            assert_eq!((refusal.kind, refusal.proved), (kind, false), "{text}");
        }
    }
}

/// A removable singularity at a multiple of pi, and a radius far below the size of the centre.
#[test]
fn centres_need_not_be_rational() {
    let pi = |multiple: i32| Centre {
        rational: Rational::new(),
        pi_multiple: Rational::from(multiple),
    };
    let quotient = formula("sin(x)/(x-pi)");
    let result = magnitude_on_disc(&quotient, &pi(1), &Float::with_val(53, 1), 16);
    // sinh(1)
    let result = result.unwrap().to_f64_upper();
    assert!((1.1752..1.8).contains(&result), "{result}");
    for radius in [1e-30, 1e-200] {
        let radius = Float::with_val(53, radius);
        let result = magnitude_on_disc(&formula("1/cos(x)"), &pi(1), &radius, 8);
        assert!((1.0..1.001).contains(&result.unwrap().to_f64_upper()));
        let result = magnitude_on_disc(&quotient, &pi(1), &radius, 8);
        assert!((1.0..2.5).contains(&result.unwrap().to_f64_upper()));
    }
    assert!(magnitude_on_disc(&quotient, &pi(2), &Float::with_val(53, 4), 16).is_err());
}

#[test]
fn constants_without_a_value_are_proved_so() {
    let refusal = bound("x*log(1-2)", "0", 1.0, 8).unwrap_err();
    assert!(refusal.proved && refusal.kind == RefusalKind::OutsideDomain);
    let refusal = bound("x+1/(2-2)", "0", 1.0, 8).unwrap_err();
    assert!(refusal.proved && refusal.kind == RefusalKind::DivisionByZero);
    // Not decided at the precision of the bound: not proved.
    assert!(!bound("x/(4*atan(1)-pi)", "0", 1.0, 8).unwrap_err().proved);
}

#[test]
fn extreme_input_is_refused_or_bounded() {
    let one = formula("exp(x)");
    let zero = Centre::rational(Rational::new());
    for radius in [0.0, -1.0, f64::INFINITY, f64::NAN] {
        let refusal = magnitude_on_disc(&one, &zero, &Float::with_val(53, radius), 8).unwrap_err();
        assert_eq!(refusal.kind, RefusalKind::Unbounded);
    }
    let nan = Float::with_val(53, Special::Nan);
    assert!(magnitude_on_disc(&one, &zero, &nan, 8).is_err());
    let huge = bound("exp(exp(exp(x)))", "1000", 1.0, 8).unwrap_err();
    assert_eq!(huge.kind, RefusalKind::Unbounded);
    assert!(bound("exp(exp(100))+0*x", "0", 1.0, 8).is_err());
    for arcs in [0, 1, 3, usize::MAX] {
        let result = bound("exp(x)", "0", 1.0, arcs).unwrap().to_f64_upper();
        assert!(
            (std::f64::consts::E..4.2).contains(&result),
            "{arcs}: {result}"
        );
    }
    // A list of operations is a loop, however long.
    let mut builder = FormulaBuilder::new("long");
    let mut node = builder.push(Operation::Variable, 0..0);
    for _ in 0..100_000 {
        node = builder.push(Operation::Apply(Function::Atan, node), 0..0);
    }
    let long = builder.finish(node);
    let radius = Float::with_val(53, 0.001);
    assert!(magnitude_on_disc(&long, &zero, &radius, 1).is_ok());
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(2000))]

    /// What follows from analyticity and the bound, by other code: Cauchy's estimate for the Taylor
    /// coefficients, and values on the diameter.
    #[test]
    fn bounds_imply_estimates_of_coefficients_and_values(
        text in formula_text(),
        centre in -12i32..12,
        size in -3i32..5,
        share in -1.0f64..=1.0,
    ) {
        let formula = formula(&text);
        let centre = Centre::rational(Rational::from((centre, 4)));
        let radius = Float::with_val(53, 1) << size;
        let Ok(bound) = magnitude_on_disc(&formula, &centre, &radius, 8) else {
            return Ok(());
        };
        if let Ok(coefficients) = series(&formula, &centre, &radius, 16, 128) {
            for (k, coefficient) in coefficients.iter().enumerate() {
                let (lower, upper) = (coefficient.lower(), coefficient.upper());
                let least = WideInterval::new(lower, upper).mignitude();
                prop_assert!(Radius::of_float_lower(&least) <= bound, "{} {:?} {}", text, centre, k);
            }
        }
        let offset = Rational::from_f64(share).unwrap() * radius.to_rational().unwrap();
        let at = Centre { rational: centre.rational + offset, ..centre };
        match range(&formula, &at.wide_interval(200)) {
            Ok(value) => prop_assert!(
                Radius::of_float_lower(&value.mignitude()) <= bound,
                "{} {:?} {:?}", text, at, value
            ),
            Err(refusal) => prop_assert!(!refusal.proved, "{} {:?}", text, at),
        }
    }
}
