//! Two-point Hermite approximations: Taylor data at shared knots, or at both ends of every piece.

use std::cmp::Ordering;

use rug::Rational;

use crate::approximant::common_denominator::ConversionTooLarge;
use crate::approximant::hermite::{Scaling, multiply_by_powers_of_width, to_powers};
use crate::approximant::order::compare;
use crate::approximant::piece::{Basis, Form, Piece, Stored};
use crate::approximant::polynomial::Polynomial;
use crate::approximant::power::{Variable, origin_and_scale};
use crate::audit::diagnostic::quoted;
use crate::audit::document::Node;
use crate::function::constant::Constant;

use super::approximant::Content;
use super::pieces::{check_count, check_neighbours};
use super::reader::{At, Reader, Table};
use super::storage::{Storage, StoredList};

pub(super) const KEYS: [&str; 3] = ["knots", "pieces", "scaling"];

const KNOTS: &str = "write knots = [{ at = \"0\", taylor = [\"1\", \"1\"] }, ...], at least two, \
                     with f^(j)/j! for j = 0, 1, ...";
const PIECES: &str = "write pieces = [{ on = [\"0\", \"1\"], left = [...], right = [...] }]";
const TAYLOR: &str = "write f^(j)/j! for j = 0, 1, ...: taylor = [\"1\", \"1\", \"0.5\"]";

struct Knot {
    position: Constant,
    data: StoredList,
}

/// `knots`: neighbouring pieces share the data of a knot. `pieces` with `left` and `right`: every
/// piece has data of its own at both ends.
pub(super) fn read(
    reader: &mut Reader<'_>,
    table: &Table<'_>,
    storage: &mut Storage,
) -> Option<Content> {
    let scaling = match table.get("scaling") {
        Some(at) => reader.word(
            at,
            &[("run-time", Scaling::RunTime), ("stored", Scaling::Stored)],
        ),
        None => Some(Scaling::RunTime),
    };
    let pieces = match (table.get("knots"), table.get("pieces")) {
        (Some(_), Some(at)) => {
            let found = "both stand here";
            reader.error(at, "`knots` and `pieces` exclude each other", found, KNOTS);
            return None;
        }
        (None, Some(at)) => {
            let scaling = scaling?;
            reader.with_array(at, PIECES, |reader, at, elements| {
                read_pieces(reader, at, elements, scaling, storage)
            })
        }
        _ => {
            let at = reader.required(table, "knots", KNOTS)?;
            let scaling = scaling?;
            reader.with_array(at, KNOTS, |reader, at, elements| {
                read_knots(reader, at, elements, scaling, storage)
            })
        }
    }?;
    Some(Content {
        basis: Basis::Hermite { scaling: scaling? },
        pieces,
    })
}

fn read_knots(
    reader: &mut Reader<'_>,
    at: At<'_>,
    elements: &[Node],
    scaling: Scaling,
    storage: &mut Storage,
) -> Option<Vec<Piece>> {
    if !check_count(reader, at, elements, 2, KNOTS) {
        return None;
    }
    let mut knots = Vec::new();
    for element in elements {
        if let Some(knot) = read_knot(reader, at.to(element), storage) {
            knots.push(knot);
        }
    }
    if knots.len() != elements.len() || !check_knots(reader, at, elements, &knots) {
        return None;
    }
    if scaling == Scaling::Stored && !check_equal_widths(reader, at, elements, &knots) {
        return None;
    }
    let mut pieces = Vec::new();
    for (pair, element) in knots.windows(2).zip(elements) {
        let [left, right] = pair else { continue };
        let on = [left.position.clone(), right.position.clone()];
        if let Some(piece) = convert(reader, at.to(element), on, &left.data, &right.data, scaling) {
            pieces.push(piece);
        }
    }
    (pieces.len() + 1 == knots.len()).then_some(pieces)
}

fn read_knot(reader: &mut Reader<'_>, at: At<'_>, storage: &mut Storage) -> Option<Knot> {
    let table = reader.table(at, KNOTS)?;
    reader.check_keys(&table, &["at", "taylor"]);
    let position = reader
        .required(&table, "at", "write where the knot is: at = \"0.5\"")
        .and_then(|at| {
            let position = reader.constant(at)?;
            reader.round_end(at, position, storage.ends)
        });
    let data = reader
        .required(&table, "taylor", TAYLOR)
        .and_then(|at| reader.stored_list(at, storage, TAYLOR));
    Some(Knot {
        position: position?,
        data: data?,
    })
}

fn check_knots(reader: &mut Reader<'_>, at: At<'_>, nodes: &[Node], knots: &[Knot]) -> bool {
    let mut ascending = true;
    for (index, pair) in knots.windows(2).enumerate() {
        let [before, after] = pair else { continue };
        let (title, advice) = match compare(&before.position, &after.position) {
            Some(Ordering::Less) => continue,
            Some(Ordering::Equal) => (
                "a knot is repeated",
                "write all orders of a knot in one `taylor` list",
            ),
            Some(Ordering::Greater) => (
                "the knots are not in ascending order",
                "write the knots from left to right",
            ),
            None => (
                "the order of two knots cannot be decided",
                "write the knots with more distance, or as numbers",
            ),
        };
        let found = format!(
            "knot {} at {} and knot {} at {}",
            index + 1,
            quoted(before.position.text()),
            index + 2,
            quoted(after.position.text())
        );
        reader.error(at.to(&nodes[index + 1]), title, found, advice);
        ascending = false;
    }
    ascending
}

