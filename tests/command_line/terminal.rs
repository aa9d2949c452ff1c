//! Colours and progress belong to terminals only.

use assert_cmd::Command;
use predicates::prelude::*;
use predicates::str::{contains, is_empty};

use crate::sandbox::{Audit, PROGRAM, Sandbox};

const ESCAPE: &str = "\u{1b}[";

fn sandbox() -> Sandbox {
    let sandbox = Sandbox::new();
    sandbox.write("holds.audit.toml", Audit::holds());
    sandbox.write("bad.audit.toml", "title = 3\n");
    sandbox.write("many.audit.toml", Audit::many_pieces(2000));
    sandbox
}

/// `boundmark audit` on a terminal: what it shows comes out of the command's standard output.
fn on_a_terminal(sandbox: &Sandbox, arguments: &[&str]) -> Command {
    const SPAWN: &str = "import os, pty, sys\n\
                         status = pty.spawn(sys.argv[1:])\n\
                         sys.exit(os.WEXITSTATUS(status))\n";
    let mut command = Command::new("python3");
    command.args(["-c", SPAWN, PROGRAM, "audit"]);
    command.args(arguments);
    let mut command = sandbox.prepared(command);
    command.env("TERM", "xterm-256color");
    command
}

#[test]
fn nothing_is_coloured_where_there_is_no_terminal() {
    let sandbox = sandbox();
    sandbox
        .audit(["holds.audit.toml", "bad.audit.toml"])
        .assert()
        .code(2)
        .stdout(contains("holds").and(contains(ESCAPE).not()))
        .stderr(contains("bad.audit.toml").and(contains(ESCAPE).not()));
    sandbox
        .audit(["holds.audit.toml", "nowhere.audit.toml"])
        .env("NO_COLOR", "1")
        .env("TERM", "xterm-256color")
        .assert()
        .code(2)
        .stdout(contains(ESCAPE).not())
        .stderr(contains(ESCAPE).not());
}

#[test]
fn colours_can_be_forced() {
    sandbox()
        .audit(["holds.audit.toml"])
        .env("CLICOLOR_FORCE", "1")
        .assert()
        .code(0)
        .stdout(contains(ESCAPE));
}

#[test]
fn json_is_never_coloured() {
    let assert = sandbox()
        .audit(["holds.audit.toml", "--format", "json"])
        .env("CLICOLOR_FORCE", "1")
        .assert()
        .code(0);
    serde_json::from_slice::<serde_json::Value>(&assert.get_output().stdout).expect("JSON");
}

#[cfg(unix)]
#[test]
fn a_terminal_shows_colours_unless_told_not_to() {
    let sandbox = sandbox();
    on_a_terminal(&sandbox, &["holds.audit.toml"])
        .assert()
        .code(0)
        .stdout(contains(ESCAPE).and(contains("holds")));
    on_a_terminal(&sandbox, &["holds.audit.toml"])
        .env("NO_COLOR", "1")
        .assert()
        .code(0)
        .stdout(contains(ESCAPE).not().and(contains("holds     accuracy")));
    on_a_terminal(&sandbox, &["bad.audit.toml"])
        .env("NO_COLOR", "1")
        .assert()
        .code(2)
        .stdout(contains(ESCAPE).not().and(contains("bad.audit.toml")));
}

#[cfg(unix)]
#[test]
fn progress_is_shown_on_a_terminal_unless_quiet() {
    let sandbox = sandbox();
    on_a_terminal(&sandbox, &["many.audit.toml"])
        .assert()
        .code(0)
        .stdout(contains("/2000 pieces"));
    for quiet in ["--quiet", "-q"] {
        on_a_terminal(&sandbox, &["many.audit.toml", quiet])
            .assert()
            .code(0)
            .stdout(contains("/2000 pieces").not().and(contains("holds")));
    }
    // Nothing of it without a terminal.
    sandbox
        .audit(["many.audit.toml"])
        .assert()
        .code(0)
        .stderr(is_empty());
}

/// `boundmark audit ... | head -1`: the reader goes away, the audit ends with its own exit code.
#[test]
fn a_closed_pipe_is_no_error() {
    let sandbox = sandbox();
    for format in ["text", "json"] {
        let mut child = std::process::Command::new(PROGRAM)
            .args(["audit", "many.audit.toml", "--format", format])
            .current_dir(sandbox.path("."))
            .stdout(std::process::Stdio::piped())
            .stderr(std::process::Stdio::piped())
            .spawn()
            .expect("the program starts");
        drop(child.stdout.take());
        let output = child.wait_with_output().expect("the program ends");
        assert_eq!(output.status.code(), Some(0), "{format}");
        assert_eq!(String::from_utf8_lossy(&output.stderr), "", "{format}");
    }
}
