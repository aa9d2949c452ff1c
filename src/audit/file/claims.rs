//! The claims of the file.

use std::cmp::Ordering;
use std::collections::HashSet;

use rug::Rational;

use crate::approximant::order::compare;
use crate::approximant::piece::Approximant;
use crate::audit::diagnostic::quoted;
use crate::audit::document::Value;
use crate::claim::model::{Bound, Claim, ErrorMeasure, Subject, Target};
use crate::function::constant::Constant;

use super::AuditedApproximant;
use super::approximant::identity;
use super::reader::{At, Reader, Table};
use super::spelling::nearest;

const KEYS: [&str; 15] = [
    "id",
    "of",
    "error",
    "on",
    "at_most",
    "absolute_part",
    "relative_part",
    "except",
    "approximant",
    "quantity",
    "order",
    "property",
    "within",
    "count",
    "format",
];

const CLAIM: &str =
    "write [[claims]] and below it of = \"exact\", error = \"absolute\", at_most = \"1e-9\"";

/// The kinds of error measure; the parts of a mixed one are read apart.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Kind {
    Absolute,
    Relative,
    Mixed,
    Ulp,
}

/// Reads every claim. Without the approximations (they have errors of their own) the claims are
/// checked as far as that goes.
pub(super) fn read_all(
    reader: &mut Reader<'_>,
    root: &Table<'_>,
    approximants: Option<&[AuditedApproximant]>,
) -> Option<Vec<Claim>> {
    let Some(at) = root.get("claims") else {
        if reader.options.require_claims {
            reader.error(root.at, "`claims` is missing", "nothing is claimed", CLAIM);
            return None;
        }
        return Some(Vec::new());
    };
    let elements = reader.array(at, CLAIM)?;
    if elements.is_empty() && reader.options.require_claims {
        reader.error(at, "`claims` is empty", "nothing is claimed", CLAIM);
        return None;
    }
    let mut claims = Vec::new();
    let mut names = HashSet::new();
    for (index, element) in elements.iter().enumerate() {
        let at = at.to(element);
        let Some(claim) = read(reader, at, index + 1, approximants) else {
            continue;
        };
        if !names.insert(claim.id.clone()) {
            let advice = "give each claim an id of its own";
            reader.error(at, "two claims have the same id", quoted(&claim.id), advice);
        }
        claims.push(claim);
    }
    (claims.len() == elements.len()).then_some(claims)
}

fn read(
    reader: &mut Reader<'_>,
    at: At<'_>,
    number: usize,
    approximants: Option<&[AuditedApproximant]>,
) -> Option<Claim> {
    let table = reader.table(at, CLAIM)?;
    reader.check_keys(&table, &KEYS);
    let id = match table.get("id") {
        Some(at) => identity(reader, at),
        None => Some(format!("claim-{number}")),
    };
    if !is_supported(reader, &table) {
        return None;
    }
    let subject = read_subject(reader, &table);
    let measure = read_measure(reader, &table);
    let at_most = read_bound(reader, &table, measure.as_ref());
    let targets = read_targets(reader, &table, approximants);
    Some(Claim {
        id: id?,
        subject: subject?,
        measure: measure?,
        at_most: at_most?,
        targets: targets?,
    })
}

/// Reports what a later version will prove.
fn is_supported(reader: &mut Reader<'_>, table: &Table<'_>) -> bool {
    if let Some(at) = table.get("property") {
        reader.unsupported(
            at,
            "claims about a property are",
            "claim an error of the value",
        );
        return false;
    }
    if let Some(at) = table.get("quantity") {
        let words = [("value", true), ("derivative", false), ("integral", false)];
        match reader.word(at, &words) {
            Some(true) => {}
            Some(false) => {
                let what = "claims about derivatives and integrals are";
                reader.unsupported(at, what, "claim an error of the value");
                return false;
            }
            None => return false,
        }
    }
    let mut supported = true;
    for key in ["order", "within", "count"] {
        if let Some(entry) = table.entry(key) {
            let advice = "remove it: it belongs to claims about derivatives or properties";
            reader.key_error(table, entry, "a key of another kind of claim", advice);
            supported = false;
        }
    }
    supported
}

