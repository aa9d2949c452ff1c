//! Minimum and maximum of the error on one patch.
//!
//! The error is (D(t) + tau)/divisor with |tau| <= tail for every t, D a polynomial with interval
//! coefficients. Subintervals are bisected until their second-order bounds cannot raise the
//! maximum, or lower the minimum, by more than the tolerance.

use inari::Interval;

use crate::bound::double_polynomial::{DoublePolynomial, SecondOrder, interval, singleton};

/// What the numerator is divided by.
#[derive(Clone, Debug)]
pub enum Divisor {
    /// Nothing: the absolute error.
    One,
    /// The reference F(t) + sigma, |sigma| <= tail: the relative error.
    Reference {
        /// F.
        polynomial: DoublePolynomial,
        /// Bound of |sigma|.
        tail: f64,
    },
    /// A + |R F(t) + sigma|, |sigma| <= tail: the mixed error; `scaled` is R F.
    Mixed {
        /// A > 0.
        absolute: Interval,
        /// R F.
        scaled: DoublePolynomial,
        /// Bound of |sigma|.
        tail: f64,
    },
}

/// The error on a patch as a function of t.
#[derive(Clone, Debug)]
pub struct Target {
    /// D.
    pub numerator: DoublePolynomial,
    /// Bound of |tau|.
    pub tail: f64,
    /// The divisor.
    pub divisor: Divisor,
}

/// A minimum or maximum: it lies in [lower, upper], and the end that is nearer to zero effort
/// (the lower one of a maximum, the upper one of a minimum) is attained within `value_at` at `at`.
#[derive(Clone, Copy, Debug)]
pub struct Extreme {
    /// Proved lower bound.
    pub lower: f64,
    /// Proved upper bound.
    pub upper: f64,
    /// Where the best value was seen.
    pub at: f64,
}

/// Both extremes on a patch.
#[derive(Clone, Copy, Debug)]
pub struct Extremes {
    /// The minimum of the signed error.
    pub minimum: Extreme,
    /// The maximum of the signed error.
    pub maximum: Extreme,
    /// Subintervals looked at.
    pub work: u64,
}

/// Why no extremes could be given.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum NoExtremes {
    /// The divisor may vanish near this t.
    DivisorMayVanish(f64),
    /// The budget of subintervals ran out.
    Exhausted,
}

/// Where to look and how hard.
#[derive(Clone, Copy, Debug)]
pub struct Region {
    /// Every t in here is covered by the bounds.
    pub outer: [f64; 2],
    /// Sample points are taken from here; inside `outer`. Without it no value is proved to be
    /// reached and only the outer bounds are of use.
    pub inner: Option<[f64; 2]>,
    /// Modulus of the error already reached elsewhere (in the units of the patch).
    pub known: f64,
    /// Relative tolerance of the result against the larger of `known` and what is found here.
    pub tightness: f64,
    /// Most subintervals to look at.
    pub budget: u64,
}

/// Bounds of the error over one subinterval, and its value at the midpoint.
struct Bounds {
    at_midpoint: Interval,
    lower: f64,
    upper: f64,
}

impl Target {
    /// Encloses the error over `over`, by a second-order form around its midpoint `m`.
    ///
    /// Absolute: D +- tail. Relative: with F_true = F (1 + delta), |delta| <= e = tail_F/min|F|,
    /// (D + tau)/F_true lies in (D/F +- tail/min|F|) * [1/(1+e), 1/(1-e)], e < 1. Mixed: the same
    /// with W = A + R|F| for F where R F has a sign, and D/W by ranges where it has none.
    fn bounds(&self, m: f64, over: Interval) -> Option<Bounds> {
        let offset = over - singleton(m);
        let radius = offset.mag();
        let numerator = self.numerator.second_order(m, over);
        match &self.divisor {
            Divisor::One => {
                let (lower, upper) = numerator.bounds(radius);
                let spread = symmetric(self.tail);
                let range = interval(lower, upper) + spread;
                Some(Bounds {
                    at_midpoint: numerator.value + spread,
                    lower: range.inf(),
                    upper: range.sup(),
                })
            }
            Divisor::Reference { polynomial, tail } => {
                let divisor = polynomial.second_order(m, over);
                self.quotient(&numerator, &divisor, *tail, offset)
            }
            Divisor::Mixed {
                absolute,
                scaled,
                tail,
            } => {
                let scaled = scaled.second_order(m, over);
                let range = scaled.over(offset) + symmetric(*tail);
                let signed = if range.inf() > 0.0 {
                    Some(scaled)
                } else if range.sup() < 0.0 {
                    Some(SecondOrder {
                        value: -scaled.value,
                        slope: -scaled.slope,
                        curvature: -scaled.curvature,
                    })
                } else {
                    None
                };
                if let Some(signed) = signed {
                    let weight = SecondOrder {
                        value: signed.value + *absolute,
                        ..signed
                    };
                    return self.quotient(&numerator, &weight, *tail, offset);
                }
                let spread = symmetric(self.tail);
                let (lower, upper) = numerator.bounds(radius);
                let whole = (interval(lower, upper) + spread) / (*absolute + range.abs());
                let middle = scaled.value + symmetric(*tail);
                Some(Bounds {
                    at_midpoint: (numerator.value + spread) / (*absolute + middle.abs()),
                    lower: whole.inf(),
                    upper: whole.sup(),
                })
            }
        }
    }

    /// Encloses the error at the point t, without tails where they are not set yet.
    pub fn value(&self, t: f64) -> Option<Interval> {
        self.bounds(t, singleton(t))
            .map(|bounds| bounds.at_midpoint)
    }

