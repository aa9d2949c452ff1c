//! The machine-readable summary of a run: an array with one certificate an audit file.

use serde::Serialize;

use crate::certificate::model::Certificate;

/// One audited file.
#[derive(Debug, Serialize)]
pub struct Entry<'a> {
    /// Path of the audit file as named on the command line.
    pub path: &'a str,
    /// Its certificate.
    pub certificate: &'a Certificate,
}

/// The summary as indented JSON.
///
/// # Errors
///
/// None in practice: the model has string keys and no number that JSON cannot hold.
pub fn summary(entries: &[Entry]) -> Result<String, serde_json::Error> {
    serde_json::to_string_pretty(entries)
}
