//! Arcs of the upper half of the unit circle.

use std::sync::OnceLock;

use rug::{Float, Rational};

use crate::number::rectangle::Rectangle;
use crate::number::wide_interval::WideInterval;

/// Levels at which the unit arcs are kept.
const LEVELS: usize = 13;

/// Bits of the unit arcs: the overestimate of a curved arc by a rectangle is far larger.
const PRECISION: u32 = 53;

static UNIT_ARCS: [OnceLock<Vec<Rectangle>>; LEVELS] = [const { OnceLock::new() }; LEVELS];

/// The arc of the angles [index, index + 1] pi / 2^level.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Arc {
    pub(super) level: u32,
    pub(super) index: u32,
}

impl Arc {
    /// The largest level.
    pub(super) const LAST_LEVEL: u32 = LEVELS as u32 - 1;

    /// The two halves, in the order of the angle.
    pub(super) fn halves(self) -> [Self; 2] {
        let level = self.level + 1;
        [
            Self {
                level,
                index: 2 * self.index,
            },
            Self {
                level,
                index: 2 * self.index + 1,
            },
        ]
    }

    /// Encloses radius e^(i theta) for the angles of the arc, to the precision of `radius`.
    pub(super) fn scaled(self, radius: &WideInterval) -> Rectangle {
        let arcs = UNIT_ARCS[self.level as usize].get_or_init(|| unit_arcs(self.level));
        arcs[self.index as usize].scale(radius)
    }
}

/// All arcs of a level. With two or more of them none has an extreme of the cosine or of the sine
/// inside, so that the smallest rectangle is spanned by the ends; the whole half circle, the only
/// arc of level 0, is put together from its halves.
fn unit_arcs(level: u32) -> Vec<Rectangle> {
    let pi = WideInterval::pi(PRECISION);
    let points = 1u32 << level.max(1);
    let ends: Vec<Rectangle> = (0..=points)
        .map(|k| {
            let exact = |x: i64| WideInterval::from_integer(x, PRECISION);
            if k == 0 || k == points {
                return Rectangle::from_real(exact(if k == 0 { 1 } else { -1 }));
            }
            if 2 * k == points {
                return Rectangle::new(exact(0), exact(1));
            }
            let share = WideInterval::from_rational(&Rational::from((k, points)), PRECISION);
            let (sine, cosine) = pi.mul(&share).sin_cos();
            Rectangle::new(cosine, sine)
        })
        .collect();
    let arcs: Vec<Rectangle> = ends.windows(2).map(|pair| pair[0].hull(&pair[1])).collect();
    if level == 0 {
        return vec![arcs[0].hull(&arcs[1])];
    }
    arcs
}

/// A radius as an interval, to at least `precision` bits.
pub(super) fn exact_radius(radius: &Float, precision: u32) -> WideInterval {
    WideInterval::point(radius).with_precision(precision)
}
