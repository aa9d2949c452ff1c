//! Truncated power series in balls and the recurrences on them.
//!
//! A series is in powers of t; ' is the derivative with respect to t. Each elementary function y of
//! a series u satisfies a differential equation of first order in which the coefficient of t^(k-1)
//! determines y_k from y_0, ..., y_{k-1}; with s_j = j u_j = (t u')_j the sums below follow. The
//! constant term y_0 comes from the function of a ball. All operations cost O(n^2) or, where u is a
//! polynomial of degree d, mostly O(d n) multiplications. Sources (from memory): Knuth, The Art of
//! Computer Programming, vol. 2, section 4.7 (division, Miller's recurrence for powers); Brent and
//! Kung, Fast algorithms for manipulating formal power series, J. ACM 25 (1978), 581-595.
//!
//! The radii follow the recurrences with absolute values: they are about 2^-precision times the
//! coefficients of a majorant, for u/v of 1/(|v_0| - |v_1| t - |v_2| t^2 - ...), which may grow
//! faster than the true coefficients by a few bits a term.

use crate::number::ball::Ball;

/// The number of coefficients of a series that is a polynomial, known to all orders.
const ALL: usize = usize::MAX;

/// The coefficients of 1, t, ..., t^(known-1). The list may be shorter than `known`: coefficients
/// beyond its end are exactly zero. Its last element is never exactly zero.
#[derive(Clone, Debug)]
pub(super) struct PowerSeries {
    coefficients: Vec<Ball>,
    known: usize,
}

impl PowerSeries {
    fn new(coefficients: Vec<Ball>, known: usize) -> Self {
        let mut series = PowerSeries {
            coefficients,
            known,
        };
        series.trim();
        series
    }

    fn trim(&mut self) {
        while self.coefficients.last().is_some_and(Ball::is_exact_zero) {
            self.coefficients.pop();
        }
    }

    /// A constant, which is known to all orders.
    pub(super) fn constant(value: Ball) -> Self {
        PowerSeries::new(vec![value], ALL)
    }

    /// value + slope t
    pub(super) fn line(value: Ball, slope: Ball) -> Self {
        PowerSeries::new(vec![value, slope], ALL)
    }

    /// A value of which no derivative is known.
    pub(super) fn value_only(value: Ball) -> Self {
        PowerSeries::new(vec![value], 1)
    }

    /// True if the function does not depend on t.
    pub(super) fn is_constant(&self) -> bool {
        self.known == ALL && self.coefficients.len() <= 1
    }

    /// True if the function is identically zero.
    pub(super) fn is_zero(&self) -> bool {
        self.known == ALL && self.coefficients.is_empty()
    }

    /// The number of known coefficients.
    pub(super) fn known(&self) -> usize {
        self.known
    }

    /// The coefficients up to the last one that is not exactly zero.
    pub(super) fn coefficients(&self) -> &[Ball] {
        &self.coefficients
    }

    /// The coefficient of t^k, k < `known`.
    pub(super) fn coefficient(&self, k: usize, precision: u32) -> Ball {
        self.coefficients
            .get(k)
            .cloned()
            .unwrap_or_else(|| Ball::zero(precision))
    }

    /// The series with another constant term.
    pub(super) fn with_value(mut self, value: Ball) -> Self {
        match self.coefficients.first_mut() {
            Some(first) => *first = value,
            None => self.coefficients.push(value),
        }
        self.trim();
        self
    }

    /// Replaces a coefficient by exactly zero.
    pub(super) fn set_zero(&mut self, k: usize) {
        if let Some(coefficient) = self.coefficients.get_mut(k) {
            *coefficient = Ball::zero(coefficient.precision());
            self.trim();
        }
    }

    /// The quotient by t^count of a series whose first `count` coefficients are zero.
    pub(super) fn without_leading(&self, count: usize) -> Self {
        let rest = self.coefficients.get(count..).unwrap_or_default().to_vec();
        let known = if self.known == ALL {
            ALL
        } else {
            self.known.saturating_sub(count)
        };
        PowerSeries::new(rest, known)
    }

    pub(super) fn is_finite(&self) -> bool {
        self.coefficients.iter().all(Ball::is_finite)
    }

    /// The first `terms` coefficients; a series that knows fewer gives those.
    pub(super) fn into_coefficients(mut self, terms: usize, precision: u32) -> Vec<Ball> {
        self.coefficients
            .resize(terms.min(self.known), Ball::zero(precision));
        self.coefficients
    }

    /// s_j = j u_j for all stored coefficients, the coefficients of t u'.
    fn slopes(&self) -> Vec<Ball> {
        (0i64..)
            .zip(&self.coefficients)
            .map(|(j, coefficient)| coefficient.mul_integer(j))
            .collect()
    }

