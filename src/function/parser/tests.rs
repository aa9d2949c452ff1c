use proptest::prelude::*;
use rug::Rational;
use rug::ops::Pow;

use super::*;
use crate::function::formula::{Function, Operation};

mod advice;
mod code;

fn formula(text: &str) -> Formula {
    parse_formula(text).unwrap_or_else(|error| panic!("{text}: {error}"))
}

fn operations(text: &str) -> Vec<Operation> {
    formula(text).operations().to_vec()
}

fn error(text: &str) -> SyntaxError {
    match parse_formula(text) {
        Ok(formula) => panic!("{text}: read as {:?}", formula.operations()),
        Err(error) => error,
    }
}

/// The exact value at a rational argument, or `None` if there is none or it is not rational.
fn evaluate(formula: &Formula, x: &Rational) -> Option<Rational> {
    let mut values: Vec<Option<Rational>> = Vec::new();
    for operation in formula.operations() {
        let known = |node: &usize| values[*node].clone();
        let pair = |a: &usize, b: &usize| Some((known(a)?, known(b)?));
        values.push(match operation {
            Operation::Variable => Some(x.clone()),
            Operation::Rational(value) => Some(value.clone()),
            Operation::Negate(a) => known(a).map(|a| -a),
            Operation::Add(a, b) => pair(a, b).map(|(a, b)| a + b),
            Operation::Subtract(a, b) => pair(a, b).map(|(a, b)| a - b),
            Operation::Multiply(a, b) => pair(a, b).map(|(a, b)| a * b),
            Operation::Divide(a, b) => pair(a, b).filter(|(_, b)| !b.is_zero()).map(|(a, b)| a / b),
            Operation::PowerInteger(a, n) => known(a)
                .filter(|a| !(a.is_zero() && *n < 0))
                .map(|a| a.pow(*n)),
            Operation::Apply(Function::Fabs, a) => known(a).map(Rational::abs),
            _ => None,
        });
    }
    values.swap_remove(formula.root())
}

#[test]
fn operators_bind_as_in_c() {
    let x = Rational::from((3, 7));
    let two = Rational::from(2);
    for (text, value) in [
        ("1 - 2 - 3", Rational::from(-4)),
        ("12/2/3", two.clone()),
        ("12/2*3", Rational::from(18)),
        ("1 + 2*3", Rational::from(7)),
        ("(1 + 2)*3", Rational::from(9)),
        ("-2*-3", Rational::from(6)),
        ("2 - -3", Rational::from(5)),
        ("2--3", Rational::from(5)),
        ("+-+2", Rational::from(-2)),
        ("-x*x", Rational::from((-9, 49))),
        ("-x - x", Rational::from((-6, 7))),
        ("fma(x, 7, -1)", two.clone()),
        ("pow(-x, 2)", Rational::from((9, 49))),
        ("-pow(x, 2)", Rational::from((-9, 49))),
        ("pow(2, -3)", Rational::from((1, 8))),
        ("fabs(-x)", x.clone()),
        ("2/3", Rational::from((2, 3))),
        ("0.1 + 0x1p-1", Rational::from((3, 5))),
        ("0x1e+3", Rational::from(33)),
        ("\t((( x\n)))\r", x.clone()),
    ] {
        assert_eq!(evaluate(&formula(text), &x), Some(value), "{text}");
    }
}

#[test]
fn every_function_and_constant_is_known() {
    for function in Function::ALL {
        let text = format!("{}(x)", function.name());
        let expected = [Operation::Variable, Operation::Apply(function, 0)];
        assert_eq!(operations(&text), expected, "{text}");
    }
    assert_eq!(operations("pi"), [Operation::Pi]);
    assert_eq!(operations("M_PI"), [Operation::Pi]);
    let e = [
        Operation::Rational(Rational::from(1)),
        Operation::Apply(Function::Exp, 0),
    ];
    assert_eq!(operations("e"), e);
    assert_eq!(operations("M_E"), e);
    assert_eq!(operations("exp(1)"), e);
    let fused = [
        Operation::Variable,
        Operation::Multiply(0, 0),
        Operation::Add(1, 0),
    ];
    assert_eq!(operations("fma(x, x, x)"), fused);
}

#[test]
fn powers_are_told_apart_by_their_exponents() {
    let root = |text: &str| {
        let formula = formula(text);
        formula.operations()[formula.root()].clone()
    };
    assert_eq!(root("pow(x, 3)"), Operation::PowerInteger(0, 3));
    assert_eq!(root("pow(x, 6/2 - 4)"), Operation::PowerInteger(0, -1));
    assert_eq!(root("pow(x, 2.0)"), Operation::PowerInteger(0, 2));
    assert_eq!(
        root("pow(x, -1000000)"),
        Operation::PowerInteger(0, -1_000_000)
    );
    assert_eq!(
        root("pow(x, 1/3)"),
        Operation::PowerRational(0, Rational::from((1, 3)))
    );
    assert_eq!(
        root("pow(x, -0.5)"),
        Operation::PowerRational(0, Rational::from((-1, 2)))
    );
    assert_eq!(root("pow(x, x)"), Operation::Power(0, 0));
    assert_eq!(root("pow(x, pi)"), Operation::Power(0, 1));
    assert_eq!(error("pow(x, 1000001)").span, 7..14);
    assert_eq!(error("pow(x, -1000000.5)").span, 7..17);
}

