//! JSON (RFC 8259, nothing added) as a tree of nodes.

use std::collections::HashSet;

use jsonc_parser::ast;
use jsonc_parser::common::Ranged;
use jsonc_parser::errors::ParseErrorKind;
use jsonc_parser::{CollectOptions, ParseOptions, parse_to_ast};

use super::{Entry, Node, Problem, Value};

/// Reads a text whose nesting has been checked.
pub(super) fn parse(text: &str) -> Result<Node, Problem> {
    let options = ParseOptions {
        allow_comments: false,
        allow_loose_object_property_names: false,
        allow_trailing_commas: false,
        allow_missing_commas: false,
        allow_single_quoted_strings: false,
        allow_hexadecimal_numbers: false,
        allow_unary_plus_numbers: false,
        allow_bare_decimal_point_numbers: false,
        allow_non_finite_numbers: false,
        allow_extended_string_escapes: false,
    };
    match parse_to_ast(text, &CollectOptions::default(), &options) {
        Ok(parsed) => match parsed.value {
            Some(value) => convert(text, value),
            None => Err(Problem::new(
                0..0,
                "the file is empty",
                "no JSON value",
                "write an object: { ... }",
            )),
        },
        Err(error) => {
            let span = error.range().start..error.range().end;
            let found = error.kind().to_string();
            let advice = advice(error.kind());
            Err(Problem::new(span, "this is not JSON", found, advice))
        }
    }
}

fn advice(kind: &ParseErrorKind) -> &'static str {
    match kind {
        ParseErrorKind::CommentsNotAllowed => "JSON has no comments; TOML has (# ...)",
        ParseErrorKind::TrailingCommasNotAllowed => "remove the comma before the closing bracket",
        ParseErrorKind::ExpectedComma => "put a comma between the two values",
        ParseErrorKind::HexadecimalNumbersNotAllowed
        | ParseErrorKind::UnaryPlusNumbersNotAllowed
        | ParseErrorKind::BareDecimalPointNumbersNotAllowed
        | ParseErrorKind::NonFiniteNumbersNotAllowed => "put the number in quotes",
        _ => "see https://www.json.org for the syntax",
    }
}

fn convert(text: &str, value: ast::Value<'_>) -> Result<Node, Problem> {
    let range = value.range();
    let span = range.start..range.end;
    let value = match value {
        ast::Value::StringLit(literal) => {
            if let Some(offset) = text[span.clone()].bytes().position(|byte| byte < 0x20) {
                let position = span.start + offset;
                return Err(Problem::new(
                    position..position + 1,
                    "this is not JSON",
                    "a control character in a string",
                    "write it as an escape, such as \\n",
                ));
            }
            Value::Text(literal.value.into())
        }
        ast::Value::NumberLit(literal) => {
            if literal
                .value
                .bytes()
                .all(|byte| byte == b'-' || byte.is_ascii_digit())
            {
                Value::Integer(literal.value.into())
            } else {
                Value::Float(literal.value.into())
            }
        }
        ast::Value::BooleanLit(literal) => Value::Boolean(literal.value),
        ast::Value::NullKeyword(_) => Value::Null,
        ast::Value::Array(array) => {
            let mut elements = Vec::with_capacity(array.elements.len());
            for element in array.elements {
                elements.push(convert(text, element)?);
            }
            Value::Array(elements)
        }
        ast::Value::Object(object) => {
            let mut seen = HashSet::new();
            let mut entries = Vec::with_capacity(object.properties.len());
            for property in object.properties {
                let range = property.name.range();
                let key_span = range.start..range.end;
                let key = property.name.into_string();
                if !seen.insert(key.clone()) {
                    return Err(Problem::duplicate_key(&key, key_span));
                }
                entries.push(Entry::new(&key, key_span, convert(text, property.value)?));
            }
            Value::Table(entries)
        }
    };
    Ok(Node::new(value, span))
}
