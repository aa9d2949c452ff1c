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

#[test]
fn coefficients_are_tight() {
    for case in cases() {
        let ours = evaluate(&case.formula, &case.centre, &case.scale, 20, 128);
        for (k, (ball, value)) in ours.iter().zip(&case.coefficients).enumerate() {
            let size = value.clone().abs().max(rational("1e-60"));
            let bound = Radius::of_rational_upper(&size).mul_power_of_two(-108);
            assert!(
                ball.radius() <= bound,
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
