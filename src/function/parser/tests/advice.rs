//! Errors: the place, and what they tell a person to write.

use proptest::prelude::*;

use super::super::is_reserved;
use super::{error, parse_formula};

#[test]
fn errors_point_and_advise() {
    for (text, span, message) in [
        ("ln(x)", 0..2, "there is no function `ln`; write log"),
        ("1 + abs(x)", 4..7, "there is no function `abs`; write fabs"),
        ("sinf(x)", 0..4, "; write sin"),
        ("expm1l(x)", 0..6, "; write expm1"),
        ("Arctan(x)", 0..6, "; write atan"),
        ("sine(x)", 0..4, "; write sin if that is meant"),
        ("sqr(x)", 0..3, "; write sqrt if that is meant"),
        ("tgamma(x)", 0..6, "there is no function `tgamma`"),
        (
            "x**2",
            1..3,
            "C has no operator for powers; write pow(a, b)",
        ),
        ("x^2", 1..2, "C has no operator for powers; write pow(a, b)"),
        (
            "2x",
            0..2,
            "an operator is missing between 2 and x; write 2*x",
        ),
        ("1 + 3pi", 4..7, "write 3*pi"),
        ("2e", 0..2, "write 2*e"),
        ("2sin(x)", 0..4, "write 2*sin"),
        (
            "2(x)",
            1..2,
            "an operator is missing before this; write * for a product",
        ),
        ("(x)(x)", 3..4, "an operator is missing"),
        ("x x", 2..3, "an operator is missing"),
        ("x.5", 1..3, "an operator is missing"),
        ("sin x", 0..3, "`sin` is a function; write sin(...)"),
        ("sin + 1", 0..3, "`sin` is a function"),
        (
            "x (x + 1)",
            0..1,
            "there is no function `x`; write * for a product",
        ),
        ("PI*x", 0..2, "there is no number `PI`; write pi"),
        ("M_PI_2", 0..6, "write pi/2"),
        ("X", 0..1, "write x"),
        ("t + 1", 0..1, "there is no number `t`"),
        ("1.5f*x", 0..4, "carries the C suffix `f`"),
        ("x*0.1F", 2..6, "write 0.1 for exactly that, 0x1.99999ap-4"),
        ("1.0L", 0..4, "carries the C suffix `L`"),
        ("1'000", 0..5, "write 1000"),
        ("1_000", 0..5, "write 1000"),
        ("1.2.3", 0..5, "two points"),
        ("1e99999*x", 0..7, "beyond the limit of 20000"),
        ("010*x", 0..3, "`010` is octal in C; write 10"),
        ("0,5*x", 1..2, "write a point, as in 1.5"),
        ("(x", 0..1, "`)` is missing"),
        ("2*sin(x", 2..5, "`)` is missing"),
        ("x)", 1..2, "`)` has no opening"),
        ("sin(x]", 5..6, "`)` is expected here"),
        ("x]", 1..2, "`]` has no opening"),
        ("sin()", 4..5, "stands where"),
        ("()", 1..2, "stands where"),
        ("sin(x, x)", 0..9, "sin takes 1 argument, not 2"),
        ("1 + pow(x)", 4..10, "pow takes 2 arguments, not 1"),
        ("fma(x, x,)", 9..10, "stands where"),
        ("", 0..0, "the formula is empty"),
        ("  ", 2..2, "the formula is empty"),
        ("x + ", 4..4, "the formula ends where"),
        ("x*/2", 2..3, "`/` stands where"),
        ("x ? 1 : 2", 2..3, "no formula; give each interval its own"),
        ("x < 1", 2..3, "no formula"),
        ("y = x", 2..3, "write only the expression"),
        ("x;", 1..2, "leave the semicolon out"),
        ("std::sin(x)", 3..4, "leave std::, math. and the like out"),
        ("1 + np.sin(x)", 6..7, "leave std::, math. and the like out"),
        ("π*x", 0..2, "write pi"),
        ("x − 1", 2..5, "write the ASCII minus sign"),
        ("x²", 1..3, "write pow(a, 2)"),
        ("x\u{200b}", 1..4, "has no meaning in a formula"),
        ("x[0]", 0..1, "an index needs the name of an array"),
        ("(x)[0]", 3..4, "an index stands only directly after"),
        (
            "horner(x, x)",
            7..8,
            "the first argument of horner needs the name of an array",
        ),
    ] {
        let error = error(text);
        assert!(error.to_string().contains(message), "{text}: {error}");
        assert_eq!(error.span, span, "{text}: {error}");
    }
}

#[test]
fn long_names_are_repeated_shortly() {
    let name = "a".repeat(500_000);
    assert!(error(&name).to_string().len() < 200);
    assert!(error(&format!("{name}(x)")).to_string().len() < 200);
    assert!(error(&format!("1{name}")).to_string().len() < 200);
}

#[test]
fn reserved_names_are_those_with_a_meaning() {
    for name in [
        "x", "pi", "e", "M_PI", "M_E", "sin", "pow", "fma", "horner", "clenshaw",
    ] {
        assert!(is_reserved(name), "{name}");
    }
    for name in ["y", "t", "E", "Sin", "ln", ""] {
        assert!(!is_reserved(name), "{name}");
    }
}

proptest! {
    /// What is advised for a function by its similarity is a function.
    #[test]
    fn similar_names_exist(name in "[a-z]{1,3}(sin|cos|tan|exp|log|erf|pow|sqrt|cbrt|fabs)[0-9a-z]{0,2}") {
        if let Err(error) = parse_formula(&format!("{name}(x)"))
            && let Some(advice) = error.advice
            && let Some(similar) =
                advice.strip_prefix("write ").and_then(|rest| rest.strip_suffix(" if that is meant"))
        {
            prop_assert!(is_reserved(similar), "{}", advice);
        }
    }
}