    /// The derivative.
    fn derivative(&self) -> Self {
        let mut slopes = self.slopes();
        if !slopes.is_empty() {
            slopes.remove(0);
        }
        let known = if self.known == ALL {
            ALL
        } else {
            self.known - 1
        };
        PowerSeries::new(slopes, known)
    }
}

/// Arithmetic of power series with a number of terms at a precision.
#[derive(Debug)]
pub(super) struct Arithmetic {
    pub(super) precision: u32,
    pub(super) terms: usize,
    /// The number of ball multiplications so far.
    pub(super) work: u64,
}

impl Arithmetic {
    pub(super) fn zero(&self) -> Ball {
        Ball::zero(self.precision)
    }

    /// total += sum u_j v_{k-j} over first <= j <= last, as far as both lists reach.
    fn accumulate(
        &mut self,
        total: &mut Ball,
        u: &[Ball],
        v: &[Ball],
        k: usize,
        range: (usize, usize),
    ) {
        self.convolve(total, u, v, k, range, Ball::add_product);
    }

    /// total -= sum u_j v_{k-j} over 1 <= j <= k, as far as both lists reach.
    fn diminish(&mut self, total: &mut Ball, u: &[Ball], v: &[Ball], k: usize) {
        self.convolve(total, u, v, k, (1, k), Ball::sub_product);
    }

    #[inline]
    fn convolve(
        &mut self,
        total: &mut Ball,
        u: &[Ball],
        v: &[Ball],
        k: usize,
        range: (usize, usize),
        step: impl Fn(&mut Ball, &Ball, &Ball),
    ) {
        if u.is_empty() || v.is_empty() {
            return;
        }
        let first = range.0.max((k + 1).saturating_sub(v.len()));
        let last = range.1.min(u.len() - 1);
        for j in first..=last {
            let (left, right) = (&u[j], &v[k - j]);
            if !left.is_exact_zero() && !right.is_exact_zero() {
                step(total, left, right);
                self.work += 1;
            }
        }
    }

    /// sum v_j v_{k-j} over first <= j <= k - first; the products of a pair are taken once.
    fn square_term(&mut self, v: &[Ball], k: usize, first: usize) -> Ball {
        let mut total = self.zero();
        if k > first {
            self.accumulate(&mut total, v, v, k, (first, (k - 1) / 2));
        }
        total = total.mul_power_of_two(1);
        if k.is_multiple_of(2)
            && k / 2 >= first
            && let Some(middle) = v.get(k / 2)
            && !middle.is_exact_zero()
        {
            total.add_product(middle, middle);
            self.work += 1;
        }
        total
    }

    pub(super) fn negate(&self, u: &PowerSeries) -> PowerSeries {
        PowerSeries::new(u.coefficients.iter().map(Ball::neg).collect(), u.known)
    }

    pub(super) fn add(&self, u: &PowerSeries, v: &PowerSeries) -> PowerSeries {
        self.combine(u, v, Ball::add, Ball::clone)
    }

    pub(super) fn subtract(&self, u: &PowerSeries, v: &PowerSeries) -> PowerSeries {
        self.combine(u, v, Ball::sub, Ball::neg)
    }

    fn combine(
        &self,
        u: &PowerSeries,
        v: &PowerSeries,
        both: fn(&Ball, &Ball) -> Ball,
        second: fn(&Ball) -> Ball,
    ) -> PowerSeries {
        let known = u.known.min(v.known);
        let length = u.coefficients.len().max(v.coefficients.len()).min(known);
        let coefficients = (0..length)
            .map(|k| match (u.coefficients.get(k), v.coefficients.get(k)) {
                (Some(left), Some(right)) => both(left, right),
                (Some(left), None) => left.clone(),
                (None, Some(right)) => second(right),
                (None, None) => self.zero(),
            })
            .collect();
        PowerSeries::new(coefficients, known)
    }

    /// The known coefficients of a polynomial result of the given length, or of a truncated one.
    fn product_length(&self, u: &PowerSeries, v: &PowerSeries, limit: usize) -> (usize, usize) {
        let known = u.known.min(v.known);
        let full = (u.coefficients.len() + v.coefficients.len()).saturating_sub(1);
        if known == ALL && full <= limit {
            (full, ALL)
        } else {
            (full.min(known).min(limit), known.min(limit))
        }
    }

    pub(super) fn product(&mut self, u: &PowerSeries, v: &PowerSeries) -> PowerSeries {
        self.product_to(u, v, self.terms)
    }

