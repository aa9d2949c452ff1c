use proptest::prelude::*;
use rug::{Float, Rational};
use serde_json::Value;

use super::*;
use crate::function::parser::parse_formula;
use crate::number::literal;
use crate::number::radius::Radius;

fn formula(text: &str) -> Formula {
    parse_formula(text).unwrap_or_else(|error| panic!("{text}: {error:?}"))
}

fn rational(text: &str) -> Rational {
    literal::parse(text).unwrap_or_else(|error| panic!("{text}: {error:?}"))
}

fn centre(text: &str) -> Centre {
    if text == "pi" {
        Centre {
            rational: Rational::new(),
            pi_multiple: Rational::from(1),
        }
    } else {
        Centre::rational(rational(text))
    }
}

fn dyadic(text: &str) -> Float {
    Float::with_val(64, rational(text))
}

fn evaluate(text: &str, at: &str, scale: &str, terms: usize, precision: u32) -> Vec<Ball> {
    series(
        &formula(text),
        &centre(at),
        &dyadic(scale),
        terms,
        precision,
    )
    .unwrap_or_else(|refusal| panic!("{text} at {at}: {refusal:?}"))
}

fn refusal(text: &str, at: &str, terms: usize) -> Refusal {
    match series(&formula(text), &centre(at), &dyadic("1/8"), terms, 128) {
        Ok(coefficients) => panic!("{text} at {at} gives {coefficients:?}"),
        Err(refusal) => refusal,
    }
}

struct Case {
    formula: String,
    centre: String,
    scale: String,
    coefficients: Vec<Rational>,
}

/// The values of an independent implementation; see tests/data/make_series_values.py.
fn cases() -> Vec<Case> {
    let data: Value = serde_json::from_str(include_str!(concat!(
        env!("CARGO_MANIFEST_DIR"),
        "/tests/data/series_values.json"
    )))
    .unwrap();
    let text = |value: &Value| value.as_str().unwrap().to_owned();
    data["cases"]
        .as_array()
        .unwrap()
        .iter()
        .map(|case| Case {
            formula: text(&case["formula"]),
            centre: text(&case["centre"]),
            scale: text(&case["scale"]),
            coefficients: case["coefficients"]
                .as_array()
                .unwrap()
                .iter()
                .map(|value| rational(value.as_str().unwrap()))
                .collect(),
        })
        .collect()
}

/// The ball contains a number that is within a relative 1e-58 and an absolute 1e-90 of the value.
fn agrees(ball: &Ball, value: &Rational) -> bool {
    let mut tolerance = Radius::of_rational_upper(&(value.clone().abs() * rational("1e-58")));
    tolerance = tolerance.add(Radius::of_rational_upper(&rational("1e-90")));
    let mut widened = ball.clone();
    widened.add_error(tolerance);
    widened.contains_rational(value)
}

#[test]
fn coefficients_contain_independent_values() {
    for case in cases() {
        for precision in [64, 128, 400] {
            let ours = evaluate(&case.formula, &case.centre, &case.scale, 20, precision);
            assert_eq!(ours.len(), 20);
            for (k, (ball, value)) in ours.iter().zip(&case.coefficients).enumerate() {
                assert!(
                    agrees(ball, value),
                    "{} at {}, coefficient {k}, {precision} bits: {ball:?}, not {}",
                    case.formula,
                    case.centre,
                    value.to_f64()
                );
            }
        }
    }
}

