//! The published approximations of `tests/outside`, audited and compared with what was computed
//! without this program.

use std::path::PathBuf;
use std::sync::atomic::{AtomicUsize, Ordering};
use std::time::Instant;

use boundmark::audit::file::{self, ReadOptions};
use boundmark::audit::run;
use boundmark::certificate::build;
use boundmark::certificate::model::{Certificate, Claim, Verdict};
use boundmark::claim::model::Bound;
use boundmark::number::literal;
use rug::Rational;
use serde::Deserialize;

/// What an audit of one case must find (`expected.json`).
#[derive(Clone, Debug, Deserialize)]
pub struct Case {
    pub id: String,
    pub covered: bool,
    pub source: String,
    #[serde(default)]
    pub file: String,
    #[serde(default)]
    pub printed: String,
    #[serde(default)]
    pub error: String,
    #[serde(default)]
    pub claims: Vec<String>,
    /// Encloses the supremum; computed without this program.
    #[serde(default)]
    pub supremum: Option<[String; 2]>,
    /// Encloses the least value of approximant minus reference (absolute errors).
    #[serde(default)]
    pub signed_minimum: Option<[String; 2]>,
    #[serde(default)]
    pub signed_maximum: Option<[String; 2]>,
    #[serde(default)]
    pub expected_verdict: Option<String>,
    #[serde(default)]
    pub variant_of: Option<String>,
}

/// Cases that only the campaign audits, and why.
#[rustfmt::skip]
pub const SLOW: &[(&str, &str)] = &[
    ("as-26.2.23", "the normal quantile by its inverse, with erfc of up to 142"),
    ("fd-s_erf-4", "log(x erfc(x)) + x^2 up to 28: nearly equal numbers are subtracted"),
    ("ld-128-erfl-5", "log(x erfc(x)) + x^2 up to 108: nearly equal numbers are subtracted"),
    ("cephes-erfl-rc", "log(x erfc(x)) + x^2 up to 107: nearly equal numbers are subtracted"),
    ("boost-erf64-5", "x exp(x^2) erfc(x) up to 110: the factors are very large and very small"),
    ("cody-erf-3", "x exp(x^2) erfc(x) up to 100: the factors are very large and very small"),
    ("boost-erfinv-5", "sqrt(-log(erfc(x))) up to 18, in reference and steps"),
    ("boost-erfinv-7", "sqrt(-log(erfc(x))) up to 100, in reference and steps"),
];

#[derive(Deserialize)]
struct Expected {
    covered: usize,
    variants: usize,
    cases: Vec<Case>,
}

/// What the audit found, and how it compares.
#[derive(Clone, Debug)]
pub struct Finding {
    pub case: Case,
    /// `None` where the audit could not be carried out.
    pub enclosure: Option<[String; 2]>,
    pub verdict: &'static str,
    pub seconds: f64,
    /// Units of work: the same on every machine.
    pub work: u64,
    /// The enclosures of supremum and signed extremes overlap those computed independently.
    pub contains: bool,
    /// The upper end exceeds the lower one by no more than the default tightness.
    pub tight: bool,
    pub right_verdict: bool,
    /// Everything that is not as it should be, one sentence each.
    pub complaints: Vec<String>,
}

/// How near to the supremum the other bounds of [`complaints_about_near_bounds`] lie: the width of
/// the enclosures computed independently is at most one part in 10^9.
const NEAR: u32 = 100_000_000;

/// Upper end over lower end of an enclosure, at most.
const TIGHT: (u32, u32) = (1001, 1000);

fn folder() -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("tests/outside")
}

/// All covered cases with their variants, in the order of `expected.json`.
pub fn covered_cases() -> Vec<Case> {
    let text = std::fs::read_to_string(folder().join("expected.json")).expect("expected.json");
    let expected: Expected = serde_json::from_str(&text).expect("expected.json is as described");
    let covered: Vec<Case> = expected
        .cases
        .into_iter()
        .filter(|case| case.covered)
        .collect();
    let variants = covered
        .iter()
        .filter(|case| case.variant_of.is_some())
        .count();
    assert_eq!(variants, expected.variants);
    assert_eq!(covered.len(), expected.covered + expected.variants);
    covered
}

