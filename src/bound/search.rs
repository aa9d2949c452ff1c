//! From a piece to a proved enclosure of the supremum: cells, splitting, pruning.

use std::collections::VecDeque;

use rug::float::{Round, Special};
use rug::{Complete, Float, Rational};

use crate::bound::cell::{Anchor, Cell};
use crate::bound::confirm::confirmed;
use crate::bound::measure::Measure;
use crate::bound::patch::{NoPatch, Part, Patch, Wish, patch};
use crate::bound::plain::plain_bounds;
use crate::bound::point::{exactly, precise_values_at, values_at};
use crate::bound::pole::undefined_near;
use crate::bound::task::{Supremum, Task, Undefined, Unfinished};
use crate::bound::unbounded::{Shared, around_zero};
use crate::bound::zeros::exact_zero;
use crate::function::exact::Centre;
use crate::function::formula::{Formula, Operation};
use crate::function::refusal::{Refusal, RefusalKind};
use crate::function::series::series;

/// Bits of the reported enclosures.
const RESULT_PRECISION: u32 = 64;

/// Deepest bisection of a piece.
const DEEPEST: u32 = 400;

/// Least units of work that a cell counts as.
const CELL_WORK: u64 = 500;

/// Most cells that wait at one time: bounds the memory.
const LONGEST_QUEUE: usize = 100_000;

/// Units of work that a search for an exact zero counts as.
const ZERO_SEARCH: u64 = 100_000;

/// Once a claim is refuted, the budget is divided by this.
const REFUTED_SHARE: u64 = 2;

/// Depths at which a refused cell is searched for a pole, which costs more than a refusal.
const POLE_DEPTHS: [u32; 8] = [0, 1, 3, 6, 12, 24, 48, 96];

/// Depth from which a cell may be covered by its natural interval extension.
const PLAIN_FROM: u32 = 2;

/// Encloses the supremum for `task`, repeating with a smaller tolerance while the claimed bound
/// lies inside the enclosure.
pub fn supremum(task: &Task) -> Result<Supremum, Undefined> {
    let mut tightness = task.tightness;
    let mut result = Search::new(task, tightness, task.budget).run()?;
    while let Some(bound) = &task.bound {
        let open = result.lower <= *bound && result.upper > *bound;
        let left = task.budget.saturating_sub(result.work);
        if !open || result.unfinished.is_some() || tightness < 1e-11 || left == 0 {
            break;
        }
        tightness /= 32.0;
        let spent = result.work;
        let mut sharper = Search::new(task, tightness, left).run()?;
        sharper.work += spent;
        let finished = sharper.unfinished.is_none();
        // The sharper run replaces the first unless it ran out before it got anywhere.
        if finished || sharper.upper <= result.upper {
            result = sharper;
        } else {
            result.work = sharper.work;
        }
        if !finished {
            break;
        }
    }
    Ok(result)
}

/// The state of one pass.
struct Search<'a> {
    task: &'a Task<'a>,
    queue: VecDeque<Cell>,
    wish: Wish,
    budget: u64,
    result: Supremum,
    maximum_at: Option<(Centre, usize)>,
    minimum_at: Option<(Centre, usize)>,
    seeded: bool,
    largest: Float,
}

impl<'a> Search<'a> {
    fn new(task: &'a Task<'a>, tightness: f64, budget: u64) -> Self {
        let infinity = |special| Float::with_val(RESULT_PRECISION, special);
        let (below, above) = (Special::NegInfinity, Special::Infinity);
        let (floor, precision) = floor_and_precision(task);
        Self {
            task,
            queue: VecDeque::from([Cell::whole(task.outer.clone())]),
            wish: Wish {
                known: Float::new(53),
                tightness,
                floor,
                terms: 6,
                precision,
                budget: 200_000,
            },
            budget,
            result: Supremum {
                lower: Float::new(RESULT_PRECISION),
                upper: Float::new(RESULT_PRECISION),
                minimum: [infinity(above), infinity(above)],
                maximum: [infinity(below), infinity(below)],
                at: None,
                unbounded: None,
                by_continuity: Vec::new(),
                remainder: None,
                cells: [0, 0],
                unfinished: None,
                work: 0,
            },
            maximum_at: None,
            minimum_at: None,
            seeded: false,
            largest: Float::new(53),
        }
    }

