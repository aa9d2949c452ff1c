//! Which files are audited, and what is written where.

use predicates::prelude::*;
use predicates::str::{contains, is_empty};

use crate::sandbox::{Audit, Sandbox};

#[test]
fn certificates_keep_the_subfolders() {
    let sandbox = Sandbox::new();
    sandbox.write("tables/top.audit.toml", Audit::holds());
    sandbox.write("tables/a/one.audit.toml", Audit::holds());
    sandbox.write("tables/a/b/two.audit.toml", Audit::fails());
    sandbox.write("tables/a/notes.toml", "x = 1\n");
    sandbox.write("tables/a/old.certificate.json", "{}");
    sandbox
        .audit(["tables", "--out", "new/out"])
        .assert()
        .code(1)
        .stderr(is_empty());
    assert_eq!(
        sandbox.files("new/out"),
        [
            "a/b/two.certificate.json",
            "a/one.certificate.json",
            "top.certificate.json"
        ]
    );
    // What was there before is there still, and nothing was added.
    assert_eq!(sandbox.files("tables").len(), 5);
}

#[test]
fn a_file_named_itself_goes_to_the_top_of_the_output_folder() {
    let sandbox = Sandbox::new();
    let path = sandbox.write("deep/below/name.audit.toml", Audit::holds());
    let path = path.to_str().expect("UTF-8");
    sandbox.audit([path, "--out", "out"]).assert().code(0);
    assert_eq!(sandbox.files("out"), ["name.certificate.json"]);
}

#[test]
fn certificates_may_lie_beside_their_audits_and_are_replaced() {
    let sandbox = Sandbox::new();
    sandbox.write("a/one.audit.toml", Audit::holds());
    sandbox.write("a/one.certificate.json", "an old one");
    sandbox.audit([".", "--out", "."]).assert().code(0);
    let first = sandbox.read("a/one.certificate.json");
    assert!(first.starts_with("{\"assumptions\":["));
    // Audited again with the certificate beside it: the same bytes.
    sandbox.audit([".", "--out", "."]).assert().code(0);
    assert_eq!(sandbox.read("a/one.certificate.json"), first);
    assert_eq!(
        sandbox.files("."),
        ["a/one.audit.toml", "a/one.certificate.json"]
    );
}

#[cfg(unix)]
#[test]
fn a_certificate_can_be_read_by_everybody() {
    use std::os::unix::fs::PermissionsExt;
    let sandbox = Sandbox::new();
    sandbox.write("one.audit.toml", Audit::holds());
    sandbox.audit([".", "--out", "out"]).assert().code(0);
    let metadata = std::fs::metadata(sandbox.path("out/one.certificate.json")).expect("written");
    assert_eq!(metadata.permissions().mode() & 0o777, 0o644);
}

#[test]
fn toml_and_json_say_the_same() {
    let sandbox = Sandbox::new();
    sandbox.write("a.audit.toml", Audit::holds());
    sandbox.write(
        "b.audit.json",
        r#"{"title": "Exponential", "reference": {"formula": "exp(x)"},
            "approximant": {"basis": "power", "variable": "x", "order": "ascending",
              "pieces": [{"on": ["0", "0.25"], "coefficients": ["1", "1", "0.52"]}]},
            "claims": [{"id": "accuracy", "of": "exact", "error": "absolute", "at_most": "2e-3"}]}"#,
    );
    sandbox.audit([".", "--out", "out"]).assert().code(0);
    let certificate = |name: &str| -> serde_json::Value {
        let text = sandbox.read(&format!("out/{name}.certificate.json"));
        serde_json::from_str(&text).expect("JSON")
    };
    let (mut a, mut b) = (certificate("a"), certificate("b"));
    assert_ne!(a["inputs"], b["inputs"]);
    a["inputs"].take();
    b["inputs"].take();
    assert_eq!(a, b);
}

#[test]
fn equal_names_are_refused_before_anything_is_written() {
    let sandbox = Sandbox::new();
    sandbox.write("a/same.audit.toml", Audit::holds());
    sandbox.write("b/same.audit.toml", Audit::fails());
    sandbox.write("c/same.audit.toml", Audit::holds());
    sandbox.write("c/same.audit.json", "{}");
    let pairs: [&[&str]; 3] = [
        &["a/same.audit.toml", "b/same.audit.toml"],
        &["a", "b"],
        &["c"],
    ];
    for pair in pairs {
        sandbox
            .audit(pair)
            .args(["--out", "out"])
            .assert()
            .code(2)
            .stdout(is_empty())
            .stderr(contains("would both write same.certificate.json").and(contains("rename one")));
        assert!(!sandbox.path("out").exists());
    }
    // In sub-folders of one folder they are kept apart.
    std::fs::remove_file(sandbox.path("c/same.audit.json")).expect("removed");
    sandbox.audit([".", "--out", "out"]).assert().code(1);
    assert_eq!(sandbox.files("out").len(), 3);
}

#[test]
fn missing_files_and_empty_folders_are_named() {
    let sandbox = Sandbox::new();
    std::fs::create_dir(sandbox.path("empty")).expect("a folder");
    std::fs::create_dir(sandbox.path("folder.audit.toml")).expect("a folder");
    sandbox.write("other/readme.txt", "nothing to audit");
    sandbox
        .audit(["nowhere.audit.toml"])
        .assert()
        .code(2)
        .stdout(is_empty())
        .stderr(contains("nowhere.audit.toml").and(contains("the file cannot be read")));
    for folder in ["empty", "other", "folder.audit.toml"] {
        sandbox
            .audit([folder])
            .assert()
            .code(2)
            .stdout(is_empty())
            .stderr(contains(format!(
                "{folder}: no audit file below this folder"
            )));
    }
}