/// The cases that only the campaign audits, and the others.
pub fn slow_and_other(cases: Vec<Case>) -> (Vec<Case>, Vec<Case>) {
    for (id, _) in SLOW {
        assert!(cases.iter().any(|case| case.id == *id), "no case is {id}");
    }
    cases
        .into_iter()
        .partition(|case| SLOW.iter().any(|(id, _)| *id == case.id))
}

/// Audits the cases; the findings are in the order given.
pub fn audit(cases: &[Case], finished: &(dyn Fn(&Finding) + Sync)) -> Vec<Finding> {
    in_parallel(cases, &|case| {
        let finding = find(case);
        finished(&finding);
        finding
    })
}

/// Does some work for every case, several at once, each on one thread.
///
/// The threads are not a rayon pool: a worker that waits for the pieces of one case would work on
/// another meanwhile, and the times of cases would mean nothing.
pub fn in_parallel<T: Send>(cases: &[Case], work: &(dyn Fn(&Case) -> T + Sync)) -> Vec<T> {
    let threads = std::thread::available_parallelism().map_or(1, |count| count.get());
    let next = AtomicUsize::new(0);
    let mut done: Vec<(usize, T)> = std::thread::scope(|scope| {
        let workers: Vec<_> = (0..threads.min(cases.len()))
            .map(|_| {
                scope.spawn(|| {
                    let pool = rayon::ThreadPoolBuilder::new()
                        .num_threads(1)
                        .build()
                        .expect("a pool of one thread");
                    let mut done = Vec::new();
                    loop {
                        let index = next.fetch_add(1, Ordering::Relaxed);
                        let Some(case) = cases.get(index) else {
                            return done;
                        };
                        done.push((index, pool.install(|| work(case))));
                    }
                })
            })
            .collect();
        workers
            .into_iter()
            .flat_map(|worker| worker.join().expect("an audit panicked"))
            .collect()
    });
    done.sort_by_key(|(index, _)| *index);
    done.into_iter().map(|(_, result)| result).collect()
}

/// Audits one case and compares.
pub fn find(case: &Case) -> Finding {
    let start = Instant::now();
    let certificate = certificate_of(case, None);
    let seconds = start.elapsed().as_secs_f64();
    let mut finding = Finding {
        case: case.clone(),
        enclosure: None,
        verdict: "no audit",
        seconds,
        work: 0,
        contains: false,
        tight: false,
        right_verdict: false,
        complaints: Vec::new(),
    };
    match certificate {
        Ok(certificate) => compare(&mut finding, &certificate),
        Err(message) => finding.complaints.push(message),
    }
    finding
}

fn certificate_of(case: &Case, at_most: Option<&Rational>) -> Result<Certificate, String> {
    let path = folder().join(&case.file);
    let mut file = file::read(&path, &ReadOptions::default()).map_err(|diagnostics| {
        diagnostics
            .iter()
            .map(ToString::to_string)
            .collect::<Vec<_>>()
            .join("\n")
    })?;
    if let Some(at_most) = at_most {
        for claim in &mut file.claims {
            claim.at_most = Some(Bound {
                value: at_most.clone(),
                text: at_most.to_string(),
            });
        }
    }
    let outcomes =
        run::run(&file, 1, &|_| (), &|| ()).map_err(|error| format!("refused: {error:?}"))?;
    Ok(build::certificate(&file, &outcomes))
}

