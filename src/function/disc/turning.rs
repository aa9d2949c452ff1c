//! The argument of a function along a half circle, in quarter turns.

use rug::Float;

use crate::number::rectangle::Rectangle;

/// How far a function without zeros has turned around 0 on its way along the arcs.
///
/// Each arc is given a number of quarter turns d such that its enclosure lies in the half plane
/// Re(i^-d z) > 0, and that the argument followed continuously from the first arc is between
/// (d - 1) pi/2 and (d + 1) pi/2. The value at the point that two neighbouring arcs share lies in
/// both half planes; those of d and d + 2 are disjoint, so that neighbours differ by at most 1, and
/// the next number is determined by which half plane contains the next enclosure.
#[derive(Clone, Copy, Debug, Default)]
pub(super) struct Turning {
    first: i64,
    latest: Option<i64>,
}

impl Turning {
    /// Takes the next arc. `None` if its enclosure contains 0.
    ///
    /// The first arc begins, and the last one ends, at a real value different from 0; it lies in
    /// Re > 0 or Re < 0, so that its number is even: 0 or 2 for the first.
    pub(super) fn next(self, enclosure: &Rectangle) -> Option<Self> {
        match self.latest {
            None => {
                let first = [0, 2]
                    .into_iter()
                    .find(|&turns| lies_in(enclosure, turns))?;
                Some(Self {
                    first,
                    latest: Some(first),
                })
            }
            Some(turns) => {
                let mut candidates = [turns, turns + 1, turns - 1].into_iter();
                let latest = candidates.find(|&turns| lies_in(enclosure, turns))?;
                Some(Self {
                    latest: Some(latest),
                    ..self
                })
            }
        }
    }

    /// The number of the latest arc.
    pub(super) fn turns(self) -> i64 {
        self.latest.unwrap_or(0)
    }

    /// The sign of the (real) value at the start.
    pub(super) fn starts_negative(self) -> bool {
        self.first != 0
    }

    /// After the last arc: the number of zeros in the disc, half the number of half turns on the
    /// whole circle, of which the arcs are one half.
    pub(super) fn zeros(self) -> i64 {
        (self.turns() - self.first) / 2
    }
}

/// True if the rectangle lies in the half plane Re(i^-turns z) > 0.
fn lies_in(enclosure: &Rectangle, turns: i64) -> bool {
    let positive = |x: &Float| *x > 0;
    match turns.rem_euclid(4) {
        0 => positive(enclosure.real.lower()),
        1 => positive(enclosure.imaginary.lower()),
        2 => enclosure.real.is_negative(),
        _ => enclosure.imaginary.is_negative(),
    }
}