fn read_subject(reader: &mut Reader<'_>, table: &Table<'_>) -> Option<Subject> {
    let advice = "write of = \"exact\" (the function that the coefficients define)";
    let at = reader.required(table, "of", advice)?;
    match reader.word(
        at,
        &[("exact", Subject::Exact), ("computed", Subject::Computed)],
    )? {
        Subject::Exact => Some(Subject::Exact),
        Subject::Computed => {
            let what = "claims about the computed value are";
            reader.unsupported(at, what, "claim the exact approximation: of = \"exact\"");
            None
        }
    }
}

fn read_measure(reader: &mut Reader<'_>, table: &Table<'_>) -> Option<ErrorMeasure> {
    let advice = "write error = \"absolute\", \"relative\" or \"mixed\"";
    let at = reader.required(table, "error", advice)?;
    let words = [
        ("absolute", Kind::Absolute),
        ("relative", Kind::Relative),
        ("mixed", Kind::Mixed),
        ("ulp", Kind::Ulp),
    ];
    let kind = reader.word(at, &words)?;
    if kind == Kind::Ulp {
        reader.unsupported(at, "errors in units in the last place are", advice);
        return None;
    }
    let foreign: &[&str] = match kind {
        Kind::Mixed => &["format"],
        _ => &["absolute_part", "relative_part", "format"],
    };
    let mut clean = true;
    for key in foreign {
        if let Some(entry) = table.entry(key) {
            let advice = "remove it, or choose the error measure that it belongs to \
                          (the parts: mixed; the format: ulp)";
            reader.key_error(table, entry, "a key of another error measure", advice);
            clean = false;
        }
    }
    let measure = match kind {
        Kind::Absolute => ErrorMeasure::Absolute,
        Kind::Relative => ErrorMeasure::Relative,
        Kind::Mixed | Kind::Ulp => read_mixed(reader, table)?,
    };
    clean.then_some(measure)
}

fn read_mixed(reader: &mut Reader<'_>, table: &Table<'_>) -> Option<ErrorMeasure> {
    let advice = "a mixed error is |p-f|/(A + R|f|): write absolute_part = \"1e-12\" for A and \
                  relative_part = \"1e-9\" for R";
    let mut part = |key| {
        reader
            .required(table, key, advice)
            .and_then(|at| reader.non_negative(at, "a part of a mixed error"))
    };
    let (absolute_part, relative_part) = (part("absolute_part"), part("relative_part"));
    let (absolute_part, relative_part) = (absolute_part?, relative_part?);
    if absolute_part.is_zero() && relative_part.is_zero() {
        reader.error(
            table.at,
            "both parts of the mixed error are 0",
            "A = R = 0",
            advice,
        );
        return None;
    }
    Some(ErrorMeasure::Mixed {
        absolute_part,
        relative_part,
    })
}

/// The bound; without one the error is measured, and a mixed error is at most 1.
fn read_bound(
    reader: &mut Reader<'_>,
    table: &Table<'_>,
    measure: Option<&ErrorMeasure>,
) -> Option<Option<Bound>> {
    match table.get("at_most") {
        Some(at) => {
            let value = reader.non_negative(at, "a bound")?;
            let text = match &at.node.value {
                Value::Text(text) | Value::Integer(text) => text.to_string(),
                _ => value.to_string(),
            };
            Some(Some(Bound { value, text }))
        }
        None if matches!(measure, Some(ErrorMeasure::Mixed { .. })) => Some(Some(Bound {
            value: Rational::from(1),
            text: "1".to_owned(),
        })),
        None => Some(None),
    }
}

