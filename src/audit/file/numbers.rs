//! Exact numbers, constants and intervals from the nodes of a file.

use std::cmp::Ordering;
use std::ops::Range;

use rug::Rational;

use crate::approximant::order::compare;
use crate::audit::diagnostic::quoted;
use crate::audit::document::Value;
use crate::function::constant::Constant;
use crate::function::parser::SyntaxError;
use crate::number::literal;

use super::reader::{At, Reader};

/// How numbers are written.
const NUMBER: &str =
    "write a number in quotes: \"0.1\", \"-1e-7\", \"0x1.8p-3\", \"1/3\" or \"2^-58\"";

/// Bits of the enclosure that shows that a constant has a value.
const PRECISION: u32 = 128;

/// How ends are written.
const END: &str = "write a number or a constant formula in quotes: \"0.5\", \"-pi/4\"";

impl Reader<'_> {
    /// The text of a number: a string, or a bare integer, which is exact.
    fn number_text<'document>(
        &mut self,
        at: At<'document>,
        advice: &str,
    ) -> Option<&'document str> {
        match &at.node.value {
            Value::Text(text) | Value::Integer(text) => Some(text),
            Value::Float(text) => {
                if names_no_number(text) {
                    self.not_finite(at, text);
                } else {
                    self.error(
                        at,
                        "a bare float would be rounded before it is read",
                        format!("the float {text}"),
                        format!("write it in quotes: \"{text}\""),
                    );
                }
                None
            }
            _ => {
                self.wrong_kind(at, "a number", advice);
                None
            }
        }
    }

    fn not_finite(&mut self, at: At<'_>, text: &str) {
        self.error(
            at,
            "this is not a finite number",
            quoted(text),
            "a stored number must be finite: look where the table was made",
        );
    }

    /// An exact number.
    pub fn rational(&mut self, at: At<'_>) -> Option<Rational> {
        let text = self.number_text(at, NUMBER)?;
        if names_no_number(text) {
            self.not_finite(at, text);
            return None;
        }
        match literal::parse(text) {
            Ok(value) => Some(value),
            Err(error) => {
                let found = format!("`{}` {}", error.found, error.problem);
                let advice = error.advice.unwrap_or_else(|| NUMBER.to_owned());
                self.error(at, "this is not an exact number", found, advice);
                None
            }
        }
    }

    /// An exact number that is at least 0.
    pub fn non_negative(&mut self, at: At<'_>, what: &str) -> Option<Rational> {
        let value = self.rational(at)?;
        if value.cmp0() == Ordering::Less {
            let title = format!("{what} cannot be negative");
            self.error(
                at,
                title,
                "a negative number",
                "write a number that is 0 or more",
            );
            return None;
        }
        Some(value)
    }

    /// An exact number, or a formula without a variable.
    pub fn constant(&mut self, at: At<'_>) -> Option<Constant> {
        let text = self.number_text(at, END)?;
        if names_no_number(text) {
            self.not_finite(at, text);
            return None;
        }
        match Constant::parse(text) {
            Ok(constant) if constant.enclosure(PRECISION).is_some() => Some(constant),
            Ok(_) => {
                let found = quoted(text);
                self.error(
                    at,
                    "this constant is not proved to have a value",
                    found,
                    END,
                );
                None
            }
            Err(error) => {
                self.syntax_error(at, text, &error, "this is not a constant", END);
                None
            }
        }
    }

    /// Two constants, an array of two elements.
    pub fn ends(&mut self, at: At<'_>) -> Option<[Constant; 2]> {
        const ADVICE: &str = "write the two ends: [\"0\", \"pi/4\"]";
        let elements = self.array(at, ADVICE)?;
        let [left, right] = elements else {
            let found = format!("{} elements", elements.len());
            self.error(at, "an interval has two ends", found, ADVICE);
            return None;
        };
        let left = self.constant(at.to(left));
        let right = self.constant(at.to(right));
        Some([left?, right?])
    }

    /// Reports an interval that does not go from left to right; a single point is allowed or not.
    pub fn check_interval(&mut self, at: At<'_>, on: &[Constant; 2], point_allowed: bool) -> bool {
        let (title, advice) = match compare(&on[0], &on[1]) {
            Some(Ordering::Less) => return true,
            Some(Ordering::Equal) if point_allowed => return true,
            Some(Ordering::Equal) => ("the interval is a single point", "write two different ends"),
            Some(Ordering::Greater) => ("the interval is reversed", "write the smaller end first"),
            None => (
                "the order of the two ends cannot be decided",
                "write equal ends with the same text, and different ones with more distance",
            ),
        };
        let ends = format!("from {} to {}", quoted(on[0].text()), quoted(on[1].text()));
        self.error(at, title, ends, advice);
        false
    }

    /// Reports what a parser of formulas objects to, at its place inside the string.
    /// `otherwise` is the advice where the parser gives none.
    pub fn syntax_error(
        &mut self,
        at: At<'_>,
        text: &str,
        error: &SyntaxError,
        title: &str,
        otherwise: &str,
    ) {
        if self.is_full() {
            return;
        }
        let span = place_in_string(at, text, &error.span);
        let path = at.document.path_of(at.node);
        let found = format!("{} (in `{path}`)", error.message);
        let advice = error.advice.as_deref().unwrap_or(otherwise);
        self.error_at_span(at.document, span, title, found, advice);
    }
}

/// The bytes of the file for bytes of a string's value. Where escapes make the two differ, the
/// whole string is the place.
fn place_in_string(at: At<'_>, text: &str, inner: &Range<usize>) -> Range<usize> {
    let outer = at.node.span();
    let source = at.document.text().get(outer.clone()).unwrap_or_default();
    match source.find(text) {
        Some(offset) => {
            let start = outer.start + offset;
            start + inner.start..start + inner.end
        }
        None => outer,
    }
}

/// True for the usual names of infinities and of "not a number".
fn names_no_number(text: &str) -> bool {
    let name = text
        .trim()
        .trim_start_matches(['+', '-'])
        .to_ascii_lowercase();
    name == "inf"
        || name == "infinity"
        || name == "nan"
        || (name.starts_with("nan(") && name.ends_with(')'))
}
