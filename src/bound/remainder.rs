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

/// Arcs of the upper half circle on which |f| is bounded.
const ARCS: usize = 8;

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
/// t = 1 means a distance of `scale`.
///
/// The largest circle on which the last third of the computed terms is not yet the dominant part
/// is about the best one for an entire function and about the circle of convergence otherwise; it
/// is approached from a little inside.
pub fn disc_for(
    formula: &Formula,
    centre: &Centre,
    scale: &Float,
    coefficients: &[Ball],
    target: f64,
    work: &mut u64,
) -> Result<Disc, NoDisc> {
    let start = promising_log2_rho(coefficients);
    let mut refused = NoDisc::TooSlow;
    // A removable singularity beside the cell does not show in the coefficients, but no disc may
    // contain it: the insets grow until the disc is hardly larger than the cell.
    let mut inset = 0.15;
    while start - inset >= SMALLEST_LOG2_RHO {
        let log2_rho = (start - inset).min(LARGEST_LOG2_RHO);
        match try_disc(formula, centre, scale, log2_rho, work) {
            Ok(disc) => {
                return Ok(widened(
                    formula,
                    centre,
                    scale,
                    disc,
                    coefficients.len(),
                    target,
                    work,
                ));
            }
            Err(refusal) => refused = NoDisc::Refused(refusal),
        }
        inset = 1.5 * inset + 0.3;
    }
    Err(refused)
}

/// Tries larger discs while the tail misses its target and a larger disc makes it smaller.
fn widened(
    formula: &Formula,
    centre: &Centre,
    scale: &Float,
    mut best: Disc,
    terms: usize,
    target: f64,
    work: &mut u64,
) -> Disc {
    for _ in 0..6 {
        let tail = best.tail(terms);
        if steering::log2_of(&tail.to_float_upper(53)) <= target {
            break;
        }
        let log2_rho = steering::log2_of(&best.rho) + 0.8;
        if log2_rho > LARGEST_LOG2_RHO {
            break;
        }
        match try_disc(formula, centre, scale, log2_rho, work) {
            Ok(larger) if larger.tail(terms) < tail => best = larger,
            _ => break,
        }
    }
    best
}

fn try_disc(
    formula: &Formula,
    centre: &Centre,
    scale: &Float,
    log2_rho: f64,
    work: &mut u64,
) -> Result<Disc, Refusal> {
    let rho = steering::power_of_two(log2_rho);
    // 8 bits of rho and at most 30 of the patch radius: the product is exact in 64.
    let radius = Float::with_val(64, &rho * scale);
    *work += (ARCS * formula.operations().len()) as u64;
    let magnitude = magnitude_on_disc(formula, centre, &radius, ARCS)?;
    Ok(Disc { rho, magnitude })
}

/// log2 of the largest rho at which the largest |f_k| rho^k still has k <= 0.7 terms.
fn promising_log2_rho(coefficients: &[Ball]) -> f64 {
    let logs: Vec<(f64, f64)> = coefficients
        .iter()
        .enumerate()
        .filter(|(_, c)| !c.is_exact_zero())
        .map(|(k, c)| {
            (
                k as f64,
                steering::log2_of(&c.magnitude_upper().to_float_upper(53)),
            )
        })
        .collect();
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
