//! TOML as a tree of nodes.

use std::ops::Range;

use toml_edit::{Document, InlineTable, Item, Key, Table};

use super::{Entry, Node, Problem, Value};

/// Reads a text whose nesting has been checked.
pub(super) fn parse(text: &str) -> Result<Node, Problem> {
    let document = Document::parse(text).map_err(|error| {
        let span = error.span().unwrap_or(0..0);
        if error.message() == "duplicate key" {
            let key = text.get(span.clone()).unwrap_or_default();
            return Problem::duplicate_key(key, span);
        }
        // The parser turns numbers into 64-bit ones and objects to those that do not fit.
        let advice = match error.message().contains("number") {
            true => "put the number in quotes",
            false => "see https://toml.io for the syntax",
        };
        Problem::new(span, "this is not TOML", error.message(), advice)
    })?;
    Ok(Node::new(from_table(text, document.as_table()), 0..0))
}

fn from_table(text: &str, table: &Table) -> Value {
    let pairs = table.iter().filter_map(|(key, _)| table.get_key_value(key));
    Value::Table(
        pairs
            .filter_map(|(key, item)| from_entry(text, key, item))
            .collect(),
    )
}

fn from_inline_table(text: &str, table: &InlineTable) -> Value {
    let pairs = table.iter().filter_map(|(key, _)| table.get_key_value(key));
    Value::Table(
        pairs
            .filter_map(|(key, item)| from_entry(text, key, item))
            .collect(),
    )
}

fn from_entry(text: &str, key: &Key, item: &Item) -> Option<Entry> {
    let key_span = key.span().unwrap_or(0..0);
    let node = match item {
        Item::None => return None,
        Item::Value(value) => from_value(text, value, &key_span),
        Item::Table(table) => {
            let span = table.span().unwrap_or(key_span.clone());
            Node::new(from_table(text, table), span)
        }
        Item::ArrayOfTables(tables) => {
            let span = |table: &Table| table.span().unwrap_or(key_span.clone());
            let elements = tables
                .iter()
                .map(|table| Node::new(from_table(text, table), span(table)))
                .collect();
            let first = tables.iter().next().map_or(key_span.clone(), span);
            Node::new(Value::Array(elements), first)
        }
    };
    Some(Entry::new(key.get(), key_span, node))
}

fn from_value(text: &str, value: &toml_edit::Value, key_span: &Range<usize>) -> Node {
    // Only a table made by a dotted key has no span of its own.
    let span = value.span().unwrap_or(key_span.clone());
    let written = || text.get(span.clone()).unwrap_or_default().into();
    let value = match value {
        toml_edit::Value::String(string) => Value::Text(string.value().as_str().into()),
        toml_edit::Value::Integer(integer) => Value::Integer(integer.value().to_string().into()),
        toml_edit::Value::Float(_) => Value::Float(written()),
        toml_edit::Value::Boolean(boolean) => Value::Boolean(*boolean.value()),
        toml_edit::Value::Datetime(_) => Value::DateTime(written()),
        toml_edit::Value::Array(array) => Value::Array(
            array
                .iter()
                .map(|element| from_value(text, element, key_span))
                .collect(),
        ),
        toml_edit::Value::InlineTable(table) => from_inline_table(text, table),
    };
    Node::new(value, span)
}