    fn run(mut self) -> Result<Supremum, Undefined> {
        while let Some(cell) = self.queue.pop_front() {
            // A claim that is refuted already needs no tight enclosure.
            let refuted = self
                .task
                .bound
                .as_ref()
                .is_some_and(|bound| self.wish.known > *bound);
            let share = if refuted { REFUTED_SHARE } else { 1 };
            if self.result.work > self.budget / share || self.queue.len() > LONGEST_QUEUE {
                self.give_up(&cell, Unfinished::Budget);
                break;
            }
            self.result.work += CELL_WORK;
            let frame = cell.frame(&self.task.inner, self.task.owned);
            match patch(
                &self.task.subject,
                &frame,
                &self.wish,
                &mut self.result.work,
            ) {
                Ok(found) => self.merge(&cell, &frame.centre, frame.shared_zero, &found),
                Err(NoPatch::TooWide | NoPatch::Exhausted) => {
                    self.look_for_poles(&cell)?;
                    if cell.depth >= PLAIN_FROM {
                        self.seed()?;
                        if self.settled_plainly(&cell) {
                            continue;
                        }
                    }
                    self.divide(cell, Unfinished::Budget);
                }
                Err(NoPatch::Unresolved) => {
                    let at = cell.middle();
                    self.divide(cell, Unfinished::Precision { at });
                }
                Err(NoPatch::ReferenceMayVanish(_)) => self.zero_of_reference(cell),
                Err(NoPatch::Centre(refusal, part) | NoPatch::Disc(refusal, part)) => {
                    self.refused(cell, refusal, part)?;
                }
            }
        }
        Ok(self.finish())
    }

    fn merge(&mut self, cell: &Cell, centre: &Centre, shared_zero: usize, found: &Patch) {
        self.result.cells[0] += 1;
        if let Some(anchor) = &cell.anchor
            && !self.result.by_continuity.contains(&anchor.centre)
        {
            self.result.by_continuity.push(anchor.centre.clone());
        }
        self.wish.terms = self.wish.terms.max(found.terms.saturating_sub(4));
        self.wish.precision = self.wish.precision.max(found.precision);
        let scaled = |x: f64| Float::with_val(RESULT_PRECISION, x) << found.exponent;
        let extremes = &found.extremes;
        let at = |t: f64| {
            let place = cell.argument(centre, t);
            (place, if t == 0.0 { shared_zero } else { 0 })
        };
        let (low, high) = (
            scaled(extremes.minimum.lower),
            scaled(extremes.maximum.upper),
        );
        let top = Float::with_val(53, high.clone().abs().max(&low.clone().abs()));
        if self.result.remainder.is_none() || top > self.largest {
            self.largest = top;
            self.result.remainder = Some(found.remainder.clone());
        }
        // (p - f)/(R|f|) changes its sign with t^k where a zero of odd order k is divided out.
        let turned =
            shared_zero % 2 == 1 && matches!(self.task.subject.measure, Measure::Mixed { .. });
        if turned {
            self.cover(Float::with_val(RESULT_PRECISION, -&high), high);
            self.cover(low.clone(), Float::with_val(RESULT_PRECISION, -&low));
        } else {
            self.cover(low, high);
        }
        for (extreme, value, up) in [
            (&extremes.maximum, extremes.maximum.lower, true),
            (&extremes.minimum, extremes.minimum.upper, false),
        ] {
            let turn = turned && extreme.at < 0.0;
            let value = if turn { -scaled(value) } else { scaled(value) };
            self.reach(value, || at(extreme.at), up != turn);
        }
    }

    /// Every signed error of some cell lies in [low, high].
    fn cover(&mut self, low: Float, high: Float) {
        if low < self.result.minimum[0] {
            self.result.minimum[0] = low;
        }
        if high > self.result.maximum[1] {
            self.result.maximum[1] = high;
        }
    }

