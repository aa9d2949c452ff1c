use std::fmt::Write as _;

use proptest::prelude::*;
use rug::Rational;

use super::*;
use crate::approximant::piece::{Basis, Form, Owner, Piece, Stored};
use crate::approximant::polynomial::Polynomial;
use crate::audit::diagnostic::Severity;
use crate::claim::model::{ErrorMeasure, Subject};
use crate::function::formula::Operation;

const REFERENCE: &str = "[reference]\nformula = \"exp(x)\"\n";
const CLAIM: &str = "[[claims]]\nof = \"exact\"\nerror = \"absolute\"\n";

fn parse(text: &str) -> AuditFile {
    match read_text("a.audit.toml", text, None, &ReadOptions::default()) {
        Ok(file) => file,
        Err(errors) => {
            panic!(
                "{}",
                errors
                    .iter()
                    .map(Diagnostic::render)
                    .collect::<Vec<_>>()
                    .join("\n")
            )
        }
    }
}

/// A file with this approximant and one claim.
fn with_approximant(approximant: &str) -> AuditFile {
    parse(&format!("{REFERENCE}[approximant]\n{approximant}\n{CLAIM}"))
}

fn pieces(file: &AuditFile) -> &[Piece] {
    &file.approximants[0].approximant.pieces
}

fn polynomial(piece: &Piece) -> &Polynomial {
    match &piece.form {
        Form::Polynomial(polynomial) => polynomial,
        Form::Formula(_) => panic!("a polynomial was expected"),
    }
}

fn number(text: &str) -> Rational {
    crate::number::literal::parse(text).expect("a number")
}

fn value(piece: &Piece, x: &str) -> Rational {
    polynomial(piece)
        .evaluate(&number(x))
        .expect("rational ends")
}

/// Errors of a text that must not be accepted, rendered.
fn refusal(text: &str) -> String {
    match read_text("a.audit.toml", text, None, &ReadOptions::default()) {
        Ok(_) => panic!("accepted"),
        Err(errors) => errors
            .iter()
            .map(Diagnostic::render)
            .collect::<Vec<_>>()
            .join("\n"),
    }
}

const HERMITE: &str = r#"
title = "Exponential on [0, 1] from three shared knots"

[reference]
formula = "exp(x)"

[approximant]
basis = "hermite"                 # Taylor coefficients
stored_as = "binary64"
knots = [
  { at = "0",   taylor = ["1", "1", "0.5"] },
  { at = "0.5", taylor = ["0x1.a61298e1e069cp+0", "0x1.a61298e1e069cp+0", "0x1.a61298e1e069cp-1"] },
  { at = "1",   taylor = ["2.718281828459045", "2.718281828459045", "1.3591409142295225"] },
]

[program]
format = "binary64"
scheme = "two-ended-horner"
contraction = "either"
rounding = "nearest"

[[claims]]
id = "accuracy"
of = "exact"
error = "absolute"
on = ["0", "1"]
at_most = "1e-3"
"#;

