//! From an audit and its outcomes to a certificate.

use std::collections::BTreeMap;

use rug::{Float, Rational};

use crate::approximant::piece::{Approximant, Basis, Form, Owner, Piece, Stored};
use crate::audit::file::AuditFile;
use crate::audit::run::ClaimOutcome;
use crate::bound::point::{PointValues, Subject, precise_values_at};
use crate::bound::task::Unfinished;
use crate::certificate::model;
use crate::claim::evaluation::{PieceOutcome, Place};
use crate::claim::judgement::Verdict;
use crate::claim::model::ErrorMeasure;
use crate::function::constant::Constant;
use crate::function::exact::Centre;
use crate::function::parser::ConstantValue;
use crate::number::ball::Ball;
use crate::number::decimal::{ENCLOSURE_DIGITS, exact, rounded_down, rounded_up};
use crate::number::radius::Radius;

/// Significant digits of values at a witness.
const VALUE_DIGITS: usize = 21;

/// Makes the certificate of an audit.
pub fn certificate(file: &AuditFile, outcomes: &[ClaimOutcome]) -> model::Certificate {
    model::Certificate {
        certificate: model::FORMAT.to_owned(),
        made_by: made_by(),
        inputs: file
            .inputs
            .iter()
            .map(|input| model::Input {
                path: input.path.clone(),
                bytes: input.bytes,
                sha256: input.sha256.clone(),
            })
            .collect(),
        subject: subject(file),
        assumptions: assumptions(file),
        claims: outcomes
            .iter()
            .map(|outcome| claim(file, outcome))
            .collect(),
        pieces: pieces(file, outcomes),
    }
}

/// Version of the interval library; the package does not tell it at run time.
const INARI_VERSION: &str = "2";

fn made_by() -> model::MadeBy {
    use gmp_mpfr_sys::{gmp, mpfr};
    let dotted = |parts: [i64; 3]| parts.map(|part| part.to_string()).join(".");
    let libraries = [
        (
            "gmp",
            dotted([gmp::VERSION, gmp::VERSION_MINOR, gmp::VERSION_PATCHLEVEL].map(i64::from)),
        ),
        ("inari", INARI_VERSION.to_owned()),
        (
            "mpfr",
            dotted(
                [
                    mpfr::VERSION_MAJOR,
                    mpfr::VERSION_MINOR,
                    mpfr::VERSION_PATCHLEVEL,
                ]
                .map(i64::from),
            ),
        ),
    ];
    model::MadeBy {
        program: "boundmark".to_owned(),
        version: env!("CARGO_PKG_VERSION").to_owned(),
        libraries: libraries
            .into_iter()
            .map(|(name, version)| (name.to_owned(), version))
            .collect(),
    }
}

fn subject(file: &AuditFile) -> model::Subject {
    let approximants = file.approximants.iter().enumerate();
    model::Subject {
        title: file.title.clone().unwrap_or_default(),
        approximants: approximants
            .map(|(index, audited)| {
                approximant(&audited.approximant, file.reference_of(index).text())
            })
            .collect(),
        program: file.program.clone(),
    }
}

