//! A part of a piece, and the frame in which it is expanded.

use rug::float::Round;
use rug::{Complete, Float, Rational};

use crate::bound::patch::{Frame, local};
use crate::bound::zeros::short_middle;
use crate::function::exact::Centre;
use crate::number::wide_interval::WideInterval;

/// An exact point around which a cell must be expanded.
#[derive(Clone, Debug)]
pub struct Anchor {
    /// The point.
    pub centre: Centre,
    /// Order of the zero that reference and approximant share there and that is divided out.
    pub shared_zero: usize,
}

/// A closed subinterval of the piece.
#[derive(Clone, Debug)]
pub struct Cell {
    /// Ends.
    pub ends: [Rational; 2],
    /// Number of bisections that led here.
    pub depth: u32,
    /// Expansion point, where it is prescribed.
    pub anchor: Option<Anchor>,
    /// A zero of the reference was sought in or beside the cell, and none was found.
    pub sought: bool,
}

/// Bits of a patch radius.
const RADIUS_BITS: u32 = 24;

impl Cell {
    /// The whole of a piece.
    pub fn whole(ends: [Rational; 2]) -> Self {
        Self {
            ends,
            depth: 0,
            anchor: None,
            sought: false,
        }
    }

    /// A short number near the middle.
    pub fn middle(&self) -> Rational {
        short_middle(&self.ends[0], &self.ends[1])
    }

    /// The cell as an interval, rounded outward.
    pub fn range(&self, precision: u32) -> WideInterval {
        WideInterval::from_rationals(&self.ends[0], &self.ends[1], precision)
    }

    /// The frame of expansion: centre, radius and the range of t, outward for the bounds and
    /// inward (and away from ends that the set does not own) for the sample points.
    pub fn frame(&self, inner: &[Rational; 2], owned: [bool; 2]) -> Frame {
        let (centre, shared_zero) = match &self.anchor {
            Some(anchor) => (anchor.centre.clone(), anchor.shared_zero),
            None => (Centre::rational(self.middle()), 0),
        };
        let radius = self.radius_around(&centre);
        let t = |x: &Rational, round| local(&centre, &radius, x, round);
        let outer = [
            t(&self.ends[0], Round::Down).max(-1.0),
            t(&self.ends[1], Round::Up).min(1.0),
        ];
        // Ends of the cell that lie inside the set are of the set.
        let inside = |k: usize| {
            if k == 0 {
                self.ends[0] > inner[0]
            } else {
                self.ends[1] < inner[1]
            }
        };
        let left = if inside(0) { &self.ends[0] } else { &inner[0] };
        let right = if inside(1) { &self.ends[1] } else { &inner[1] };
        let mut range = [t(left, Round::Up), t(right, Round::Down)];
        let margin = (range[1] - range[0]).abs() / (1u64 << 40) as f64;
        if !owned[0] && !inside(0) {
            range[0] = (range[0] + margin).next_up();
        }
        if !owned[1] && !inside(1) {
            range[1] = (range[1] - margin).next_down();
        }
        // A cell may hold no representable argument of the set (it covers the end of an
        // irrational domain, say): then it gives upper bounds only.
        let inner = (range[0] <= range[1]).then_some(range);
        Frame {
            centre,
            radius,
            outer,
            inner,
            seek_zero: !self.sought && shared_zero == 0,
            shared_zero,
        }
    }

    fn radius_around(&self, centre: &Centre) -> Float {
        let distance = |x: &Rational| {
            let difference =
                WideInterval::from_rationals(x, x, 128).sub(&centre.wide_interval(128));
            Float::with_val_round(RADIUS_BITS, difference.magnitude(), Round::Up).0
        };
        let radius = distance(&self.ends[0]).max(&distance(&self.ends[1]));
        if radius.is_zero() {
            // A single point: any radius serves.
            return Float::with_val(RADIUS_BITS, 1) >> 200;
        }
        radius
    }

    /// The argument centre + radius t.
    pub fn argument(&self, centre: &Centre, t: f64) -> Centre {
        let radius = self.radius_around(centre).to_rational().unwrap_or_default();
        let step = Rational::from_f64(t).unwrap_or_default() * radius;
        Centre {
            rational: (&centre.rational + step),
            pi_multiple: centre.pi_multiple.clone(),
        }
    }

    /// Two halves; an anchored cell becomes an anchored middle and what is beside it.
    pub fn parts(self) -> Vec<Cell> {
        let depth = self.depth + 1;
        match &self.anchor {
            None => {
                let middle = self.middle();
                let [left, right] = self.ends;
                vec![
                    Cell {
                        ends: [left, middle.clone()],
                        depth,
                        anchor: None,
                        sought: false,
                    },
                    Cell {
                        ends: [middle, right],
                        depth,
                        anchor: None,
                        sought: false,
                    },
                ]
            }
            Some(anchor) => {
                let half = self
                    .radius_around(&anchor.centre)
                    .to_rational()
                    .unwrap_or_default()
                    / 2u32;
                let anchor = anchor.clone();
                self.around(&anchor, &half, depth)
            }
        }
    }

    /// The cell with a prescribed expansion point, which lies in it or not far beside it.
    pub fn anchored(self, anchor: Anchor) -> Vec<Cell> {
        let depth = self.depth + 1;
        let radius = self
            .radius_around(&anchor.centre)
            .to_rational()
            .unwrap_or_default();
        self.around(&anchor, &radius, depth)
    }

    /// The part within `radius` of the anchor, anchored, and the rest, not.
    fn around(self, anchor: &Anchor, radius: &Rational, depth: u32) -> Vec<Cell> {
        let place = anchor.centre.wide_interval(128);
        let place = place.midpoint().to_rational().unwrap_or_default();
        if (&place - radius).complete() >= self.ends[1]
            || (&place + radius).complete() <= self.ends[0]
        {
            // The anchor lies beside the cell and its neighbourhood has shrunk away from it.
            return Cell {
                anchor: None,
                ..self
            }
            .parts();
        }
        let [left, right] = self.ends;
        let inner_left = (&place - radius).complete().max(left.clone());
        let inner_right = (&place + radius).complete().min(right.clone());
        let mut cells = Vec::with_capacity(3);
        if inner_left > left {
            cells.push(Cell {
                ends: [left, inner_left.clone()],
                depth,
                anchor: None,
                sought: false,
            });
        }
        if inner_right < right {
            cells.push(Cell {
                ends: [inner_right.clone(), right],
                depth,
                anchor: None,
                sought: false,
            });
        }
        cells.insert(
            0,
            Cell {
                ends: [inner_left, inner_right],
                depth,
                anchor: Some(anchor.clone()),
                sought: false,
            },
        );
        cells
    }
}