#[test]
fn a_file_that_is_no_text_is_refused() {
    let sandbox = Sandbox::new();
    sandbox.write("a.audit.toml", b"title = \"\xff\"\n");
    sandbox
        .audit(["a.audit.toml"])
        .assert()
        .code(2)
        .stderr(contains("not valid UTF-8"));
}

#[test]
fn files_outside_of_the_folder_need_leave() {
    let sandbox = Sandbox::new();
    sandbox.write("table.json", "[\"1\", \"1\", \"0.52\"]");
    let text = Audit::holds().replace("[\"1\", \"1\", \"0.52\"]", "{ file = \"../table.json\" }");
    assert!(text.contains("../table.json"));
    sandbox.write("inside/a.audit.toml", text);
    sandbox
        .audit(["inside"])
        .assert()
        .code(2)
        .stderr(contains("--allow-outside").and(contains("table.json")));
    sandbox
        .audit(["inside", "--allow-outside", "--out", "out"])
        .assert()
        .code(0);
    let certificate = sandbox.read("out/a.certificate.json");
    assert!(certificate.contains("\"path\":\"../table.json\""));
}

#[cfg(unix)]
#[test]
fn a_file_that_may_not_be_read_is_named() {
    use crate::sandbox::set_mode;
    let sandbox = Sandbox::new();
    let path = sandbox.write("secret.audit.toml", Audit::holds());
    set_mode(&path, 0o000);
    sandbox
        .audit_unprivileged(&["secret.audit.toml"])
        .assert()
        .code(2)
        .stdout(is_empty())
        .stderr(contains("secret.audit.toml").and(contains("Permission denied")));
    let folder = sandbox.path("closed");
    std::fs::create_dir(&folder).expect("a folder");
    set_mode(&folder, 0o000);
    sandbox
        .audit_unprivileged(&["closed"])
        .assert()
        .code(2)
        .stderr(contains("closed").and(contains("Permission denied")));
    set_mode(&folder, 0o755);
}

#[cfg(unix)]
#[test]
fn an_output_folder_that_may_not_be_written_leaves_the_old_certificate() {
    use crate::sandbox::set_mode;
    let sandbox = Sandbox::new();
    sandbox.write("one.audit.toml", Audit::holds());
    sandbox.write("out/one.certificate.json", "the old one");
    let folder = sandbox.path("out");
    set_mode(&folder, 0o555);
    sandbox
        .audit_unprivileged(&["one.audit.toml", "--out", "out"])
        .assert()
        .code(2)
        .stderr(
            contains("the certificate could not be written")
                .and(contains("Permission denied"))
                .and(contains("out")),
        );
    set_mode(&folder, 0o755);
    assert_eq!(sandbox.files("out"), ["one.certificate.json"]);
    assert_eq!(sandbox.read("out/one.certificate.json"), "the old one");
}

#[test]
fn an_output_folder_that_is_a_file_is_refused() {
    let sandbox = Sandbox::new();
    sandbox.write("one.audit.toml", Audit::holds());
    sandbox.write("out", "a file");
    sandbox
        .audit(["one.audit.toml", "--out", "out"])
        .assert()
        .code(2)
        .stderr(contains("the certificate could not be written"));
    assert_eq!(sandbox.read("out"), "a file");
}

#[test]
fn a_folder_in_the_place_of_a_certificate_is_left_alone() {
    let sandbox = Sandbox::new();
    sandbox.write("one.audit.toml", Audit::holds());
    sandbox.write("out/one.certificate.json/keep.txt", "kept");
    sandbox
        .audit(["one.audit.toml", "--out", "out"])
        .assert()
        .code(2)
        .stderr(contains("one.certificate.json"));
    assert_eq!(sandbox.files("out"), ["one.certificate.json/keep.txt"]);
}

/// The disk is full in the middle of a certificate: here a limit on the size of a file.
#[cfg(unix)]
#[test]
fn a_write_that_breaks_off_leaves_the_old_certificate() {
    use crate::sandbox::PROGRAM;
    let sandbox = Sandbox::new();
    sandbox.write("one.audit.toml", Audit::many_pieces(60));
    sandbox.write("out/one.certificate.json", "the old one");
    let mut shell = assert_cmd::Command::new("sh");
    // Ignored, the signal of the limit becomes an error of the write. Blocks have 512 or 1024 bytes.
    shell.args([
        "-c",
        "trap '' XFSZ; ulimit -f 8; exec \"$0\" \"$@\"",
        PROGRAM,
    ]);
    shell.args(["audit", "one.audit.toml", "--out", "out"]);
    sandbox
        .prepared(shell)
        .assert()
        .code(2)
        .stderr(contains("the certificate could not be written").and(contains("too large")));
    assert_eq!(sandbox.files("out"), ["one.certificate.json"]);
    assert_eq!(sandbox.read("out/one.certificate.json"), "the old one");
    // Without the limit it is written, and would not have fitted.
    sandbox
        .audit(["one.audit.toml", "--out", "out"])
        .assert()
        .code(0);
    assert!(sandbox.read("out/one.certificate.json").len() > 8 * 1024);
}
