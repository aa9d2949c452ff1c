//! The worked audits of `certificates/`, proved again: the certificates are the same bytes for
//! every number of threads and every folder, they are the committed ones, and the one audit that is
//! meant to fail fails.

use std::collections::BTreeMap;
use std::path::{Path, PathBuf};
use std::sync::OnceLock;

use boundmark::audit::file::{self, ReadOptions};
use boundmark::audit::run;
use boundmark::certificate::model::{Certificate, Verdict};
use boundmark::certificate::{build, canonical};
use boundmark::cli::discover::{Found, audit_files};

/// The negative control.
const MEANT_TO_FAIL: &str = "partial-tuner-edited";

fn folder() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("certificates")
}

fn worked_audits() -> Vec<Found> {
    let found = audit_files(&[folder()]).expect("the folder holds audits");
    assert!(found.len() >= 7, "only {} worked audits", found.len());
    found
}

fn name(audit: &Found) -> String {
    audit
        .certificate
        .display()
        .to_string()
        .replace(".certificate.json", "")
}

fn prove(path: &Path, threads: usize) -> Certificate {
    let pool = rayon::ThreadPoolBuilder::new()
        .num_threads(threads)
        .build()
        .expect("a pool of threads");
    pool.install(|| {
        let file = file::read(path, &ReadOptions::default())
            .unwrap_or_else(|errors| panic!("{}: {}", path.display(), errors[0]));
        let outcomes = run::run(&file, 1, &|_| (), &|| ())
            .unwrap_or_else(|error| panic!("{}: {error:?}", path.display()));
        build::certificate(&file, &outcomes)
    })
}

fn bytes(certificate: &Certificate) -> String {
    let bytes = canonical::bytes(certificate).expect("a certificate is JSON");
    String::from_utf8(bytes).expect("JSON is UTF-8")
}

/// The certificates proved on one thread, by name.
fn certificates() -> &'static BTreeMap<String, Certificate> {
    static PROVED: OnceLock<BTreeMap<String, Certificate>> = OnceLock::new();
    PROVED.get_or_init(|| {
        worked_audits()
            .iter()
            .map(|audit| (name(audit), prove(&audit.path, 1)))
            .collect()
    })
}

/// Where two texts part, with what surrounds the place.
fn first_difference(one: &str, other: &str) -> String {
    let at = one
        .bytes()
        .zip(other.bytes())
        .position(|(a, b)| a != b)
        .unwrap_or(one.len().min(other.len()));
    let around = |text: &str| {
        let cut = &text.as_bytes()[at.saturating_sub(80)..text.len().min(at + 40)];
        String::from_utf8_lossy(cut).into_owned()
    };
    format!("byte {at}:\n  {}\n  {}", around(one), around(other))
}

#[test]
fn certificates_do_not_depend_on_the_number_of_threads() {
    for audit in worked_audits() {
        let one = bytes(&certificates()[&name(&audit)]);
        for threads in [2, 5] {
            let several = bytes(&prove(&audit.path, threads));
            assert!(
                one == several,
                "{}: 1 and {threads} threads differ at {}",
                name(&audit),
                first_difference(&one, &several)
            );
        }
    }
}

#[test]
fn certificates_do_not_depend_on_the_folder() {
    let elsewhere = tempfile::tempdir().expect("a folder");
    for audit in worked_audits() {
        let here = audit.path.parent().expect("a folder");
        let there = elsewhere.path().join("a").join(name(&audit));
        std::fs::create_dir_all(&there).expect("a folder");
        for entry in std::fs::read_dir(here).expect("the folder can be read") {
            let path = entry.expect("an entry").path();
            if path.is_file() {
                std::fs::copy(&path, there.join(path.file_name().expect("a name")))
                    .expect("a copy");
            }
        }
        let copy = there.join(audit.path.file_name().expect("a name"));
        let one = bytes(&certificates()[&name(&audit)]);
        let other = bytes(&prove(&copy, 2));
        assert!(
            one == other,
            "{}: another folder makes a difference at {}",
            name(&audit),
            first_difference(&one, &other)
        );
    }
}

#[test]
fn committed_certificates_are_the_ones_proved() {
    let mut problems = Vec::new();
    for audit in worked_audits() {
        let path = folder().join(&audit.certificate);
        let proved = bytes(&certificates()[&name(&audit)]);
        match std::fs::read_to_string(&path) {
            Ok(committed) if committed == proved => {}
            Ok(committed) => problems.push(format!(
                "{} is not what is proved now; from {}",
                audit.certificate.display(),
                first_difference(&committed, &proved)
            )),
            Err(error) => problems.push(format!("{}: {error}", audit.certificate.display())),
        }
    }
    assert!(
        problems.is_empty(),
        "`make certificates` writes them anew; look at `git diff` before committing\n{}",
        problems.join("\n")
    );
}

#[test]
fn every_committed_certificate_has_its_audit() {
    let mut found = Vec::new();
    let mut folders = vec![folder()];
    while let Some(folder) = folders.pop() {
        for entry in std::fs::read_dir(folder).expect("the folder can be read") {
            let path = entry.expect("an entry").path();
            if path.is_dir() {
                folders.push(path);
            } else if path.to_string_lossy().ends_with(".certificate.json") {
                found.push(path);
            }
        }
    }
    let expected: Vec<PathBuf> = worked_audits()
        .iter()
        .map(|audit| folder().join(&audit.certificate))
        .collect();
    for path in found {
        assert!(expected.contains(&path), "{} is left over", path.display());
    }
}

#[test]
fn only_the_damaged_table_fails() {
    let mut failing = 0;
    for (name, certificate) in certificates() {
        let meant_to_fail = name.ends_with(MEANT_TO_FAIL);
        let mut verdicts = certificate.claims.iter().map(|claim| claim.verdict);
        if meant_to_fail {
            failing += 1;
            assert!(
                verdicts.all(|verdict| verdict == Verdict::Fails),
                "a claim of {name} does not fail"
            );
            for claim in &certificate.claims {
                let witness = claim
                    .witness
                    .as_ref()
                    .expect("a claim that fails has a witness");
                let worst = claim.worst_at.as_ref().expect("and a worst argument");
                assert_eq!(witness.at.piece, worst.piece, "{name}: {}", claim.id);
            }
        } else {
            assert!(
                verdicts.all(|verdict| matches!(verdict, Verdict::Holds | Verdict::Measured)),
                "a claim of {name} does not hold"
            );
            assert!(
                certificate
                    .claims
                    .iter()
                    .any(|claim| claim.verdict == Verdict::Holds),
                "no claim of {name} is decided"
            );
        }
    }
    assert_eq!(failing, 1, "{MEANT_TO_FAIL} is missing");
}

/// A certificate is read back as it was written: nothing is lost in its text.
#[test]
fn certificates_survive_being_read() {
    for (name, certificate) in certificates() {
        let read: Certificate = serde_json::from_str(&bytes(certificate)).expect("a certificate");
        assert!(read == *certificate, "{name}");
    }
}
