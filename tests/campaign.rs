//! `make campaign`: audits all published approximations, the slow ones too, and writes the record
//! `tests/outside/campaign.md`. Without the environment variable `BOUNDMARK_CAMPAIGN` this does
//! nothing.

#[path = "support/published_cases.rs"]
mod published_cases;

use std::io::Write;
use std::path::Path;
use std::process::Command;

use published_cases::{
    Finding, audit, complaints, complaints_about_near_bounds, counts, covered_cases, in_parallel,
    slow_and_other, table,
};

const VARIABLE: &str = "BOUNDMARK_CAMPAIGN";

#[test]
fn all_published_bounds_are_confirmed_or_refuted() {
    if std::env::var_os(VARIABLE).is_none_or(|value| value != "1") {
        // Past the capture of the test harness, so that it is seen.
        let _ = writeln!(
            std::io::stderr(),
            "campaign skipped (minutes): `make campaign`, or {VARIABLE}=1, audits all published cases"
        );
        return;
    }
    let all = covered_cases();
    let places: Vec<String> = all.iter().map(|case| case.id.clone()).collect();
    let (slow, other) = slow_and_other(all);
    // The slow ones first: otherwise one of them runs alone at the end.
    let cases = [slow, other.clone()].concat();
    let mut findings = audit(&cases, &|finding| println!("{}", line(finding)));
    findings.sort_by_key(|finding| places.iter().position(|id| *id == finding.case.id));
    let mut found = complaints(&findings);
    println!("bounds just above and just below the supremum");
    let near = in_parallel(&other, &complaints_about_near_bounds);
    for complaint in near.iter().flatten() {
        found += &format!("{complaint}\n");
    }
    let right = near.iter().filter(|complaints| complaints.is_empty());
    let told_apart = format!("{} of {}", right.count(), near.len());
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/outside/campaign.md");
    std::fs::write(&path, record(&findings, &told_apart, &found)).expect("the record is written");
    println!("\n{}\nThe record is {}.", counts(&findings), path.display());
    assert!(found.is_empty(), "\n{found}");
}

fn line(finding: &Finding) -> String {
    format!(
        "{:8.2} s  {:9} {} ({})",
        finding.seconds, finding.verdict, finding.case.id, finding.case.source
    )
}

fn record(findings: &[Finding], told_apart: &str, complaints: &str) -> String {
    let unexpected = if complaints.is_empty() {
        "Everything is as expected.\n".to_owned()
    } else {
        format!("Not as expected:\n\n```\n{complaints}```\n")
    };
    format!(
        "# Campaign\n\n\
         Written by `make campaign`: every published approximation that is covered, audited and \
         compared with `expected.json`.\n\n\
         - date: {}\n\
         - commit: {}\n\
         - claims with bounds one part in 10^8 above and below the supremum told apart: \
           {told_apart} cases (the slow ones are left out)\n\n\
         {}\n{unexpected}\n\
         The supremum lies in the enclosure, rounded outward to 15 digits. Seconds are those of \
         one thread. \"fails\" is said of the figure as printed and read exactly, see `README.md`.\n\n\
         {}",
        output("date", &["-u", "+%Y-%m-%d"]),
        commit(),
        counts(findings),
        table(findings),
    )
}

fn commit() -> String {
    let commit = output("git", &["rev-parse", "--short=12", "HEAD"]);
    let changes = output("git", &["status", "--porcelain", "--", "src", "Cargo.lock"]);
    if changes.is_empty() {
        commit
    } else {
        format!("{commit}, with changes that are not committed")
    }
}

fn output(program: &str, arguments: &[&str]) -> String {
    Command::new(program)
        .args(arguments)
        .current_dir(env!("CARGO_MANIFEST_DIR"))
        .output()
        .map(|output| String::from_utf8_lossy(&output.stdout).trim().to_owned())
        .unwrap_or_default()
}
