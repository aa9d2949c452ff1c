//! Circular and hyperbolic functions of complex rectangles.

use super::Rectangle;

impl Rectangle {
    /// sin z = sin x cosh y + i cos x sinh y.
    #[must_use]
    pub fn sin(&self) -> Self {
        let (sine, cosine) = self.real.sin_cos();
        Self::new(
            sine.mul(&self.imaginary.cosh()),
            cosine.mul(&self.imaginary.sinh()),
        )
    }

    /// cos z = cos x cosh y - i sin x sinh y.
    #[must_use]
    pub fn cos(&self) -> Self {
        let (sine, cosine) = self.real.sin_cos();
        Self::new(
            cosine.mul(&self.imaginary.cosh()),
            sine.mul(&self.imaginary.sinh()).neg(),
        )
    }

    /// tan z; `None` if the rectangle comes so close to a pole that the denominator may be 0.
    ///
    /// Two formulas, of which each is tight where the other is not: near 0
    /// tan z = (sin 2x + i sinh 2y)/(cos 2x + cosh 2y), whose denominator is 2|cos z|^2, and
    /// near the poles and far from the real axis tan z = -i + 2i/(e^(2iz) + 1).
    #[must_use]
    pub fn tan(&self) -> Option<Self> {
        let (x, y) = (self.real.double(), self.imaginary.double());
        let (sine, cosine) = x.sin_cos();
        let denominator = cosine.add(&y.cosh());
        let quotient = || {
            Some(Self::new(
                sine.div(&denominator)?,
                y.sinh().div(&denominator)?,
            ))
        };
        let size = y.neg().exp();
        let shifted = Self::new(size.mul(&cosine).add(&self.integer(1)), size.mul(&sine));
        let inverted = || {
            let reciprocal = shifted.reciprocal()?;
            let two = Self::new(reciprocal.real.double(), reciprocal.imaginary.double());
            let turned = two.turned(1);
            Some(Self::new(
                turned.real,
                turned.imaginary.sub(&self.integer(1)),
            ))
        };
        match (quotient(), inverted()) {
            (Some(first), Some(second)) => first.intersection(&second).or(Some(first)),
            (first, second) => first.or(second),
        }
    }

    /// sinh z = -i sin(iz).
    #[must_use]
    pub fn sinh(&self) -> Self {
        self.turned(1).sin().turned(-1)
    }

    /// cosh z = cos(iz).
    #[must_use]
    pub fn cosh(&self) -> Self {
        self.turned(1).cos()
    }

    /// tanh z = -i tan(iz).
    #[must_use]
    pub fn tanh(&self) -> Option<Self> {
        Some(self.turned(1).tan()?.turned(-1))
    }
}