    /// The divisor at t without its tail (steers only); `None` where there is no divisor.
    pub fn weight(&self, t: f64) -> Option<Interval> {
        let at = singleton(t);
        match &self.divisor {
            Divisor::One => None,
            Divisor::Reference { polynomial, .. } => Some(polynomial.value(at)),
            Divisor::Mixed {
                absolute, scaled, ..
            } => Some(*absolute + scaled.value(at).abs()),
        }
    }

    fn quotient(
        &self,
        numerator: &SecondOrder,
        divisor: &SecondOrder,
        divisor_tail: f64,
        offset: Interval,
    ) -> Option<Bounds> {
        let form = numerator.quotient(divisor, offset)?;
        let smallest = divisor.over(offset).mig();
        let relative = singleton(divisor_tail) / singleton(smallest);
        if smallest <= 0.0 || relative.sup() >= 0.5 {
            return None;
        }
        let one = singleton(1.0);
        let factor = one / (one + symmetric(relative.sup()));
        let spread = symmetric((singleton(self.tail) / singleton(smallest)).sup());
        let (lower, upper) = form.bounds(offset.mag());
        let range = (interval(lower, upper) + spread) * factor;
        Some(Bounds {
            at_midpoint: (form.value + spread) * factor,
            lower: range.inf(),
            upper: range.sup(),
        })
    }
}

fn symmetric(radius: f64) -> Interval {
    interval(-radius, radius)
}

/// Best values seen so far, each proved at a point of the inner region.
struct Best {
    maximum: f64,
    maximum_at: f64,
    minimum: f64,
    minimum_at: f64,
}

impl Best {
    fn see(&mut self, t: f64, value: Interval) {
        if value.inf() > self.maximum {
            (self.maximum, self.maximum_at) = (value.inf(), t);
        }
        if value.sup() < self.minimum {
            (self.minimum, self.minimum_at) = (value.sup(), t);
        }
    }

    /// The modulus of the error that is proved to be reached.
    fn modulus(&self) -> f64 {
        self.maximum.max(-self.minimum).max(0.0)
    }
}

/// Encloses minimum and maximum of `target` on `region`.
///
/// A subinterval is settled when its bounds exceed the best values by at most
/// tightness/2 * max(known, modulus reached here), plus twice the width to which the error is known
/// at one point. Everything settled contributes its bounds, so
/// the result holds for every t of the outer region whatever the sample points were.
pub fn extremes(target: &Target, region: &Region) -> Result<Extremes, NoExtremes> {
    let [start, end] = region.outer;
    let samples = 2 * target.numerator.coefficients().len() + 7;
    let mut best = Best {
        maximum: f64::NEG_INFINITY,
        maximum_at: start,
        minimum: f64::INFINITY,
        minimum_at: start,
    };
    for k in 0..=samples {
        let Some([first, last]) = region.inner else {
            break;
        };
        let share = k as f64 / samples as f64;
        let t = (first * (1.0 - share) + last * share).clamp(first, last);
        if let Some(bounds) = target.bounds(t, singleton(t)) {
            best.see(t, bounds.at_midpoint);
        }
    }

    let mut result = Extremes {
        minimum: Extreme {
            lower: f64::INFINITY,
            upper: f64::INFINITY,
            at: 0.0,
        },
        maximum: Extreme {
            lower: f64::NEG_INFINITY,
            upper: f64::NEG_INFINITY,
            at: 0.0,
        },
        work: samples as u64,
    };
    let mut open = initial_mesh(start, end, samples / 4 + 1);
    while let Some((left, right)) = open.pop() {
        result.work += 1;
        if result.work > region.budget {
            return Err(NoExtremes::Exhausted);
        }
        let m = (left * 0.5 + right * 0.5).clamp(left, right);
        let bounds = target.bounds(m, interval(left, right));
        if let Some(bounds) = &bounds {
            if region
                .inner
                .is_some_and(|[first, last]| m >= first && m <= last)
            {
                best.see(m, bounds.at_midpoint);
            }
            // Bisection cannot make the bounds narrower than the value at one point is known.
            let allowance = 0.5 * region.tightness * best.modulus().max(region.known)
                + 2.0 * bounds.at_midpoint.wid();
            let (top, bottom) = match region.inner {
                Some(_) => (best.maximum, best.minimum),
                // Without sample points: settle for the size known elsewhere.
                None => (region.known, -region.known),
            };
            if bounds.upper <= top + allowance && bounds.lower >= bottom - allowance {
                result.maximum.upper = result.maximum.upper.max(bounds.upper);
                result.minimum.lower = result.minimum.lower.min(bounds.lower);
                continue;
            }
        }
        if m <= left || m >= right || right - left < NARROWEST {
            let Some(bounds) = bounds else {
                return Err(NoExtremes::DivisorMayVanish(m));
            };
            result.maximum.upper = result.maximum.upper.max(bounds.upper);
            result.minimum.lower = result.minimum.lower.min(bounds.lower);
            continue;
        }
        open.push((m, right));
        open.push((left, m));
    }
    (result.maximum.lower, result.maximum.at) = (best.maximum, best.maximum_at);
    (result.minimum.upper, result.minimum.at) = (best.minimum, best.minimum_at);
    Ok(result)
}

/// Narrowest subinterval of [-1, 1] that is still bisected: below it the rounding of the double
/// coefficients outweighs what bisection gains.
const NARROWEST: f64 = 1.0 / (1u64 << 44) as f64;

fn initial_mesh(start: f64, end: f64, parts: usize) -> Vec<(f64, f64)> {
    let mut mesh = Vec::with_capacity(parts + 40);
    let mut right = end;
    for k in (0..parts).rev() {
        let share = k as f64 / parts as f64;
        let left = if k == 0 {
            start
        } else {
            (start + (end - start) * share).clamp(start, right)
        };
        mesh.push((left, right));
        right = left;
    }
    mesh
}

#[cfg(test)]
mod tests;
