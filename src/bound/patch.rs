//! The error on a cell as a polynomial in t plus a proved tail.

use rug::float::Round;
use rug::{Complete, Float, Rational};

use crate::approximant::piece::Form;
use crate::bound::double_polynomial::{DoublePolynomial, outward};
use crate::bound::extremes::{Divisor, Extremes, NoExtremes, Region, Target, extremes};
use crate::bound::measure::Measure;
use crate::bound::point::Subject;
use crate::bound::remainder::{Disc, NoDisc, disc_for};
use crate::bound::shift::shifted;
use crate::bound::steering;
use crate::function::exact::Centre;
use crate::function::formula::Formula;
use crate::function::refusal::Refusal;
use crate::function::series::series;
use crate::number::ball::Ball;
use crate::number::radius::Radius;

/// Where a patch is expanded: x = centre + radius * t.
#[derive(Clone, Debug)]
pub struct Frame {
    /// Exact expansion point.
    pub centre: Centre,
    /// Exact, at most 30 bits.
    pub radius: Float,
    /// Covers every t of the cell.
    pub outer: [f64; 2],
    /// Only t of the cell that belong to the set; `None` if no double is one.
    pub inner: Option<[f64; 2]>,
    /// Whether a reference that becomes small somewhere is worth a search for a zero beside the cell.
    pub seek_zero: bool,
    /// Order of the zero that reference and approximant share at the centre, which is divided
    /// out of both (relative errors only; proved by the caller).
    pub shared_zero: usize,
}

/// What the search already knows, and what it wants.
#[derive(Clone, Debug)]
pub struct Wish {
    /// Modulus of the error proved to be reached elsewhere on the piece.
    pub known: Float,
    /// Relative tolerance of the supremum.
    pub tightness: f64,
    /// Errors below this need no resolution.
    pub floor: Float,
    /// Series terms to begin with.
    pub terms: usize,
    /// Bits to begin with.
    pub precision: u32,
    /// Most subintervals that the range step may look at.
    pub budget: u64,
}

/// A remainder as the certificate states it.
#[derive(Clone, Debug)]
pub struct Remainder {
    /// Expansion point.
    pub centre: Centre,
    /// Patch radius (distance of t = 1).
    pub scale: Float,
    /// Radius of the disc of analyticity, in units of `scale`.
    pub rho: Float,
    /// Terms kept.
    pub terms: usize,
    /// Bound of the modulus on the disc.
    pub magnitude: Radius,
    /// Bound of what was left out.
    pub tail: Radius,
}

/// Proved bounds on one patch; extremes are in units of 2^exponent.
#[derive(Clone, Debug)]
pub struct Patch {
    /// Minimum and maximum of the signed error.
    pub extremes: Extremes,
    /// Scale of `extremes`.
    pub exponent: i32,
    /// Remainder of the reference (or the larger of the two, where the approximant is a formula).
    pub remainder: Remainder,
    /// Bits used.
    pub precision: u32,
    /// Terms used.
    pub terms: usize,
}

/// Why a cell could not be modelled by one patch.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum NoPatch {
    /// A series could not be formed at the centre.
    Centre(Refusal, Part),
    /// No disc of analyticity around the cell.
    Disc(Refusal, Part),
    /// Too many terms would be needed: a smaller cell is cheaper.
    TooWide,
    /// The reference may vanish near this t (relative error).
    ReferenceMayVanish(f64),
    /// The range step ran out of its budget.
    Exhausted,
    /// The most bits allowed do not resolve the error.
    Unresolved,
}

/// Which of the two functions refused.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Part {
    /// f.
    Reference,
    /// p.
    Approximant,
}

impl Part {
    /// The word in messages.
    pub fn name(self) -> &'static str {
        match self {
            Part::Reference => "reference",
            Part::Approximant => "approximant",
        }
    }
}

/// Most bits a series is computed with.
pub const MOST_PRECISION: u32 = 8192;

/// A reference that falls below this share of its largest value on the cell may have a zero beside
/// it, around which the relative error is better expanded.
const SMALL_REFERENCE: f64 = 1.0 / 64.0;

/// Truncated series of both functions on a frame.
struct Expansion {
    reference: Vec<Ball>,
    /// p - f, before a shared zero is divided out.
    difference: Vec<Ball>,
    /// Series of p where it is a formula (its tail counts too).
    approximant: Option<Vec<Ball>>,
}

