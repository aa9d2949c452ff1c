//! The command line as its users and their scripts see it: exit codes, output, files written.

#[path = "command_line/folders.rs"]
mod folders;
#[path = "command_line/sandbox.rs"]
mod sandbox;
#[path = "command_line/terminal.rs"]
mod terminal;
#[path = "command_line/undefined.rs"]
mod undefined;

use boundmark::certificate::canonical;
use boundmark::certificate::model::{Certificate, Verdict};
use predicates::prelude::*;
use predicates::str::{contains, is_empty, starts_with};
use sandbox::{Audit, Sandbox};

#[test]
fn the_exit_code_says_whether_claims_hold() {
    let sandbox = Sandbox::new();
    sandbox.write("holds.audit.toml", Audit::holds());
    sandbox.write("fails.audit.toml", Audit::fails());
    sandbox.write("undecided.audit.toml", Audit::undecided());
    sandbox.write("measured.audit.toml", Audit::measured());
    sandbox.write("bad.audit.toml", "[reference]\nformula = \"sin(\"\n");
    for (files, code) in [
        (&["holds"][..], 0),
        (&["measured"], 0),
        (&["fails"], 1),
        (&["bad"], 2),
        (&["undecided"], 3),
        (&["holds", "measured"], 0),
        (&["holds", "undecided"], 3),
        (&["undecided", "fails"], 1),
        (&["fails", "undecided", "holds"], 1),
        (&["bad", "fails"], 2),
        (&["undecided", "bad"], 2),
    ] {
        let files: Vec<String> = files.iter().map(|f| format!("{f}.audit.toml")).collect();
        sandbox.audit(&files).assert().code(code);
    }
}

#[test]
fn the_summary_names_file_title_claim_verdict_and_bound() {
    let sandbox = Sandbox::new();
    sandbox.write("holds.audit.toml", Audit::holds());
    sandbox.write("fails.audit.toml", Audit::fails());
    sandbox.write("undecided.audit.toml", Audit::undecided());
    sandbox.write("measured.audit.toml", Audit::measured());
    sandbox
        .audit(["holds.audit.toml"])
        .assert()
        .stderr(is_empty())
        .stdout(
            starts_with("holds.audit.toml  Exponential\n")
                .and(contains(
                    "holds     accuracy: absolute error at most 2e-3; supremum in [",
                ))
                .and(contains("worst near x = ")),
        );
    sandbox
        .audit(["fails.audit.toml"])
        .assert()
        .stderr(is_empty())
        .stdout(
            contains("FAILS     accuracy: absolute error exceeds 1e-3; supremum in [")
                .and(contains("witness: x = "))
                .and(contains("approximant  in [").or(contains("approximant  1")))
                .and(contains("reference ")),
        );
    sandbox.audit(["undecided.audit.toml"]).assert().stdout(
        contains("UNDECIDED accuracy")
            .and(contains("is not decided"))
            .and(contains("why: ")),
    );
    sandbox
        .audit(["measured.audit.toml"])
        .assert()
        .stdout(contains(
            "measured  accuracy: absolute error has its supremum in [",
        ));
}

#[test]
fn a_bad_file_does_not_keep_the_others_from_being_audited() {
    let sandbox = Sandbox::new();
    sandbox.write("a-bad.audit.toml", "title = 3\n");
    sandbox.write("b-good.audit.toml", Audit::holds());
    sandbox
        .audit(["."])
        .assert()
        .code(2)
        .stderr(contains("a-bad.audit.toml:1:"))
        .stdout(contains("b-good.audit.toml").and(contains("holds     accuracy")));
}

#[test]
fn json_is_one_array_of_certificates_and_nothing_else() {
    let sandbox = Sandbox::new();
    sandbox.write("one/holds.audit.toml", Audit::holds());
    sandbox.write("two/fails.audit.toml", Audit::fails());
    sandbox.write("two/undecided.audit.toml", Audit::undecided());
    let assert = sandbox
        .audit([".", "--format", "json", "--out", "certificates"])
        .assert()
        .code(1)
        .stderr(is_empty());
    let output = &assert.get_output().stdout;
    let entries: serde_json::Value = serde_json::from_slice(output).expect("JSON");
    let entries = entries.as_array().expect("an array");
    let found: Vec<(String, Verdict)> = entries
        .iter()
        .map(|entry| {
            let path = entry["path"].as_str().expect("a path").to_owned();
            let certificate: Certificate =
                serde_json::from_value(entry["certificate"].clone()).expect("a certificate");
            let stem = path.strip_suffix(".audit.toml").expect("the ending");
            let written = sandbox.read(&format!("certificates/{stem}.certificate.json"));
            let canonical = canonical::bytes(&certificate).expect("canonical");
            assert!(written.as_bytes() == canonical, "{path}: two certificates");
            (path, certificate.claims[0].verdict)
        })
        .collect();
    let of = |path: &str| {
        found
            .iter()
            .find(|(p, _)| p.ends_with(path))
            .map(|(_, v)| *v)
    };
    assert_eq!(found.len(), 3);
    assert_eq!(of("one/holds.audit.toml"), Some(Verdict::Holds));
    assert_eq!(of("two/fails.audit.toml"), Some(Verdict::Fails));
    assert_eq!(of("two/undecided.audit.toml"), Some(Verdict::Undecided));
}