/// On |t| <= 1, which is what the radii are for, at most 8 of 128 bits are lost. Relative to its
/// own coefficient a radius may grow by 1.3 bits a term for atan and asinh, whose derivative is a
/// quotient by a quadratic with complex zeros, and by 3 bits a term for a compound formula.
#[test]
fn coefficients_are_tight() {
    for case in cases() {
        let ours = evaluate(&case.formula, &case.centre, &case.scale, 20, 128);
        let norm = case
            .coefficients
            .iter()
            .map(|value| value.clone().abs())
            .max()
            .unwrap();
        let norm = Radius::of_rational_upper(&norm);
        let loss = if !case.formula.ends_with("(x)") || case.formula.len() > 8 {
            3.0
        } else if ["atan(x)", "asinh(x)"].contains(&case.formula.as_str()) {
            1.3
        } else {
            0.5
        };
        for (k, (ball, value)) in ours.iter().zip(&case.coefficients).enumerate() {
            assert!(
                ball.radius() <= norm.mul_power_of_two(-120),
                "{} at {}, coefficient {k}: radius {:e} of {:e}",
                case.formula,
                case.centre,
                ball.radius().to_f64_upper(),
                norm.to_f64_upper()
            );
            let size = Radius::of_rational_upper(value);
            let lost = 10 + (k as f64 * loss) as i64;
            assert!(
                ball.radius() <= size.mul_power_of_two(lost - 128)
                    || size <= norm.mul_power_of_two(-200),
                "{} at {}, coefficient {k}: radius {:e} of {:e}",
                case.formula,
                case.centre,
                ball.radius().to_f64_upper(),
                value.to_f64()
            );
        }
    }
}

#[test]
fn every_function_has_reference_values() {
    let cases = cases();
    for function in Function::ALL {
        let text = format!("{}(x)", function.name());
        assert!(cases.iter().any(|case| case.formula == text), "{text}");
    }
}

/// Formulas whose series is a polynomial or another formula's.
const IDENTITIES: [(&str, &str); 22] = [
    ("sin(x)*sin(x)+cos(x)*cos(x)", "1"),
    ("exp(log(1+x*x))", "1+x*x"),
    ("log(exp(x))", "x"),
    ("sqrt(1+x*x)*sqrt(1+x*x)", "1+x*x"),
    ("pow(cbrt(2+x), 3)", "2+x"),
    ("pow(2+x, 1.5)*pow(2+x, -1.5)", "1"),
    ("pow(1+x*x, pi)*pow(1+x*x, -pi)", "1"),
    ("tan(x)*cos(x)", "sin(x)"),
    ("tan(atan(x))", "x"),
    ("sin(asin(x))", "x"),
    ("asin(x)+acos(x)", "pi/2"),
    ("cosh(x)+sinh(x)", "exp(x)"),
    ("tanh(x)*cosh(x)", "sinh(x)"),
    ("sinh(asinh(x))", "x"),
    ("cosh(acosh(2+x))", "2+x"),
    ("tanh(atanh(x))", "x"),
    ("erf(x)+erfc(x)", "1"),
    ("log1p(expm1(x))", "x"),
    ("log2(exp2(x))", "x"),
    ("log10(2+x)*log(10)", "log(2+x)"),
    ("pow(1+x, 5)/pow(1+x, 3)", "(1+x)*(1+x)"),
    ("fabs(x-3)", "3-x"),
];

