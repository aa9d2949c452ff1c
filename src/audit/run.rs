//! Carries out the claims of an audit file: the plan, and its parallel run.
//!
//! A unit of the plan is one claim on one piece. Units share nothing and their results are
//! collected in order, so the outcome does not depend on the number of threads.

use rayon::prelude::*;

use crate::approximant::piece::{Approximant, Owner};
use crate::audit::file::AuditFile;
use crate::bound::task::Undefined;
use crate::claim::domain::{End, Part, intersection};
use crate::claim::evaluation::{Effort, PieceOutcome, Summary, evaluate, summary};
use crate::claim::model::{Claim, Target};
use crate::function::constant::Constant;

/// Default tightness of an enclosure: upper/lower - 1.
pub const TIGHTNESS: f64 = 1e-3;

/// Units of work for one claim on one piece at effort 1.
pub const BUDGET: u64 = 1_000_000_000;

/// One claim about one approximant, carried out.
#[derive(Clone, Debug)]
pub struct ClaimOutcome {
    /// Position of the claim in the audit file.
    pub claim: usize,
    /// Position of the approximant.
    pub approximant: usize,
    /// The set of arguments: closed intervals.
    pub on: Vec<[Constant; 2]>,
    /// Pieces that the claim is about, by position, with what is proved on them.
    pub pieces: Vec<(usize, PieceOutcome)>,
    /// The whole.
    pub summary: Summary,
}

/// Why an audit could not be carried out: the input is at fault.
#[derive(Clone, Debug)]
pub enum AuditError {
    /// A formula has no value at an argument of the claim.
    Undefined {
        /// Position of the approximant whose reference or steps it is.
        approximant: usize,
        /// Name of the claim.
        claim: String,
        /// Where and why.
        undefined: Undefined,
    },
    /// A claim is left without any argument.
    EmptySet {
        /// Name of the claim.
        claim: String,
    },
    /// An end such as "pi/4" could not be enclosed.
    End {
        /// The text of the end.
        text: String,
    },
}

/// One unit of the plan.
struct Unit<'a> {
    claim: &'a Claim,
    approximant_index: usize,
    approximant: &'a Approximant,
    piece: usize,
    parts: Vec<Part>,
}

/// Carries out every claim. `advance` is called once a unit from any thread.
///
/// # Errors
///
/// The first fault of the input, in the order of the plan.
pub fn run(
    file: &AuditFile,
    effort: u32,
    started: &(dyn Fn(u64) + Sync),
    advance: &(dyn Fn() + Sync),
) -> Result<Vec<ClaimOutcome>, AuditError> {
    let mut outcomes = Vec::new();
    let mut units = Vec::new();
    for (claim_index, claim) in file.claims.iter().enumerate() {
        for target in &claim.targets {
            let on = set_of(target)?;
            let first = units.len();
            plan(file, claim, target, &on, &mut units)?;
            if units.len() == first {
                return Err(AuditError::EmptySet {
                    claim: claim.id.clone(),
                });
            }
            let on = on.into_iter().map(|interval| interval.on).collect();
            outcomes.push((claim_index, target.approximant, on, first..units.len()));
        }
    }
    started(units.len() as u64);
    let effort = Effort {
        tightness: TIGHTNESS,
        budget: BUDGET.saturating_mul(u64::from(effort)),
    };
    let results: Vec<Result<PieceOutcome, AuditError>> = units
        .par_iter()
        .map(|unit| {
            let result = carry_out(file, unit, &effort);
            advance();
            result
        })
        .collect();
    let mut results = results.into_iter();
    outcomes
        .into_iter()
        .map(|(claim, approximant, on, range)| {
            let pieces = results
                .by_ref()
                .take(range.len())
                .collect::<Result<Vec<_>, _>>()?;
            let bound = file.claims[claim]
                .at_most
                .as_ref()
                .map(|bound| &bound.value);
            let summary = summary(&pieces, bound);
            let pieces = units[range]
                .iter()
                .map(|unit| unit.piece)
                .zip(pieces)
                .collect();
            Ok(ClaimOutcome {
                claim,
                approximant,
                on,
                pieces,
                summary,
            })
        })
        .collect()
}

