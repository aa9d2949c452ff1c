//! Cauchy's estimate for what a truncated power series leaves out.
//!
//! # Theorem
//!
//! Let f be analytic in the open disc |t| < rho, rho > 1, continuous on the closed one, and
//! |f| <= M there. Then its Taylor coefficients satisfy |f_k| <= M rho^-k (Cauchy's estimate, by
//! the integral formula over circles of radius rho' -> rho), and for every |t| <= 1 and every
//! j <= N
//!
//! ```text
//! | sum_{k >= N} f_k t^(k-j) |  <=  sum_{k >= N} M rho^-k  =  M rho^(1-N) / (rho - 1).
//! ```
//!
//! (With j > 0 the same bound serves after a common factor t^j has been divided out.)
//!
//! M and the analyticity come from [`magnitude_on_disc`]; the choice of rho is steered by the
//! decay of the computed coefficients and proves nothing by itself.

use rug::Float;
use rug::float::Round;
use rug::ops::DivAssignRound;

use crate::bound::steering;
use crate::function::disc::magnitude_on_disc;
use crate::function::exact::Centre;
use crate::function::formula::Formula;
use crate::function::refusal::Refusal;
use crate::number::ball::Ball;
use crate::number::radius::Radius;

/// A disc on which a function is bounded.
#[derive(Clone, Debug)]
pub struct Disc {
    /// rho, in units of the patch radius; a short exact number > 1.
    pub rho: Float,
    /// M.
    pub magnitude: Radius,
}

/// Why there is no usable disc.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum NoDisc {
    /// Every disc tried was refused; the last refusal.
    Refused(Refusal),
    /// The coefficients decay too slowly for a disc larger than the patch.
    TooSlow,
}

/// Arcs of the upper half circle on which |f| is bounded, few at first. Where the enclosures of a
/// product of large and small factors (exp(x*x)*erfc(x)), or of a function that turns quickly
/// (log(erfc(x))), are too wide, narrower arcs help.
const ARCS: [usize; 3] = [8, 64, 256];

/// A bound that is this many bits above what the coefficients suggest has grown for want of arcs,
/// or because rho is too large.
const EXCESS: f64 = 7.0;

/// log2 of the smallest rho worth using.
const SMALLEST_LOG2_RHO: f64 = 0.3;

/// log2 of the largest rho tried.
const LARGEST_LOG2_RHO: f64 = 24.0;

impl Disc {
    /// Upper bound of the tail after `terms` terms: M rho^(1-terms)/(rho-1).
    pub fn tail(&self, terms: usize) -> Radius {
        let precision = 53;
        // rho - 1 and 1/rho bounded in the direction that enlarges the tail.
        let gap = Float::with_val_round(precision, &self.rho - 1u32, Round::Down).0;
        let mut inverse = Float::with_val(precision, 1);
        inverse.div_assign_round(&self.rho, Round::Up);
        let exponent = u32::try_from(terms.saturating_sub(1)).unwrap_or(u32::MAX);
        let power = Radius::of_float_upper(&inverse).pow(exponent);
        let mut inverse_gap = Float::with_val(precision, 1);
        inverse_gap.div_assign_round(&gap, Round::Up);
        self.magnitude
            .mul(power)
            .mul(Radius::of_float_upper(&inverse_gap))
    }

    /// About how many terms bring the tail down to 2^`target`.
    pub fn terms_for(&self, target: f64) -> usize {
        let log2_rho = steering::log2_of(&self.rho).max(0.05);
        let magnitude = steering::log2_of(&self.magnitude.to_float_upper(53));
        let gap = steering::log2_of(&Float::with_val(53, &self.rho - 1u32));
        let terms = 1.5 + (magnitude - gap - target) / log2_rho;
        terms.clamp(1.0, 1e6) as usize
    }
}

/// Finds a disc around `centre` for Cauchy's estimate after `coefficients.len()` terms, where
/// t = 1 means a distance of `scale`; the tail should come down to 2^`target`.
///
/// The largest circle on which the last third of the computed terms is not yet the dominant part
/// is about the best one for an entire function and about the circle of convergence otherwise; it
/// is approached from a little inside. A removable singularity beside the cell does not show in
/// the coefficients, but no disc may contain it: the insets grow until the disc is hardly larger
/// than the cell.
pub fn disc_for(
    formula: &Formula,
    centre: &Centre,
    scale: &Float,
    coefficients: &[Ball],
    target: f64,
    work: &mut u64,
) -> Result<Disc, NoDisc> {
    let mut search = DiscSearch {
        formula,
        centre,
        scale,
        coefficients,
        work,
    };
    let start = promising_log2_rho(coefficients);
    let mut refused = NoDisc::TooSlow;
    for &arcs in &ARCS[..2] {
        let mut inset = 0.15;
        while start - inset >= SMALLEST_LOG2_RHO {
            match search.attempt((start - inset).min(LARGEST_LOG2_RHO), arcs) {
                Ok(disc) => return Ok(search.improved(disc, arcs, target)),
                Err(refusal) => refused = NoDisc::Refused(refusal),
            }
            inset = 1.5 * inset + 0.3;
        }
    }
    Err(refused)
}