#[test]
fn the_hermite_example_is_read() {
    let file = parse(HERMITE);
    assert_eq!(
        file.title.as_deref(),
        Some("Exponential on [0, 1] from three shared knots")
    );
    let approximant = &file.approximants[0].approximant;
    assert_eq!(approximant.id, "approximant");
    assert_eq!(approximant.owner, Owner::Right);
    assert_eq!(approximant.pieces.len(), 2);
    assert_eq!(approximant.storage_rounding.numbers, 9);
    assert_eq!(approximant.storage_rounding.changed, 3);
    assert_eq!(
        value(&approximant.pieces[0], "0.5"),
        number("0x1.a61298e1e069cp+0")
    );
    assert_eq!(
        value(&approximant.pieces[1], "0.5"),
        number("0x1.a61298e1e069cp+0")
    );
    assert_eq!(
        value(&approximant.pieces[1], "1"),
        number("0x1.5bf0a8b145769p+1")
    );
    assert!(
        approximant.pieces[0].written.is_none(),
        "nothing was rounded on the left"
    );
    let written = approximant.pieces[1]
        .written
        .as_ref()
        .expect("decimals were rounded");
    assert_eq!(
        written.evaluate(&number("1")),
        Some(number("2.718281828459045"))
    );
    // The derivative at the shared knot is the stored one: p'(1/2) of the left piece, times the
    // width, is the sum of k c_k.
    let coefficients = &polynomial(&approximant.pieces[0]).coefficients;
    let mut slope = Rational::new();
    for (power, coefficient) in coefficients.iter().enumerate() {
        slope += coefficient * Rational::from(power);
    }
    assert_eq!(slope * 2, number("0x1.a61298e1e069cp+0"));

    let claim = &file.claims[0];
    assert_eq!(claim.id, "accuracy");
    assert_eq!(claim.subject, Subject::Exact);
    assert_eq!(claim.measure, ErrorMeasure::Absolute);
    let bound = claim.at_most.as_ref().expect("a bound");
    assert_eq!(
        (bound.text.as_str(), &bound.value),
        ("1e-3", &Rational::from((1, 1000)))
    );
    assert_eq!(claim.targets[0].on[1].text(), "1");
    assert_eq!(
        file.program.as_deref(),
        Some(
            r#"{"contraction":"either","format":"binary64","rounding":"nearest","scheme":"two-ended-horner"}"#
        )
    );
    assert_eq!(file.inputs.len(), 1);
    assert_eq!(file.inputs[0].bytes, HERMITE.len() as u64);
    assert!(file.notes.is_empty());
}

#[test]
fn json_and_toml_are_the_same_file() {
    let json = r#"{
      "title": "Exponential",
      "reference": { "formula": "exp(x)" },
      "approximant": {
        "basis": "power", "variable": "x", "order": "ascending",
        "pieces": [{ "on": [0, "1"], "coefficients": ["1", 1, "1/2"] }]
      },
      "program": { "format": "binary64" },
      "claims": [{ "of": "exact", "error": "relative", "at_most": "2^-8" }]
    }"#;
    let toml = r#"
      title = "Exponential"
      program.format = "binary64"
      [reference]
      formula = "exp(x)"
      [approximant]
      basis = "power"
      variable = "x"
      order = "ascending"
      [[approximant.pieces]]
      on = [0, "1"]
      coefficients = ["1", 1, "1/2"]
      [[claims]]
      of = "exact"
      error = "relative"
      at_most = "2^-8"
    "#;
    let options = ReadOptions::default();
    let from_json = read_text("a.audit.json", json, None, &options).expect("JSON");
    let from_toml = read_text("a.audit.toml", toml, None, &options).expect("TOML");
    assert_eq!(from_json.title, from_toml.title);
    assert_eq!(from_json.program, from_toml.program);
    for file in [&from_json, &from_toml] {
        assert_eq!(value(&pieces(file)[0], "2"), 5);
        assert_eq!(file.claims[0].id, "claim-1");
        assert_eq!(file.claims[0].measure, ErrorMeasure::Relative);
        assert_eq!(
            file.claims[0].at_most.as_ref().unwrap().value,
            Rational::from((1, 256))
        );
    }
}