fn approximant(approximant: &Approximant, reference: &str) -> model::Approximant {
    let mut conventions = BTreeMap::new();
    let mut steps = None;
    match &approximant.basis {
        Basis::Power { order, parity, .. } => {
            conventions.insert("order".to_owned(), order.name().to_owned());
            if let Some(parity) = parity {
                conventions.insert("parity".to_owned(), parity.name().to_owned());
            }
        }
        Basis::Chebyshev {
            order,
            parity,
            first,
            ..
        } => {
            conventions.insert("order".to_owned(), order.name().to_owned());
            conventions.insert("first".to_owned(), first.name().to_owned());
            if let Some(parity) = parity {
                conventions.insert("parity".to_owned(), parity.name().to_owned());
            }
        }
        Basis::Bernstein { order, .. } => {
            conventions.insert("order".to_owned(), order.name().to_owned());
        }
        Basis::Hermite { scaling } => {
            conventions.insert("scaling".to_owned(), scaling.name().to_owned());
        }
        Basis::Steps { constants, .. } => {
            let texts = |numbers: &[Rational]| numbers.iter().map(exact).collect::<Vec<_>>();
            steps = Some(model::Steps {
                constants: constants
                    .iter()
                    .map(|(name, constant)| {
                        let values = match constant {
                            ConstantValue::Number(number) => {
                                model::StepConstant::Number(exact(number))
                            }
                            ConstantValue::Array(numbers) => {
                                model::StepConstant::Array(texts(numbers))
                            }
                        };
                        (name.clone(), values)
                    })
                    .collect(),
                steps: lines_of(approximant),
            });
        }
    }
    model::Approximant {
        id: approximant.id.clone(),
        reference: model::Reference {
            formula: reference.to_owned(),
        },
        basis: approximant.basis.name().to_owned(),
        conventions,
        stored_as: approximant
            .stored_as
            .map_or("exact", |format| format.name())
            .to_owned(),
        owner: owner(approximant.owner).to_owned(),
        steps,
        pieces: approximant.pieces.iter().map(stored_piece).collect(),
    }
}

/// The steps as given: the text of their formula, one to a line.
fn lines_of(approximant: &Approximant) -> Vec<String> {
    let form = approximant.pieces.first().map(|piece| &piece.form);
    match form {
        Some(Form::Formula(formula)) => formula.text().lines().map(str::to_owned).collect(),
        _ => Vec::new(),
    }
}

fn owner(owner: Owner) -> &'static str {
    match owner {
        Owner::Left => "left",
        Owner::Right => "right",
    }
}

fn stored_piece(piece: &Piece) -> model::StoredPiece {
    let texts = |numbers: &[Rational]| Some(numbers.iter().map(exact).collect::<Vec<_>>());
    let (origin, scale) = match &piece.form {
        Form::Polynomial(polynomial) => {
            (Some(end(&polynomial.origin)), Some(end(&polynomial.scale)))
        }
        Form::Formula(_) => (None, None),
    };
    let (coefficients, left_taylor, right_taylor) = match &piece.stored {
        Stored::Coefficients(numbers) => (texts(numbers), None, None),
        Stored::Ends { left, right } => (None, texts(left), texts(right)),
        Stored::Steps => (None, None, None),
    };
    model::StoredPiece {
        on: ends(&piece.on),
        origin,
        scale,
        coefficients,
        left_taylor,
        right_taylor,
    }
}

fn end(constant: &Constant) -> String {
    match constant.as_rational() {
        Some(x) => exact(x),
        None => constant.text().to_owned(),
    }
}

fn ends(on: &[Constant; 2]) -> [String; 2] {
    [end(&on[0]), end(&on[1])]
}

fn assumptions(file: &AuditFile) -> Vec<String> {
    let mut sentences = vec![
        "The reference formulas and the approximants are stated as intended.".to_owned(),
        "MPFR and GMP round as they document; inari's interval operations contain what they \
         enclose; compiler and processor carry out IEEE 754 arithmetic with the rounding asked for."
            .to_owned(),
        "The claims are about the exact functions that the stored coefficients define, for real \
         arguments: the rounding of a program that evaluates them is not part of these claims."
            .to_owned(),
        "A certificate covers the model stated here, not the system built from it.".to_owned(),
    ];
    for audited in &file.approximants {
        let approximant = &audited.approximant;
        if let Some(format) = approximant.stored_as
            && approximant.storage_rounding.changed > 0
        {
            sentences.push(format!(
                "{}: {} of {} stored numbers differ from the numbers written, being rounded to {} \
                 (nearest, ties to even).",
                approximant.id,
                approximant.storage_rounding.changed,
                approximant.storage_rounding.numbers,
                format.name()
            ));
        }
    }
    sentences
}