#[test]
fn spans_cover_the_operands_with_their_parentheses() {
    let text = "(x + 1)*sin( x )/-(2)";
    let formula = formula(text);
    let texts: Vec<&str> = (0..formula.operations().len())
        .map(|node| &text[formula.span(node)])
        .collect();
    assert_eq!(
        texts,
        [
            "x",
            "1",
            "x + 1",
            "sin( x )",
            "(x + 1)*sin( x )",
            "-(2)",
            text
        ]
    );
}

#[test]
fn a_million_parentheses_signs_or_calls_are_an_error() {
    for (unit, place) in [
        ("(", 1_000),
        ("-", 1_000),
        ("-(", 1_000),
        ("sin(", 4_000),
        ("[", 0),
    ] {
        let text = unit.repeat(1_000_000 / unit.len());
        let error = error(&text);
        assert_eq!(error.span.start, place, "{unit}: {error}");
    }
    // A sign that changes nothing waits for nothing.
    let plus = "+".repeat(1_000_000);
    assert_eq!(error(&plus).span, 1_000_000..1_000_000);
    assert_eq!(operations(&format!("{plus}x")), [Operation::Variable]);
    assert!(error(&")".repeat(1_000_000)).message.contains("expected"));
}

#[test]
fn depth_is_limited_at_1000() {
    let nested = |depth: usize| format!("{}x{}", "(".repeat(depth), ")".repeat(depth));
    assert_eq!(operations(&nested(DEPTH_LIMIT)), [Operation::Variable]);
    assert!(
        error(&nested(DEPTH_LIMIT + 1))
            .message
            .contains("more than 1000")
    );
    let signs = |depth: usize| format!("{}x", "-".repeat(depth));
    assert_eq!(operations(&signs(DEPTH_LIMIT)).len(), DEPTH_LIMIT + 1);
    assert!(
        error(&signs(DEPTH_LIMIT + 1))
            .message
            .contains("more than 1000")
    );
    // Neighbours are not nested.
    assert_eq!(
        operations(&format!("x{}", "*(-x)".repeat(10_000))).len(),
        10_002
    );
}

#[test]
fn length_is_limited() {
    let chain = |terms: usize| format!("x{}", "+x".repeat(terms - 1));
    assert_eq!(
        operations(&chain(OPERATION_LIMIT / 2)).len(),
        OPERATION_LIMIT / 2
    );
    assert!(
        error(&chain(OPERATION_LIMIT / 2 + 1))
            .message
            .contains("100000 operations")
    );
    let spaces = |length: usize| format!("{}x", " ".repeat(length - 1));
    assert_eq!(operations(&spaces(TEXT_LIMIT)), [Operation::Variable]);
    assert!(
        error(&spaces(TEXT_LIMIT + 1))
            .message
            .contains("longer than 1048576 bytes")
    );
}

#[test]
fn what_has_no_value_is_read() {
    for text in ["1/0", "sqrt(-1)", "pow(0, -1)", "log(0)", "1/(x - x)"] {
        assert!(parse_formula(text).is_ok(), "{text}");
    }
}

/// A formula with rational values, for comparison with what is read from its text.
#[derive(Clone, Debug)]
enum Tree {
    Variable,
    Number(i32, u32),
    Negate(Box<Tree>),
    Absolute(Box<Tree>),
    Binary(char, Box<Tree>, Box<Tree>),
    Power(Box<Tree>, i32),
    Fused(Box<[Tree; 3]>),
}

impl Tree {
    /// How strongly the outermost operator binds.
    fn precedence(&self) -> u8 {
        match self {
            Self::Binary('+' | '-', ..) => 1,
            Self::Binary(..) => 2,
            Self::Negate(_) => 3,
            _ => 4,
        }
    }

    /// The text with only the parentheses that it needs.
    fn text(&self) -> String {
        let inside = |tree: &Self, least: u8| {
            let text = tree.text();
            if tree.precedence() < least {
                format!("( {text})")
            } else {
                text
            }
        };
        match self {
            Self::Variable => "x".into(),
            Self::Number(whole, 1) => whole.to_string(),
            Self::Number(thousandths, _) => {
                format!("{}.{:03}", thousandths / 1000, thousandths % 1000)
            }
            Self::Negate(a) => format!("-{}", inside(a, 3)),
            Self::Absolute(a) => format!("fabs({})", a.text()),
            Self::Binary(operator, a, b) => {
                let own = self.precedence();
                format!("{} {operator}{}", inside(a, own), inside(b, own + 1))
            }
            Self::Power(a, exponent) => format!("pow ({}, {exponent})", a.text()),
            Self::Fused(operands) => {
                let [a, b, c] = operands.each_ref().map(Self::text);
                format!("fma({a},{b} , {c})")
            }
        }
    }