/// One stored list cannot be scaled by two widths: where data are stored scaled, a knot with
/// derivatives lies between pieces of the same width.
fn check_equal_widths(reader: &mut Reader<'_>, at: At<'_>, nodes: &[Node], knots: &[Knot]) -> bool {
    for (index, triple) in knots.windows(3).enumerate() {
        let [before, knot, after] = triple else {
            continue;
        };
        let width = |left: &Knot, right: &Knot| {
            let (left, right) = (left.position.as_rational()?, right.position.as_rational()?);
            Some(Rational::from(right - left))
        };
        let widths = (width(before, knot), width(knot, after));
        let equal = matches!(&widths, (Some(left), Some(right)) if left == right);
        if knot.data.stored.len() > 1 && !equal {
            reader.error(
                at.to(&nodes[index + 1]),
                "stored scaling needs equal widths beside a shared knot",
                "the pieces to the left and to the right are not proved equally wide",
                "write pieces = [{ on, left, right }], or store unscaled data",
            );
            return false;
        }
    }
    true
}

fn read_pieces(
    reader: &mut Reader<'_>,
    at: At<'_>,
    elements: &[Node],
    scaling: Scaling,
    storage: &mut Storage,
) -> Option<Vec<Piece>> {
    if !check_count(reader, at, elements, 1, PIECES) {
        return None;
    }
    let mut pieces = Vec::new();
    for element in elements {
        let Some((on, left, right)) = read_piece(reader, at.to(element), storage) else {
            continue;
        };
        if let Some(piece) = convert(reader, at.to(element), on, &left, &right, scaling) {
            pieces.push(piece);
        }
    }
    // Neighbours can be compared only where every piece was understood.
    let fit = pieces.len() == elements.len() && check_neighbours(reader, at, elements, &pieces);
    fit.then_some(pieces)
}

fn read_piece(
    reader: &mut Reader<'_>,
    at: At<'_>,
    storage: &mut Storage,
) -> Option<([Constant; 2], StoredList, StoredList)> {
    let table = reader.table(at, PIECES)?;
    reader.check_keys(&table, &["on", "left", "right"]);
    let on = reader
        .required(
            &table,
            "on",
            "write the two ends of the piece: on = [\"0\", \"1\"]",
        )
        .and_then(|at| reader.piece_ends(at, storage));
    let mut data = |key| {
        reader
            .required(&table, key, PIECES)
            .and_then(|at| reader.stored_list(at, storage, TAYLOR))
    };
    let (left, right) = (data("left"), data("right"));
    Some((on?, left?, right?))
}

fn convert(
    reader: &mut Reader<'_>,
    at: At<'_>,
    on: [Constant; 2],
    left: &StoredList,
    right: &StoredList,
    scaling: Scaling,
) -> Option<Piece> {
    let (origin, scale) = match origin_and_scale(&Variable::Unit, &on) {
        Ok(pair) => pair,
        Err(error) => {
            let advice = "write the knots as numbers or as shorter formulas";
            reader.error(
                at,
                "the width of the piece has no value",
                error.message,
                advice,
            );
            return None;
        }
    };
    let width = match (scaling, scale.as_rational()) {
        (Scaling::Stored, _) => None,
        (Scaling::RunTime, Some(width)) => Some(width.clone()),
        // Values alone are not scaled.
        (Scaling::RunTime, None) if left.stored.len() == 1 && right.stored.len() == 1 => None,
        (Scaling::RunTime, None) => {
            reader.error(
                at,
                "a Hermite piece with derivatives needs rational knots",
                format!("a width of {}", quoted(scale.text())),
                "write the knots that the program uses, for example with ends_stored_as",
            );
            return None;
        }
    };
    let polynomial = |left: &[Rational], right: &[Rational]| {
        to_unit_powers(left, right, width.as_ref()).map(|coefficients| Polynomial {
            origin: origin.clone(),
            scale: scale.clone(),
            coefficients,
        })
    };
    let is_changed = left.is_changed() || right.is_changed();
    let written = is_changed.then(|| polynomial(left.as_written(), right.as_written()));
    match (polynomial(&left.stored, &right.stored), written.transpose()) {
        (Ok(stored), Ok(written)) => Some(Piece {
            on,
            form: Form::Polynomial(stored),
            written,
            stored: Stored::Ends {
                left: left.stored.clone(),
                right: right.stored.clone(),
            },
        }),
        (Err(error), _) | (_, Err(error)) => {
            let advice = "write fewer orders, or decimals instead of ratios";
            reader.error(at, "the piece is too large", error.to_string(), advice);
            None
        }
    }
}

/// The powers of (x - a)/(b - a), from data that are still to be scaled where a width is given.
fn to_unit_powers(
    left: &[Rational],
    right: &[Rational],
    width: Option<&Rational>,
) -> Result<Vec<Rational>, ConversionTooLarge> {
    match width {
        None => to_powers(left, right),
        Some(width) => to_powers(
            &multiply_by_powers_of_width(left, width)?,
            &multiply_by_powers_of_width(right, width)?,
        ),
    }
}
