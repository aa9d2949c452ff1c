//! Complex rectangles: a real and an imaginary interval, with the elementary functions.
//!
//! A function returns `None` where the rectangle meets its branch cut or singularity, or where
//! the enclosures used on the way are too wide to exclude that.

use rug::{Float, Rational};

use crate::number::radius::Radius;
use crate::number::wide_interval::WideInterval;

/// The complex numbers x + iy with x in `real` and y in `imaginary`.
#[derive(Clone, Debug, PartialEq)]
pub struct Rectangle {
    /// Real parts.
    pub real: WideInterval,
    /// Imaginary parts.
    pub imaginary: WideInterval,
}

impl Rectangle {
    /// A real interval as a rectangle.
    pub fn from_real(real: WideInterval) -> Self {
        let imaginary = WideInterval::zero(real.precision());
        Self { real, imaginary }
    }

    fn new(real: WideInterval, imaginary: WideInterval) -> Self {
        Self { real, imaginary }
    }

    fn constant(&self, x: i32) -> WideInterval {
        WideInterval::from_rational(&Rational::from(x), self.real.precision())
    }

    /// Upper bound of |z|: the length of the diagonal of the largest moduli.
    pub fn magnitude(&self) -> Radius {
        let x = Radius::of_float_upper(&self.real.magnitude());
        let y = Radius::of_float_upper(&self.imaginary.magnitude());
        x.mul(x).add(y.mul(y)).sqrt()
    }

    /// True if both parts are bounded.
    pub fn is_finite(&self) -> bool {
        self.real.is_finite() && self.imaginary.is_finite()
    }

    /// True if 0 is in the rectangle.
    pub fn contains_zero(&self) -> bool {
        self.real.contains_zero() && self.imaginary.contains_zero()
    }

    /// True if the rectangle meets the half line (-inf, 0], the cut of the logarithm.
    pub fn meets_negative_axis(&self) -> bool {
        self.imaginary.contains_zero() && *self.real.lower() <= 0
    }

    /// The smallest rectangle that holds both.
    #[must_use]
    pub fn hull(&self, other: &Self) -> Self {
        Self::new(
            self.real.hull(&other.real),
            self.imaginary.hull(&other.imaginary),
        )
    }

    /// -z.
    #[must_use]
    pub fn neg(&self) -> Self {
        Self::new(self.real.neg(), self.imaginary.neg())
    }

    /// i z.
    #[must_use]
    pub fn times_i(&self) -> Self {
        Self::new(self.imaginary.neg(), self.real.clone())
    }

    /// z + w.
    #[must_use]
    pub fn add(&self, other: &Self) -> Self {
        Self::new(
            self.real.add(&other.real),
            self.imaginary.add(&other.imaginary),
        )
    }

    /// z - w.
    #[must_use]
    pub fn sub(&self, other: &Self) -> Self {
        Self::new(
            self.real.sub(&other.real),
            self.imaginary.sub(&other.imaginary),
        )
    }

    /// z + x for a real interval x.
    #[must_use]
    pub fn add_real(&self, x: &WideInterval) -> Self {
        Self::new(self.real.add(x), self.imaginary.clone())
    }

    /// z x for a real interval x.
    #[must_use]
    pub fn scale(&self, x: &WideInterval) -> Self {
        Self::new(self.real.mul(x), self.imaginary.mul(x))
    }

    /// z w.
    #[must_use]
    pub fn mul(&self, other: &Self) -> Self {
        Self::new(
            self.real
                .mul(&other.real)
                .sub(&self.imaginary.mul(&other.imaginary)),
            self.real
                .mul(&other.imaginary)
                .add(&self.imaginary.mul(&other.real)),
        )
    }

    /// z^2, with x^2 and y^2 as squares.
    #[must_use]
    pub fn square(&self) -> Self {
        let cross = self.real.mul(&self.imaginary);
        Self::new(
            self.real.square().sub(&self.imaginary.square()),
            cross.add(&cross),
        )
    }

    /// z / w = z conj(w) / |w|^2; `None` if w may be 0.
    #[must_use]
    pub fn div(&self, other: &Self) -> Option<Self> {
        if other.imaginary.is_exact() && other.imaginary.contains_zero() {
            return Some(Self::new(
                self.real.div(&other.real)?,
                self.imaginary.div(&other.real)?,
            ));
        }
        let size = other.real.square().add(&other.imaginary.square());
        let conjugate = Self::new(other.real.clone(), other.imaginary.neg());
        let product = self.mul(&conjugate);
        Some(Self::new(
            product.real.div(&size)?,
            product.imaginary.div(&size)?,
        ))
    }

    /// z^n; `None` for a negative n if z may be 0.
    #[must_use]
    pub fn pow_integer(&self, n: i32) -> Option<Self> {
        let mut result: Option<Self> = None;
        let mut square = self.clone();
        let mut m = n.unsigned_abs();
        while m > 0 {
            if m & 1 == 1 {
                result = Some(result.map_or_else(|| square.clone(), |r| r.mul(&square)));
            }
            m >>= 1;
            if m > 0 {
                square = square.square();
            }
        }
        let one = Self::from_real(self.constant(1));
        let power = result.unwrap_or_else(|| one.clone());
        if n < 0 { one.div(&power) } else { Some(power) }
    }

