//! Straight-line code.

use proptest::prelude::*;
use rug::Rational;

use super::super::*;
use super::evaluate;

fn number(numerator: i64, denominator: i64) -> ConstantValue {
    ConstantValue::Number(Rational::from((numerator, denominator)))
}

fn array(entries: &[i64]) -> ConstantValue {
    ConstantValue::Array(entries.iter().map(|&entry| Rational::from(entry)).collect())
}

fn table(entries: &[(&str, ConstantValue)]) -> ConstantTable {
    let mut table = ConstantTable::new();
    for (name, value) in entries {
        table.insert(name, value.clone()).expect("a good constant");
    }
    table
}

fn read(steps: &[&str], constants: &ConstantTable) -> ParsedSteps {
    parse_steps(steps, constants, &[]).unwrap_or_else(|error| panic!("{steps:?}: {error}"))
}

fn value(steps: &[&str], constants: &ConstantTable, x: (i64, i64)) -> Rational {
    evaluate(&read(steps, constants).formula, &Rational::from(x)).expect("rational")
}

#[test]
fn the_last_step_is_the_value() {
    let constants = table(&[("S1", number(-1, 6)), ("S2", number(1, 120))]);
    let steps = ["z = x*x", "r = S1 + z*S2", "y = x + x*z*r"];
    // 2 - 8/6 + 32/120
    assert_eq!(value(&steps, &constants, (2, 1)), Rational::from((14, 15)));
    let parsed = read(&steps, &constants);
    assert_eq!(parsed.formula.text(), steps.join("\n"));
    let names: Vec<&str> = parsed.steps.iter().map(|step| step.name.as_str()).collect();
    assert_eq!(names, ["z", "r", "y"]);
    for (step, text) in parsed.steps.iter().zip(["x*x", "S1 + z*S2", "x + x*z*r"]) {
        let node = step.node.expect("needed");
        assert_eq!(&parsed.formula.text()[parsed.formula.span(node)], text);
        let (_, span) = step.expression.elements().last().expect("not empty");
        let offset = parsed.formula.span(node).start - span.start;
        assert!(offset == 0 || parsed.formula.text().as_bytes()[offset - 1] == b'\n');
    }
    assert_eq!(parsed.steps[2].node, Some(parsed.formula.root()));
}

#[test]
fn names_may_get_new_values_and_unused_steps_are_kept_apart() {
    let constants = ConstantTable::new();
    assert_eq!(
        value(&["t = x", "t = t*t", "t = t + 1"], &constants, (3, 1)),
        10
    );
    let parsed = read(&["u = 1/x", "y = x"], &constants);
    assert_eq!(parsed.steps[0].node, None);
    assert_eq!(parsed.formula.operations().len(), 1);
}

#[test]
fn formats_are_kept_as_written() {
    let parsed = read(
        &[
            "z : binary32 = x*x",
            "w:decimal:7=z",
            "v: q:3.12 =w",
            "y = v",
        ],
        &ConstantTable::new(),
    );
    let formats: Vec<_> = parsed
        .steps
        .iter()
        .map(|step| step.format.as_deref())
        .collect();
    assert_eq!(
        formats,
        [Some("binary32"), Some("decimal:7"), Some("q:3.12"), None]
    );
    assert_eq!(parsed.steps[0].format_span, Some(4..12));
    assert_eq!(parsed.steps[1].format_span, Some(2..11));
    assert_eq!(parsed.steps[3].format_span, None);
}

#[test]
fn expressions_are_kept_before_folding() {
    let parsed = read(&["y = 2*3*x + (1 - 1)"], &ConstantTable::new());
    let elements: Vec<&Element> = parsed.steps[0]
        .expression
        .elements()
        .iter()
        .map(|(element, _)| element)
        .collect();
    let number = |value: i32| Element::Number(Rational::from(value));
    assert_eq!(
        elements,
        [
            &number(2),
            &number(3),
            &Element::Multiply,
            &Element::Name("x".into()),
            &Element::Multiply,
            &number(1),
            &number(1),
            &Element::Subtract,
            &Element::Add,
        ]
    );
}

#[test]
fn arguments_take_the_given_value_and_may_be_assigned() {
    let arguments = [("y".to_string(), Rational::from((1, 2)))];
    let steps = ["z = x + y", "y = z*y"];
    let parsed = parse_steps(&steps, &ConstantTable::new(), &arguments).expect("good code");
    assert_eq!(
        evaluate(&parsed.formula, &Rational::from(1)),
        Some(Rational::from((3, 4)))
    );
    let constants = table(&[("y", number(1, 1))]);
    let error = parse_steps(&steps, &constants, &arguments).expect_err("defined twice");
    assert_eq!(error.step, None);
    let arguments = [("x".to_string(), Rational::new())];
    assert!(parse_steps(&steps, &ConstantTable::new(), &arguments).is_err());
}

