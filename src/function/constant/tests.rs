use proptest::prelude::*;

use super::*;

fn constant(text: &str) -> Constant {
    Constant::parse(text).unwrap_or_else(|error| panic!("{text}: {error}"))
}

#[test]
fn literals_and_formulas_are_constants() {
    for (text, value) in [
        ("0.1", (1, 10)),
        (" 1/3 ", (1, 3)),
        ("-2^-3", (-1, 8)),
        ("0x1p+2", (4, 1)),
        ("(1 + 2)/3 - 0.5", (1, 2)),
        ("pi - pi + 2", (2, 1)),
        ("(3*pi)/(2*pi)", (3, 2)),
        ("010", (10, 1)),
    ] {
        assert_eq!(
            constant(text).as_rational(),
            Some(&Rational::from(value)),
            "{text}"
        );
        assert_eq!(constant(text).text(), text);
        assert!(constant(text).formula().is_constant());
    }
}

#[test]
fn combinations_with_pi_are_exact() {
    for (text, a, b) in [
        ("pi", (0, 1), (1, 1)),
        ("-pi/4", (0, 1), (-1, 4)),
        ("3*(pi/2 - 1)*0.5", (-3, 2), (3, 4)),
        ("1 - pi*2/3", (1, 1), (-2, 3)),
        ("M_PI + M_PI", (0, 1), (2, 1)),
        ("pow(pi, 1)", (0, 1), (1, 1)),
        ("pi*0", (0, 1), (0, 1)),
    ] {
        let expected = (Rational::from(a), Rational::from(b));
        assert_eq!(constant(text).pi_multiple(), Some(expected), "{text}");
    }
    for text in [
        "pi*pi",
        "1/pi",
        "sqrt(2)",
        "e",
        "pi/0",
        "pi/(pi - pi)",
        "1/0",
    ] {
        assert_eq!(constant(text).pi_multiple(), None, "{text}");
        assert_eq!(constant(text).as_rational(), None, "{text}");
    }
}

#[test]
fn the_variable_and_bad_text_are_refused() {
    let error = Constant::parse("1 + 2*x").expect_err("not constant");
    assert_eq!(error.span, 6..7);
    assert!(Constant::parse("inf").is_err());
    assert!(Constant::parse("1,5").is_err());
    assert!(Constant::parse("").is_err());
}

#[test]
fn enclosures_hold_the_value_and_are_narrow() {
    // Square root and reciprocal by comparison of squares, no MPFR function involved.
    let (low, high) = constant("1/sqrt(10)").enclosure(100).expect("exists");
    let tenth = Rational::from((1, 10));
    assert!(low.clone() * &low <= tenth && high.clone() * &high >= tenth);
    assert!(high - low < Rational::from(1) >> 95);
    // 333/106 < pi < 355/113.
    let (low, high) = constant("pi").enclosure(200).expect("exists");
    assert!(low > Rational::from((333, 106)) && high < Rational::from((355, 113)));
    assert!(low < high && high - low < Rational::from(1) >> 195);
    let third = Rational::from((1, 3));
    assert_eq!(constant("1/3").enclosure(10), Some((third.clone(), third)));
}

#[test]
fn two_precisions_overlap_and_the_ball_agrees() {
    for text in [
        "exp(1)",
        "e",
        "pi/4",
        "log(2)/3",
        "22/7 - pi",
        "pow(2, 1/3)",
        "sin(pi/3)",
    ] {
        let constant = constant(text);
        let (low, high) = constant.enclosure(60).expect("exists");
        let (lower, higher) = constant.enclosure(400).expect("exists");
        assert!(low <= lower && lower < higher && higher <= high, "{text}");
        let ball = constant.ball(60).expect("exists");
        assert!(
            ball.contains_rational(&lower) && ball.contains_rational(&higher),
            "{text}"
        );
        assert!(
            ball.radius() < crate::number::radius::Radius::power_of_two(-54),
            "{text}"
        );
    }
}

#[test]
fn what_has_no_value_has_no_enclosure() {
    for text in [
        "1/0",
        "sqrt(-1)",
        "log(0)",
        "asin(2)",
        "pi/(pi - pi)",
        "exp(1e15)",
    ] {
        assert!(constant(text).enclosure(100).is_none(), "{text}");
    }
}

#[test]
fn extreme_exponents_are_bounded_without_filling_the_memory() {
    assert!(constant("exp(1e8)").enclosure(100).is_none());
    let (low, high) = constant("exp(-1e8)").enclosure(100).expect("exists");
    assert_eq!(low, 0);
    assert_eq!(high, Rational::from(1) >> 400_000);
    let (low, high) = constant("-exp(-1e8)").enclosure(100).expect("exists");
    assert_eq!(low, Rational::from(-1) >> 400_000);
    assert_eq!(high, 0);
}

#[test]
fn a_number_becomes_a_constant_with_a_text_that_reads_back() {
    for value in [Rational::from((-7, 3)), Rational::from(5), Rational::new()] {
        let made = Constant::from(value.clone());
        assert_eq!(made.as_rational(), Some(&value));
        assert_eq!(constant(made.text()).as_rational(), Some(&value));
    }
}

proptest! {
    /// a + b pi evaluated exactly, against the interval evaluation of the same text.
    #[test]
    fn combination_lies_in_the_range_of_the_formula(
        a in -50i32..50, b in -50i32..50, c in 1i32..50, d in -50i32..50,
    ) {
        let text = format!("({a} + {b}*pi)/{c} - (pi - {d})*{b}");
        let constant = constant(&text);
        let (rational, multiple) = constant.pi_multiple().expect("linear in pi");
        let pi = WideInterval::pi(300);
        let exact = pi
            .mul(&WideInterval::from_rational(&multiple, 300))
            .add(&WideInterval::from_rational(&rational, 300));
        let range = range(constant.formula(), &WideInterval::zero(100)).expect("defined");
        prop_assert!(range.lower() <= exact.lower() && exact.upper() <= range.upper());
    }
}
