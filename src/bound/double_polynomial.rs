//! Polynomials in t with double intervals as coefficients, and their second-order enclosures.
//!
//! The difference of approximant and reference is formed in balls; only the result is dropped to
//! doubles, scaled by a power of two so that its largest coefficient is near 1 (tables of 300
//! digits would underflow otherwise). After that, 53 bits are plenty.

use inari::Interval;
use rug::Float;
use rug::float::Round;

use crate::number::ball::Ball;

/// c_0 + c_1 t + ... with interval coefficients, meant as the set of all polynomials whose
/// coefficients lie in those intervals.
#[derive(Clone, Debug)]
pub struct DoublePolynomial {
    coefficients: Vec<Interval>,
    /// Coefficients of the second derivative.
    second: Vec<Interval>,
}

/// Value, slope and curvature on a subinterval J around m: for every polynomial g of the set and
/// every t in J,  g(t) = g(m) + g'(m) (t-m) + g''(s)/2 (t-m)^2  for some s in J (Taylor's theorem
/// with Lagrange's remainder).
#[derive(Clone, Copy, Debug)]
pub struct SecondOrder {
    /// Encloses g(m).
    pub value: Interval,
    /// Encloses g'(m).
    pub slope: Interval,
    /// Encloses g''(s) for every s in J.
    pub curvature: Interval,
}

/// The interval from `lower` to `upper`; the whole line if they are not a proper pair (a NaN, or
/// reversed by an overflow), which is always an enclosure.
pub fn interval(lower: f64, upper: f64) -> Interval {
    Interval::try_from((lower, upper)).unwrap_or(Interval::ENTIRE)
}

/// The interval that holds exactly `x`.
pub fn singleton(x: f64) -> Interval {
    interval(x, x)
}

/// Outward double interval of `ball` times 2^-exponent.
pub fn outward(ball: &Ball, exponent: i64) -> Interval {
    if !ball.is_finite() {
        return Interval::ENTIRE;
    }
    interval(
        scaled(ball.lower(), exponent, Round::Down),
        scaled(ball.upper(), exponent, Round::Up),
    )
}

/// Binary exponents beyond which a double is certainly zero or infinite.
const BEYOND_DOUBLES: i64 = 3000;
const BELOW_DOUBLES: i64 = -3000;

/// x * 2^-exponent as a double, rounded in the given direction.
///
/// MPFR rounds a shift that leaves its exponent range to nearest, which would turn a tiny upper
/// bound into 0; numbers that no double is near are therefore rounded here by their sign alone.
fn scaled(x: Float, exponent: i64, round: Round) -> f64 {
    let Some(own) = x.get_exp() else {
        return x.to_f64_round(round);
    };
    let size = i64::from(own).saturating_sub(exponent);
    let outside = matches!(
        (round, x.is_sign_negative()),
        (Round::Up, false) | (Round::Down, true)
    );
    let magnitude = match (size, outside) {
        (BEYOND_DOUBLES.., true) => f64::INFINITY,
        (BEYOND_DOUBLES.., false) => f64::MAX,
        (..=BELOW_DOUBLES, true) => f64::from_bits(1),
        (..=BELOW_DOUBLES, false) => 0.0,
        _ => {
            // |size| is small, so the shifted number is well inside MPFR's range.
            let shift = -exponent;
            return match i32::try_from(shift) {
                Ok(shift) => (x << shift).to_f64_round(round),
                Err(_) => match round {
                    Round::Down => f64::NEG_INFINITY,
                    _ => f64::INFINITY,
                },
            };
        }
    };
    if x.is_sign_negative() {
        -magnitude
    } else {
        magnitude
    }
}

impl DoublePolynomial {
    /// The polynomial with the given coefficients.
    pub fn new(coefficients: Vec<Interval>) -> Self {
        let second = coefficients
            .iter()
            .enumerate()
            .skip(2)
            // k (k-1) is exact in a double for every k that fits in memory.
            .map(|(k, &c)| c * singleton((k * (k - 1)) as f64))
            .collect();
        Self {
            coefficients,
            second,
        }
    }

    /// Drops balls to doubles after scaling by 2^-exponent.
    pub fn from_balls(balls: &[Ball], exponent: i64) -> Self {
        Self::new(balls.iter().map(|ball| outward(ball, exponent)).collect())
    }

