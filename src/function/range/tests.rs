use proptest::prelude::*;
use rug::{Float, Rational};

use super::range;
use crate::function::formula::Formula;
use crate::function::parser::parse_formula;
use crate::function::random::formula_text;
use crate::function::refusal::RefusalKind;
use crate::number::wide_interval::WideInterval;

fn formula(text: &str) -> Formula {
    parse_formula(text).unwrap_or_else(|error| panic!("{text}: {error:?}"))
}

fn interval(a: f64, b: f64) -> WideInterval {
    WideInterval::new(Float::with_val(53, a), Float::with_val(53, b))
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(2000))]

    /// Ranges at different precisions and on a part overlap: all contain the value at a point.
    #[test]
    fn ranges_hold_the_values_at_points(
        text in formula_text(),
        start in -4.0f64..4.0,
        width in prop_oneof![Just(0.0), 0.0f64..4.0, 0.0f64..1e-6],
        share in prop_oneof![Just(0.0), Just(1.0), 0.0f64..1.0],
        precision in prop::sample::select(vec![8u32, 53, 64, 200]),
    ) {
        let formula = formula(&text);
        let over = interval(start, start + width).with_precision(precision);
        let ends = [over.lower().to_rational().unwrap(), over.upper().to_rational().unwrap()];
        let at = Rational::from(&ends[1] - &ends[0]) * Rational::from_f64(share).unwrap();
        let at = WideInterval::from_rational(&Rational::from(&at + &ends[0]), 300);
        match (range(&formula, &over), range(&formula, &at)) {
            (Ok(whole), Ok(value)) => {
                prop_assert!(whole.intersection(&value).is_some(), "{text} {at:?} {whole:?}");
                prop_assert_eq!(whole.precision(), precision);
            }
            // A domain that holds on the whole holds at a point; that the formula has no value
            // anywhere contradicts a value at the point.
            (Ok(_), Err(refusal)) => prop_assert!(!refusal.proved, "{text} {at:?}"),
            (Err(refusal), Ok(_)) => prop_assert!(!refusal.proved, "{text} {over:?}"),
            (Err(_), Err(_)) => {}
        }
    }
}

#[test]
fn a_variable_that_occurs_once_gives_the_range() {
    for (text, over, least, greatest) in [
        ("x*x", [-1.0, 2.0], 0.0, 4.0),
        ("exp(-x)", [0.0, 1.0], 0.36787944117144233, 1.0),
        ("1/(1+pow(x,2))", [-1.0, 2.0], 0.2, 1.0),
        ("fabs(x-1)", [-1.0, 2.0], 0.0, 2.0),
        ("pow(x,1.5)", [0.0, 4.0], 0.0, 8.0),
        ("sin(x)", [1.0, 2.0], 0.8414709848078965, 1.0),
        ("cosh(x)", [-1.0, 0.5], 1.0, 1.5430806348152437),
        ("pow(2,x)", [-1.0, 3.0], 0.5, 8.0),
        ("acos(x)", [-1.0, 1.0], 0.0, std::f64::consts::PI),
    ] {
        let result = range(&formula(text), &interval(over[0], over[1])).unwrap();
        let close = |x: &Float, y: f64| (x.to_f64() - y).abs() <= 1e-14 * y.abs();
        assert!(
            close(result.lower(), least) && close(result.upper(), greatest),
            "{text} {result:?}"
        );
    }
}

#[test]
fn only_sets_without_any_value_are_proved_undefined() {
    use RefusalKind::{DivisionByZero, OutsideDomain};
    for (text, over, kind, proved) in [
        ("log(x)", [-2.0, 0.0], OutsideDomain, true),
        ("log(x)", [-2.0, 1.0], OutsideDomain, false),
        ("log(x)", [0.0, 1.0], OutsideDomain, false),
        ("log2(x)", [-1.0, -0.5], OutsideDomain, true),
        ("log10(x)", [-1.0, 0.5], OutsideDomain, false),
        ("log1p(x)", [-2.0, -1.0], OutsideDomain, true),
        ("log1p(x)", [-2.0, 0.0], OutsideDomain, false),
        ("sqrt(x)", [-2.0, -1.0], OutsideDomain, true),
        ("sqrt(x)", [-2.0, 0.0], OutsideDomain, false),
        ("asin(x)", [1.5, 2.0], OutsideDomain, true),
        ("acos(x)", [-2.0, -1.0], OutsideDomain, false),
        ("acosh(x)", [0.0, 0.5], OutsideDomain, true),
        ("acosh(x)", [0.0, 1.0], OutsideDomain, false),
        ("atanh(x)", [1.0, 2.0], OutsideDomain, true),
        ("atanh(x)", [0.5, 2.0], OutsideDomain, false),
        ("pow(x,1.5)", [-2.0, -1.0], OutsideDomain, true),
        ("pow(x,1.5)", [-2.0, 0.0], OutsideDomain, false),
        ("pow(x,-1.5)", [-2.0, 0.0], OutsideDomain, true),
        ("pow(x,x)", [-2.0, 0.0], OutsideDomain, true),
        ("pow(x,x)", [-2.0, 1.0], OutsideDomain, false),
        ("pow(x,-2)", [0.0, 0.0], DivisionByZero, true),
        ("pow(x,-2)", [0.0, 1.0], DivisionByZero, false),
        ("1/x", [0.0, 0.0], DivisionByZero, true),
        ("1/x", [-1.0, 1.0], DivisionByZero, false),
        ("cos(x)/(x-x)", [0.0, 0.0], DivisionByZero, true),
        // Continued through the removable singularity.
        ("sin(x)/x", [0.0, 0.0], DivisionByZero, false),
        ("tan(x)", [1.0, 2.0], OutsideDomain, false),
    ] {
        let refusal = range(&formula(text), &interval(over[0], over[1])).expect_err(text);
        assert_eq!(
            (refusal.kind, refusal.proved),
            (kind, proved),
            "{text} {over:?}"
        );
    }
}

#[test]
fn closed_domains_include_their_ends() {
    for (text, over) in [
        ("sqrt(x)", [0.0, 1.0]),
        ("asin(x)", [-1.0, 1.0]),
        ("acosh(x)", [1.0, 2.0]),
        ("pow(x,0.25)", [0.0, 1.0]),
        ("acos(cos(x))", [-9.0, 9.0]),
    ] {
        assert!(
            range(&formula(text), &interval(over[0], over[1])).is_ok(),
            "{text}"
        );
    }
}