/// Bounds the error on `frame`.
///
/// With f = F + sigma and p = P + tau on |t| <= 1 (F, P the truncated series, |sigma| and |tau|
/// bounded by Cauchy's estimate, tau = 0 for a polynomial), the numerator is D = P - F with tail
/// |tau| + |sigma|. Terms and bits are raised until both the tail and the width of the
/// coefficients are small against the tolerance. Units of work are added to `work`.
pub fn patch(
    subject: &Subject,
    frame: &Frame,
    wish: &Wish,
    work: &mut u64,
) -> Result<Patch, NoPatch> {
    let mut terms = wish.terms.max(degree(subject.form) + 4) + frame.shared_zero;
    let mut precision = wish.precision;
    for _ in 0..24 {
        let expansion = expand(subject, frame, terms, precision, work)?;
        let mut scaled = Scaled::new(subject.measure, &expansion, frame.shared_zero);
        let goal = match scaled.goal(frame, wish) {
            Goal::Resolved(goal) => goal,
            Goal::MayVanish(t) => return Err(NoPatch::ReferenceMayVanish(t)),
            Goal::MoreBits(bits) => {
                if precision >= MOST_PRECISION {
                    return Err(NoPatch::Unresolved);
                }
                precision = (precision + bits).min(MOST_PRECISION);
                continue;
            }
        };
        let target = goal.tail_log2;
        let disc = of_part(
            Part::Reference,
            disc_for(
                subject.reference,
                &frame.centre,
                &frame.radius,
                &expansion.reference,
                target,
                work,
            ),
        )?;
        let second = match (subject.form, &expansion.approximant) {
            (Form::Formula(formula), Some(coefficients)) => Some(of_part(
                Part::Approximant,
                disc_for(
                    formula,
                    &frame.centre,
                    &frame.radius,
                    coefficients,
                    target,
                    work,
                ),
            )?),
            _ => None,
        };
        let reference_tail = disc.tail(terms);
        let approximant_tail = second
            .as_ref()
            .map_or(Radius::ZERO, |disc| disc.tail(terms));
        let tail = reference_tail.add(approximant_tail);
        if steering::log2_of(&tail.to_float_upper(53)) > target {
            let slower = second.iter().chain([&disc]);
            let wanted = slower
                .map(|disc| disc.terms_for(target - 1.0))
                .max()
                .unwrap_or(terms);
            let wanted = wanted.max(terms + 2);
            if wanted > most_terms(subject.form, &disc) + frame.shared_zero {
                return Err(NoPatch::TooWide);
            }
            terms = wanted;
            continue;
        }
        scaled.set_tails(tail, reference_tail, subject.measure);
        let region = Region {
            outer: frame.outer,
            inner: frame.inner,
            known: goal.known,
            tightness: wish.tightness,
            budget: wish.budget,
        };
        let outcome = extremes(&scaled.target, &region);
        let extremes = match outcome {
            Ok(extremes) => extremes,
            Err(NoExtremes::DivisorMayVanish(t)) => return Err(NoPatch::ReferenceMayVanish(t)),
            Err(NoExtremes::Exhausted) => return Err(NoPatch::Exhausted),
        };
        *work += extremes.work * terms as u64 / 4;
        let main = match &second {
            Some(second) if approximant_tail > reference_tail => second,
            _ => &disc,
        };
        return Ok(Patch {
            extremes,
            // At most twice LARGEST_SCALE in modulus.
            exponent: i32::try_from(scaled.exponent).map_err(|_| NoPatch::Unresolved)?,
            remainder: Remainder {
                centre: frame.centre.clone(),
                scale: frame.radius.clone(),
                rho: main.rho.clone(),
                terms,
                magnitude: main.magnitude,
                tail,
            },
            precision,
            terms,
        });
    }
    Err(NoPatch::TooWide)
}

fn of_part(part: Part, disc: Result<Disc, NoDisc>) -> Result<Disc, NoPatch> {
    disc.map_err(|none| match none {
        NoDisc::Refused(refusal) => NoPatch::Disc(refusal, part),
        NoDisc::TooSlow => NoPatch::TooWide,
    })
}

fn degree(form: &Form) -> usize {
    match form {
        Form::Polynomial(polynomial) => polynomial.coefficients.len().saturating_sub(1),
        Form::Formula(_) => 4,
    }
}

/// Terms beyond which a smaller cell is cheaper: the cost of a series is quadratic in the terms,
/// so a disc four times as wide as the patch or wider is worth many terms, a narrow one few.
fn most_terms(form: &Form, disc: &Disc) -> usize {
    let base = (degree(form) + 12).max(32);
    if disc.rho >= 4 { base.max(400) } else { base }
}