    /// e^z = e^x (cos y + i sin y).
    #[must_use]
    pub fn exp(&self) -> Self {
        let size = self.real.exp();
        Self::new(
            size.mul(&self.imaginary.cos()),
            size.mul(&self.imaginary.sin()),
        )
    }

    /// Principal logarithm: log|z| + i arg z; `None` if the rectangle meets (-inf, 0].
    #[must_use]
    pub fn log(&self) -> Option<Self> {
        let argument = self.argument()?;
        let size = self.real.square().add(&self.imaginary.square()).log()?;
        let half = WideInterval::from_rational(&Rational::from((1, 2)), self.real.precision());
        Some(Self::new(size.mul(&half), argument))
    }

    /// arg z in (-pi, pi). On x > 0 it is atan(y/x); on y > 0 it is pi/2 - atan(x/y), on y < 0
    /// -pi/2 - atan(x/y); a rectangle off (-inf, 0] lies in one of these half planes.
    ///
    /// # Errors
    ///
    /// `None` if the rectangle meets (-inf, 0].
    pub fn argument(&self) -> Option<WideInterval> {
        if self.meets_negative_axis() {
            return None;
        }
        let (x, y) = (&self.real, &self.imaginary);
        if x.is_positive() {
            return Some(y.div(x)?.atan());
        }
        let half = WideInterval::from_rational(&Rational::from((1, 2)), x.precision());
        let quarter = WideInterval::pi(x.precision()).mul(&half);
        let angle = x.div(y)?.atan();
        if y.is_positive() {
            Some(quarter.sub(&angle))
        } else {
            Some(quarter.neg().sub(&angle))
        }
    }

    /// z^q = exp(q log z), principal.
    #[must_use]
    pub fn pow_rational(&self, q: &Rational) -> Option<Self> {
        let q = WideInterval::from_rational(q, self.real.precision());
        Some(self.log()?.scale(&q).exp())
    }

    /// Principal square root.
    #[must_use]
    pub fn sqrt(&self) -> Option<Self> {
        self.pow_rational(&Rational::from((1, 2)))
    }

    /// sin z = sin x cosh y + i cos x sinh y.
    #[must_use]
    pub fn sin(&self) -> Self {
        Self::new(
            self.real.sin().mul(&self.imaginary.cosh()),
            self.real.cos().mul(&self.imaginary.sinh()),
        )
    }

    /// cos z = cos x cosh y - i sin x sinh y.
    #[must_use]
    pub fn cos(&self) -> Self {
        Self::new(
            self.real.cos().mul(&self.imaginary.cosh()),
            self.real.sin().mul(&self.imaginary.sinh()).neg(),
        )
    }

    /// sinh z = sinh x cos y + i cosh x sin y.
    #[must_use]
    pub fn sinh(&self) -> Self {
        Self::new(
            self.real.sinh().mul(&self.imaginary.cos()),
            self.real.cosh().mul(&self.imaginary.sin()),
        )
    }

    /// cosh z = cosh x cos y + i sinh x sin y.
    #[must_use]
    pub fn cosh(&self) -> Self {
        Self::new(
            self.real.cosh().mul(&self.imaginary.cos()),
            self.real.sinh().mul(&self.imaginary.sin()),
        )
    }

    /// tan z = (sin 2x + i sinh 2y)/(cos 2x + cosh 2y); the denominator is 2 |cos z|^2.
    #[must_use]
    pub fn tan(&self) -> Option<Self> {
        let (x, y) = (
            self.real.add(&self.real),
            self.imaginary.add(&self.imaginary),
        );
        let size = x.cos().add(&y.cosh());
        if !size.is_positive() {
            return None;
        }
        Some(Self::new(x.sin().div(&size)?, y.sinh().div(&size)?))
    }

    /// tanh z = -i tan(i z).
    #[must_use]
    pub fn tanh(&self) -> Option<Self> {
        Some(self.times_i().tan()?.times_i().neg())
    }

    /// asin z = -i log(i z + sqrt(1 - z^2)).
    #[must_use]
    pub fn asin(&self) -> Option<Self> {
        let root = self.square().neg().add_real(&self.constant(1)).sqrt()?;
        Some(self.times_i().add(&root).log()?.times_i().neg())
    }

    /// acos z = pi/2 - asin z.
    #[must_use]
    pub fn acos(&self) -> Option<Self> {
        let half = WideInterval::from_rational(&Rational::from((1, 2)), self.real.precision());
        let quarter = WideInterval::pi(self.real.precision()).mul(&half);
        Some(self.asin()?.neg().add_real(&quarter))
    }

    /// atan z = (i/2) (log(1 - i z) - log(1 + i z)).
    #[must_use]
    pub fn atan(&self) -> Option<Self> {
        let turned = self.times_i();
        let one = self.constant(1);
        let half = WideInterval::from_rational(&Rational::from((1, 2)), self.real.precision());
        let difference = turned
            .neg()
            .add_real(&one)
            .log()?
            .sub(&turned.add_real(&one).log()?);
        Some(difference.times_i().scale(&half))
    }

