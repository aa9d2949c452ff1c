//! The `[program]` table: checked for its keys and kept for the certificate.

use serde_json::{Map, Value as Json};

use crate::audit::diagnostic::quoted;
use crate::audit::document::Value;

use super::reader::{At, Reader};
use super::spelling::nearest;

const KEYS: [&str; 8] = [
    "format",
    "argument",
    "scheme",
    "contraction",
    "rounding",
    "map",
    "calls",
    "arguments",
];

const FORMAT: &str = "write a format in quotes: \"binary64\", \"binary32\", \"binary:113\", \
                      \"decimal:34\" or \"q:15.16\"";

/// Formats of arithmetic that have a name of their own.
const NAMES: [&str; 8] = [
    "binary16",
    "bfloat16",
    "binary32",
    "binary64",
    "binary128",
    "decimal32",
    "decimal64",
    "decimal128",
];

/// Reports a text that is not the name of a format of arithmetic.
pub(super) fn check_format(reader: &mut Reader<'_>, at: At<'_>, name: &str) -> bool {
    let is_number = |digits: &str| {
        !digits.is_empty() && digits.len() < 9 && digits.bytes().all(|byte| byte.is_ascii_digit())
    };
    let known = match name.split_once(':') {
        None => NAMES.contains(&name),
        Some(("binary" | "decimal", digits)) => is_number(digits),
        Some(("q", parts)) => parts
            .split_once('.')
            .is_some_and(|(whole, fraction)| is_number(whole) && is_number(fraction)),
        Some(_) => false,
    };
    if !known {
        let advice = match nearest(name, &NAMES) {
            Some(near) => format!("did you mean \"{near}\"?"),
            None => FORMAT.to_owned(),
        };
        reader.error(at, "an unknown format", quoted(name), advice);
    }
    known
}

/// The table as JSON text with its keys sorted.
pub(super) fn read(reader: &mut Reader<'_>, at: At<'_>) -> Option<String> {
    let table = reader.table(at, "write [program] and below it format = \"binary64\"")?;
    reader.check_keys(&table, &KEYS);
    for key in ["format", "argument"] {
        if let Some(at) = table.get(key)
            && let Some(name) = reader.text(at, FORMAT)
        {
            check_format(reader, at, name);
        }
    }
    for key in ["scheme", "rounding"] {
        if let Some(at) = table.get(key) {
            reader.text(at, "write a word in quotes");
        }
    }
    if let Some(at) = table.get("contraction") {
        reader.word(at, &[("off", ()), ("on", ()), ("either", ())]);
    }
    if let Some(at) = table.get("map")
        && !matches!(at.node.value, Value::Text(_) | Value::Array(_))
    {
        reader.wrong_kind(
            at,
            "a word or an array of steps",
            "write map = \"reciprocal\"",
        );
    }
    for key in ["calls", "arguments"] {
        if let Some(at) = table.get(key) {
            reader.table(at, "write a table: { name = ... }");
        }
    }
    json(reader, at).map(|value| value.to_string())
}

/// The recursion is bounded by the nesting limit of the document.
fn json(reader: &mut Reader<'_>, at: At<'_>) -> Option<Json> {
    match &at.node.value {
        Value::Text(text) => Some(Json::String(text.to_string())),
        Value::Boolean(value) => Some(Json::Bool(*value)),
        Value::Array(elements) => {
            let parts: Vec<_> = elements
                .iter()
                .map(|node| json(reader, at.to(node)))
                .collect();
            parts
                .into_iter()
                .collect::<Option<Vec<Json>>>()
                .map(Json::Array)
        }
        Value::Table(entries) => {
            let mut map = Map::new();
            for entry in entries {
                map.insert(entry.key.to_string(), json(reader, at.to(&entry.node))?);
            }
            Some(Json::Object(map))
        }
        Value::Integer(text) => Some(Json::String(text.to_string())),
        Value::Float(_) | Value::DateTime(_) | Value::Null => {
            reader.wrong_kind(at, "a string", "write the value in quotes");
            None
        }
    }
}