#[test]
fn poles_and_domains_are_refused() {
    let cases = [
        ("log(x)", "-1", 1, RefusalKind::OutsideDomain, true),
        ("log(x)", "0", 1, RefusalKind::OutsideDomain, true),
        ("log2(sin(x))", "pi", 3, RefusalKind::OutsideDomain, true),
        ("log1p(x)", "-1", 2, RefusalKind::OutsideDomain, true),
        ("sqrt(x)", "-1/1000", 2, RefusalKind::OutsideDomain, true),
        ("asin(x)", "1.0001", 1, RefusalKind::OutsideDomain, true),
        ("acos(x)", "-1.0001", 5, RefusalKind::OutsideDomain, true),
        ("acosh(x)", "0.9999", 5, RefusalKind::OutsideDomain, true),
        ("atanh(x)", "1", 1, RefusalKind::OutsideDomain, true),
        ("atanh(x)", "-2", 2, RefusalKind::OutsideDomain, true),
        ("pow(x, 0.5)", "-2", 2, RefusalKind::OutsideDomain, true),
        ("pow(x, -0.5)", "0", 1, RefusalKind::OutsideDomain, true),
        ("pow(x, x)", "-1", 1, RefusalKind::OutsideDomain, true),
        // The ball contains points of the domain.
        (
            "sqrt(sin(1)*sin(1)+cos(1)*cos(1)-1+x)",
            "0",
            2,
            RefusalKind::OutsideDomain,
            false,
        ),
        (
            "log(sin(1)*sin(1)+cos(1)*cos(1)-1+x)",
            "0",
            1,
            RefusalKind::OutsideDomain,
            false,
        ),
        // Defined, not analytic.
        ("sqrt(x)", "0", 2, RefusalKind::NotAnalytic, false),
        ("cbrt(x)", "0", 2, RefusalKind::NotAnalytic, false),
        ("pow(x, 1.5)", "0", 2, RefusalKind::NotAnalytic, false),
        ("asin(x)", "1", 2, RefusalKind::NotAnalytic, false),
        ("acos(x)", "-1", 2, RefusalKind::NotAnalytic, false),
        ("acosh(x)", "1", 2, RefusalKind::NotAnalytic, false),
        ("fabs(x)", "0", 2, RefusalKind::NotAnalytic, false),
        // Poles.
        ("1/x", "0", 1, RefusalKind::DivisionByZero, true),
        ("pow(x, -2)", "0", 4, RefusalKind::DivisionByZero, true),
        ("1/sin(x)", "pi", 1, RefusalKind::DivisionByZero, true),
        ("sin(x)/(x*x)", "0", 1, RefusalKind::DivisionByZero, true),
        (
            "(exp(x)-1.0001)/x",
            "0",
            5,
            RefusalKind::DivisionByZero,
            true,
        ),
        ("x/(x-x)", "1", 5, RefusalKind::DivisionByZero, true),
        ("1/sin(pi)", "1", 1, RefusalKind::DivisionByZero, true),
        // Zeros that exact arithmetic does not see, or of too high an order.
        (
            "x/(cos(1)-cos(1+x))",
            "0",
            5,
            RefusalKind::DivisionByZero,
            false,
        ),
        (
            "(cos(1)-cos(1+x))/x",
            "0",
            5,
            RefusalKind::DivisionByZero,
            false,
        ),
        (
            "pow(x, 9)/pow(x, 8)",
            "0",
            5,
            RefusalKind::DivisionByZero,
            false,
        ),
        ("sqrt(x)*x/x", "0", 1, RefusalKind::NotAnalytic, false),
        ("tan(x)", "1e9000", 1, RefusalKind::OutsideDomain, false),
        ("exp(exp(exp(x)))", "100", 3, RefusalKind::Unbounded, false),
    ];
    for (text, at, terms, kind, proved) in cases {
        let refusal = refusal(text, at, terms);
        assert_eq!(
            (refusal.kind, refusal.proved),
            (kind, proved),
            "{text} at {at}"
        );
    }
}

#[test]
fn a_refusal_names_the_operation() {
    let text = "exp(x)+log(x-2)";
    let refusal = refusal(text, "1", 4);
    assert_eq!(&text[formula(text).span(refusal.node)], "log(x-2)");
}

#[test]
fn values_exist_at_the_ends_of_domains() {
    let cases = [
        ("sqrt(x)", "0", "0"),
        ("cbrt(x)", "0", "0"),
        ("pow(x, 1.5)", "0", "0"),
        ("asin(x)*2/pi", "1", "1"),
        ("acos(x)/pi", "-1", "1"),
        ("acosh(x)", "1", "0"),
        ("fabs(x)", "0", "0"),
        ("sqrt(1-x*x)", "1", "0"),
        ("exp(sqrt(x))", "0", "1"),
        ("sqrt(sin(x))", "pi", "0"),
    ];
    for (text, at, value) in cases {
        let ours = evaluate(text, at, "1", 1, 128);
        assert!(
            ours.len() == 1 && ours[0].contains_rational(&rational(value)),
            "{text}: {ours:?}"
        );
        assert!(
            ours[0].radius() <= Radius::power_of_two(-120),
            "{text}: {ours:?}"
        );
    }
}

