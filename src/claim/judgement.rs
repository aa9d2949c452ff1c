//! From proved enclosures to a verdict.

use rug::{Float, Rational};

/// The outcome of a claim.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Verdict {
    /// Proved: the supremum is at most the bound.
    Holds,
    /// Refuted: some argument is proved to break the bound.
    Fails,
    /// Neither is proved.
    Undecided,
    /// There is no bound.
    Measured,
}

impl Verdict {
    /// The word in reports and certificates.
    pub fn word(self) -> &'static str {
        match self {
            Verdict::Holds => "holds",
            Verdict::Fails => "fails",
            Verdict::Undecided => "undecided",
            Verdict::Measured => "measured",
        }
    }
}

/// Judges a bound by the enclosure [lower, upper] of the supremum.
///
/// | condition | verdict |
/// |---|---|
/// | no bound | measured |
/// | upper <= bound | holds |
/// | lower > bound | fails |
/// | otherwise | undecided |
///
/// The comparisons are exact (binary numbers against a rational). An infinite or undefined upper
/// end never holds.
pub fn judge(lower: &Float, upper: &Float, bound: Option<&Rational>) -> Verdict {
    let Some(bound) = bound else {
        return Verdict::Measured;
    };
    if upper.is_finite() && *upper <= *bound {
        Verdict::Holds
    } else if lower.is_finite() && *lower > *bound
        || lower.is_infinite() && lower.is_sign_positive()
    {
        Verdict::Fails
    } else {
        Verdict::Undecided
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use rug::float::Special;

    #[test]
    fn equality_and_infinities_fall_on_the_safe_side() {
        let x = |v: f64| Float::with_val(53, v);
        let tenth = Rational::from((1, 10));
        // 0.1 as a double is above one tenth, so a supremum of exactly that double does not hold.
        assert_eq!(judge(&x(0.0), &x(0.1), Some(&tenth)), Verdict::Undecided);
        assert_eq!(judge(&x(0.1), &x(0.2), Some(&tenth)), Verdict::Fails);
        assert_eq!(
            judge(&x(0.0), &x(0.125), Some(&Rational::from((1, 8)))),
            Verdict::Holds
        );
        assert_eq!(
            judge(&x(0.125), &x(0.125), Some(&Rational::from((1, 8)))),
            Verdict::Holds
        );
        let infinite = Float::with_val(53, Special::Infinity);
        let undefined = Float::with_val(53, Special::Nan);
        assert_eq!(judge(&x(0.0), &infinite, Some(&tenth)), Verdict::Undecided);
        assert_eq!(
            judge(&undefined, &undefined, Some(&tenth)),
            Verdict::Undecided
        );
        assert_eq!(judge(&x(0.0), &x(1.0), None), Verdict::Measured);
    }
}
