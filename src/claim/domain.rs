//! The set of arguments of a claim on one piece: outer and inner rational ends.
//!
//! An end that is a constant such as "pi/4" is known only as an enclosure [lo, hi]. Upper bounds
//! are proved on the outer set (from the lower end of the left enclosure to the upper end of the
//! right one), lower bounds and witnesses come from the inner set.

use rug::Rational;

use crate::function::constant::Constant;

/// An end with its enclosure; the same number where it is rational.
#[derive(Clone, Debug)]
pub struct End {
    /// Not above the end.
    pub low: Rational,
    /// Not below the end.
    pub high: Rational,
    text: String,
}

/// A part of a piece that a claim is about.
#[derive(Clone, Debug)]
pub struct Part {
    /// Covers every argument.
    pub outer: [Rational; 2],
    /// Holds only arguments of the set; may be reversed where nothing is certain to belong.
    pub inner: [Rational; 2],
    /// Whether the ends belong to the set.
    pub owned: [bool; 2],
}

/// Bits to which irrational ends are enclosed.
const END_PRECISION: u32 = 320;

impl End {
    /// Encloses a constant.
    pub fn new(constant: &Constant) -> Option<Self> {
        let (low, high) = match constant.as_rational() {
            Some(x) => (x.clone(), x.clone()),
            None => constant.enclosure(END_PRECISION)?,
        };
        Some(Self {
            low,
            high,
            text: constant.text().to_owned(),
        })
    }

    /// Proved to be the same number: equal rationals, or the same text.
    pub fn equals(&self, other: &End) -> bool {
        let exact = self.low == self.high && other.low == other.high;
        (exact && self.low == other.low) || (!exact && self.text == other.text)
    }

    /// Proved to be smaller.
    fn below(&self, other: &End) -> bool {
        self.high < other.low
    }
}

/// The intersection of a piece with one interval of a claim, either of which may or may not own
/// its ends. `None` if it is empty, or is a single point that does not belong to both.
pub fn intersection(
    piece: [&End; 2],
    owned: [bool; 2],
    claim: [&End; 2],
    closed: [bool; 2],
) -> Option<Part> {
    if piece[1].below(claim[0]) || claim[1].below(piece[0]) {
        return None;
    }
    if (!(owned[1] && closed[0]) && piece[1].equals(claim[0]))
        || (!(owned[0] && closed[1]) && claim[1].equals(piece[0]))
    {
        return None;
    }
    let outer_left = (&piece[0].low).max(&claim[0].low).clone();
    let outer_right = (&piece[1].high).min(&claim[1].high).clone();
    let inner_left = (&piece[0].high).max(&claim[0].high).clone();
    let inner_right = (&piece[1].low).min(&claim[1].low).clone();
    // The end that lies further inside decides whether it belongs to the set; where it is not
    // known which one does, both must.
    let belongs = |piece_is_inside: bool, claim_is_inside: bool, k: usize| {
        (claim_is_inside || owned[k]) && (piece_is_inside || closed[k])
    };
    let left = belongs(claim[0].below(piece[0]), piece[0].below(claim[0]), 0);
    let right = belongs(piece[1].below(claim[1]), claim[1].below(piece[1]), 1);
    Some(Part {
        outer: [outer_left.clone(), outer_right.max(outer_left)],
        inner: [inner_left, inner_right],
        owned: [left, right],
    })
}
