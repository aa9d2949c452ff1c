//! The reference function of the file or of one approximation.

use crate::function::parser::parse_formula;

use super::Reference;
use super::reader::{At, Reader};

/// The first keys of the references that are not formulas.
const LATER: [(&str, &str); 5] = [
    (
        "equation",
        "references given by a differential equation are",
    ),
    ("inverse_of", "references given as an inverse function are"),
    ("integral_of", "references given as an integral are"),
    ("branches", "references of several branches are"),
    ("points", "references given as data points are"),
];

const FORMULA: &str = "write a formula in x with the operators and functions of C";

const ADVICE: &str = "write what the approximation stands for: formula = \"exp(x)\"";

pub(super) fn read(reader: &mut Reader<'_>, at: At<'_>) -> Option<Reference> {
    let table = reader.table(at, "write [reference] and below it formula = \"exp(x)\"")?;
    for (key, what) in LATER {
        if let Some(at) = table.get(key) {
            reader.unsupported(at, what, "write a formula in x: formula = \"exp(x)\"");
            return None;
        }
    }
    reader.check_keys(&table, &["formula"]);
    let at = reader.required(&table, "formula", ADVICE)?;
    let text = reader.text(at, ADVICE)?;
    match parse_formula(text) {
        Ok(formula) => Some(Reference::Formula(formula)),
        Err(error) => {
            reader.syntax_error(at, text, &error, "this is not a formula", FORMULA);
            None
        }
    }
}