/// Audits two other claims: bounds that lie one part in [`NEAR`] above and below the supremum that
/// was computed independently. The first must hold, the second must fail.
pub fn complaints_about_near_bounds(case: &Case) -> Vec<String> {
    let [low, high] = case.supremum.as_ref().expect("a covered case").each_ref();
    let number = |text: &str| literal::parse(text).expect("an end is a number");
    let above = number(high) * Rational::from((NEAR + 1, NEAR));
    let below = number(low) * Rational::from((NEAR - 1, NEAR));
    [(above, "holds"), (below, "fails")]
        .into_iter()
        .filter_map(|(bound, expected)| {
            let found = match certificate_of(case, Some(&bound)) {
                Ok(certificate) => verdict(&certificate.claims),
                Err(message) => return Some(format!("{}: {message}", case.id)),
            };
            let source = &case.source;
            (found != expected).then(|| {
                format!(
                    "{} ({source}): a bound that {expected}, by one part in {NEAR}: {found}",
                    case.id
                )
            })
        })
        .collect()
}

/// An enclosure whose ends may be infinite.
struct Enclosure {
    text: [String; 2],
    low: Option<Rational>,
    high: Option<Rational>,
}

impl Enclosure {
    fn of(text: &[String; 2]) -> Self {
        let end = |text: &str, infinite: &str| {
            (text != infinite).then(|| literal::parse(text).expect("an end is a number"))
        };
        Self {
            text: text.clone(),
            low: end(&text[0], "-inf"),
            high: end(&text[1], "inf"),
        }
    }

    /// Both contain the same number, so they must overlap.
    fn overlaps(&self, other: &Self) -> bool {
        let below = |low: &Option<Rational>, high: &Option<Rational>| match (low, high) {
            (Some(low), Some(high)) => low <= high,
            _ => true,
        };
        below(&self.low, &other.high) && below(&other.low, &self.high)
    }

    fn is_tight(&self) -> bool {
        match (&self.low, &self.high) {
            (Some(low), Some(high)) => {
                Rational::from(high * TIGHT.1) <= Rational::from(low * TIGHT.0)
            }
            _ => false,
        }
    }
}

/// The enclosure whose ends are the largest (`sign` 1) or the least (`sign` -1) of the claims'.
fn extreme(claims: &[Claim], of: impl Fn(&Claim) -> &[String; 2], sign: i32) -> Enclosure {
    let value = |text: &str| match text {
        "inf" => Rational::from(1) << 100_000u32,
        "-inf" => Rational::from(-1) << 100_000u32,
        text => literal::parse(text).expect("an end is a number"),
    };
    let end = |k: usize| {
        claims
            .iter()
            .map(|claim| of(claim)[k].clone())
            .max_by_key(|text| value(text) * sign)
            .expect("a claim")
    };
    Enclosure::of(&[end(0), end(1)])
}

fn compare(finding: &mut Finding, certificate: &Certificate) {
    let case = finding.case.clone();
    let claims = &certificate.claims;
    finding.work = certificate
        .pieces
        .iter()
        .flat_map(|piece| &piece.errors)
        .map(|error| error.work)
        .sum();
    let mut complaints = Vec::new();
    let names: Vec<&str> = claims.iter().map(|claim| claim.id.as_str()).collect();
    if names != case.claims {
        complaints.push(format!("claims {names:?} instead of {:?}", case.claims));
    }

    let supremum = extreme(claims, |claim| &claim.enclosure, 1);
    let mut pairs = vec![("supremum", &supremum, case.supremum.as_ref())];
    let minimum = extreme(claims, |claim| &claim.signed[0], -1);
    let maximum = extreme(claims, |claim| &claim.signed[1], 1);
    pairs.push(("signed minimum", &minimum, case.signed_minimum.as_ref()));
    pairs.push(("signed maximum", &maximum, case.signed_maximum.as_ref()));
    finding.contains = true;
    for (name, ours, theirs) in pairs {
        let Some(theirs) = theirs.map(Enclosure::of) else {
            continue;
        };
        if !ours.overlaps(&theirs) {
            finding.contains = false;
            complaints.push(format!(
                "{name} in {:?}, but it was computed to be in {:?}",
                ours.text, theirs.text
            ));
        }
    }

    finding.tight = supremum.is_tight();
    if !finding.tight {
        complaints.push(format!("the enclosure {:?} is wide", supremum.text));
    }
    finding.enclosure = Some(supremum.text);

    finding.verdict = verdict(claims);
    finding.right_verdict = case.expected_verdict.as_deref() == Some(finding.verdict);
    if !finding.right_verdict {
        complaints.push(format!(
            "{} instead of {}",
            finding.verdict,
            case.expected_verdict.as_deref().unwrap_or("a verdict")
        ));
    }
    complaints.extend(
        claims
            .iter()
            .filter_map(|claim| contradiction(&case, claim)),
    );
    finding.complaints.append(&mut complaints);
}