    /// The signed error is at least (`up`) or at most `value` at some argument of the set.
    fn reach(&mut self, value: Float, at: impl Fn() -> (Centre, usize), up: bool) {
        if up && value > self.result.maximum[0] {
            self.result.maximum[0] = value;
            self.maximum_at = Some(at());
        } else if !up && value < self.result.minimum[1] {
            self.result.minimum[1] = value;
            self.minimum_at = Some(at());
        }
        let modulus = self.modulus_reached();
        if modulus > self.wish.known {
            self.wish.known = Float::with_val_round(53, &modulus, Round::Down).0;
        }
    }

    fn modulus_reached(&self) -> Float {
        let below = Float::with_val(RESULT_PRECISION, -&self.result.minimum[1]);
        let largest = below.max(&self.result.maximum[0]);
        if largest.is_sign_positive() && largest.is_finite() {
            largest
        } else {
            Float::new(RESULT_PRECISION)
        }
    }

    /// Cuts a cell in two, or gives it up where that cannot help any more.
    fn divide(&mut self, cell: Cell, reason: Unfinished) {
        if cell.depth >= DEEPEST {
            self.give_up(&cell, reason);
            return;
        }
        self.queue.extend(cell.parts());
    }

    fn give_up(&mut self, cell: &Cell, reason: Unfinished) {
        let range = cell.range(256);
        match plain_bounds(&self.task.subject, &range) {
            Ok([low, high]) => self.cover(low, high),
            Err(_) => self.cover(
                Float::with_val(RESULT_PRECISION, Special::NegInfinity),
                Float::with_val(RESULT_PRECISION, Special::Infinity),
            ),
        }
        self.result.unfinished.get_or_insert(reason);
        let rest: Vec<Cell> = self.queue.drain(..).collect();
        for cell in rest {
            self.cover_plainly(&cell);
        }
    }

    fn cover_plainly(&mut self, cell: &Cell) {
        let bounds = plain_bounds(&self.task.subject, &cell.range(256));
        let [low, high] = bounds.unwrap_or_else(|_| {
            [Special::NegInfinity, Special::Infinity].map(|x| Float::with_val(RESULT_PRECISION, x))
        });
        self.cover(low, high);
    }

    /// A series or a disc was refused: a removable singularity, a singularity to be approached by
    /// a graded mesh, or an argument where the formula has no value.
    fn refused(&mut self, cell: Cell, refusal: Refusal, part: Part) -> Result<(), Undefined> {
        self.seed()?;
        if refusal.proved && refusal.kind != RefusalKind::NotAnalytic && self.belongs(&cell) {
            let at = cell.middle();
            let exact = Centre::rational(at.clone());
            if let Err(refusal) = values_at(&self.task.subject, &exact, 0, 256)
                && refusal.proved
            {
                return Err(Undefined { at, refusal, part });
            }
        }
        if POLE_DEPTHS.contains(&cell.depth)
            && let Some(formula) = self.formula_of(part)
            && let Some(at) = undefined_near(formula, refusal.node, &cell, &self.task.inner)
        {
            return Err(Undefined { at, refusal, part });
        }
        if refusal.kind == RefusalKind::DivisionByZero && cell.anchor.is_none() {
            self.result.work += ZERO_SEARCH;
        }
        if refusal.kind == RefusalKind::DivisionByZero
            && cell.anchor.is_none()
            && let Some(formula) = self.formula_of(part)
            && let Operation::Divide(_, denominator) = formula.operations()[refusal.node]
            && let Some(zero) = exact_zero(formula, denominator, &cell.ends[0], &cell.ends[1])
        {
            self.queue.extend(cell.anchored(Anchor {
                centre: zero.centre,
                shared_zero: 0,
            }));
            return Ok(());
        }
        if cell.depth >= PLAIN_FROM && self.settled_plainly(&cell) {
            return Ok(());
        }
        let at = cell.middle();
        self.divide(cell, Unfinished::Refused { at, refusal, part });
        Ok(())
    }