    /// The coefficients.
    pub fn coefficients(&self) -> &[Interval] {
        &self.coefficients
    }

    /// Encloses g(t) for t in `at` (Horner).
    pub fn value(&self, at: Interval) -> Interval {
        horner(&self.coefficients, at)
    }

    /// Encloses g(m) and g'(m) (Horner's scheme carried for both).
    pub fn value_and_slope(&self, m: f64) -> (Interval, Interval) {
        let m = singleton(m);
        let zero = singleton(0.0);
        let (mut value, mut slope) = (zero, zero);
        for &c in self.coefficients.iter().rev() {
            slope = slope * m + value;
            value = value * m + c;
        }
        (value, slope)
    }

    /// The second-order enclosure on `over` around `m`.
    pub fn second_order(&self, m: f64, over: Interval) -> SecondOrder {
        let (value, slope) = self.value_and_slope(m);
        SecondOrder {
            value,
            slope,
            curvature: horner(&self.second, over),
        }
    }
}

fn horner(coefficients: &[Interval], at: Interval) -> Interval {
    coefficients
        .iter()
        .rev()
        .fold(singleton(0.0), |sum, &c| sum * at + c)
}

impl SecondOrder {
    /// Encloses g over J, given J - m as an interval.
    pub fn over(&self, offset: Interval) -> Interval {
        let half = singleton(0.5);
        self.value + self.slope * offset + half * self.curvature * offset.sqr()
    }

    /// Encloses g' over J.
    pub fn slope_over(&self, offset: Interval) -> Interval {
        self.slope + self.curvature * offset
    }

    /// Second-order form of the quotient of `self` by `divisor` on J, or `None` if the divisor
    /// may vanish on J.
    ///
    /// With g = a/b:  g' = (a' - g b')/b  and  g'' = (a'' - 2 g' b' - g b'')/b  (differentiate
    /// a = g b once and twice). Value and slope are taken at m, the curvature over J, where the
    /// ranges of a, a', b, b' over J come from their own second-order forms.
    pub fn quotient(&self, divisor: &SecondOrder, offset: Interval) -> Option<SecondOrder> {
        let divisor_over = divisor.over(offset);
        if divisor_over.contains(0.0) || divisor.value.contains(0.0) {
            return None;
        }
        let value = self.value / divisor.value;
        let slope = (self.slope - value * divisor.slope) / divisor.value;
        let value_over = self.over(offset) / divisor_over;
        let divisor_slope_over = divisor.slope_over(offset);
        let slope_over = (self.slope_over(offset) - value_over * divisor_slope_over) / divisor_over;
        let two = singleton(2.0);
        let curvature = (self.curvature
            - two * slope_over * divisor_slope_over
            - value_over * divisor.curvature)
            / divisor_over;
        Some(SecondOrder {
            value,
            slope,
            curvature,
        })
    }

    /// Lower and upper bound of g over J = m + [-r, r].
    ///
    /// g(t) <= sup g(m) + max over tau in [0, r] of (|g'(m)| tau + c tau^2/2) with c = sup g''
    /// over J, and for the lower bound the same for -g. The maximum of s tau + c tau^2/2 on
    /// [0, r] with s >= 0 is s r + c r^2/2 if c >= 0 or if the vertex s/(-c) is at or beyond r,
    /// and never more than s^2/(-2c) if c < 0. Every operation below is rounded to nearest and
    /// then moved one step up (or down), which bounds it outward.
    pub fn bounds(&self, r: f64) -> (f64, f64) {
        let s = self.slope.mag();
        let upper = add_up(self.value.sup(), rise(s, self.curvature.sup(), r));
        let lower = add_down(self.value.inf(), -rise(s, -self.curvature.inf(), r));
        (lower, upper)
    }
}

/// Upper bound of max over tau in [0, r] of s tau + c tau^2/2, for s, r >= 0.
fn rise(s: f64, c: f64, r: f64) -> f64 {
    let linear = multiply_up(s, r);
    if c >= 0.0 {
        return add_up(linear, multiply_up(c, multiply_up(r, r)) * 0.5).next_up();
    }
    let steepness = -c;
    if multiply_up(steepness, r) <= s {
        let square = (r * r).next_down().max(0.0);
        let drop = ((steepness * square).next_down() * 0.5)
            .next_down()
            .max(0.0);
        add_up(linear, -drop)
    } else {
        let vertex = (multiply_up(s, s) / (2.0 * steepness)).next_up();
        vertex.min(linear)
    }
}