#[test]
fn arrays_are_indexed_and_summed() {
    let constants = table(&[
        ("a", array(&[3, -1, 4, 2])),
        ("c", array(&[5])),
        ("d", array(&[1, 2])),
    ]);
    assert_eq!(value(&["y = a[2]*x + a[ 1 + 2 ]"], &constants, (10, 1)), 42);
    // 3 - 2 + 16 + 16
    assert_eq!(value(&["y = horner(a, x)"], &constants, (2, 1)), 33);
    // T_0..T_3 at 2: 1, 2, 7, 26
    assert_eq!(
        value(&["y = clenshaw(a, x)"], &constants, (2, 1)),
        3 - 2 + 28 + 52
    );
    for call in ["horner", "clenshaw"] {
        assert_eq!(
            value(&[&format!("y = {call}(c, x)")], &constants, (7, 1)),
            5
        );
        assert_eq!(
            value(&[&format!("y = {call}(d, x*x) - 1")], &constants, (7, 1)),
            98
        );
    }
}

#[test]
fn errors_name_the_step_and_the_place() {
    let constants = table(&[("a", array(&[1, 2, 3])), ("S1", number(1, 3))]);
    for (steps, step, span, message) in [
        (
            vec!["z = x", "y = zz*x"],
            1,
            4..6,
            "there is no number `zz`",
        ),
        (vec!["y = S2"], 0, 4..6, "write S1 if that is meant"),
        (vec!["y = z", "z = x"], 0, 4..5, "there is no number `z`"),
        (vec!["y = x", "x = y"], 1, 0..1, "`x` has a fixed meaning"),
        (vec!["pi = 3"], 0, 0..2, "`pi` has a fixed meaning"),
        (vec!["sin = x"], 0, 0..3, "`sin` has a fixed meaning"),
        (vec!["horner = x"], 0, 0..6, "`horner` has a fixed meaning"),
        (
            vec!["S1 = x"],
            0,
            0..2,
            "`S1` is a constant; write another name",
        ),
        (vec!["a = x"], 0, 0..1, "`a` is a constant"),
        (vec!["a[0] = x"], 0, 0..4, "`a[0]` is not a name"),
        (
            vec!["y = a[3]"],
            0,
            6..7,
            "`a` has 3 entries, counted from 0",
        ),
        (vec!["y = a[-1]"], 0, 6..8, "`a` has 3 entries"),
        (vec!["y = a[1e19000]"], 0, 6..13, "`a` has 3 entries"),
        (
            vec!["y = a[1/2]"],
            0,
            6..9,
            "an index is a constant whole number",
        ),
        (
            vec!["y = a[x]"],
            0,
            6..7,
            "an index is a constant whole number",
        ),
        (vec!["y = a[1"], 0, 5..6, "`]` is missing"),
        (vec!["y = a[1)"], 0, 7..8, "`]` is expected"),
        (
            vec!["y = a + 1"],
            0,
            4..5,
            "`a` is an array of 3 numbers; write a[0]",
        ),
        (vec!["y = a"], 0, 4..5, "`a` is an array"),
        (
            vec!["y = x[1]"],
            0,
            4..5,
            "an index needs the name of an array",
        ),
        (vec!["y = horner(x, a)"], 0, 14..15, "`a` is an array"),
        (
            vec!["y = horner(S1, x)"],
            0,
            11..13,
            "the first argument of horner needs",
        ),
        (vec!["y = clenshaw(a + 1, x)"], 0, 13..14, "`a` is an array"),
        (
            vec!["y = horner(a)"],
            0,
            4..13,
            "horner takes 2 arguments, not 1",
        ),
        (
            vec!["y"],
            0,
            0..1,
            "does not define a name; write name = expression",
        ),
        (vec!["return x*x"], 0, 0..10, "does not define a name"),
        (vec!["= x"], 0, 0..0, "`` is not a name"),
        (vec!["2z = x"], 0, 0..2, "`2z` is not a name"),
        (
            vec!["double z = x*x"],
            0,
            0..8,
            "write z = ..., or z : binary32 = ...",
        ),
        (vec!["y = x", "y *= 2"], 1, 0..3, "write y = y * (...)"),
        (vec!["y : = x"], 0, 4..4, "is not the name of a format"),
        (
            vec!["y : a b = x"],
            0,
            4..7,
            "`a b` is not the name of a format",
        ),
        (vec!["y = "], 0, 4..4, "the formula is empty"),
        (vec!["y == x"], 0, 3..4, "write only the expression"),
        (vec!["y = x;"], 0, 5..6, "leave the semicolon out"),
        (vec!["y = x", "z = y**2"], 1, 5..7, "write pow(a, b)"),
    ] {
        let error = parse_steps(&steps, &constants, &[]).expect_err(steps[0]);
        assert_eq!(error.step, Some(step), "{steps:?}: {error}");
        assert_eq!(error.error.span, span, "{steps:?}: {error}");
        assert!(error.to_string().contains(message), "{steps:?}: {error}");
        assert!(
            error
                .to_string()
                .starts_with(&format!("step {}: ", step + 1))
        );
    }
    let none: [&str; 0] = [];
    let error = parse_steps(&none, &constants, &[]).expect_err("no steps");
    assert_eq!(error.to_string(), "there are no steps");
}