#[test]
fn json_stays_json_where_a_file_is_bad() {
    let sandbox = Sandbox::new();
    sandbox.write("bad.audit.toml", "title = 3\n");
    let assert = sandbox
        .audit(["bad.audit.toml", "--format", "json"])
        .assert()
        .code(2)
        .stderr(contains("bad.audit.toml:1:"));
    let entries: serde_json::Value =
        serde_json::from_slice(&assert.get_output().stdout).expect("JSON");
    assert_eq!(entries, serde_json::json!([]));
}

#[test]
fn wrong_usage_is_told_and_ends_with_2() {
    let sandbox = Sandbox::new();
    sandbox.write("a.audit.toml", Audit::holds());
    let cases: &[(&[&str], &str)] = &[
        (&[], "Usage: boundmark <COMMAND>"),
        (&["frobnicate"], "unrecognized subcommand 'frobnicate'"),
        (&["audit"], "<PATH>..."),
        (
            &["audit", "a.audit.toml", "--jobs", "0"],
            "0 is not in 1..=1024",
        ),
        (
            &["audit", "a.audit.toml", "--jobs", "1025"],
            "1025 is not in 1..=1024",
        ),
        (
            &["audit", "a.audit.toml", "--jobs", "many"],
            "invalid value 'many' for '--jobs <N>'",
        ),
        (
            &["audit", "a.audit.toml", "--effort", "0"],
            "0 is not in 1..=1000000",
        ),
        (
            &["audit", "a.audit.toml", "--effort", "1000001"],
            "1000001 is not in 1..=1000000",
        ),
        (
            &["audit", "a.audit.toml", "--effort=-1"],
            "invalid value '-1' for '--effort <N>'",
        ),
        (
            &["audit", "a.audit.toml", "--effort", "1.5"],
            "invalid value '1.5' for '--effort <N>'",
        ),
        (
            &["audit", "a.audit.toml", "--format", "yaml"],
            "possible values: text, json",
        ),
        (
            &["audit", "a.audit.toml", "--out"],
            "a value is required for '--out <DIR>'",
        ),
        (
            &["audit", "a.audit.toml", "--frob"],
            "unexpected argument '--frob' found",
        ),
    ];
    for (arguments, message) in cases {
        sandbox
            .command(*arguments)
            .assert()
            .code(2)
            .stdout(is_empty())
            .stderr(contains(*message));
    }
}

#[test]
fn the_limits_of_jobs_and_effort_are_allowed() {
    let sandbox = Sandbox::new();
    sandbox.write("a.audit.toml", Audit::holds());
    for option in [
        "--jobs=1",
        "--jobs=64",
        "--effort=1",
        "--effort=1000000",
        "--quiet",
        "-q",
    ] {
        sandbox.audit(["a.audit.toml", option]).assert().code(0);
    }
}

#[test]
fn results_do_not_depend_on_jobs() {
    let sandbox = Sandbox::new();
    sandbox.write("a.audit.toml", Audit::many_pieces(40));
    let summary = |jobs: &str| {
        let assert = sandbox
            .audit(["a.audit.toml", "--jobs", jobs, "--out", jobs])
            .assert()
            .code(0);
        let text = String::from_utf8(assert.get_output().stdout.clone()).expect("UTF-8");
        (text, sandbox.read(&format!("{jobs}/a.certificate.json")))
    };
    let one = summary("1");
    assert!(one == summary("2") && one == summary("7"));
}

#[test]
fn help_names_commands_exit_codes_and_options() {
    let sandbox = Sandbox::new();
    for arguments in [&["--help"][..], &["help"], &["-h"]] {
        sandbox
            .command(arguments)
            .assert()
            .code(0)
            .stderr(is_empty())
            .stdout(
                contains("Usage: boundmark <COMMAND>")
                    .and(contains("audit"))
                    .and(contains("Exit codes: 0 every claim holds"))
                    .and(contains("1 a claim fails"))
                    .and(contains("2 bad usage or input"))
                    .and(contains("3 nothing fails but a claim is undecided")),
            );
    }
    let mut help = sandbox.command(["audit", "--help"]).assert().code(0);
    for word in [
        "<PATH>...",
        "--out <DIR>",
        "NAME.certificate.json",
        "--format <FORMAT>",
        "text",
        "json",
        "--effort <N>",
        "--jobs <N>",
        "--quiet",
        "--allow-outside",
        "[reference]",
        "[approximant]",
        "[[claims]]",
        "hermite",
        "stored_as",
        "at_most",
    ] {
        help = help.stdout(contains(word));
    }
    sandbox
        .command(["--version"])
        .assert()
        .code(0)
        .stdout(format!("boundmark {}\n", env!("CARGO_PKG_VERSION")));
}

/// Whoever copies the example of the help must get an audit that works.
#[test]
fn the_example_of_the_help_is_an_audit_that_holds() {
    let sandbox = Sandbox::new();
    let assert = sandbox.command(["audit", "--help"]).assert().code(0);
    let help = String::from_utf8(assert.get_output().stdout.clone()).expect("UTF-8");
    let start = help.find("  [reference]").expect("an example");
    let end = help[start..].find("\nNumbers").expect("what follows it") + start;
    sandbox.write("example.audit.toml", &help[start..end]);
    sandbox
        .audit(["example.audit.toml"])
        .assert()
        .code(0)
        .stderr(is_empty())
        .stdout(contains("holds "));
}
