//! Every way to write an audit file wrong that we could think of, and what the user is told.
//!
//! One small file for each case in `tests/data/bad`; inputs that are too large or too strange for
//! a file of their own are made here.

use std::collections::BTreeSet;
use std::path::{Path, PathBuf};

use boundmark::audit::diagnostic::Diagnostic;
use boundmark::audit::file::{ReadOptions, read, read_text};

/// A file, the line that its first message points at (where the case is about the place), and a
/// part of the rendered message.
struct Case {
    file: &'static str,
    line: Option<usize>,
    message: &'static str,
}

#[rustfmt::skip]
const CASES: &[Case] = &[
    Case { file: "bare-float.audit.toml", line: None, message: r#"write it in quotes: "1e-3""# },
    Case { file: "bare-float-coefficient.audit.toml", line: None, message: "in `approximant.pieces[1].coefficients[2]`" },
    Case { file: "not-a-number.audit.toml", line: None, message: "this is not a finite number" },
    Case { file: "infinite.audit.toml", line: None, message: "this is not a finite number" },
    Case { file: "bare-infinity.audit.toml", line: None, message: "this is not a finite number" },
    Case { file: "garbled-number.audit.toml", line: None, message: "this is not an exact number" },
    Case { file: "number-of-wrong-kind.audit.toml", line: None, message: "a number is needed here" },
    Case { file: "unknown-key.audit.toml", line: None, message: "did you mean `at_most`?" },
    Case { file: "unknown-top-key.audit.toml", line: None, message: "did you mean `title`?" },
    Case { file: "unknown-program-key.audit.toml", line: None, message: "did you mean `format`?" },
    Case { file: "program-contraction.audit.toml", line: None, message: "an unknown word" },
    Case { file: "missing-reference.audit.toml", line: None, message: "`reference` is missing" },
    Case { file: "missing-formula.audit.toml", line: None, message: "`formula` is missing" },
    Case { file: "missing-approximant.audit.toml", line: None, message: "`approximant` is missing" },
    Case { file: "missing-basis.audit.toml", line: None, message: "`basis` is missing" },
    Case { file: "missing-variable.audit.toml", line: None, message: "`variable` is missing" },
    Case { file: "missing-order.audit.toml", line: None, message: "`order` is missing" },
    Case { file: "missing-first.audit.toml", line: None, message: "`first` is missing" },
    Case { file: "missing-pieces.audit.toml", line: None, message: "`pieces` is missing" },
    Case { file: "missing-coefficients.audit.toml", line: None, message: "`coefficients` is missing" },
    Case { file: "missing-on.audit.toml", line: None, message: "`on` is missing" },
    Case { file: "missing-claims.audit.toml", line: None, message: "`claims` is missing" },
    Case { file: "missing-of.audit.toml", line: None, message: "`of` is missing" },
    Case { file: "missing-error.audit.toml", line: None, message: "`error` is missing" },
    Case { file: "claims-as-table.audit.toml", line: None, message: "an array is needed here" },
    Case { file: "unknown-basis.audit.toml", line: None, message: r#"did you mean "power"?"# },
    Case { file: "key-of-another-basis.audit.toml", line: None, message: "a key of another basis" },
    Case { file: "chebyshev-on-x.audit.toml", line: None, message: "an unknown word" },
    Case { file: "zero-scale.audit.toml", line: None, message: "the scale is 0" },
    Case { file: "empty-pieces.audit.toml", line: None, message: "at least 1 must stand here" },
    Case { file: "empty-coefficients.audit.toml", line: None, message: "the list is empty" },
    Case { file: "too-many-coefficients.audit.toml", line: None, message: "the list is too long" },
    Case { file: "gap.audit.toml", line: Some(12), message: "there is a gap between two pieces" },
    Case { file: "overlap.audit.toml", line: Some(12), message: "two pieces overlap" },
    Case { file: "unordered.audit.toml", line: Some(12), message: "the pieces are not in ascending order" },
    Case { file: "repeated-piece.audit.toml", line: Some(12), message: "two pieces overlap" },
    Case { file: "undecided-ends.audit.toml", line: Some(12), message: "it cannot be decided whether two ends are equal" },
    Case { file: "reversed-piece.audit.toml", line: None, message: "the interval is reversed" },
    Case { file: "point-piece.audit.toml", line: None, message: "the interval is a single point" },
    Case { file: "three-ends.audit.toml", line: None, message: "an interval has two ends" },
    Case { file: "end-with-variable.audit.toml", line: None, message: "this is not a constant" },
    Case { file: "collapsed-by-rounding.audit.toml", line: None, message: "the ends coincide after rounding" },
    Case { file: "overflow.audit.toml", line: None, message: "the number overflows binary16" },
    Case { file: "overflowing-end.audit.toml", line: None, message: "the number overflows binary16" },
    Case { file: "unknown-format.audit.toml", line: None, message: "an unknown word" },
    Case { file: "one-knot.audit.toml", line: None, message: "at least 2 must stand here" },
    Case { file: "repeated-knot.audit.toml", line: Some(11), message: "a knot is repeated" },
    Case { file: "unordered-knots.audit.toml", line: Some(10), message: "the knots are not in ascending order" },
    Case { file: "knot-without-orders.audit.toml", line: None, message: "the list is empty" },
    Case { file: "knot-without-taylor.audit.toml", line: None, message: "`taylor` is missing" },
    Case { file: "knots-and-pieces.audit.toml", line: None, message: "`knots` and `pieces` exclude each other" },
    Case { file: "irrational-knot.audit.toml", line: None, message: "needs rational knots" },
    Case { file: "stored-scaling-unequal.audit.toml", line: None, message: "stored scaling needs equal widths" },
    Case { file: "claim-outside.audit.toml", line: None, message: "the claim leaves the domain of the pieces" },
    Case { file: "claim-reversed.audit.toml", line: None, message: "the interval is reversed" },
    Case { file: "exception-reversed.audit.toml", line: None, message: "the interval is reversed" },
    Case { file: "negative-bound.audit.toml", line: None, message: "a bound cannot be negative" },
    Case { file: "mixed-without-parts.audit.toml", line: None, message: "`absolute_part` is missing" },
    Case { file: "mixed-zero-parts.audit.toml", line: None, message: "both parts of the mixed error are 0" },
    Case { file: "parts-without-mixed.audit.toml", line: None, message: "a key of another error measure" },
    Case { file: "repeated-claim-id.audit.toml", line: None, message: "two claims have the same id" },
    Case { file: "unknown-approximant.audit.toml", line: None, message: r#"did you mean "approximant"?"# },
    Case { file: "empty-id.audit.toml", line: None, message: "this is not a name" },
    Case { file: "computed-claim.audit.toml", line: None, message: "claims about the computed value are not supported yet by this version" },
    Case { file: "ulp-claim.audit.toml", line: None, message: "not supported yet by this version" },
    Case { file: "derivative-claim.audit.toml", line: None, message: "claims about derivatives and integrals are not supported yet by this version" },
    Case { file: "property-claim.audit.toml", line: None, message: "claims about a property are not supported yet by this version" },
    Case { file: "differential-equation.audit.toml", line: Some(2), message: "references given by a differential equation are not supported yet by this version" },
    Case { file: "inverse-reference.audit.toml", line: Some(2), message: "not supported yet by this version" },
    Case { file: "bad-formula.audit.toml", line: Some(4), message: "this is not a formula" },
    Case { file: "two-spellings-of-approximant.audit.toml", line: None, message: "`approximant` and `approximants` exclude each other" },
    Case { file: "repeated-approximant-id.audit.toml", line: None, message: "two approximations have the same id" },
    Case { file: "approximant-without-id.audit.toml", line: None, message: "`id` is missing" },
    Case { file: "approximant-without-reference.audit.toml", line: None, message: "`reference` is missing" },
    Case { file: "repeated-key.audit.toml", line: None, message: "a key stands twice in one table" },
    Case { file: "unclosed.audit.toml", line: None, message: "this is not TOML" },
    Case { file: "empty.audit.toml", line: Some(1), message: "`approximant` is missing" },
    Case { file: "comment.audit.json", line: Some(2), message: "JSON has no comments" },
    Case { file: "trailing-comma.audit.json", line: Some(2), message: "remove the comma" },
    Case { file: "repeated-key.audit.json", line: Some(3), message: "a key stands twice in one table" },
    Case { file: "bare-float.audit.json", line: Some(4), message: r#"write it in quotes: "5e-1""# },
    Case { file: "null.audit.json", line: Some(2), message: "a string is needed here" },
    Case { file: "array.audit.json", line: Some(1), message: "a table is needed here" },
    Case { file: "parent-folder.audit.toml", line: None, message: "the path leaves the folder of the audit file" },
    Case { file: "absolute-path.audit.toml", line: None, message: "the path leaves the folder of the audit file" },
    Case { file: "missing-file.audit.toml", line: None, message: "the file cannot be read" },
    Case { file: "folder-as-file.audit.toml", line: None, message: "this is not a regular file" },
    Case { file: "missing-key-in-file.audit.toml", line: None, message: "did you mean `pieces`?" },
    Case { file: "not-an-array-in-file.audit.toml", line: None, message: "an array is needed here" },
    Case { file: "bad-number-in-file.audit.toml", line: Some(4), message: "in `pieces[1].coefficients[2]`" },
    Case { file: "broken-table.audit.toml", line: Some(2), message: "this is not JSON" },
    Case { file: "source-file.audit.toml", line: None, message: "numbers from source code, archives and columns are not supported yet" },
    Case { file: "archive.audit.toml", line: None, message: "tables in files other than JSON (.json) are not supported yet" },
    Case { file: "steps-unknown-name.audit.toml", line: Some(9), message: "these steps cannot be read" },
    Case { file: "steps-without-assignment.audit.toml", line: Some(9), message: "write name = expression" },
    Case { file: "steps-reserved-constant.audit.toml", line: Some(8), message: "`pi` has a fixed meaning" },
    Case { file: "steps-unknown-format.audit.toml", line: Some(9), message: r#"did you mean "binary32"?"# },
    Case { file: "steps-empty.audit.toml", line: Some(9), message: "there are no steps" },
    Case { file: "steps-missing.audit.toml", line: None, message: "`steps` is missing" },
    Case { file: "steps-without-domain.audit.toml", line: None, message: "`on` is missing" },
    Case { file: "steps-second-argument.audit.toml", line: Some(11), message: "not supported yet by this version" },
    Case { file: "steps-bare-float.audit.toml", line: Some(8), message: r#"write it in quotes: "0.5""# },
    Case { file: "program-format.audit.toml", line: Some(18), message: "an unknown format" },
    Case { file: "integer-too-long.audit.toml", line: Some(10), message: "put the number in quotes" },
    Case { file: "end-without-value.audit.toml", line: Some(10), message: "this constant is not proved to have a value" },
    Case { file: "piece-without-brackets.audit.toml", line: Some(10), message: "an array is needed here" },
];

fn folder() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/data/bad")
}

fn errors(file: &str) -> Vec<Diagnostic> {
    match read(&folder().join(file), &ReadOptions::default()) {
        Ok(_) => panic!("{file} was accepted"),
        Err(errors) => errors,
    }
}

#[test]
fn every_case_is_refused_with_its_message_at_its_place() {
    let mut failures = Vec::new();
    for case in CASES {
        let errors = errors(case.file);
        let rendered = errors
            .iter()
            .map(Diagnostic::render)
            .collect::<Vec<_>>()
            .join("\n");
        let line = errors
            .first()
            .and_then(|error| error.place.as_ref())
            .map(|place| place.line);
        if !rendered.contains(case.message) || (case.line.is_some() && line != case.line) {
            failures.push(format!(
                "{} (line {line:?}, wanted {:?} with {:?}):\n{rendered}",
                case.file, case.line, case.message
            ));
        }
    }
    assert!(failures.is_empty(), "{}", failures.join("\n\n"));
}

#[test]
fn every_message_has_a_place_and_says_what_to_write() {
    for case in CASES {
        for error in errors(case.file) {
            assert!(error.place.is_some(), "{}: {error}", case.file);
            assert!(!error.advice.is_empty(), "{}: {error}", case.file);
        }
    }
}

#[test]
fn the_folder_holds_the_cases_and_nothing_else() {
    let listed: BTreeSet<String> = CASES.iter().map(|case| case.file.to_owned()).collect();
    assert_eq!(listed.len(), CASES.len(), "a file is listed twice");
    let present: BTreeSet<String> = std::fs::read_dir(folder())
        .expect("the folder")
        .map(|entry| {
            entry
                .expect("an entry")
                .file_name()
                .to_string_lossy()
                .into_owned()
        })
        .filter(|name| name.contains(".audit."))
        .collect();
    assert_eq!(present, listed);
}

#[test]
fn all_errors_of_a_file_are_reported_at_once_up_to_twenty() {
    let coefficients = "0.5, ".repeat(500);
    let text = format!(
        "[reference]\nformula = \"x\"\n[approximant]\nbasis = \"power\"\nvariable = \"x\"\n\
         order = \"ascending\"\npieces = [{{ on = [\"0\", \"1\"], coefficients = [{coefficients}] }}]\n"
    );
    let errors =
        read_text("many.audit.toml", &text, None, &ReadOptions::default()).expect_err("floats");
    assert_eq!(errors.len(), 20);
    // 500 floats and the missing claims.
    assert!(
        errors[19].advice.contains("481 more errors"),
        "{}",
        errors[19]
    );
}

#[test]
fn a_million_errors_take_no_longer_than_twenty() {
    let pieces = "{\"on\":[\"(\",1],\"x\":0},".repeat(300_000);
    let text = format!(
        "{{\"approximant\":{{\"basis\":\"bernstein\",\"pieces\":[{pieces}0]}},\"claims\":[]}}"
    );
    let errors =
        read_text("many.audit.json", &text, None, &ReadOptions::default()).expect_err("errors");
    assert_eq!(errors.len(), 20);
}

#[test]
fn a_nest_of_a_million_brackets_is_an_error_in_either_syntax() {
    for (name, text) in [
        ("deep.audit.toml", format!("a = {}", "[".repeat(1_000_000))),
        ("deep.audit.json", "[".repeat(1_000_000)),
        ("deep.audit.json", "{\"a\":".repeat(1_000_000)),
    ] {
        let errors =
            read_text(name, &text, None, &ReadOptions::default()).expect_err("a deep nest");
        assert_eq!(errors[0].title, "the file is nested too deeply");
    }
}

#[test]
fn a_formula_of_a_million_parentheses_is_an_error() {
    let nest = format!("{}x{}", "(".repeat(1_000_000), ")".repeat(1_000_000));
    let text = format!("[reference]\nformula = \"{nest}\"\n");
    assert!(read_text("deep.audit.toml", &text, None, &ReadOptions::default()).is_err());
    let text = format!(
        "[approximant]\nbasis = \"power\"\nvariable = \"x\"\norder = \"ascending\"\n\
         pieces = [{{ on = [\"0\", \"{}1{}\"], coefficients = [1] }}]\n",
        "(".repeat(1_000_000),
        ")".repeat(1_000_000)
    );
    assert!(read_text("deep.audit.toml", &text, None, &ReadOptions::default()).is_err());
}

#[test]
fn invalid_utf_8_and_huge_files_are_errors() {
    let folder = tempfile::tempdir().expect("a folder");
    let path = folder.path().join("latin.audit.toml");
    std::fs::write(&path, b"title = \"caf\xe9\"\n").expect("written");
    let errors = read(&path, &ReadOptions::default()).expect_err("not UTF-8");
    assert!(
        errors[0].render().contains("byte 12 is 0xe9"),
        "{}",
        errors[0]
    );

    let options = ReadOptions {
        maximum_bytes: 10,
        ..ReadOptions::default()
    };
    let errors = read(&path, &options).expect_err("too large");
    assert!(
        errors[0].render().contains("the limit is 10"),
        "{}",
        errors[0]
    );
    assert!(read(&folder.path().join("absent.audit.toml"), &options).is_err());
    assert!(read(folder.path(), &ReadOptions::default()).is_err());
}

#[cfg(unix)]
#[test]
fn a_link_that_leads_outside_is_refused_unless_it_is_allowed() {
    let outside = tempfile::tempdir().expect("a folder");
    let inside = tempfile::tempdir().expect("a folder");
    std::fs::write(
        outside.path().join("table.json"),
        "[{\"on\": [0, 1], \"coefficients\": [\"1\"]}]",
    )
    .expect("written");
    std::os::unix::fs::symlink(outside.path(), inside.path().join("link")).expect("a link");
    let path = inside.path().join("a.audit.toml");
    let text = "[reference]\nformula = \"x\"\n[approximant]\nbasis = \"power\"\nvariable = \"x\"\n\
                order = \"ascending\"\npieces = { file = \"link/table.json\" }\n\
                [[claims]]\nof = \"exact\"\nerror = \"absolute\"\n";
    std::fs::write(&path, text).expect("written");
    let errors = read(&path, &ReadOptions::default()).expect_err("outside");
    assert!(
        errors[0].render().contains("a symbolic link leads outside"),
        "{}",
        errors[0]
    );
    let options = ReadOptions {
        allow_outside: true,
        ..ReadOptions::default()
    };
    let file = read(&path, &options).expect("allowed");
    let paths: Vec<&str> = file
        .inputs
        .iter()
        .map(|input| input.path.as_str())
        .collect();
    assert_eq!(paths, ["a.audit.toml", "link/table.json"]);
}