    fn product_to(&mut self, u: &PowerSeries, v: &PowerSeries, limit: usize) -> PowerSeries {
        let (length, known) = self.product_length(u, v, limit);
        let mut coefficients = Vec::with_capacity(length);
        for k in 0..length {
            let mut total = self.zero();
            self.accumulate(&mut total, &u.coefficients, &v.coefficients, k, (0, k));
            coefficients.push(total);
        }
        PowerSeries::new(coefficients, known)
    }

    pub(super) fn square(&mut self, u: &PowerSeries) -> PowerSeries {
        let (length, known) = self.product_length(u, u, self.terms);
        let coefficients = (0..length)
            .map(|k| self.square_term(&u.coefficients, k, 0))
            .collect();
        PowerSeries::new(coefficients, known)
    }

    /// q = u/v from u = v q: v_0 q_k = u_k - sum_{j=1..k} v_j q_{k-j}. `None` if v_0 contains 0.
    pub(super) fn quotient(&mut self, u: &PowerSeries, v: &PowerSeries) -> Option<PowerSeries> {
        self.quotient_to(u, v, self.terms)
    }

    fn quotient_to(
        &mut self,
        u: &PowerSeries,
        v: &PowerSeries,
        limit: usize,
    ) -> Option<PowerSeries> {
        let divisor = v.coefficients.first()?;
        if v.is_constant() {
            self.work += 2 * u.coefficients.len() as u64;
            let quotients: Option<Vec<Ball>> = u
                .coefficients
                .iter()
                .map(|coefficient| coefficient.div(divisor))
                .collect();
            return Some(PowerSeries::new(quotients?, u.known));
        }
        let inverse = Ball::one(self.precision).div(divisor)?;
        let known = u.known.min(v.known).min(limit);
        let mut quotients: Vec<Ball> = Vec::with_capacity(known);
        for k in 0..known {
            let mut rest = u.coefficient(k, self.precision);
            self.diminish(&mut rest, &v.coefficients, &quotients, k);
            rest.mul_assign(&inverse);
            quotients.push(rest);
        }
        self.work += known as u64;
        Some(PowerSeries::new(quotients, known))
    }

    /// u^n by repeated squaring; u^0 = 1, also where u = 0.
    ///
    /// A recurrence would divide by u_0, which is unstable near a zero of u.
    pub(super) fn power_integer(&mut self, u: &PowerSeries, exponent: u32) -> PowerSeries {
        let bits = u32::BITS - exponent.leading_zeros();
        let Some(below_first) = bits.checked_sub(1) else {
            return PowerSeries::constant(Ball::one(self.precision));
        };
        let mut result = u.clone();
        for position in (0..below_first).rev() {
            result = self.square(&result);
            if exponent >> position & 1 == 1 {
                result = self.product(&result, u);
            }
        }
        result
    }

    /// y = y_0 + the integral of y', of which one coefficient fewer is needed.
    fn integral(&self, derivative: PowerSeries, value: Ball) -> PowerSeries {
        let known = derivative.known.saturating_add(1);
        let mut coefficients = Vec::with_capacity(derivative.coefficients.len() + 1);
        coefficients.push(value);
        for (k, coefficient) in (1u64..).zip(&derivative.coefficients) {
            coefficients.push(coefficient.div_integer(k));
        }
        PowerSeries::new(coefficients, known)
    }

    /// y with y' = u' w and the given value.
    pub(super) fn integral_of_product(
        &mut self,
        u: &PowerSeries,
        w: &PowerSeries,
        value: Ball,
    ) -> PowerSeries {
        let derivative = self.product_to(&u.derivative(), w, self.terms - 1);
        self.integral(derivative, value)
    }

    /// y with y' = u'/w and the given value. `None` if w_0 contains 0.
    pub(super) fn integral_of_quotient(
        &mut self,
        u: &PowerSeries,
        w: &PowerSeries,
        value: Ball,
    ) -> Option<PowerSeries> {
        let derivative = self.quotient_to(&u.derivative(), w, self.terms - 1)?;
        Some(self.integral(derivative, value))
    }

    /// y = exp(u): y' = u' y, so k y_k = sum_{j=1..k} s_j y_{k-j}.
    pub(super) fn exponential(&mut self, u: &PowerSeries, value: Ball) -> PowerSeries {
        let slopes = u.slopes();
        let known = u.known.min(self.terms);
        let mut result = Vec::with_capacity(known);
        result.push(value);
        for k in 1..known {
            let mut total = self.zero();
            self.accumulate(&mut total, &slopes, &result, k, (1, k));
            result.push(total.div_integer(k as u64));
        }
        PowerSeries::new(result, known)
    }

