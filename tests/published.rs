//! Bounds that were printed beside published approximations, audited: every enclosure must agree
//! with the supremum that was computed without this program, be tight, and lead to the expected
//! verdict. `make campaign` audits the slow ones too.

#[path = "support/published_cases.rs"]
mod published_cases;

use published_cases::{
    SLOW, audit, complaints, complaints_about_near_bounds, counts, covered_cases, find,
    in_parallel, slow_and_other, table,
};

/// Units of work of the first audit up to which a case is audited with other bounds too.
const QUICK: u64 = 1_000_000;

#[test]
fn published_bounds_are_confirmed_or_refuted() {
    let (_, cases) = slow_and_other(covered_cases());
    let findings = audit(&cases, &|_| ());
    println!("{}\n{}", table(&findings), counts(&findings));
    println!("left to `make campaign`:");
    for (id, why) in SLOW {
        println!("  {id}: {why}");
    }
    let complaints = complaints(&findings);
    assert!(complaints.is_empty(), "\n{complaints}");
}

/// Few published bounds are near the supremum. These are, so that nothing hides in the slack.
#[test]
fn bounds_just_above_and_just_below_the_supremum_are_told_apart() {
    let (_, cases) = slow_and_other(covered_cases());
    let complaints = in_parallel(&cases, &|case| {
        (find(case).work <= QUICK).then(|| complaints_about_near_bounds(case))
    });
    let tried: Vec<_> = complaints.into_iter().flatten().collect();
    println!("{} of {} cases", tried.len(), cases.len());
    assert!(2 * tried.len() > cases.len(), "only {} cases", tried.len());
    let complaints = tried.concat();
    assert!(complaints.is_empty(), "\n{}", complaints.join("\n"));
}