#[test]
fn every_polynomial_basis_has_the_value_of_its_definition() {
    // Each of these is 1 + 2t + 3t^2 in a local variable t, evaluated at x = 3 on [1, 5].
    for (basis, expected) in [
        (
            "basis = \"power\"\nvariable = \"x\"\norder = \"ascending\"\n",
            "34",
        ),
        (
            "basis = \"power\"\nvariable = \"x-left\"\norder = \"ascending\"\n",
            "17",
        ),
        (
            "basis = \"power\"\nvariable = \"unit\"\norder = \"ascending\"\n",
            "2.75",
        ),
        (
            "basis = \"power\"\nvariable = \"centred\"\norder = \"ascending\"\n",
            "1",
        ),
        (
            "basis = \"power\"\nvariable = \"centred\"\norder = \"descending\"\n",
            "3",
        ),
        (
            "basis = \"power\"\nvariable = { origin = \"2\", scale = \"1/3\" }\n\
             order = \"ascending\"\n",
            "34",
        ),
        // x + 2x^3 + 3x^5 and 1 + 2x^2 + 3x^4.
        (
            "basis = \"power\"\nvariable = \"x\"\norder = \"ascending\"\nparity = \"odd\"\n",
            "786",
        ),
        (
            "basis = \"power\"\nvariable = \"x\"\norder = \"ascending\"\nparity = \"even\"\n",
            "262",
        ),
        // At the centre T_0 = 1, T_1 = 0, T_2 = -1.
        (
            "basis = \"chebyshev\"\nfirst = \"full\"\norder = \"ascending\"\n",
            "-2",
        ),
        (
            "basis = \"chebyshev\"\nfirst = \"halved\"\norder = \"ascending\"\n",
            "-2.5",
        ),
        (
            "basis = \"chebyshev\"\nfirst = \"full\"\norder = \"descending\"\n",
            "2",
        ),
        (
            "basis = \"chebyshev\"\nfirst = \"full\"\norder = \"ascending\"\n\
             variable = { origin = \"3\", scale = \"7\" }\n",
            "-2",
        ),
        // (1/4) 1 + (1/2) 2 + (1/4) 3.
        ("basis = \"bernstein\"\n", "2"),
    ] {
        let file = with_approximant(&format!(
            "{basis}pieces = [{{ on = [\"1\", \"5\"], coefficients = [\"1\", \"2\", \"3\"] }}]"
        ));
        assert_eq!(value(&pieces(&file)[0], "3"), number(expected), "{basis}");
        assert!(matches!(&pieces(&file)[0].stored, Stored::Coefficients(list) if list.len() == 3));
    }
}

#[test]
fn hermite_data_can_be_given_for_each_piece_and_scaled() {
    // 1 + x on [0, 2] and x^2 - 1 on [2, 6]: the scaled derivatives are 2 and 2, 16 and 48.
    let file = with_approximant(
        r#"basis = "hermite"
           scaling = "stored"
           pieces = [
             { on = [0, 2], left = ["1", "2"], right = ["3", "2"] },
             { on = [2, 6], left = ["3", "16"], right = ["35", "48"] },
           ]"#,
    );
    assert_eq!(value(&pieces(&file)[0], "1.5"), number("2.5"));
    assert_eq!(value(&pieces(&file)[1], "4"), number("15"));
    let knots = |scaling: &str, slope: &str| {
        with_approximant(&format!(
            "basis = \"hermite\"\n{scaling}knots = [\n\
             {{ at = 0, taylor = [\"0\", \"0\"] }},\n\
             {{ at = 2, taylor = [\"4\", \"{slope}\"] }},\n\
             {{ at = 4, taylor = [\"16\"] }},\n]"
        ))
    };
    for file in [knots("", "4"), knots("scaling = \"stored\"\n", "8")] {
        assert_eq!(value(&pieces(&file)[0], "1"), 1);
        assert_eq!(value(&pieces(&file)[1], "3"), 9);
    }
}

