//! Attacks on the meaning of a verdict: random audits against an evaluation that shares no code
//! with the bounds, and cases built to mislead them.
//!
//! The approximant is evaluated exactly from the definition of its basis, the reference at 400 bits
//! at one argument after the other. No sample may exceed the upper end, the lower end must be
//! reached at the argument named, that argument must belong to the claim and to the piece that
//! owns it, and no verdict may contradict a sample.
//!
//! `SOUNDNESS_SEED=n cargo test --test soundness` tries other cases.

#[path = "soundness/adversarial.rs"]
mod adversarial;
#[path = "soundness/generator.rs"]
mod generator;

use boundmark::approximant::piece::Form;
use boundmark::audit::file::{AuditFile, ReadOptions, read_text};
use boundmark::audit::run::{self, AuditError, ClaimOutcome};
use boundmark::bound::shift::value_at;
use boundmark::claim::judgement::Verdict;
use boundmark::function::exact::Centre;
use boundmark::function::series::series;
use boundmark::number::ball::Ball;
use generator::{Case, Measure, Question, Random, case};
use rug::{Float, Rational};

const BITS: u32 = 400;
const CASES: u64 = 80;

/// Reads and carries out an audit.
fn audit(text: &str) -> (AuditFile, Result<Vec<ClaimOutcome>, AuditError>) {
    let file = read_text("case.audit.json", text, None, &ReadOptions::default())
        .unwrap_or_else(|errors| panic!("{}\n{text}", errors[0]));
    let outcome = run::run(&file, 1, &|_| (), &|| ());
    (file, outcome)
}

/// The signed error at x on one piece; `None` where it is not defined by values.
fn error_at(
    file: &AuditFile,
    case: &Case,
    piece: usize,
    measure: &Measure,
    x: &Rational,
) -> Option<Ball> {
    let unit = Float::with_val(2, 1);
    let value = |formula| {
        let terms = series(formula, &Centre::rational(x.clone()), &unit, 1, BITS).ok()?;
        terms.into_iter().next()
    };
    let reference = value(file.reference_of(0))?;
    let approximant = match &case.pieces {
        Some(pieces) => Ball::from_rational(&pieces[piece](x), BITS),
        None => match &file.approximants[0].approximant.pieces[piece].form {
            Form::Formula(formula) => value(formula)?,
            Form::Polynomial(polynomial) => {
                value_at(polynomial, &Centre::rational(x.clone()), BITS)
            }
        },
    };
    let difference = approximant.sub(&reference);
    match measure {
        Measure::Absolute => Some(difference),
        Measure::Relative => difference.div(&reference),
        Measure::Mixed(absolute, relative) => {
            let weight = Ball::from_rational(absolute, BITS)
                .add(&Ball::from_rational(relative, BITS).mul(&reference.abs()));
            difference.div(&weight)
        }
    }
}

/// What the samples show: the least and the greatest signed error.
struct Seen {
    minimum: Float,
    maximum: Float,
}

impl Seen {
    fn modulus(&self) -> Float {
        Float::with_val(BITS, -&self.minimum).max(&self.maximum)
    }
}

fn sample(file: &AuditFile, case: &Case, question: &Question) -> Seen {
    const PARTS: u32 = 96;
    let mut seen = Seen {
        minimum: Float::with_val(BITS, f64::INFINITY),
        maximum: Float::with_val(BITS, f64::NEG_INFINITY),
    };
    for (piece, part) in case.parts(question) {
        let width = Rational::from(&part[1] - &part[0]);
        let mut look = |x: &Rational| -> Option<Float> {
            let error = error_at(file, case, piece, &question.measure, x)?;
            seen.minimum = seen.minimum.clone().min(&error.upper());
            seen.maximum = seen.maximum.clone().max(&error.lower());
            Some(error.midpoint().clone().abs())
        };
        let node = |k: u32| (&width * Rational::from((k, PARTS))) + &part[0];
        let mut best: Option<(Float, Rational)> = None;
        for k in 0..=PARTS {
            let x = node(k);
            if let Some(size) = look(&x)
                && best.as_ref().is_none_or(|(largest, _)| size > *largest)
            {
                best = Some((size, x));
            }
        }
        // Closer around the best sample.
        let Some((mut largest, mut x)) = best else {
            continue;
        };
        let mut step = Rational::from(&width / PARTS) / 2;
        for _ in 0..10 {
            for y in [Rational::from(&x - &step), Rational::from(&x + &step)] {
                if y >= part[0]
                    && y <= part[1]
                    && let Some(size) = look(&y)
                    && size > largest
                {
                    (largest, x) = (size, y);
                    break;
                }
            }
            step /= 2;
        }
    }
    seen
}