/// The verdict on a case with several claims.
fn verdict(claims: &[Claim]) -> &'static str {
    let any = |verdict| claims.iter().any(|claim| claim.verdict == verdict);
    if any(Verdict::Fails) {
        "fails"
    } else if any(Verdict::Undecided) {
        "undecided"
    } else if any(Verdict::Measured) {
        "measured"
    } else {
        "holds"
    }
}

/// What a claim of a certificate says against itself: a verdict that its enclosure does not bear
/// out, or a witness that proves nothing.
fn contradiction(case: &Case, claim: &Claim) -> Option<String> {
    let problem = |what: &str| Some(format!("claim {}: {what}", claim.id));
    if claim.error != case.error {
        return problem("another measure of error");
    }
    let Some(bound) = &claim.at_most else {
        return problem("its bound is missing");
    };
    let bound = literal::parse(bound).expect("the bound is a number");
    let enclosure = Enclosure::of(&claim.enclosure);
    match claim.verdict {
        Verdict::Holds if enclosure.high.is_none_or(|high| high > bound) => {
            return problem("holds, but the enclosure exceeds the bound");
        }
        Verdict::Fails => {
            if enclosure.low.is_none_or(|low| low <= bound) {
                return problem("fails, but the enclosure reaches below the bound");
            }
            let Some(witness) = &claim.witness else {
                return problem("fails without a witness");
            };
            let error = Enclosure::of(&witness.error);
            let above = error.low.is_some_and(|low| low > bound);
            let below = error.high.is_some_and(|high| -high > bound);
            if !above && !below {
                return problem("the error at the witness does not exceed the bound");
            }
        }
        _ => {}
    }
    if claim.worst_at.is_none() {
        return problem("no argument is named");
    }
    None
}

/// How many of the findings contain, are tight, and have the right verdict.
pub fn counts(findings: &[Finding]) -> String {
    let count = |what: fn(&Finding) -> bool| findings.iter().filter(|f| what(f)).count();
    format!(
        "| | of {} |\n|---|---|\n\
         | enclosures that overlap what was computed independently | {} |\n\
         | upper end at most 1.001 times the lower one | {} |\n\
         | verdicts as expected | {} |\n",
        findings.len(),
        count(|f| f.contains),
        count(|f| f.tight),
        count(|f| f.right_verdict),
    )
}

/// One row a case.
pub fn table(findings: &[Finding]) -> String {
    let mut out = String::from(
        "| id | source | error | printed | supremum proved in | verdict | seconds |\n\
         |---|---|---|---|---|---|---|\n",
    );
    for finding in findings {
        let case = &finding.case;
        let enclosure = finding
            .enclosure
            .as_ref()
            .map_or(String::new(), |[low, high]| format!("[{low}, {high}]"));
        let unexpected = if finding.right_verdict { "" } else { " (!)" };
        out += &format!(
            "| {} | {} | {} | {} | {enclosure} | {}{unexpected} | {:.2} |\n",
            case.id, case.source, case.error, case.printed, finding.verdict, finding.seconds
        );
    }
    out
}

/// Everything that is not as it should be.
pub fn complaints(findings: &[Finding]) -> String {
    let mut out = String::new();
    for finding in findings {
        for complaint in &finding.complaints {
            out += &format!(
                "{} ({}): {complaint}\n",
                finding.case.id, finding.case.source
            );
        }
    }
    out
}
