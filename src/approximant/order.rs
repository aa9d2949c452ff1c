//! The order of two exact constants, decided by proof.

use std::cmp::Ordering;

use crate::function::constant::Constant;

/// Precisions of the enclosures, in bits. Constants that agree to the last one are equal or chosen
/// to deceive.
const PRECISIONS: [u32; 4] = [64, 256, 1024, 4096];

/// How `left` compares with `right`, or `None` where neither their texts, nor their exact values,
/// nor enclosures of 4096 bits decide it ("log(2)" and "log(4)/2": equal, and only a theorem says so).
pub fn compare(left: &Constant, right: &Constant) -> Option<Ordering> {
    if left.text() == right.text() {
        return Some(Ordering::Equal);
    }
    if let (Some(left), Some(right)) = (left.as_rational(), right.as_rational()) {
        return Some(left.cmp(right));
    }
    // Both are a + b pi: since pi is irrational, they are equal only if a and b are.
    let multiples = left.pi_multiple().zip(right.pi_multiple());
    if multiples.is_some_and(|(left, right)| left == right) {
        return Some(Ordering::Equal);
    }
    for precision in PRECISIONS {
        let (left_lower, left_upper) = left.enclosure(precision)?;
        let (right_lower, right_upper) = right.enclosure(precision)?;
        if left_upper < right_lower {
            return Some(Ordering::Less);
        }
        if left_lower > right_upper {
            return Some(Ordering::Greater);
        }
    }
    None
}

#[cfg(test)]
mod tests {
    use super::*;

    fn constant(text: &str) -> Constant {
        Constant::parse(text).expect("a constant")
    }

    #[test]
    fn exact_values_and_enclosures_decide() {
        for (left, right, expected) in [
            ("0.5", "1/2", Some(Ordering::Equal)),
            ("0.1", "0x1.999999999999ap-4", Some(Ordering::Less)),
            ("pi/4", "pi/4", Some(Ordering::Equal)),
            ("log(2)", "log(2)", Some(Ordering::Equal)),
            ("pi/4", "0.25*pi", Some(Ordering::Equal)),
            ("(pi/2)/pi", "1/2", Some(Ordering::Equal)),
            ("log(2)", "0.69314718055994530942", Some(Ordering::Less)),
            ("pi/4", "0.7853981633974483", Some(Ordering::Greater)),
            ("-pi/4", "-0.7853981633974483", Some(Ordering::Less)),
            ("1", "pi/4", Some(Ordering::Greater)),
        ] {
            assert_eq!(
                compare(&constant(left), &constant(right)),
                expected,
                "{left} {right}"
            );
        }
    }

    #[test]
    fn equal_values_that_no_enclosure_separates_are_undecided() {
        assert_eq!(compare(&constant("log(2)"), &constant("log(4)/2")), None);
    }
}