#[test]
fn irrational_ends_are_exact_and_keep_their_pieces_together() {
    let file = with_approximant(
        r#"basis = "power"
           variable = "unit"
           order = "ascending"
           pieces = [
             { on = ["-pi/4", "pi/4"], coefficients = ["1"] },
             { on = ["pi/4", "pi/2"], coefficients = ["1"] },
           ]"#,
    );
    let scale = &polynomial(&pieces(&file)[0]).scale;
    assert!(scale.as_rational().is_none());
    let (lower, upper) = scale.enclosure(128).unwrap();
    assert!(lower < number("1.5707963267948966193") && upper > number("1.5707963267948966192"));
    assert_eq!(file.claims[0].targets[0].on[0].text(), "-pi/4");
    let error = refusal(&format!(
        "{REFERENCE}[approximant]\nbasis = \"power\"\nvariable = \"x\"\norder = \"ascending\"\n\
         pieces = [{{ on = [\"0\", \"pi/4\"], coefficients = [\"1\"] }}]\n\
         {CLAIM}on = [\"0\", \"0.785398163397448309616\"]\n"
    ));
    assert!(
        error.contains("the claim leaves the domain of the pieces"),
        "{error}"
    );
}

#[test]
fn rounding_concerns_what_was_asked_and_is_counted() {
    let file = with_approximant(
        r#"basis = "power"
           variable = "x"
           order = "ascending"
           stored_as = "binary32"
           ends_stored_as = "binary16"
           owner = "left"
           pieces = [{ on = ["-0.1", "pi/4"], coefficients = ["0.1", "0.5", "0x1.0000001p0", "0x1.0000003p0"] }]"#,
    );
    let approximant = &file.approximants[0].approximant;
    assert_eq!(approximant.owner, Owner::Left);
    assert_eq!(approximant.storage_rounding.changed, 3);
    let piece = &approximant.pieces[0];
    assert_eq!(polynomial(piece).coefficients[0], number("0x1.99999ap-4"));
    assert_eq!(
        piece.written.as_ref().unwrap().coefficients[0],
        number("0.1")
    );
    assert_eq!(piece.on[0].as_rational(), Some(&number("-0x1.998p-4")));
    assert_eq!(piece.on[1].as_rational(), Some(&number("0x1.92p-1")));
    assert_eq!(
        file.claims[0].targets[0].on[1].as_rational(),
        Some(&number("0x1.92p-1"))
    );
    assert_eq!(file.notes.len(), 1);
    assert_eq!(file.notes[0].severity, Severity::Note);
    assert!(
        file.notes[0].found.contains("the first of 2"),
        "{}",
        file.notes[0]
    );
}

#[test]
fn the_ends_of_claims_are_rounded_like_those_of_the_pieces() {
    let text = format!(
        "{REFERENCE}[approximant]\nbasis = \"power\"\nvariable = \"x\"\norder = \"ascending\"\n\
         ends_stored_as = \"binary64\"\n\
         pieces = [{{ on = [\"-pi/4\", \"pi/4\"], coefficients = [\"1\"] }}]\n\
         {CLAIM}on = [\"-pi/4\", \"pi/4\"]\n"
    );
    let on = &parse(&text).claims[0].targets[0].on;
    assert_eq!(on[1].as_rational(), Some(&number("0x1.921fb54442d18p-1")));
}

#[test]
fn several_approximants_have_their_own_references_and_claims() {
    let piece = "basis = \"power\"\nvariable = \"x\"\norder = \"ascending\"\n\
                 pieces = [{ on = [\"0\", \"1\"], coefficients = [\"1\"] }]\n";
    let text = format!(
        "{REFERENCE}[[approximants]]\nid = \"low\"\n{piece}\
         [[approximants]]\nid = \"high\"\n{piece}\
         [approximants.reference]\nformula = \"cos(x)\"\n\
         {CLAIM}\n{CLAIM}approximant = \"high\"\nexcept = [[\"0.25\", \"0.25\"]]\n"
    );
    let file = parse(&text);
    assert_eq!(
        [0, 1].map(|position| file.reference_of(position).text()),
        ["exp(x)", "cos(x)"]
    );
    let targets = |claim: usize| -> Vec<usize> {
        file.claims[claim]
            .targets
            .iter()
            .map(|target| target.approximant)
            .collect()
    };
    assert_eq!(targets(0), [0, 1]);
    assert_eq!(targets(1), [1]);
    assert_eq!(file.claims[1].targets[0].except.len(), 1);
    let ids: Vec<&str> = file.claims.iter().map(|claim| claim.id.as_str()).collect();
    assert_eq!(ids, ["claim-1", "claim-2"]);
}

