//! Cases built to mislead: each names the trap, and what must not be said.

use boundmark::audit::run::{AuditError, ClaimOutcome};
use boundmark::claim::judgement::Verdict;
use rug::Rational;
use serde_json::{Value, json};

use super::audit;

fn document(formula: &str, on: [&str; 2], coefficients: &[&str], claim: Value) -> Value {
    let mut claim = claim;
    claim["of"] = json!("exact");
    json!({
        "reference": { "formula": formula },
        "approximant": {
            "basis": "power", "variable": "x", "order": "ascending", "stored_as": "exact",
            "pieces": [{ "on": on, "coefficients": coefficients }],
        },
        "claims": [claim],
    })
}

fn absolute(bound: &str) -> Value {
    json!({ "error": "absolute", "at_most": bound })
}

fn relative(bound: &str) -> Value {
    json!({ "error": "relative", "at_most": bound })
}

fn only(document: &Value) -> ClaimOutcome {
    let outcomes = audit(&document.to_string()).1;
    let mut outcomes = outcomes.unwrap_or_else(|error| panic!("{document}: {error:?}"));
    assert_eq!(outcomes.len(), 1);
    outcomes.remove(0)
}

/// The argument named, which is rational in these cases, and its piece.
fn worst(outcome: &ClaimOutcome) -> (usize, Rational) {
    let (piece, result) = &outcome.pieces[outcome.summary.worst.expect("a piece")];
    let (at, _) = result.at.as_ref().expect("an argument");
    assert!(at.pi_multiple.is_zero());
    (*piece, at.rational.clone())
}

/// The enclosure must hold the supremum, given between two doubles.
fn encloses(outcome: &ClaimOutcome, supremum: [f64; 2]) {
    let [lower, upper] = &outcome.summary.enclosure;
    assert!(*lower <= supremum[1], "lower end {lower}");
    assert!(*upper >= supremum[0], "upper end {upper}");
}

#[test]
fn an_exception_beyond_the_set_leaves_out_nothing() {
    for except in [
        json!([["0.2", "0.3"], ["2", "3"]]),
        json!([["2", "3"]]),
        json!([["pi", "4"]]),
    ] {
        let claim = json!({
            "error": "absolute", "at_most": "0.5", "on": ["0", "1"], "except": except,
        });
        let outcome = only(&document("x", ["0", "10"], &["0"], claim));
        assert_eq!(outcome.summary.verdict, Verdict::Fails);
        encloses(&outcome, [1.0, 1.0]);
    }
}

#[test]
fn the_ends_of_an_exception_are_no_witnesses() {
    let three_quarters = Rational::from((3, 4));
    for (except, limit) in [
        (json!([["0.75", "1"], ["-1", "-0.75"]]), three_quarters),
        (json!([["1", "1"], ["-1", "-1"]]), Rational::from(1)),
    ] {
        let claim = json!({ "error": "absolute", "at_most": "0.5", "except": except });
        let outcome = only(&document("x", ["-1", "1"], &["0"], claim));
        assert_eq!(outcome.summary.verdict, Verdict::Fails);
        assert!(Rational::from(worst(&outcome).1.abs_ref()) < limit);
        encloses(&outcome, [limit.to_f64(), limit.to_f64()]);
    }
}

#[test]
fn a_shared_zero_is_not_divided_out_of_a_mixed_error() {
    // |x - 2048 x^3|/(1/5120 + |x|) on |x| <= 1/64: at most 0.92339.
    let claim = json!({
        "error": "mixed", "absolute_part": "1/5120", "relative_part": "1", "at_most": "0.95",
    });
    let zero = "0";
    let coefficients = [zero, "2", zero, "-2048", zero, zero, zero, zero, zero, zero];
    let outcome = only(&document("x", ["-1/64", "1/64"], &coefficients, claim));
    assert_eq!(outcome.summary.verdict, Verdict::Holds);
    encloses(&outcome, [0.923_38, 0.923_40]);
    // The error is odd.
    assert!(outcome.summary.minimum[1] < -0.92 && outcome.summary.maximum[0] > 0.92);
}

#[test]
fn a_mixed_error_without_absolute_part_keeps_its_sign() {
    // (x - sin x)/|sin x| is odd.
    let claim = json!({
        "error": "mixed", "absolute_part": "0", "relative_part": "1", "at_most": "0.5",
    });
    let outcome = only(&document("sin(x)", ["-1", "1"], &["0", "1"], claim));
    assert_eq!(outcome.summary.verdict, Verdict::Holds);
    encloses(&outcome, [0.188_39, 0.188_40]);
    assert!(outcome.summary.minimum[0] < -0.188 && outcome.summary.maximum[1] > 0.188);
}

#[test]
fn a_witness_stays_in_a_set_that_begins_below_the_least_double() {
    for left in ["1e-330", "1e-400", "1e-20"] {
        let shared = document(
            "sin(x)",
            [left, "1"],
            &["0", "2", "0", "-1"],
            relative("0.9"),
        );
        let outcome = only(&shared);
        assert_eq!(outcome.summary.verdict, Verdict::Fails);
        assert!(worst(&outcome).1 > 0, "{left}");
    }
}