    /// asinh z = log(z + sqrt(1 + z^2)), by the odd symmetry where the real part is negative.
    #[must_use]
    pub fn asinh(&self) -> Option<Self> {
        if *self.real.upper() < 0 {
            return Some(self.neg().asinh()?.neg());
        }
        let root = self.square().add_real(&self.constant(1)).sqrt()?;
        self.add(&root).log()
    }

    /// acosh z = log(z + sqrt(z - 1) sqrt(z + 1)).
    #[must_use]
    pub fn acosh(&self) -> Option<Self> {
        let one = self.constant(1);
        let root = self
            .add_real(&one.neg())
            .sqrt()?
            .mul(&self.add_real(&one).sqrt()?);
        self.add(&root).log()
    }

    /// atanh z = (log(1 + z) - log(1 - z))/2.
    #[must_use]
    pub fn atanh(&self) -> Option<Self> {
        let one = self.constant(1);
        let half = WideInterval::from_rational(&Rational::from((1, 2)), self.real.precision());
        Some(
            self.add_real(&one)
                .log()?
                .sub(&self.neg().add_real(&one).log()?)
                .scale(&half),
        )
    }

    /// The error function.
    ///
    /// erf(x + iy) = erf(x) + i y * (average over tau in [0, 1] of erf'(x + i tau y)), and an
    /// average of values in a convex set (a rectangle) lies in it. erf'(z) = 2/sqrt(pi) e^(-z^2).
    #[must_use]
    pub fn erf(&self) -> Self {
        let precision = self.real.precision();
        let segment = Self::new(
            self.real.clone(),
            self.imaginary.hull(&WideInterval::zero(precision)),
        );
        let slope = segment
            .square()
            .neg()
            .exp()
            .scale(&two_over_root_pi(precision));
        let rise = slope.scale(&self.imaginary).times_i();
        rise.add_real(&self.real.erf())
    }

    /// The complementary error function, with relative accuracy for large real parts.
    ///
    /// For Re z > 0, erfc(z) = e^(-z^2) w(z) with
    /// w(z) = (2/sqrt(pi)) int_0^inf exp(-t^2 - 2 z t) dt, so
    /// |w'(z)| <= (4/sqrt(pi)) int_0^inf t exp(-t^2 - 2 t Re z) dt = -w'(Re z), which is at most
    /// both 2/sqrt(pi) - 2 x w(x) (the derivative of e^(x^2) erfc(x)) and 1/(sqrt(pi) x^2) (drop
    /// exp(-t^2)), x = Re z; it falls with x, as does w(x). Hence |w(x + iy) - w(x)| <= |y| (-w'(x)).
    ///
    /// On the real line
    /// (2/sqrt(pi)) / (x + sqrt(x^2 + 2)) < w(x) <= (2/sqrt(pi)) / (x + sqrt(x^2 + 4/pi)), x >= 0
    /// (Abramowitz and Stegun, 7.1.13): within 16% at x = 1/2, closer beyond, and far cheaper than
    /// erfc itself, which a bound on a disc does not need to more digits.
    #[must_use]
    pub fn erfc(&self) -> Self {
        let scaled = if *self.real.lower() >= 0.5 { self.erfc_right() } else { None };
        scaled.unwrap_or_else(|| self.erf().neg().add_real(&self.constant(1)))
    }

    /// The scaled form of [`erfc`](Self::erfc), for real parts >= 1/2.
    fn erfc_right(&self) -> Option<Self> {
        let precision = self.real.precision();
        let factor = two_over_root_pi(precision);
        let point = |x: &Float| WideInterval::new(x.clone(), x.clone());
        let bound = |x: &WideInterval, shift: &WideInterval| {
            factor.div(&x.add(&x.square().add(shift).sqrt()?))
        };
        let (left, right) = (point(self.real.lower()), point(self.real.upper()));
        let two = self.constant(2);
        let four_over_pi = self.constant(4).div(&WideInterval::pi(precision))?;
        let scaled = bound(&right, &two)?.hull(&bound(&left, &four_over_pi)?);
        let one_way = factor.sub(&two.mul(&left).mul(&bound(&left, &two)?));
        let other_way = factor.div(&two.mul(&left.square()))?;
        let steepest = if other_way.upper() < one_way.upper() { other_way } else { one_way };
        let spread = WideInterval::new(steepest.upper().clone(), steepest.upper().clone())
            .mul(&point(&self.imaginary.magnitude()));
        let deviation = spread.hull(&spread.neg());
        let scaled = Self::new(scaled.add(&deviation), deviation);
        Some(self.square().neg().exp().mul(&scaled))
    }
}

fn two_over_root_pi(precision: u32) -> WideInterval {
    let two = WideInterval::from_rational(&Rational::from(2), precision);
    let root = WideInterval::pi(precision).sqrt();
    // pi is positive, so root and quotient exist.
    root.and_then(|root| two.div(&root)).unwrap_or(two)
}