fn claim(file: &AuditFile, outcome: &ClaimOutcome) -> model::Claim {
    let claim = &file.claims[outcome.claim];
    let summary = &outcome.summary;
    let (absolute_part, relative_part) = match &claim.measure {
        ErrorMeasure::Mixed {
            absolute_part,
            relative_part,
        } => (Some(exact(absolute_part)), Some(exact(relative_part))),
        _ => (None, None),
    };
    let worst = summary.worst.map(|index| &outcome.pieces[index]);
    let worst_at = worst.and_then(|(piece, result)| Some(place(result.at.as_ref()?, *piece)));
    let witness = (summary.verdict == Verdict::Fails)
        .then(|| {
            worst.and_then(|(piece, result)| witness(file, outcome, *piece, result.at.as_ref()?))
        })
        .flatten();
    let reason = (summary.verdict == Verdict::Undecided).then(|| reason(outcome));
    model::Claim {
        id: claim.id.clone(),
        approximant: file.approximants[outcome.approximant]
            .approximant
            .id
            .clone(),
        of: claim.subject.name().to_owned(),
        error: claim.measure.name().to_owned(),
        absolute_part,
        relative_part,
        on: outcome.on.iter().map(ends).collect(),
        at_most: claim.at_most.as_ref().map(|bound| bound.text.clone()),
        verdict: match summary.verdict {
            Verdict::Holds => model::Verdict::Holds,
            Verdict::Fails => model::Verdict::Fails,
            Verdict::Undecided => model::Verdict::Undecided,
            Verdict::Measured => model::Verdict::Measured,
        },
        enclosure: outward(&summary.enclosure),
        signed: [outward(&summary.minimum), outward(&summary.maximum)],
        worst_at,
        witness,
        reason,
        notes: notes(outcome),
    }
}

fn notes(outcome: &ClaimOutcome) -> Vec<String> {
    let mut notes = Vec::new();
    for (_, piece) in &outcome.pieces {
        for point in &piece.by_continuity {
            let note = format!(
                "at x = {} the value is taken by continuity",
                exact_place(point)
            );
            if !notes.contains(&note) {
                notes.push(note);
            }
        }
    }
    let zero = outcome
        .pieces
        .iter()
        .find_map(|(_, piece)| piece.unbounded.as_ref());
    if let Some(zero) = zero {
        notes.push(format!(
            "the relative error is unbounded: the reference vanishes at or near x = {}, where the \
             approximant does not; claim a mixed error, or leave the zero out with `except`",
            rounded_down(&zero.ball(128).lower(), 10)
        ));
    }
    notes
}

/// Why a claim is undecided.
fn reason(outcome: &ClaimOutcome) -> String {
    let Some((piece, result)) = outcome
        .summary
        .unfinished
        .map(|index| &outcome.pieces[index])
    else {
        return "the bound lies inside the enclosure, whose ends cannot be brought closer: the \
                supremum equals the bound, or all but; loosen at_most slightly"
            .to_owned();
    };
    let near = |x: &Rational| {
        let x = Float::with_val(53, x);
        rounded_down(&x, 10)
    };
    match &result.unfinished {
        Some(Unfinished::Refused { at, refusal, part }) => format!(
            "near x = {} (piece {}) {} of the {} could not be shown to be {}",
            near(at),
            piece + 1,
            "an operation",
            part.name(),
            refusal.kind.requirement(),
        ),
        Some(Unfinished::ZeroOfReference { at }) => format!(
            "the reference vanishes near x = {} (piece {}), and the approximant is not proved to \
             vanish there too",
            near(at),
            piece + 1
        ),
        Some(Unfinished::Precision { at }) => format!(
            "near x = {} (piece {}) approximant and reference agree to all bits that are computed",
            near(at),
            piece + 1
        ),
        Some(Unfinished::Budget) | None => format!(
            "the work allowed ran out on piece {} after {} units; a larger --effort allows more",
            piece + 1,
            result.work
        ),
    }
}