#[test]
fn a_mixed_claim_has_parts_and_a_default_bound() {
    let text = format!(
        "{REFERENCE}[approximant]\nbasis = \"bernstein\"\n\
         pieces = [{{ on = [\"0\", \"1\"], coefficients = [\"1\"] }}]\n\
         [[claims]]\nof = \"exact\"\nerror = \"mixed\"\n\
         absolute_part = \"1e-12\"\nrelative_part = \"1e-9\"\n"
    );
    let file = parse(&text);
    let ErrorMeasure::Mixed {
        absolute_part,
        relative_part,
    } = &file.claims[0].measure
    else {
        panic!("mixed was expected");
    };
    assert_eq!(
        (absolute_part, relative_part),
        (&number("1e-12"), &number("1e-9"))
    );
    assert_eq!(file.claims[0].at_most.as_ref().unwrap().text, "1");
}

#[test]
fn tables_in_other_files_are_read_once_and_listed() {
    let folder = tempfile::tempdir().expect("a folder");
    let table = r#"{ "model": { "knots": [
        { "at": "0", "taylor": ["0", "0"] }, { "at": "1", "taylor": ["1", "2"] } ] },
        "numbers": ["1", "2"] }"#;
    std::fs::create_dir(folder.path().join("data")).expect("a folder");
    std::fs::write(folder.path().join("data/table.json"), table).expect("written");
    let text = format!(
        "{REFERENCE}[[approximants]]\nid = \"a\"\nbasis = \"hermite\"\n\
         knots = {{ file = \"data/table.json\", key = \"model.knots\" }}\n\
         [[approximants]]\nid = \"b\"\nbasis = \"bernstein\"\npieces = [{{ on = [\"0\", \"1\"], \
         coefficients = {{ file = \"data/table.json\", key = \"numbers\" }} }}]\n{CLAIM}"
    );
    let path = folder.path().join("a.audit.toml");
    std::fs::write(&path, &text).expect("written");
    let file = read(&path, &ReadOptions::default()).expect("a good file");
    assert_eq!(
        value(&file.approximants[0].approximant.pieces[0], "1/2"),
        number("1/4")
    );
    assert_eq!(
        value(&file.approximants[1].approximant.pieces[0], "1/2"),
        number("3/2")
    );
    assert_eq!(file.inputs.len(), 2);
    assert_eq!(file.inputs[0].path, "a.audit.toml");
    assert_eq!(file.inputs[1].path, "data/table.json");
    assert_eq!(file.inputs[1].bytes, table.len() as u64);
    let without_folder =
        read_text("a.audit.toml", &text, None, &ReadOptions::default()).expect_err("no folder");
    assert!(
        without_folder[0]
            .render()
            .contains("this text has no folder")
    );
}

#[test]
fn the_digest_is_that_of_the_standard() {
    // FIPS 180-2, appendix B.1 (from memory).
    assert_eq!(
        Input::of("abc", b"abc").sha256,
        "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"
    );
}

#[test]
fn a_file_without_claims_is_accepted_where_none_are_needed() {
    let text = format!(
        "{REFERENCE}[approximant]\nbasis = \"bernstein\"\n\
         pieces = [{{ on = [\"0\", \"1\"], coefficients = [\"1\"] }}]\n"
    );
    assert!(refusal(&text).contains("`claims` is missing"));
    let options = ReadOptions {
        require_claims: false,
        ..ReadOptions::default()
    };
    let file = read_text("a.audit.toml", &text, None, &options).expect("no claims needed");
    assert!(file.claims.is_empty());
}