fn add_up(a: f64, b: f64) -> f64 {
    let sum = a + b;
    if sum.is_nan() {
        f64::INFINITY
    } else {
        sum.next_up()
    }
}

fn add_down(a: f64, b: f64) -> f64 {
    let sum = a + b;
    if sum.is_nan() {
        f64::NEG_INFINITY
    } else {
        sum.next_down()
    }
}

/// Upper bound of a product of non-negative numbers (0 * infinity counts as infinity).
fn multiply_up(a: f64, b: f64) -> f64 {
    let product = a * b;
    if product.is_nan() {
        f64::INFINITY
    } else {
        product.next_up()
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;
    use rug::{Complete, Rational};

    fn rational(x: f64) -> Rational {
        Rational::from_f64(x).unwrap()
    }

    /// A bound far below every double, or far above, stays a bound on its side.
    #[test]
    fn numbers_beyond_doubles_are_rounded_outward() {
        let power = |log2: i32| Float::with_val(64, 1) << log2;
        for negative in [false, true] {
            for (log2, exponent) in [
                (-1_000_000_000, -100_000_000),
                (-1_070_000_000, 100_000_000),
                (-90_000_000, 0),
                (1_000_000_000, 100_000_000),
                (90_000_000, 0),
                (1_070_000_000, -100_000_000),
            ] {
                let x = if negative { -power(log2) } else { power(log2) };
                let found = outward(&Ball::from_float(x), exponent);
                let (near, far) = if negative {
                    (-found.sup(), -found.inf())
                } else {
                    (found.inf(), found.sup())
                };
                assert!(far > 0.0 && near < far, "2^{log2} became {found:?}");
                assert!(if log2 < 0 {
                    near <= 0.0
                } else {
                    far.is_infinite()
                });
            }
            let x = if negative {
                -power(100_000_007)
            } else {
                power(100_000_007)
            };
            let found = outward(&Ball::from_float(x), 100_000_000);
            assert_eq!(found, singleton(if negative { -128.0 } else { 128.0 }));
        }
    }

    proptest! {
        /// Against the exact maximum over tau in [0, r] of s tau + c tau^2/2.
        #[test]
        fn rise_is_above_the_exact_maximum_and_close(
            s in prop_oneof![Just(0.0), 1e-12f64..1e3],
            c in -1e3f64..1e3,
            r in 1e-9f64..2.0,
        ) {
            let (es, ec, er) = (rational(s), rational(c), rational(r));
            let at = |tau: &Rational| (&es * tau).complete() + (&ec * tau).complete() * tau / 2u32;
            let mut exact = at(&er).max(Rational::new());
            if c < 0.0 {
                let vertex = (&es / &ec).complete() * -1;
                if vertex <= er {
                    exact = exact.max(at(&vertex));
                }
            }
            let bound = rational(rise(s, c, r));
            prop_assert!(bound >= exact);
            let slack = rational(1e-12 * (s * r + c.abs() * r * r + 1e-280));
            prop_assert!(bound <= exact + slack);
        }

        #[test]
        fn second_order_form_contains_the_polynomial(
            coefficients in proptest::collection::vec(-10.0f64..10.0, 1..9),
            m in -1.0f64..1.0,
            r in 0.0f64..0.5,
            share in -1.0f64..1.0,
        ) {
            let polynomial = DoublePolynomial::new(coefficients.iter().map(|&c| singleton(c)).collect());
            let over = interval(m - r, m + r);
            let offset = over - singleton(m);
            let form = polynomial.second_order(m, over);
            let t = m + r * share;
            prop_assume!(over.contains(t));
            let exact = coefficients
                .iter()
                .rev()
                .fold(Rational::new(), |sum, &c| sum * rational(t) + rational(c));
            let (lower, upper) = form.bounds(offset.mag());
            prop_assert!(rational(lower) <= exact && exact <= rational(upper));
            let range = form.over(offset);
            prop_assert!(rational(range.inf()) <= exact && exact <= rational(range.sup()));
        }
    }
}