fn read_targets(
    reader: &mut Reader<'_>,
    table: &Table<'_>,
    approximants: Option<&[AuditedApproximant]>,
) -> Option<Vec<Target>> {
    let on = table.get("on").map(|at| (at, reader.ends(at)));
    let except = read_except(reader, table);
    let chosen = table.get("approximant").map(|at| {
        (
            at,
            reader.text(at, "write the id of an approximation in quotes"),
        )
    });
    let approximants = approximants?;
    let positions: Vec<usize> = match chosen {
        None => (0..approximants.len()).collect(),
        Some((at, id)) => vec![find(reader, at, id?, approximants)?],
    };
    let on = match on {
        Some((at, ends)) => Some((at, ends?)),
        None => None,
    };
    let except = except?;
    let mut targets = Vec::new();
    for &position in &positions {
        let approximant = &approximants[position].approximant;
        if let Some(target) = target(reader, position, approximant, on.as_ref(), &except) {
            targets.push(target);
        }
    }
    (targets.len() == positions.len()).then_some(targets)
}

fn find(
    reader: &mut Reader<'_>,
    at: At<'_>,
    id: &str,
    approximants: &[AuditedApproximant],
) -> Option<usize> {
    let position = approximants
        .iter()
        .position(|other| other.approximant.id == id);
    if position.is_none() {
        let known: Vec<&str> = approximants
            .iter()
            .map(|other| other.approximant.id.as_str())
            .collect();
        let advice = match nearest(id, &known) {
            Some(near) => format!("did you mean \"{near}\"?"),
            None => "write the id of an approximation of this file".to_owned(),
        };
        reader.error(at, "no approximation has this id", quoted(id), advice);
    }
    position
}

type Placed<'document> = (At<'document>, [Constant; 2]);

fn read_except<'document>(
    reader: &mut Reader<'_>,
    table: &Table<'document>,
) -> Option<Vec<Placed<'document>>> {
    let Some(at) = table.get("except") else {
        return Some(Vec::new());
    };
    let advice = "write the intervals to leave out: except = [[\"-1e-8\", \"1e-8\"]]";
    let elements = reader.array(at, advice)?;
    let placed: Vec<Option<Placed<'document>>> = elements
        .iter()
        .map(|element| {
            let at = at.to(element);
            reader.ends(at).map(|ends| (at, ends))
        })
        .collect();
    placed.into_iter().collect()
}

/// The arguments of a claim for one approximation: its ends rounded like those of the pieces,
/// and inside the domain.
fn target(
    reader: &mut Reader<'_>,
    position: usize,
    approximant: &Approximant,
    on: Option<&Placed<'_>>,
    except: &[Placed<'_>],
) -> Option<Target> {
    let domain = approximant.domain()?;
    let format = approximant.ends_stored_as;
    let on = match on {
        None => domain.map(Constant::clone),
        Some((at, ends)) => {
            let ends = reader.round_ends(*at, ends.clone(), format)?;
            let proper = reader.check_interval(*at, &ends, false);
            let inside = check_inside(reader, *at, &ends, domain, &approximant.id);
            if !(proper && inside) {
                return None;
            }
            ends
        }
    };
    let mut left_out = Vec::new();
    for (at, ends) in except {
        let ends = reader.round_ends(*at, ends.clone(), format)?;
        if !reader.check_interval(*at, &ends, true) {
            return None;
        }
        left_out.push(ends);
    }
    Some(Target {
        approximant: position,
        on,
        except: left_out,
    })
}

fn check_inside(
    reader: &mut Reader<'_>,
    at: At<'_>,
    on: &[Constant; 2],
    domain: [&Constant; 2],
    id: &str,
) -> bool {
    let left = compare(domain[0], &on[0]);
    let right = compare(&on[1], domain[1]);
    let inside = |order: Option<Ordering>| order.is_some_and(Ordering::is_le);
    if inside(left) && inside(right) {
        return true;
    }
    let undecided = left.is_none() || right.is_none();
    let (title, advice) = if undecided {
        (
            "it cannot be decided whether the claim stays inside the pieces",
            "write the end with the same text as the piece",
        )
    } else {
        (
            "the claim leaves the domain of the pieces",
            "claim an interval that the pieces cover (`on`)",
        )
    };
    let found = format!(
        "[{}, {}], while \"{id}\" covers [{}, {}]",
        quoted(on[0].text()),
        quoted(on[1].text()),
        quoted(domain[0].text()),
        quoted(domain[1].text())
    );
    reader.error(at, title, found, advice);
    false
}