#[test]
fn constants_have_no_derivatives() {
    for text in [
        "sqrt(0)+0*x",
        "asin(1)+0*x",
        "fabs(pi-pi)+0*x",
        "acosh(1)+0*x",
        "pow(2, pi)",
    ] {
        let ours = evaluate(text, "1", "1/2", 5, 128);
        assert!(
            ours[1..].iter().all(Ball::is_exact_zero),
            "{text}: {ours:?}"
        );
    }
}

#[test]
fn no_terms_are_no_coefficients() {
    assert!(evaluate("exp(x)", "1", "1", 0, 128).is_empty());
}

#[test]
fn nested_removable_singularities_are_continued() {
    // x/sin(x) three times over, and a chain in which each quotient feeds the next.
    let chain = "(sin((exp(x)-1)/x-1)/x-1/2)/x";
    for text in [
        "x*x/(sin(x)*sin(x))*x/sin(x)",
        "sin(x)/x*(x/sin(x))/(log1p(x)/x)",
        chain,
    ] {
        let fine = evaluate(text, "0", "1/8", 12, 256);
        let coarse = evaluate(text, "0", "1/8", 12, 96);
        assert_eq!(fine.len(), 12);
        assert!(
            fine.iter()
                .zip(&coarse)
                .all(|(one, other)| one.overlaps(other)),
            "{text}"
        );
        // Near the centre the quotients are ordinary ones.
        let sum = |ours: &[Ball]| {
            ours.iter().rev().fold(Ball::zero(256), |sum, ball| {
                sum.mul_power_of_two(-10).add(ball)
            })
        };
        let near = evaluate(text, "1/8192", "1", 1, 256);
        let difference = near[0].sub(&sum(&fine));
        assert!(
            difference.magnitude_upper() <= Radius::power_of_two(-115),
            "{text}: {difference:?}"
        );
    }
}

#[test]
fn an_exact_zero_at_a_multiple_of_pi_is_exact() {
    let ours = evaluate("sin(x)", "pi", "1/2", 6, 128);
    assert!(ours[0].is_exact_zero() && ours[2].is_exact_zero() && !ours[1].contains_zero());
}

#[test]
fn work_is_counted() {
    let count = |text: &str, terms| {
        let mut work = SeriesWork::default();
        let at = centre("1/2");
        series_with_work(&formula(text), &at, &dyadic("1/8"), terms, 128, &mut work).unwrap();
        work.multiplications
    };
    assert_eq!(count("exp(x)", 20), count("exp(x)", 20));
    assert!(
        count("exp(x)", 20) < 50,
        "an exponential of a line costs a multiplication a term"
    );
    assert!(count("exp(sin(x))", 20) > 200);
    assert!(count("x*x*x+1", 20) == count("x*x*x+1", 40));
}

/// Texts of formulas that are built from the functions; most are analytic near small rationals.
fn formula_texts() -> impl Strategy<Value = String> {
    let leaf = prop_oneof![
        5 => Just("x".to_owned()),
        1 => Just("pi".to_owned()),
        1 => Just("(x-pi)".to_owned()),
        2 => prop_oneof![Just("1"), Just("2"), Just("(1/2)"), Just("(-3)"), Just("0")]
            .prop_map(str::to_owned),
    ];
    leaf.prop_recursive(4, 12, 2, |inner| {
        prop_oneof![
            (inner.clone(), "[-+*/]", inner.clone())
                .prop_map(|(left, sign, right)| format!("({left}{sign}{right})")),
            (proptest::sample::select(&Function::ALL[..]), inner.clone())
                .prop_map(|(function, operand)| format!("{}({operand})", function.name())),
            (inner.clone(), -3i32..5).prop_map(|(base, power)| format!("pow({base}, {power})")),
            (inner.clone(), inner).prop_map(|(base, power)| format!("pow({base}, {power})")),
        ]
    })
}

