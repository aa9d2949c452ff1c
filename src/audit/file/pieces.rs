//! Do the pieces follow each other without gap, overlap or repetition?

use std::cmp::Ordering;

use crate::approximant::order::compare;
use crate::approximant::piece::Piece;
use crate::audit::diagnostic::quoted;
use crate::audit::document::Node;
use crate::function::constant::Constant;

use super::reader::{At, Reader};

/// The most pieces of one approximation.
const MAXIMUM_PIECES: usize = 1_000_000;

/// Reports a list of pieces or knots that is shorter than `least` or too long.
pub(super) fn check_count(
    reader: &mut Reader<'_>,
    at: At<'_>,
    elements: &[Node],
    least: usize,
    advice: &str,
) -> bool {
    let found = format!("{} elements", elements.len());
    if elements.len() < least {
        let title = format!("at least {least} must stand here");
        reader.error(at, title, found, advice);
        return false;
    }
    if elements.len() > MAXIMUM_PIECES {
        let advice = format!("one approximation has at most {MAXIMUM_PIECES} pieces");
        reader.error(at, "there are too many pieces", found, advice);
        return false;
    }
    true
}

/// Reports pieces that are out of order, overlap, or leave a gap. Each piece is known to go
/// from left to right; `nodes` are the places of the pieces.
pub(super) fn check_neighbours(
    reader: &mut Reader<'_>,
    at: At<'_>,
    nodes: &[Node],
    pieces: &[Piece],
) -> bool {
    let mut fit = true;
    for (index, pair) in pieces.windows(2).enumerate() {
        let [Piece { on: before, .. }, Piece { on: after, .. }] = pair else {
            continue;
        };
        let (title, advice) = match compare(&before[1], &after[0]) {
            Some(Ordering::Equal) => continue,
            Some(Ordering::Less) => (
                "there is a gap between two pieces",
                "let each piece begin where the one before it ends, or write two approximations",
            ),
            Some(Ordering::Greater) => match compare(&after[0], &before[0]) {
                Some(Ordering::Less) => (
                    "the pieces are not in ascending order",
                    "write the pieces from left to right (the order of the coefficients stays)",
                ),
                _ => (
                    "two pieces overlap",
                    "let each piece begin where the one before it ends",
                ),
            },
            None => (
                "it cannot be decided whether two ends are equal",
                "write the shared end with the same text in both pieces",
            ),
        };
        let here = at.to(&nodes[index + 1]);
        let names = format!(
            "piece {} on {} and piece {} on {}",
            index + 1,
            shown(before),
            index + 2,
            shown(after)
        );
        reader.error(here, title, names, advice);
        fit = false;
    }
    fit
}

fn shown(on: &[Constant; 2]) -> String {
    format!("[{}, {}]", quoted(on[0].text()), quoted(on[1].text()))
}
