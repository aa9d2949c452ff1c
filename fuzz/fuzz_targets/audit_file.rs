//! An audit file is read into at least one approximant with pieces, or refused with a message.
//!
//! The text has no folder, so no other file is ever opened.

#![no_main]

use boundmark::audit::file::{ReadOptions, read_text};
use libfuzzer_sys::fuzz_target;

fuzz_target!(|text: &str| {
    let json = text.trim_start().starts_with('{');
    let name = if json {
        "fuzz.audit.json"
    } else {
        "fuzz.audit.toml"
    };
    match read_text(name, text, None, &ReadOptions::default()) {
        Ok(file) => {
            assert!(!file.approximants.is_empty() && !file.claims.is_empty());
            for audited in &file.approximants {
                assert!(!audited.approximant.pieces.is_empty());
            }
        }
        Err(diagnostics) => {
            assert!(!diagnostics.is_empty());
            for diagnostic in &diagnostics {
                // Shown in full: drawing a message must not stumble over its place.
                assert!(!diagnostic.to_string().is_empty());
            }
        }
    }
});