fn witness(
    file: &AuditFile,
    outcome: &ClaimOutcome,
    piece: usize,
    at: &Place,
) -> Option<model::Witness> {
    let claim = &file.claims[outcome.claim];
    let measure = claim.measure.bound_measure();
    let subject = Subject {
        reference: file.reference_of(outcome.approximant),
        form: &file.approximants[outcome.approximant].approximant.pieces[piece].form,
        measure: &measure,
    };
    let (centre, shared_zero) = at;
    let floor = Float::new(53);
    let PointValues {
        approximant,
        reference,
        error,
    } = precise_values_at(&subject, centre, *shared_zero, 256, &floor).ok()?;
    Some(model::Witness {
        at: place(at, piece),
        error: values(&error),
        approximant: values(&approximant),
        reference: values(&reference),
    })
}

fn pieces(file: &AuditFile, outcomes: &[ClaimOutcome]) -> Vec<model::Piece> {
    // (approximant, piece) in order, each with its claims in order.
    let mut found: BTreeMap<(usize, usize), Vec<model::PieceError>> = BTreeMap::new();
    for outcome in outcomes {
        let id = &file.claims[outcome.claim].id;
        for (piece, result) in &outcome.pieces {
            let errors = found.entry((outcome.approximant, *piece)).or_default();
            errors.push(piece_error(id, *piece, result));
        }
    }
    found
        .into_iter()
        .map(|((approximant, piece), errors)| {
            let approximant = &file.approximants[approximant].approximant;
            model::Piece {
                approximant: approximant.id.clone(),
                piece,
                on: ends(&approximant.pieces[piece].on),
                errors,
            }
        })
        .collect()
}

fn piece_error(claim: &str, piece: usize, result: &PieceOutcome) -> model::PieceError {
    model::PieceError {
        claim: claim.to_owned(),
        enclosure: outward(&result.enclosure),
        signed: [outward(&result.minimum), outward(&result.maximum)],
        worst_at: result.at.as_ref().map(|at| place(at, piece)),
        budget: model::Budget {
            truncation: outward(&result.truncation),
            storage: outward(&result.storage),
        },
        remainder: result.remainder.as_ref().map(|remainder| model::Remainder {
            centre: exact_place(&remainder.centre),
            scale: exact(&remainder.scale.to_rational().unwrap_or_default()),
            radius: exact(&remainder.rho.to_rational().unwrap_or_default()),
            terms: remainder.terms,
            magnitude: upper(remainder.magnitude),
            tail: upper(remainder.tail),
        }),
        cells: result.cells,
        work: result.work,
    }
}

fn upper(radius: Radius) -> String {
    rounded_up(&radius.to_float_upper(64), ENCLOSURE_DIGITS)
}

fn outward(enclosure: &[Float; 2]) -> [String; 2] {
    [
        rounded_down(&enclosure[0], ENCLOSURE_DIGITS),
        rounded_up(&enclosure[1], ENCLOSURE_DIGITS),
    ]
}

fn values(ball: &Ball) -> [String; 2] {
    [
        rounded_down(&ball.lower(), VALUE_DIGITS),
        rounded_up(&ball.upper(), VALUE_DIGITS),
    ]
}

fn place(at: &Place, piece: usize) -> model::Place {
    let (centre, _) = at;
    model::Place {
        exact: exact_place(centre),
        decimal: rounded_down(&centre.ball(128).lower(), ENCLOSURE_DIGITS),
        piece,
    }
}

/// The exact text of an argument: a literal, or "literal + ratio*pi".
fn exact_place(centre: &Centre) -> String {
    if centre.pi_multiple.is_zero() {
        return exact(&centre.rational);
    }
    let pi = format!("{}*pi", exact(&centre.pi_multiple));
    if centre.rational.is_zero() {
        pi
    } else {
        format!("{} + {pi}", exact(&centre.rational))
    }
}