/// A search for the best disc of one function.
struct DiscSearch<'a> {
    formula: &'a Formula,
    centre: &'a Centre,
    scale: &'a Float,
    coefficients: &'a [Ball],
    work: &'a mut u64,
}

impl DiscSearch<'_> {
    fn attempt(&mut self, log2_rho: f64, arcs: usize) -> Result<Disc, Refusal> {
        let rho = steering::power_of_two(log2_rho);
        // 8 bits of rho and at most 30 of the patch radius: the product is exact in 64.
        let radius = Float::with_val(64, &rho * self.scale);
        *self.work += (arcs * self.formula.operations().len()) as u64;
        let magnitude = magnitude_on_disc(self.formula, self.centre, &radius, arcs)?;
        Ok(Disc { rho, magnitude })
    }

    /// About log2 of the tail of a disc.
    fn tail_of(&self, disc: &Disc) -> f64 {
        steering::log2_of(&disc.tail(self.coefficients.len()).to_float_upper(53))
    }

    /// True if the bound is far above what the coefficients suggest.
    fn is_excessive(&self, disc: &Disc) -> bool {
        let log2_rho = steering::log2_of(&disc.rho);
        let expected = logarithms(self.coefficients)
            .map(|(k, log2)| log2 + k * log2_rho)
            .fold(f64::NEG_INFINITY, f64::max);
        steering::log2_of(&disc.magnitude.to_float_upper(53)) > expected + EXCESS
    }

    /// While the tail misses its target: moves rho, to smaller values where the bound has outgrown
    /// the coefficients and to larger ones otherwise (log M is a convex function of log rho, by
    /// Hadamard's three circles theorem, so one direction leads to the minimum), then takes
    /// narrower arcs.
    fn improved(&mut self, mut best: Disc, mut arcs: usize, target: f64) -> Disc {
        let mut tail = self.tail_of(&best);
        let step = if self.is_excessive(&best) { -1.0 } else { 0.8 };
        for _ in 0..8 {
            if tail <= target {
                return best;
            }
            let log2_rho = steering::log2_of(&best.rho) + step;
            if !(SMALLEST_LOG2_RHO..=LARGEST_LOG2_RHO).contains(&log2_rho) {
                break;
            }
            let Ok(next) = self.attempt(log2_rho, arcs) else {
                break;
            };
            let next_tail = self.tail_of(&next);
            if next_tail >= tail {
                break;
            }
            (best, tail) = (next, next_tail);
        }
        while tail > target && self.is_excessive(&best) {
            let Some(&more) = ARCS.iter().find(|&&more| more > arcs) else {
                break;
            };
            arcs = more;
            let Ok(next) = self.attempt(steering::log2_of(&best.rho), arcs) else {
                break;
            };
            let next_tail = self.tail_of(&next);
            let gained = next_tail < tail - 4.0;
            (best, tail) = (next, next_tail);
            if !gained {
                break;
            }
        }
        best
    }
}

/// k and about log2 |f_k| of the coefficients that are not zero.
fn logarithms(coefficients: &[Ball]) -> impl Iterator<Item = (f64, f64)> + '_ {
    coefficients
        .iter()
        .enumerate()
        .filter(|(_, c)| !c.is_exact_zero())
        .map(|(k, c)| {
            (
                k as f64,
                steering::log2_of(&c.magnitude_upper().to_float_upper(53)),
            )
        })
}

/// log2 of the largest rho at which the largest |f_k| rho^k still has k <= 0.7 terms.
fn promising_log2_rho(coefficients: &[Ball]) -> f64 {
    let logs: Vec<(f64, f64)> = logarithms(coefficients).collect();
    let limit = 0.7 * coefficients.len() as f64;
    let dominated_early = |log2_rho: f64| {
        let mut largest = (f64::NEG_INFINITY, 0.0);
        for &(k, log2) in &logs {
            let size = log2 + k * log2_rho;
            if size > largest.0 {
                largest = (size, k);
            }
        }
        largest.1 <= limit
    };
    let (mut low, mut high) = (-2.0, LARGEST_LOG2_RHO + 0.5);
    if dominated_early(high) {
        return high;
    }
    for _ in 0..16 {
        let middle = 0.5 * (low + high);
        if dominated_early(middle) {
            low = middle;
        } else {
            high = middle;
        }
    }
    low
}
