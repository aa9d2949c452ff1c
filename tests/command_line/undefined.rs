//! A formula without a value inside the domain is an error of the input that names the place.

use boundmark::number::literal;
use predicates::str::{contains, is_empty};

use crate::sandbox::{Audit, Sandbox};

/// A formula, a domain, the operation at fault, and the arguments where it has no value.
type Case = (
    &'static str,
    [&'static str; 2],
    &'static str,
    fn(f64) -> bool,
);

#[rustfmt::skip]
const CASES: &[Case] = &[
    ("log(x)", ["-1", "1"], "log(x)", |x| (-1.0..=0.0).contains(&x)),
    ("1/x", ["-1", "1"], "1/x", |x| x == 0.0),
    ("sqrt(x-2)", ["0", "1"], "sqrt(x-2)", |x| (0.0..=1.0).contains(&x)),
    ("1 + sqrt(x-1)", ["0", "2"], "sqrt(x-1)", |x| (0.0..1.0).contains(&x)),
    ("exp(log1p(x))", ["-2", "0"], "log1p(x)", |x| (-2.0..=-1.0).contains(&x)),
    ("asin(x)", ["0", "2"], "asin(x)", |x| x > 1.0 && x <= 2.0),
    ("acosh(x)", ["0", "2"], "acosh(x)", |x| (0.0..1.0).contains(&x)),
    ("atanh(x)", ["0", "2"], "atanh(x)", |x| (1.0..=2.0).contains(&x)),
    ("pow(x, 1/2)", ["-1", "1"], "pow(x, 1/2)", |x| (-1.0..0.0).contains(&x)),
    ("1/(x-1/3)", ["0", "1"], "1/(x-1/3)", |x| (x - 1.0 / 3.0).abs() < 1e-8),
    ("1/(x*x-2)", ["0", "2"], "1/(x*x-2)", |x| (x - std::f64::consts::SQRT_2).abs() < 1e-8),
    ("tan(x)", ["0", "2"], "tan(x)", |x| (x - std::f64::consts::FRAC_PI_2).abs() < 1e-8),
    ("sin(1/x)", ["0", "1"], "1/x", |x| x == 0.0),
    ("cos(1/(x-0.5))", ["0", "1"], "1/(x-0.5)", |x| x == 0.5),
];

#[test]
fn a_reference_without_a_value_in_the_domain_is_refused() {
    let sandbox = Sandbox::new();
    for (formula, domain, operation, undefined) in CASES {
        let text = Audit::polynomial(formula, *domain, &["1"], Some("1"));
        sandbox.write("a.audit.toml", text);
        let assert = sandbox
            .audit(["a.audit.toml", "--out", "out"])
            .assert()
            .code(2)
            .stdout(is_empty())
            .stderr(contains(
                "a.audit.toml: claim `accuracy`: the reference has no value at x = ",
            ))
            .stderr(contains(format!("`{operation}`")));
        let message = String::from_utf8(assert.get_output().stderr.clone()).expect("UTF-8");
        let place = place_of(&message);
        assert!(
            undefined(place),
            "{formula} has a value at {place}: {message}"
        );
        assert!(!sandbox.path("out").exists(), "{formula} has a certificate");
    }
}

#[test]
fn steps_without_a_value_in_the_domain_are_refused() {
    let sandbox = Sandbox::new();
    sandbox.write(
        "a.audit.toml",
        "[reference]\nformula = \"x\"\n\
         [approximant]\nbasis = \"steps\"\nsteps = [\"r = sqrt(x)\", \"y = r*r\"]\non = [\"-1\", \"1\"]\n\
         [[claims]]\nof = \"exact\"\nerror = \"absolute\"\nat_most = \"1\"\n",
    );
    let assert = sandbox
        .audit(["a.audit.toml"])
        .assert()
        .code(2)
        .stdout(is_empty())
        .stderr(contains("the approximant has no value at x = "))
        .stderr(contains("`sqrt(x)`"));
    let message = String::from_utf8(assert.get_output().stderr.clone()).expect("UTF-8");
    assert!(place_of(&message) < 0.0, "{message}");
}

/// A claim on the part of the domain where the formula has values is audited.
#[test]
fn a_claim_on_a_part_of_the_domain_needs_values_there_only() {
    let sandbox = Sandbox::new();
    let text = Audit::polynomial("log(x)", ["-1", "2"], &["0"], Some("0.7"));
    sandbox.write("a.audit.toml", format!("{text}on = [\"1\", \"2\"]\n"));
    sandbox.audit(["a.audit.toml"]).assert().code(0);
}

fn place_of(message: &str) -> f64 {
    let after = message.split("x = ").nth(1).expect("a place");
    let number = after.split(": `").next().expect("what follows it");
    literal::parse(number)
        .unwrap_or_else(|_| panic!("{number:?} is no number"))
        .to_f64()
}
