//! Sine, cosine and tangent of intervals, and the argument of complex rectangles.

use std::cmp::Ordering;

use rug::Float;
use rug::float::Round;

use super::{WideInterval, larger, smaller};

/// Beyond 2^this the reduction by multiples of pi is not worth its cost: the range of sine and
/// cosine is taken to be [-1, 1].
const LARGEST_EXPONENT: i32 = 2000;

/// A function value between `below` and `above`, which are equal or neighbours.
struct Value {
    below: Float,
    above: Float,
}

impl Value {
    /// From the value rounded down.
    fn new(below: Float, exactness: Ordering) -> Self {
        let mut above = below.clone();
        if exactness != Ordering::Equal {
            above.next_up();
        }
        Self { below, above }
    }

    /// The sign of the value: a number >= 0 rounds down to one >= 0, and a number < 0 to one < 0.
    /// `Equal` is an exact 0, or a positive value below MPFR's range.
    fn sign(&self) -> Ordering {
        self.below.cmp0().unwrap_or(Ordering::Equal)
    }
}

/// (sin x, cos x) by one call of MPFR, rounded down.
fn sine_cosine(x: &Float) -> [Value; 2] {
    let mut sine = x.clone();
    let mut cosine = Float::new(x.prec());
    let (first, second) = sine.sin_cos_round(&mut cosine, Round::Down);
    [Value::new(sine, first), Value::new(cosine, second)]
}

/// The range of a sinusoid on [a, b], b - a < pi, from its values at the ends and the signs of its
/// derivative there; see [`WideInterval::sin_cos`].
fn range(a: &Value, b: &Value, slope_a: Ordering, slope_b: Ordering) -> WideInterval {
    use Ordering::{Equal, Greater, Less};
    let precision = a.below.prec();
    let least = || smaller(a.below.clone(), b.below.clone());
    let greatest = || larger(a.above.clone(), b.above.clone());
    let one = |sign: i32| Float::with_val(precision, sign);
    match (slope_a, slope_b) {
        (Greater, Greater) => WideInterval {
            lower: a.below.clone(),
            upper: b.above.clone(),
        },
        (Less, Less) => WideInterval {
            lower: b.below.clone(),
            upper: a.above.clone(),
        },
        (Greater | Equal, Less | Equal) => WideInterval {
            lower: least(),
            upper: one(1),
        },
        (Less, Greater) => WideInterval {
            lower: one(-1),
            upper: greatest(),
        },
        (Less, Equal) | (Equal, Greater) => WideInterval {
            lower: one(-1),
            upper: one(1),
        },
    }
}

impl WideInterval {
    /// True if the interval is certainly shorter than 3 < pi and within the range in which sines
    /// are computed.
    fn is_less_than_half_a_turn(&self) -> bool {
        let moderate = |x: &Float| {
            x.get_exp()
                .is_none_or(|exponent| exponent < LARGEST_EXPONENT)
        };
        self.is_finite() && moderate(&self.lower) && moderate(&self.upper) && self.width() < 3
    }

    /// (sin x, cos x).
    ///
    /// Theorem. On [a, b] with b - a < pi a sinusoid g changes its sign at most once, because its
    /// zeros are pi apart. If g > 0 at both ends, then g > 0 between them: otherwise [a, b] would
    /// contain a whole half wave of g < 0 and be longer than pi. So, with g the derivative of
    /// f = sin or cos: f is monotone if g has one sign at the ends; f has exactly one extreme inside,
    /// a maximum of 1, if g changes from + to -, and a minimum of -1 if it changes from - to +. The
    /// signs of g at the ends are those of correctly rounded values. A sign that stays unknown is
    /// an exact zero at an end (or a value below MPFR's range): g(a) = 0 only for a = 0, where
    /// cos has its maximum.
    ///
    /// An interval that may be longer than 3 gives [-1, 1] twice.
    #[must_use]
    pub fn sin_cos(&self) -> (Self, Self) {
        if !self.is_less_than_half_a_turn() {
            let one = |sign: i32| Float::with_val(self.precision(), sign);
            let all = Self {
                lower: one(-1),
                upper: one(1),
            };
            return (all.clone(), all);
        }
        let [sine_a, cosine_a] = sine_cosine(&self.lower);
        let [sine_b, cosine_b] = sine_cosine(&self.upper);
        let sine = range(&sine_a, &sine_b, cosine_a.sign(), cosine_b.sign());
        let cosine = range(
            &cosine_a,
            &cosine_b,
            sine_a.sign().reverse(),
            sine_b.sign().reverse(),
        );
        (sine, cosine)
    }

    /// Sine.
    #[must_use]
    pub fn sin(&self) -> Self {
        self.sin_cos().0
    }

    /// Cosine.
    #[must_use]
    pub fn cos(&self) -> Self {
        self.sin_cos().1
    }

    /// Tangent; `None` unless the cosine is certainly different from 0. Between two poles it
    /// rises, and [a, b] with b - a < pi contains no pole if the cosine has one strict sign at its
    /// ends (see [`sin_cos`](Self::sin_cos)).
    #[must_use]
    pub fn tan(&self) -> Option<Self> {
        if !self.is_less_than_half_a_turn() {
            return None;
        }
        let [_, first] = sine_cosine(&self.lower);
        let [_, last] = sine_cosine(&self.upper);
        let sign = first.sign();
        (sign != Ordering::Equal && sign == last.sign()).then(|| self.rising(Float::tan_round))
    }

    /// The argument in (-pi, pi) of the complex numbers x + iy, x in `real` and y in `imaginary`;
    /// `None` if the rectangle meets the half line (-inf, 0].
    ///
    /// The derivatives of the argument are -y/r^2 in x and x/r^2 in y. On y > 0 it falls with x and
    /// rises with y where x > 0, falls with y where x < 0; on y < 0 it is the mirror image. So the
    /// least and the greatest argument are taken at the corners that the signs select, and no
    /// corner of a rectangle inside the domain that is selected has two infinite coordinates.
    #[must_use]
    pub fn argument(real: &Self, imaginary: &Self) -> Option<Self> {
        let (x, y) = (real, imaginary);
        if y.contains_zero() && x.lower <= 0 {
            return None;
        }
        let precision = x.precision().max(y.precision());
        let at = |y: &Float, x: &Float, round: Round| {
            let mut angle = Float::with_val(precision, y);
            angle.atan2_round(x, round);
            angle
        };
        let lower = if y.lower >= 0 {
            at(
                if x.upper > 0 { &y.lower } else { &y.upper },
                &x.upper,
                Round::Down,
            )
        } else {
            at(
                if x.lower > 0 { &y.lower } else { &y.upper },
                &x.lower,
                Round::Down,
            )
        };
        let upper = if y.upper <= 0 {
            at(
                if x.upper > 0 { &y.upper } else { &y.lower },
                &x.upper,
                Round::Up,
            )
        } else {
            at(
                if x.lower > 0 { &y.upper } else { &y.lower },
                &x.lower,
                Round::Up,
            )
        };
        Some(Self { lower, upper })
    }
}