#[test]
fn constants_have_names_of_their_own() {
    let mut table = table(&[("a", number(1, 2))]);
    for name in ["x", "e", "pi", "log", "a", "", "1a", "a b", "ä"] {
        assert!(table.insert(name, number(1, 1)).is_err(), "{name}");
    }
    assert!(table.insert("b", ConstantValue::Array(vec![])).is_err());
    assert!(table.insert("_b2", array(&[1])).is_ok());
    assert_eq!(table.get("a"), Some(&number(1, 2)));
}

#[test]
fn the_work_is_limited_over_all_steps() {
    let long = table(&[("a", ConstantValue::Array(vec![Rational::from(1); 30_000]))]);
    assert!(parse_steps(&["y = horner(a, x)"], &long, &[]).is_ok());
    let twice = ["y = horner(a, x)", "z = horner(a, x)"];
    let error = parse_steps(&twice, &long, &[]).expect_err("too many operations");
    assert_eq!(error.step, Some(1));
    assert!(error.to_string().contains("more than 100000 operations"));
    let steps = vec!["y = x"; 300_000];
    let error = parse_steps(&steps, &long, &[]).expect_err("too long");
    assert!(error.to_string().contains("together longer"));
    // One step a term, each using the one before.
    let mut chain = vec!["s = x"];
    chain.resize(40_000, "s = s + x");
    assert!(parse_steps(&chain, &long, &[]).is_ok());
}

/// T_k(x) by the three-term recurrence.
fn chebyshev(degree: usize, x: &Rational) -> Rational {
    let (mut previous, mut current) = (x.clone(), Rational::from(1));
    for _ in 0..degree {
        let next = Rational::from(x * 2u32) * &current - &previous;
        (previous, current) = (current, next);
    }
    current
}

proptest! {
    #[test]
    fn sums_of_powers_and_of_chebyshev_polynomials(
        entries in prop::collection::vec(-9i64..10, 1..12), a in -20i64..20, b in 1i64..10,
    ) {
        let constants = table(&[("c", array(&entries))]);
        let x = Rational::from((a, b));
        let mut power = Rational::from(1);
        let (mut powers, mut polynomials) = (Rational::new(), Rational::new());
        for (degree, &entry) in entries.iter().enumerate() {
            powers += Rational::from(&power * entry);
            polynomials += chebyshev(degree, &x) * entry;
            power *= &x;
        }
        prop_assert_eq!(value(&["y = horner(c, x)"], &constants, (a, b)), powers);
        prop_assert_eq!(value(&["y = clenshaw(c, x)"], &constants, (a, b)), polynomials);
    }

    #[test]
    fn any_words_are_read_or_refused_at_a_place_in_them(
        words in prop::collection::vec(
            prop::sample::select(vec![
                "a", "S", "x", "y", "z", "=", " = ", ":", "binary32", "[", "]", "(", ")", ",", "0",
                "1", "2", "+", "-", "*", "/", "horner(a,", "clenshaw(a,", " ", "\n", "é",
            ]),
            0..20,
        ),
    ) {
        let constants = table(&[("a", array(&[1, 2])), ("S", number(1, 2))]);
        let (first, text) = ("z = x", words.concat());
        if let Err(error) = parse_steps(&[first, &text], &constants, &[]) {
            prop_assert_eq!(error.step, Some(1));
            prop_assert!(text.get(error.error.span.clone()).is_some(), "{:?}", error);
        }
    }
}