fn centres() -> impl Strategy<Value = Centre> {
    let rationals = prop_oneof![
        3 => proptest::sample::select(&["0", "1", "-1", "1/2", "-1/2", "2", "4", "1/4"][..])
            .prop_map(rational),
        1 => (-300i32..300).prop_map(|k| Rational::from((k, 97))),
    ];
    let multiples = prop_oneof![
        2 => Just(Rational::new()),
        1 => (-12i32..12).prop_map(|k| Rational::from((k, 12))),
    ];
    (rationals, multiples).prop_map(|(rational, pi_multiple)| {
        // A sum of both parts is no special point.
        let rational = if pi_multiple.is_zero() {
            rational
        } else {
            Rational::new()
        };
        Centre {
            rational,
            pi_multiple,
        }
    })
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(2000))]

    /// What exact arithmetic knows agrees with balls that do not use it.
    #[test]
    fn exact_coefficients_agree_with_balls(text in formula_texts(), at in centres()) {
        let formula = formula(&text);
        let exact = exact_coefficients(formula.operations(), &at, EXACT_COUNT);
        let scale = Float::with_val(2, 1);
        let mut evaluation = Evaluation::new(formula.operations(), &at, &scale, 20, 200);
        let _ = evaluation.run();
        for (node, (known, ours)) in exact.iter().zip(&evaluation.nodes).enumerate() {
            for (k, value) in known.iter().enumerate().take(ours.known()) {
                if let Some(value) = value {
                    let ball = ours.coefficient(k, 200);
                    prop_assert!(ball.overlaps(&value.ball(400)), "node {node} of {text}, {k}");
                }
            }
        }
    }

    #[test]
    fn two_precisions_overlap(text in formula_texts(), at in centres()) {
        let formula = formula(&text);
        let scale = dyadic("1/8");
        let coarse = series(&formula, &at, &scale, 12, 64);
        let fine = series(&formula, &at, &scale, 12, 300);
        match (coarse, fine) {
            (Ok(coarse), Ok(fine)) => {
                for (k, (one, other)) in coarse.iter().zip(&fine).enumerate() {
                    prop_assert!(one.overlaps(other), "{text}, coefficient {k}");
                }
            }
            (Err(coarse), Ok(_)) => prop_assert!(!coarse.proved, "{text}"),
            (Ok(_), Err(fine)) => prop_assert!(!fine.proved, "{text}"),
            (Err(_), Err(_)) => {}
        }
    }

    /// The coefficients with scale 2h are those with scale h times 2^k.
    #[test]
    fn scales_agree(text in formula_texts(), at in centres()) {
        let formula = formula(&text);
        let one = series(&formula, &at, &dyadic("1/8"), 10, 128);
        let two = series(&formula, &at, &dyadic("1/4"), 10, 128);
        if let (Ok(one), Ok(two)) = (one, two) {
            for (k, (narrow, wide)) in (0i64..).zip(one.iter().zip(&two)) {
                prop_assert!(narrow.mul_power_of_two(k).overlaps(wide), "{text}, coefficient {k}");
            }
        }
    }

    #[test]
    fn identities_hold(
        pair in proptest::sample::select(&IDENTITIES[..]),
        k in -900i32..900,
        precision in 53u32..300,
    ) {
        let at = Centre::rational(Rational::from((k, 1000)));
        let left = series(&formula(pair.0), &at, &dyadic("1/16"), 12, precision).unwrap();
        let right = series(&formula(pair.1), &at, &dyadic("1/16"), 12, precision).unwrap();
        for (one, other) in left.iter().zip(&right) {
            prop_assert!(one.overlaps(other), "{pair:?} at {k}/1000");
        }
        // Nothing is won by balls that are merely wide. Near the ends of the domains (an eighth
        // of a thousandth of the cases) the coefficients themselves grow.
        if (-700..700).contains(&k) {
            let bound = Radius::power_of_two(20 - i64::from(precision));
            prop_assert!(left.iter().all(|ball| ball.radius() <= bound), "{pair:?} at {k}: {left:?}");
        }
    }
}