    /// y = sqrt(u): y^2 = u, so 2 y_0 y_k = u_k - sum_{j=1..k-1} y_j y_{k-j}. `None` if y_0 contains
    /// 0.
    pub(super) fn square_root(&mut self, u: &PowerSeries, value: Ball) -> Option<PowerSeries> {
        let inverse = Ball::one(self.precision).div(&value.mul_power_of_two(1))?;
        let known = u.known.min(self.terms);
        let mut result = Vec::with_capacity(known);
        result.push(value);
        for k in 1..known {
            let mut rest = self.square_term(&result, k, 1);
            rest.neg_assign();
            if let Some(coefficient) = u.coefficients.get(k) {
                rest.add_assign(coefficient);
            }
            rest.mul_assign(&inverse);
            result.push(rest);
        }
        self.work += known as u64;
        Some(PowerSeries::new(result, known))
    }

    /// y = u^r by Miller's recurrence: u y' = r u' y, so
    /// k u_0 y_k = sum_{j=1..k} (r s_j - (k - j) u_j) y_{k-j}.
    /// `None` if u_0 contains 0. Valid for every real solution of the differential equation, so
    /// also for the real cube root of a negative u.
    ///
    /// The factor of y_{k-j} is formed first: two sums, one over r s_j y_{k-j}, cost as much, but
    /// enlarge the radius of y_{k-j} by the sum of the two parts where they nearly cancel.
    pub(super) fn power(
        &mut self,
        u: &PowerSeries,
        exponent: &Ball,
        value: Ball,
    ) -> Option<PowerSeries> {
        let inverse = Ball::one(self.precision).div(u.coefficients.first()?)?;
        let scaled: Vec<Ball> = u.slopes().iter().map(|slope| slope.mul(exponent)).collect();
        let known = u.known.min(self.terms);
        let mut result: Vec<Ball> = Vec::with_capacity(known);
        result.push(value);
        for k in 1..known {
            let mut total = self.zero();
            for j in 1..=k.min(u.coefficients.len() - 1) {
                let rest = (k - j) as i64;
                if !u.coefficients[j].is_exact_zero() && !result[k - j].is_exact_zero() {
                    let mut weight = u.coefficients[j].mul_integer(-rest);
                    weight.add_assign(&scaled[j]);
                    total.add_product(&weight, &result[k - j]);
                    self.work += 2;
                }
            }
            total.mul_assign(&inverse);
            result.push(total.div_integer(k as u64));
        }
        self.work += known as u64;
        Some(PowerSeries::new(result, known))
    }

    /// (sin u, cos u) from s' = u' c, c' = -u' s, or (sinh u, cosh u) from s' = u' c, c' = u' s:
    /// k s_k = sum_{j=1..k} s_j c_{k-j} and the like.
    pub(super) fn rotation(
        &mut self,
        u: &PowerSeries,
        values: (Ball, Ball),
        circular: bool,
    ) -> (PowerSeries, PowerSeries) {
        let slopes = u.slopes();
        let known = u.known.min(self.terms);
        let mut sines = Vec::with_capacity(known);
        let mut cosines = Vec::with_capacity(known);
        sines.push(values.0);
        cosines.push(values.1);
        for k in 1..known {
            let (mut sine, mut cosine) = (self.zero(), self.zero());
            self.accumulate(&mut sine, &slopes, &cosines, k, (1, k));
            self.accumulate(&mut cosine, &slopes, &sines, k, (1, k));
            if circular {
                cosine.neg_assign();
            }
            sines.push(sine.div_integer(k as u64));
            cosines.push(cosine.div_integer(k as u64));
        }
        (
            PowerSeries::new(sines, known),
            PowerSeries::new(cosines, known),
        )
    }

    /// y = tan(u) from y' = u' g, g = 1 + y^2, or y = tanh(u) with g = 1 - y^2:
    /// k y_k = sum_{j=1..k} s_j g_{k-j}, and g_k = +-(y^2)_k for k > 0.
    ///
    /// g_0 is given, because 1 - y_0^2 cancels where tanh is near 1.
    pub(super) fn tangent(
        &mut self,
        u: &PowerSeries,
        value: Ball,
        derivative: Ball,
        circular: bool,
    ) -> PowerSeries {
        let slopes = u.slopes();
        let known = u.known.min(self.terms);
        let mut result = Vec::with_capacity(known);
        let mut derivatives = Vec::with_capacity(known);
        result.push(value);
        derivatives.push(derivative);
        for k in 1..known {
            let mut total = self.zero();
            self.accumulate(&mut total, &slopes, &derivatives, k, (1, k));
            result.push(total.div_integer(k as u64));
            let mut square = self.square_term(&result, k, 0);
            if !circular {
                square.neg_assign();
            }
            derivatives.push(square);
        }
        PowerSeries::new(result, known)
    }
}