#[test]
fn steps_are_the_function_of_their_stored_constants() {
    let file = with_approximant(
        r#"basis = "steps"
           stored_as = "binary32"
           constants = { S1 = "-0x1.5555555555549p-3", S2 = "0.1", a = ["1", "0.5"] }
           steps = ["z : binary64 = x*x", "r = S1 + z*S2 + 2/3", "y = x + x*z*r*horner(a, z)"]
           on = ["-pi/4", "pi/4"]"#,
    );
    let approximant = &file.approximants[0].approximant;
    assert_eq!(approximant.storage_rounding.numbers, 4);
    assert_eq!(approximant.storage_rounding.changed, 2);
    let Basis::Steps { constants, steps } = &approximant.basis else {
        panic!("steps were expected");
    };
    let names: Vec<&str> = constants.iter().map(|(name, _)| name.as_str()).collect();
    assert_eq!(names, ["S1", "S2", "a"]);
    assert_eq!(steps[0].format.as_deref(), Some("binary64"));
    let Form::Formula(formula) = &approximant.pieces[0].form else {
        panic!("a formula was expected");
    };
    for (constant, present) in [
        ("0x1.99999ap-4", true),
        ("0.1", false),
        ("-0x1.555556p-3", true),
        ("2/3", true),
    ] {
        let operation = Operation::Rational(number(constant));
        assert_eq!(
            formula.operations().contains(&operation),
            present,
            "{constant}"
        );
    }
    // The hexadecimal literal that binary32 cannot hold, and the quotient of whole numbers.
    let notes: Vec<&str> = file.notes.iter().map(|note| note.title.as_str()).collect();
    assert_eq!(
        notes,
        [
            "all arithmetic here is real",
            "a hexadecimal literal is not a number of the storage format"
        ]
    );
    assert!(file.notes[0].found.contains("`2/3`"), "{}", file.notes[0]);
}

#[test]
fn twenty_thousand_pieces_are_read() {
    let mut text = format!(
        "{REFERENCE}{CLAIM}[approximant]\nbasis = \"power\"\nvariable = \"x-left\"\n\
         order = \"ascending\"\nstored_as = \"binary64\"\npieces = [\n"
    );
    for index in 0..20_000 {
        writeln!(
            text,
            "  {{ on = [\"{index}\", \"{}\"], coefficients = [\"0.1\", \"0x1.8p-3\", \"3\"] }},",
            index + 1
        )
        .expect("text");
    }
    text.push_str("]\n");
    assert_eq!(pieces(&parse(&text)).len(), 20_000);
}

#[test]
fn the_basis_is_kept_with_its_conventions() {
    let file = with_approximant(
        "basis = \"chebyshev\"\nfirst = \"halved\"\norder = \"descending\"\nparity = \"odd\"\n\
         pieces = [{ on = [\"-1\", \"1\"], coefficients = [\"3\", \"5\"] }]",
    );
    assert_eq!(file.approximants[0].approximant.basis.name(), "chebyshev");
    assert!(matches!(
        file.approximants[0].approximant.basis,
        Basis::Chebyshev { .. }
    ));
    // 5 T_1 + 3 T_3 at 1/2: 5/2 + 3 (4/8 - 3/2).
    assert_eq!(value(&pieces(&file)[0], "1/2"), number("-1/2"));
}

proptest! {
    #[test]
    fn damaged_files_never_panic(
        position in 0_usize..HERMITE.len(),
        length in 0_usize..20,
        inserted in "[\\[\\]{}\"'=,.0-9a-z \n#-]{0,6}",
    ) {
        let end = (position + length).min(HERMITE.len());
        let (Some(before), Some(after)) = (HERMITE.get(..position), HERMITE.get(end..)) else {
            return Ok(());
        };
        let text = format!("{before}{inserted}{after}");
        if let Err(errors) =
            read_text("a.audit.toml", &text, None, &ReadOptions::default())
        {
            prop_assert!(!errors.is_empty());
            for error in errors {
                prop_assert!(!error.render().is_empty());
            }
        }
    }
}