    fn value(&self, x: &Rational) -> Option<Rational> {
        Some(match self {
            Self::Variable => x.clone(),
            Self::Number(numerator, denominator) => Rational::from((*numerator, *denominator)),
            Self::Negate(a) => -a.value(x)?,
            Self::Absolute(a) => a.value(x)?.abs(),
            Self::Binary(operator, a, b) => {
                let (a, b) = (a.value(x)?, b.value(x)?);
                match operator {
                    '+' => a + b,
                    '-' => a - b,
                    '*' => a * b,
                    _ if b.is_zero() => return None,
                    _ => a / b,
                }
            }
            Self::Power(a, exponent) => {
                let a = a.value(x)?;
                if a.is_zero() && *exponent < 0 {
                    return None;
                }
                (0..exponent.unsigned_abs()).fold(Rational::from(1), |product, _| {
                    if *exponent < 0 {
                        product / &a
                    } else {
                        product * &a
                    }
                })
            }
            Self::Fused(operands) => {
                let [a, b, c] = operands.each_ref().map(|operand| operand.value(x));
                a? * b? + c?
            }
        })
    }
}

fn trees() -> impl Strategy<Value = Tree> {
    let leaf = prop_oneof![
        2 => Just(Tree::Variable),
        1 => (0i32..50).prop_map(|whole| Tree::Number(whole, 1)),
        1 => (0i32..5000).prop_map(|thousandths| Tree::Number(thousandths, 1000)),
    ];
    leaf.prop_recursive(7, 60, 3, |inner| {
        let boxed = inner.clone().prop_map(Box::new);
        prop_oneof![
            1 => boxed.clone().prop_map(Tree::Negate),
            1 => boxed.clone().prop_map(Tree::Absolute),
            5 => (prop::sample::select(vec!['+', '-', '*', '/']), boxed.clone(), boxed.clone())
                .prop_map(|(operator, a, b)| Tree::Binary(operator, a, b)),
            1 => (boxed, -3i32..4).prop_map(|(a, exponent)| Tree::Power(a, exponent)),
            1 => [inner.clone(), inner.clone(), inner]
                .prop_map(|operands| Tree::Fused(Box::new(operands))),
        ]
    })
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(1500))]

    #[test]
    fn what_is_written_is_what_is_read(tree in trees(), a in -40i32..40, b in 1i32..20) {
        let text = tree.text();
        let x = Rational::from((a, b));
        let formula = parse_formula(&text).map_err(|error| TestCaseError::fail(error.to_string()))?;
        prop_assert_eq!(evaluate(&formula, &x), tree.value(&x), "{}", text);
        for (node, operation) in formula.operations().iter().enumerate() {
            prop_assert!(text.get(formula.span(node)).is_some());
            if let Operation::Add(a, b) | Operation::Multiply(a, b) = operation {
                prop_assert!(*a < node && *b < node);
            }
        }
    }

    #[test]
    fn any_text_is_read_or_refused_at_a_place_in_it(text in "\\PC{0,40}") {
        if let Err(error) = parse_formula(&text) {
            prop_assert!(text.get(error.span.clone()).is_some(), "{:?}", error);
        }
    }

    /// Texts made of the words of formulas come further than random characters.
    #[test]
    fn any_words_are_read_or_refused_at_a_place_in_them(
        words in prop::collection::vec(
            prop::sample::select(vec![
                "x", "pi", "e", "1", "0x1p-3", "1e400", ".5", "2.", "+", "-", "*", "/", "(", ")",
                "[", "]", ",", "sin(", "pow(", "fma(", "horner(", "fabs(", " ", "a", "²", "1e+", "f",
            ]),
            0..25,
        ),
    ) {
        let text = words.concat();
        match parse_formula(&text) {
            Err(error) => prop_assert!(text.get(error.span.clone()).is_some(), "{:?}", error),
            Ok(formula) => {
                prop_assert_eq!(formula.text(), &text);
                let positions = 0..formula.operations().len();
                prop_assert!(positions.into_iter().all(|node| text.get(formula.span(node)).is_some()));
            }
        }
    }

    #[test]
    fn any_bytes_are_read_or_refused(bytes in prop::collection::vec(any::<u8>(), 0..60)) {
        let text = String::from_utf8_lossy(&bytes);
        let _ = parse_formula(&text);
        let _ = parse_steps(&[&text], &ConstantTable::new(), &[]);
    }
}