fn expand(
    subject: &Subject,
    frame: &Frame,
    terms: usize,
    precision: u32,
    work: &mut u64,
) -> Result<Expansion, NoPatch> {
    let of_formula = |formula: &Formula, part| {
        series(formula, &frame.centre, &frame.radius, terms, precision)
            .map_err(|refusal| NoPatch::Centre(refusal, part))
    };
    let words = u64::from(precision / 64 + 1);
    let square = (terms * terms) as u64 / 2;
    *work += square * words * subject.reference.operations().len() as u64;
    let reference = of_formula(subject.reference, Part::Reference)?;
    let (approximant, polynomial) = match subject.form {
        Form::Polynomial(polynomial) => {
            *work += square * words;
            (
                None,
                shifted(polynomial, &frame.centre, &frame.radius, precision),
            )
        }
        Form::Formula(formula) => {
            *work += square * words * formula.operations().len() as u64;
            let coefficients = of_formula(formula, Part::Approximant)?;
            (Some(coefficients.clone()), coefficients)
        }
    };
    let length = polynomial.len().max(terms);
    let zero = Ball::zero(precision);
    let difference = (0..length)
        .map(|k| {
            let p = polynomial.get(k).unwrap_or(&zero);
            let f = reference.get(k).unwrap_or(&zero);
            p.sub(f)
        })
        .collect();
    Ok(Expansion {
        reference,
        difference,
        approximant,
    })
}

/// The target of the range step, in doubles.
struct Scaled {
    target: Target,
    /// Error = value of the target * 2^exponent.
    exponent: i64,
    numerator_exponent: i64,
    divisor_exponent: i64,
    /// About R of a mixed error; steers only.
    factor: f64,
}

/// What the tail must come down to.
struct Resolved {
    /// Modulus to compare with, in units of the target.
    known: f64,
    /// log2 of the largest useful tail of the numerator, in units of x.
    tail_log2: f64,
}

enum Goal {
    Resolved(Resolved),
    /// The divisor vanishes or changes sign near this t.
    MayVanish(f64),
    /// The coefficients are too wide: this many more bits.
    MoreBits(u32),
}

impl Scaled {
    fn new(measure: &Measure, expansion: &Expansion, shared_zero: usize) -> Self {
        let numerator = &expansion.difference[shared_zero.min(expansion.difference.len())..];
        let reference = &expansion.reference[shared_zero.min(expansion.reference.len())..];
        let numerator_exponent = exponent_of(numerator);
        let numerator = DoublePolynomial::from_balls(numerator, numerator_exponent);
        let (divisor, divisor_exponent) = match measure {
            Measure::Absolute => (Divisor::One, 0),
            Measure::Relative => {
                let exponent = exponent_of(reference);
                let polynomial = DoublePolynomial::from_balls(reference, exponent);
                (
                    Divisor::Reference {
                        polynomial,
                        tail: 0.0,
                    },
                    exponent,
                )
            }
            Measure::Mixed { absolute, relative } => {
                let precision = 64;
                let factor = Ball::from_rational(relative, precision);
                let scaled: Vec<Ball> = reference.iter().map(|f| f.mul(&factor)).collect();
                let absolute = Ball::from_rational(absolute, precision);
                let exponent =
                    exponent_of(&scaled).max(exponent_of(std::slice::from_ref(&absolute)));
                let divisor = Divisor::Mixed {
                    absolute: outward(&absolute, exponent),
                    scaled: DoublePolynomial::from_balls(&scaled, exponent),
                    tail: 0.0,
                };
                (divisor, exponent)
            }
        };
        Self {
            target: Target {
                numerator,
                tail: 0.0,
                divisor,
            },
            exponent: numerator_exponent - divisor_exponent,
            numerator_exponent,
            divisor_exponent,
            factor: match measure {
                Measure::Mixed { relative, .. } => relative.to_f64(),
                _ => 1.0,
            },
        }
    }

