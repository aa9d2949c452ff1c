//! A literal is read exactly or refused: the canonical text of what was read reads back the same.

#![no_main]

use boundmark::number::{decimal, literal};
use libfuzzer_sys::fuzz_target;

fuzz_target!(|text: &str| {
    if let Ok(value) = literal::parse(text) {
        let canonical = decimal::exact(&value);
        match literal::parse(&canonical) {
            Ok(again) => assert_eq!(
                again, value,
                "{text:?} was read, then written {canonical:?}"
            ),
            // At the limits a literal can be short and its canonical text beyond them (1e-20000).
            Err(_) => {
                let bits = value
                    .numer()
                    .significant_bits()
                    .max(value.denom().significant_bits());
                assert!(bits > 30_000, "{text:?} was read, but not {canonical:?}");
            }
        }
    }
});