    /// Slowly decaying coefficients may be the sign of a pole inside the cell.
    fn look_for_poles(&self, cell: &Cell) -> Result<(), Undefined> {
        if !POLE_DEPTHS.contains(&cell.depth) || cell.depth < PLAIN_FROM {
            return Ok(());
        }
        for part in [Part::Reference, Part::Approximant] {
            let Some(formula) = self.formula_of(part) else {
                continue;
            };
            for node in 0..formula.operations().len() {
                if let Some(at) = undefined_near(formula, node, cell, &self.task.inner) {
                    let kind = RefusalKind::DivisionByZero;
                    return Err(Undefined {
                        at,
                        refusal: Refusal {
                            node,
                            kind,
                            proved: true,
                        },
                        part,
                    });
                }
            }
        }
        Ok(())
    }

    fn belongs(&self, cell: &Cell) -> bool {
        let middle = cell.middle();
        middle >= self.task.inner[0] && middle <= self.task.inner[1]
    }

    fn formula_of(&self, part: Part) -> Option<&'a Formula> {
        match (part, self.task.subject.form) {
            (Part::Reference, _) => Some(self.task.subject.reference),
            (Part::Approximant, crate::approximant::piece::Form::Formula(formula)) => Some(formula),
            (Part::Approximant, _) => None,
        }
    }

    /// Covers the cell by its natural interval extension if that is already good enough.
    fn settled_plainly(&mut self, cell: &Cell) -> bool {
        self.result.work += 64;
        let range = cell.range(self.wish.precision.max(128));
        let Ok([low, high]) = plain_bounds(&self.task.subject, &range) else {
            return false;
        };
        let known = Float::with_val(53, self.wish.known.clone().max(&self.wish.floor));
        let allowance = known * (0.5 * self.wish.tightness);
        let top = Float::with_val(RESULT_PRECISION, &self.result.maximum[0] + &allowance);
        let bottom = Float::with_val(RESULT_PRECISION, &self.result.minimum[1] - &allowance);
        let small = high <= self.wish.floor && -low.clone() <= self.wish.floor;
        if (high <= top && low >= bottom) || small {
            self.cover(low, high);
            self.result.cells[1] += 1;
            return true;
        }
        false
    }

    /// Evaluates the error at a few arguments, so that pruning works before the first patch.
    fn seed(&mut self) -> Result<(), Undefined> {
        if std::mem::replace(&mut self.seeded, true) {
            return Ok(());
        }
        let [left, right] = &self.task.inner;
        if left > right {
            // Nothing is certain to belong to the set.
            return Ok(());
        }
        let mut places = Vec::new();
        for (end, owned) in self.task.inner.iter().zip(self.task.owned) {
            if owned {
                places.push(end.clone());
            }
        }
        let width = (right - left).complete();
        for k in 1..8u32 {
            places.push(left + (&width * Rational::from((k, 8u32))));
        }
        for place in places {
            let exact = Centre::rational(place);
            let values = match precise_values_at(
                &self.task.subject,
                &exact,
                0,
                self.wish.precision,
                &self.wish.floor,
            ) {
                Ok(values) => values,
                Err(refusal) if refusal.proved => {
                    return Err(self.undefined_at(exact.rational, refusal));
                }
                Err(_) => continue,
            };
            let down = Float::with_val_round(RESULT_PRECISION, values.error.lower(), Round::Down).0;
            let up = Float::with_val_round(RESULT_PRECISION, values.error.upper(), Round::Up).0;
            self.reach(down, || (exact.clone(), 0), true);
            self.reach(up, || (exact.clone(), 0), false);
        }
        Ok(())
    }

    /// One of the two functions has no value at an argument of the set.
    fn undefined_at(&self, at: Rational, refusal: Refusal) -> Undefined {
        let unit = Float::with_val(2, 1);
        let reference = series(self.task.subject.reference, &exactly(&at), &unit, 1, 256);
        let part = if reference.is_err() {
            Part::Reference
        } else {
            Part::Approximant
        };
        Undefined { at, refusal, part }
    }

    /// The reference may vanish in the cell (relative errors).
    fn zero_of_reference(&mut self, cell: Cell) {
        if let Measure::Mixed { absolute, .. } = self.task.subject.measure
            && *absolute > 0
        {
            // A + R|f| does not vanish: no zero may be divided out of it.
            self.divide(cell, Unfinished::Budget);
            return;
        }
        if cell
            .anchor
            .as_ref()
            .is_some_and(|anchor| anchor.shared_zero > 0)
        {
            self.divide(cell, Unfinished::Budget);
            return;
        }
        self.result.work += ZERO_SEARCH;
        match around_zero(self.task, &cell) {
            Shared::Anchor(anchor) => self.queue.extend(cell.anchored(anchor)),
            Shared::Unbounded { zero, at, error } => {
                self.result.unbounded = Some(zero);
                let centre = Centre::rational(at);
                let up = error.is_sign_positive();
                self.reach(error, || (centre.clone(), 0), up);
                // Either sign may be unbounded, and what is left of the piece is not looked at.
                self.cover(
                    Float::with_val(RESULT_PRECISION, Special::NegInfinity),
                    Float::with_val(RESULT_PRECISION, Special::Infinity),
                );
                self.queue.clear();
            }
            Shared::Unknown if !cell.sought => {
                self.queue.push_front(Cell {
                    sought: true,
                    ..cell
                });
            }
            Shared::OrderUnknown => {
                let at = cell.middle();
                self.give_up(&cell, Unfinished::ZeroOfReference { at });
            }
            Shared::Unknown if cell.depth >= 60 => {
                let at = cell.middle();
                self.give_up(&cell, Unfinished::ZeroOfReference { at });
            }
            Shared::Unknown => {
                let at = cell.middle();
                self.divide(cell, Unfinished::ZeroOfReference { at });
            }
        }
    }

    /// Confirms the lower end by evaluating the error at the best argument.
    fn finish(mut self) -> Supremum {
        let result = &mut self.result;
        let below = Float::with_val(RESULT_PRECISION, -&result.minimum[0]);
        result.upper = below.max(&result.maximum[1]);
        if result.unbounded.is_some() {
            result.upper = Float::with_val(RESULT_PRECISION, Special::Infinity);
        }
        let up = result.maximum[0] >= Float::with_val(RESULT_PRECISION, -&result.minimum[1]);
        result.at = if up {
            self.maximum_at.take()
        } else {
            self.minimum_at.take()
        };
        let place = result.at.take();
        let found = place
            .as_ref()
            .and_then(|at| confirmed(self.task, at, self.wish.precision, &self.wish.floor));
        result.at = place;
        if let Some(found) = found {
            if up {
                let low =
                    Float::with_val_round(RESULT_PRECISION, found.error.lower(), Round::Down).0;
                result.maximum[0].max_mut(&low);
            } else {
                let high =
                    Float::with_val_round(RESULT_PRECISION, found.error.upper(), Round::Up).0;
                result.minimum[1].min_mut(&high);
            }
            result.lower = found.modulus;
            result.at = Some(found.at);
        }
        self.result
    }
}

/// The absolute floor of the refinement and the bits to begin with.
///
/// With a claimed bound B, errors below B 2^-24 need no resolution. Without one the floor is
/// 2^-1024 in the units of the measure, which p = f alone reaches.
fn floor_and_precision(task: &Task) -> (Float, u32) {
    match &task.bound {
        Some(bound) if *bound > 0 => {
            let bound = Float::with_val(53, bound);
            let bits = bound
                .get_exp()
                .map_or(0, |exponent| -exponent)
                .clamp(0, 4096);
            let precision = (bits.unsigned_abs() + 64).max(96).next_multiple_of(32);
            (bound >> 24, precision)
        }
        _ => (Float::with_val(53, 1) >> 1024, 128),
    }
}