fn carry_out(file: &AuditFile, unit: &Unit, effort: &Effort) -> Result<PieceOutcome, AuditError> {
    let measure = unit.claim.measure.bound_measure();
    evaluate(
        file.reference_of(unit.approximant_index),
        &unit.approximant.pieces[unit.piece],
        &unit.parts,
        &measure,
        unit.claim.at_most.as_ref().map(|bound| &bound.value),
        effort,
    )
    .map_err(|undefined| AuditError::Undefined {
        approximant: unit.approximant_index,
        claim: unit.claim.id.clone(),
        undefined,
    })
}

/// An interval of a claim with the enclosures of its ends, and whether they belong to it.
struct Interval {
    on: [Constant; 2],
    ends: [End; 2],
    closed: [bool; 2],
}

/// The set of a claim: `on` without the `except` intervals, as intervals in order. The ends of what
/// is left out do not belong to the set, so no witness may lie there. (The supremum over a set and
/// over its closure are the same for a continuous error.)
fn set_of(target: &Target) -> Result<Vec<Interval>, AuditError> {
    let both = |ends: &[Constant; 2]| Ok::<_, AuditError>((ends.clone(), enclosed(ends)?));
    let mut except = target
        .except
        .iter()
        .map(both)
        .collect::<Result<Vec<_>, _>>()?;
    except.sort_by(|(_, a), (_, b)| a[0].low.cmp(&b[0].low));
    let (on, ends) = both(&target.on)?;
    let [on_left, on_right] = on;
    let [left_end, right_end] = ends;
    let mut left = (on_left, left_end, true);
    let mut right_closed = true;
    let mut set = Vec::new();
    for ([from, to], [from_end, to_end]) in except {
        // What begins beyond the right end leaves out nothing, and neither does what follows.
        if from_end.low > right_end.high {
            break;
        }
        if from_end.high > left.1.low && !from_end.equals(&left.1) {
            set.push(Interval {
                on: [left.0.clone(), from],
                ends: [left.1.clone(), from_end],
                closed: [left.2, false],
            });
        }
        if to_end.low >= left.1.low {
            right_closed = to_end.high < right_end.low;
            left = (to, to_end, false);
        }
    }
    if left.1.low < right_end.high && !left.1.equals(&right_end) {
        set.push(Interval {
            on: [left.0, on_right],
            ends: [left.1, right_end],
            closed: [left.2, right_closed],
        });
    }
    Ok(set)
}

fn enclosed(ends: &[Constant; 2]) -> Result<[End; 2], AuditError> {
    let end = |constant: &Constant| {
        End::new(constant).ok_or_else(|| AuditError::End {
            text: constant.text().to_owned(),
        })
    };
    Ok([end(&ends[0])?, end(&ends[1])?])
}

fn plan<'a>(
    file: &'a AuditFile,
    claim: &'a Claim,
    target: &Target,
    on: &[Interval],
    units: &mut Vec<Unit<'a>>,
) -> Result<(), AuditError> {
    let approximant = &file.approximants[target.approximant].approximant;
    let count = approximant.pieces.len();
    for (index, piece) in approximant.pieces.iter().enumerate() {
        let ends = enclosed(&piece.on)?;
        let owned = match approximant.owner {
            Owner::Right => [true, index + 1 == count],
            Owner::Left => [index == 0, true],
        };
        let parts: Vec<Part> = on
            .iter()
            .filter_map(
                |Interval {
                     ends: claim,
                     closed,
                     ..
                 }| {
                    intersection([&ends[0], &ends[1]], owned, [&claim[0], &claim[1]], *closed)
                },
            )
            .collect();
        if !parts.is_empty() {
            units.push(Unit {
                claim,
                approximant_index: target.approximant,
                approximant,
                piece: index,
                parts,
            });
        }
    }
    Ok(())
}