    /// Samples the target (without tails) to learn the size of the error here and the width of
    /// its enclosure. Steers only.
    fn goal(&self, frame: &Frame, wish: &Wish) -> Goal {
        let in_units = |x: &Float| {
            let shift = i32::try_from((-self.exponent).clamp(-1_000_000, 1_000_000)).unwrap_or(0);
            (x.clone() << shift).to_f64()
        };
        let floor = in_units(&wish.floor);
        let (mut reached, mut width, mut weight) = (in_units(&wish.known), 0.0f64, f64::INFINITY);
        let (mut seen_sign, mut heaviest, mut lightest_at) = (None, 0.0f64, 0.0);
        const SAMPLES: u32 = 12;
        for k in 0..=SAMPLES {
            let share = f64::from(k) / f64::from(SAMPLES);
            let [start, end] = frame.inner.unwrap_or(frame.outer);
            let t = start * (1.0 - share) + end * share;
            if let Some(value) = self.target.value(t) {
                reached = reached.max(value.mig());
                width = width.max(value.wid());
            }
            if let Some(size) = self.target.weight(t) {
                heaviest = heaviest.max(size.mag());
                let sign = if size.inf() > 0.0 {
                    1
                } else if size.sup() < 0.0 {
                    -1
                } else {
                    0
                };
                if sign == 0 || seen_sign.is_some_and(|seen| seen != sign) {
                    return Goal::MayVanish(t);
                }
                seen_sign = Some(sign);
                if size.mag() < weight {
                    (weight, lightest_at) = (size.mag(), t);
                }
            }
        }
        // Only a relative error gains from dividing a shared zero out: A + R|f| has none.
        let relative = matches!(self.target.divisor, Divisor::Reference { .. });
        if relative && frame.seek_zero && weight < heaviest * SMALL_REFERENCE {
            return Goal::MayVanish(lightest_at);
        }
        let goal = reached.max(floor) * wish.tightness / 8.0;
        if width > goal {
            let bits = if goal > 0.0 && width.is_finite() && goal > width * 1e-30 {
                let excess = Float::with_val(53, width / goal);
                steering::log2_of(&excess) as u32 + 16
            } else {
                wish.precision.max(96)
            };
            return Goal::MoreBits(bits.next_multiple_of(32));
        }
        let weight = if weight.is_finite() { weight } else { 1.0 };
        let mut tail = steering::log2_of(&Float::with_val(53, goal * weight));
        // The tail of the divisor spreads the error by its share of the divisor, whatever the size
        // of the error: this matters where the error is large against 1.
        if !matches!(self.target.divisor, Divisor::One) && self.factor > 0.0 {
            let share = Float::with_val(53, wish.tightness / 8.0 * weight / self.factor);
            let largest = steering::log2_of(&share) + self.divisor_exponent as f64;
            tail = tail.min(largest - self.numerator_exponent as f64);
        }
        Goal::Resolved(Resolved {
            known: reached.max(floor),
            tail_log2: tail + self.numerator_exponent as f64,
        })
    }

    fn set_tails(&mut self, numerator: Radius, reference: Radius, measure: &Measure) {
        self.target.tail = in_doubles(numerator, self.numerator_exponent);
        match (&mut self.target.divisor, measure) {
            (Divisor::Reference { tail, .. }, _) => {
                *tail = in_doubles(reference, self.divisor_exponent);
            }
            (Divisor::Mixed { tail, .. }, Measure::Mixed { relative, .. }) => {
                let scaled = reference.mul(Radius::of_rational_upper(relative));
                *tail = in_doubles(scaled, self.divisor_exponent);
            }
            _ => {}
        }
    }
}

/// Upper bound of `radius` * 2^-exponent in doubles.
fn in_doubles(radius: Radius, exponent: i64) -> f64 {
    radius
        .mul_power_of_two(-exponent)
        .to_float_upper(53)
        .to_f64_round(Round::Up)
}

/// Largest power of two by which polynomials are scaled.
const LARGEST_SCALE: i64 = 100_000_000;

/// An exponent that brings the largest of the balls near 1.
fn exponent_of(balls: &[Ball]) -> i64 {
    let largest = balls
        .iter()
        .map(Ball::magnitude_upper)
        .max()
        .unwrap_or(Radius::ZERO);
    let log2 = steering::log2_of(&largest.to_float_upper(53));
    // Zero and infinite balls have no scale of their own. The limit keeps a bound that is scaled
    // back, a double times a quotient of two such powers, far inside MPFR's exponent range.
    if log2.abs() < 1e15 {
        (log2 as i64).clamp(-LARGEST_SCALE, LARGEST_SCALE)
    } else {
        0
    }
}

/// t of an exact x on a frame, rounded to a double in the given direction.
pub fn local(centre: &Centre, radius: &Float, x: &Rational, round: Round) -> f64 {
    let scale = radius.to_rational().unwrap_or_else(|| Rational::from(1));
    if centre.pi_multiple.is_zero() {
        let t = (x - &centre.rational).complete() / scale;
        // Twice in the same direction: a double below the least normal one has fewer bits.
        return Float::with_val_round(53, &t, round).0.to_f64_round(round);
    }
    let precision = 256;
    let difference = Ball::from_rational(x, precision).sub(&centre.ball(precision));
    let t = difference.div(&Ball::from_rational(&scale, precision));
    let t = t.unwrap_or_else(|| Ball::whole(precision));
    match round {
        Round::Down => t.lower().to_f64_round(Round::Down),
        _ => t.upper().to_f64_round(Round::Up),
    }
}