/// Compares one claim's outcome with the samples and with the argument that it names.
fn check(file: &AuditFile, case: &Case, question: &Question, outcome: &ClaimOutcome, label: &str) {
    let summary = &outcome.summary;
    let [lower, upper] = &summary.enclosure;
    assert!(lower <= upper, "{label}: {lower} > {upper}");
    let seen = sample(file, case, question);
    if seen.minimum.is_finite() {
        assert!(
            seen.modulus() <= *upper,
            "{label}: upper end {upper} below {}",
            seen.modulus()
        );
        assert!(
            summary.minimum[0] <= seen.minimum,
            "{label}: minimum {:?}",
            summary.minimum
        );
        assert!(
            summary.maximum[1] >= seen.maximum,
            "{label}: maximum {:?}",
            summary.maximum
        );
        // The other ends are reached somewhere: a dense sample comes near them.
        if upper.is_finite() {
            let slack = Float::with_val(64, upper * 0.1f64);
            let low = Float::with_val(64, &seen.minimum - &slack);
            let high = Float::with_val(64, &seen.maximum + &slack);
            assert!(
                summary.minimum[1] >= low,
                "{label}: minimum {:?}",
                summary.minimum
            );
            assert!(
                summary.maximum[0] <= high,
                "{label}: maximum {:?}",
                summary.maximum
            );
        }
    }
    if matches!(summary.verdict, Verdict::Measured) && lower.to_f64() > 1e-100 && upper.is_finite()
    {
        let ratio = Float::with_val(64, upper / lower);
        assert!(ratio <= 1.001_01, "{label}: {lower} to {upper} is wide");
    }
    let worst = summary.worst.map(|index| &outcome.pieces[index]);
    let Some((piece, (at, shared_zero))) =
        worst.and_then(|(piece, result)| Some((*piece, result.at.as_ref()?)))
    else {
        return;
    };
    assert!(
        at.pi_multiple.is_zero(),
        "{label}: no end of these cases is irrational"
    );
    let x = &at.rational;
    assert!(question.contains(x), "{label}: {x} is not in the set");
    assert!(
        case.owns(piece, x),
        "{label}: {x} does not belong to piece {piece}"
    );
    if *shared_zero == 0 {
        let error = error_at(file, case, piece, &question.measure, x)
            .unwrap_or_else(|| panic!("{label}: no error at {x}"));
        let reached = error.magnitude_upper().to_float_upper(64);
        assert!(
            reached >= *lower,
            "{label}: lower end {lower}, but {reached} at {x}"
        );
    }
}

/// Asks again with a bound near the supremum: the verdict must not contradict the enclosure.
fn check_bounds(case: &mut Case, random: &mut Random, outcomes: &[ClaimOutcome], label: &str) {
    let mut asked = Vec::new();
    for (k, outcome) in outcomes.iter().enumerate() {
        let [lower, upper] = &outcome.summary.enclosure;
        let chosen = if random.one_in(2) { lower } else { upper };
        let Some(bound) = chosen.to_rational() else {
            asked.push(None);
            continue;
        };
        let factor = Rational::from((
            *random.pick(&[99_999i64, 100_000, 100_001, 50_000]),
            100_000,
        ));
        let bound = bound * factor;
        case.document["claims"][k]["at_most"] =
            serde_json::json!(format!("{}/{}", bound.numer(), bound.denom()));
        asked.push(Some(bound));
    }
    let (file, outcomes) = audit(&case.document.to_string());
    let outcomes = outcomes.unwrap_or_else(|error| panic!("{label}: {error:?}"));
    for ((question, outcome), bound) in case.questions.iter().zip(&outcomes).zip(&asked) {
        let Some(bound) = bound else { continue };
        let label = format!("{label}, at most {}", bound.to_f64());
        check(&file, case, question, outcome, &label);
        let seen = sample(&file, case, question).modulus();
        match outcome.summary.verdict {
            Verdict::Holds => assert!(seen <= *bound, "{label}: holds, but {seen} was seen"),
            Verdict::Fails => assert!(outcome.summary.enclosure[0] > *bound, "{label}: fails"),
            Verdict::Undecided | Verdict::Measured => {}
        }
    }
}

#[test]
fn random_audits_agree_with_dense_evaluation() {
    let seed = std::env::var("SOUNDNESS_SEED")
        .ok()
        .and_then(|text| text.parse().ok())
        .unwrap_or(20_260_101u64);
    println!("SOUNDNESS_SEED={seed}");
    let mut decided = 0;
    for index in 0..CASES {
        let mut random = Random(seed.wrapping_mul(1_000_003).wrapping_add(index));
        let mut case = case(&mut random);
        case.questions.retain(|question| !question.is_thin());
        let kept = case.questions.len();
        let text = case.document.to_string();
        if kept != case.document["claims"].as_array().map_or(0, Vec::len) {
            continue;
        }
        let label = format!("seed {seed}, case {index}: {text}");
        println!("{label}");
        let (file, outcomes) = audit(&text);
        let outcomes = outcomes.unwrap_or_else(|error| panic!("{label}: {error:?}"));
        for (question, outcome) in case.questions.iter().zip(&outcomes) {
            check(&file, &case, question, outcome, &label);
            decided += u32::from(outcome.summary.enclosure[1].is_finite());
        }
        if random.one_in(2) {
            check_bounds(&mut case, &mut random, &outcomes, &label);
        }
    }
    // A run in which nothing is proved would show nothing.
    assert!(decided > 60, "only {decided} finite enclosures");
}