#[test]
fn an_unbounded_relative_error_may_be_unbounded_on_either_side() {
    for (formula, coefficient) in [("x", "1"), ("x*x", "-1"), ("x*x", "1")] {
        let outcome = only(&document(
            formula,
            ["-1", "1"],
            &[coefficient],
            relative("0.1"),
        ));
        assert_eq!(outcome.summary.verdict, Verdict::Fails);
        assert!(outcome.summary.enclosure[1].is_infinite());
        let (minimum, maximum) = (&outcome.summary.minimum, &outcome.summary.maximum);
        assert!(minimum[0].is_infinite() && maximum[1].is_infinite());
        if formula == "x*x" && coefficient == "-1" {
            // -1/x^2 - 1 is negative everywhere.
            assert!(maximum[0] <= -2, "{maximum:?}");
        }
    }
}

#[test]
fn narrow_poles_and_bumps_between_samples_are_seen() {
    let pole = "1e-9/(pow(x-1/3,2)+1e-18)";
    let outcome = only(&document(pole, ["0", "1"], &["0"], absolute("10")));
    assert_eq!(outcome.summary.verdict, Verdict::Fails);
    assert!(outcome.summary.enclosure[1] >= 1e9);
    let bump = "exp(-pow((x-0.3)*100,2))";
    let outcome = only(&document(bump, ["0", "1"], &["0"], absolute("0.5")));
    assert_eq!(outcome.summary.verdict, Verdict::Fails);
    encloses(&outcome, [1.0, 1.0]);
}

#[test]
fn an_undefined_argument_is_refused() {
    for (formula, on) in [
        ("exp(-1/(x*x))", ["-1", "1"]),
        ("asin(1.0000000001*x)", ["-1", "1"]),
        ("pow(x,2/3)", ["-1", "1"]),
        ("log(x)", ["-1", "1"]),
        ("acosh(x)", ["0.5", "3"]),
    ] {
        let outcome = audit(&document(formula, on, &["0"], absolute("100")).to_string()).1;
        assert!(
            matches!(outcome, Err(AuditError::Undefined { .. })),
            "{formula}"
        );
    }
}

#[test]
fn a_bound_equal_to_the_supremum_never_fails() {
    for (constant, bound) in [("1/8", "1/8"), ("1/3", "1/3"), ("0.1", "0.1")] {
        let outcome = only(&document(
            "x*x",
            ["0", "1"],
            &[constant, "0", "1"],
            absolute(bound),
        ));
        assert_ne!(outcome.summary.verdict, Verdict::Fails, "{constant}");
    }
    let above = document(
        "x*x",
        ["0", "1"],
        &["0.1000000001", "0", "1"],
        absolute("0.1"),
    );
    assert_ne!(only(&above).summary.verdict, Verdict::Holds);
    let equal = only(&document(
        "x*x",
        ["0", "1"],
        &["0", "0", "1"],
        absolute("0"),
    ));
    assert_ne!(equal.summary.verdict, Verdict::Fails);
    assert_eq!(equal.summary.enclosure[0], 0);
}

#[test]
fn a_one_sided_limit_at_a_boundary_belongs_to_the_piece_beside_it() {
    // The left piece is off by 1/4 at 1/2, the right piece by nothing anywhere.
    let of_owner = |owner: &str, bound: &str| {
        let mut audited = document("x", ["0", "1"], &["0"], absolute(bound));
        audited["approximant"]["owner"] = json!(owner);
        audited["approximant"]["pieces"] = json!([
            { "on": ["0", "1/2"], "coefficients": ["0", "1.5"] },
            { "on": ["1/2", "1"], "coefficients": ["0", "1"] },
        ]);
        only(&audited)
    };
    let half = Rational::from((1, 2));
    for owner in ["left", "right"] {
        let fails = of_owner(owner, "0.2499");
        assert_eq!(fails.summary.verdict, Verdict::Fails, "{owner}");
        let (piece, x) = worst(&fails);
        assert_eq!(piece, 0);
        assert!(if owner == "left" { x <= half } else { x < half });
        assert_ne!(
            of_owner(owner, "0.25").summary.verdict,
            Verdict::Fails,
            "{owner}"
        );
        assert_eq!(
            of_owner(owner, "0.2501").summary.verdict,
            Verdict::Holds,
            "{owner}"
        );
    }
}

#[test]
fn removable_singularities_are_continued_to_the_right_value() {
    for (formula, on, value, supremum) in [
        ("sin(x)/x", ["-1", "1"], "1", [0.158_52, 0.158_54]),
        ("(1-cos(x))/(x*x)", ["-1", "1"], "1/2", [0.040_30, 0.040_31]),
        (
            "(x-sin(x))/(x*x*x)",
            ["-1", "1"],
            "1/6",
            [0.008_13, 0.008_14],
        ),
        (
            "(exp(x-1/3)-1)/(x-1/3)",
            ["-1", "1.3"],
            "1",
            [0.685_34, 0.685_35],
        ),
        ("sin(x)/(x-pi)", ["3", "4"], "-1", [0.118_36, 0.118_37]),
    ] {
        let outcome = only(&document(formula, on, &[value], absolute("1")));
        assert_eq!(outcome.summary.verdict, Verdict::Holds, "{formula}");
        encloses(&outcome, supremum);
    }
}

#[test]
fn scales_beyond_the_doubles_are_enclosed() {
    for scale in ["1e3000", "1e-3000", "1e300"] {
        let formula = format!("{scale}*exp(x)");
        let outcome = only(&document(
            &formula,
            ["-1", "1"],
            &[scale, scale],
            relative("1.01"),
        ));
        assert_eq!(outcome.summary.verdict, Verdict::Holds, "{scale}");
        // (1 + x) e^-x - 1 is -1 at x = -1.
        encloses(&outcome, [1.0, 1.0]);
    }
}
