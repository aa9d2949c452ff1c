//! One tree of nodes with byte spans for TOML and for JSON.
//!
//! Numbers keep their text: a JSON or TOML float has been rounded by nobody yet, and the reader of
//! the audit file refuses it with the place where it stands.

mod json;
mod nesting;
mod toml;

use std::ops::Range;

use crate::audit::diagnostic::{Diagnostic, Place};

/// The largest file that is read unless the caller says otherwise, in bytes.
pub const DEFAULT_MAXIMUM_BYTES: u64 = 256 << 20;

/// The syntax of a file.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Syntax {
    Toml,
    Json,
}

/// A value of the file.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Value {
    /// A string, its escapes resolved.
    Text(Box<str>),
    /// A bare integer in decimal digits.
    Integer(Box<str>),
    /// A bare number with a point or an exponent, or one that is not finite, as written.
    Float(Box<str>),
    Boolean(bool),
    /// A bare date or time, as written.
    DateTime(Box<str>),
    Null,
    Array(Vec<Node>),
    Table(Vec<Entry>),
}

/// A value and the bytes where it stands (of a table with a header: the header).
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Node {
    pub value: Value,
    start: u32,
    end: u32,
}

/// A key of a table and its value; keys are unique in their table.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Entry {
    pub key: Box<str>,
    pub node: Node,
    key_start: u32,
    key_end: u32,
}

/// A file as a tree.
#[derive(Clone, Debug)]
pub struct Document {
    name: String,
    text: String,
    root: Node,
}

impl Node {
    fn new(value: Value, span: Range<usize>) -> Self {
        // Document::parse refuses texts of 4 GiB and more.
        Self {
            value,
            start: span.start as u32,
            end: span.end as u32,
        }
    }

    /// The bytes of the file where the value stands.
    pub fn span(&self) -> Range<usize> {
        self.start as usize..self.end as usize
    }

    /// What kind of value it is, with its article.
    pub fn kind(&self) -> &'static str {
        match &self.value {
            Value::Text(_) => "a string",
            Value::Integer(_) => "an integer",
            Value::Float(_) => "a bare float",
            Value::Boolean(_) => "a boolean",
            Value::DateTime(_) => "a date or time",
            Value::Null => "null",
            Value::Array(_) => "an array",
            Value::Table(_) => "a table",
        }
    }
}

impl Entry {
    fn new(key: &str, key_span: Range<usize>, node: Node) -> Self {
        let (key_start, key_end) = (key_span.start as u32, key_span.end as u32);
        Self {
            key: key.into(),
            node,
            key_start,
            key_end,
        }
    }

    /// The bytes of the file where the key stands.
    pub fn key_span(&self) -> Range<usize> {
        self.key_start as usize..self.key_end as usize
    }
}

impl Document {
    /// Reads the bytes of a file. The text must be UTF-8 (a byte order mark is dropped).
    pub fn parse(name: &str, bytes: Vec<u8>, syntax: Syntax) -> Result<Self, Box<Diagnostic>> {
        let mut text = match String::from_utf8(bytes) {
            Ok(text) => text,
            Err(error) => return Err(Box::new(not_utf8(name, &error))),
        };
        if text.starts_with('\u{feff}') {
            text.drain(..'\u{feff}'.len_utf8());
        }
        if u32::try_from(text.len()).is_err() {
            return Err(Box::new(Diagnostic::error(
                name,
                None,
                "the file is too large",
                format!("{} bytes", text.len()),
                "files of 4 GiB and more cannot be read: split the table",
            )));
        }
        let problem = |problem: Problem| {
            let place = Place::new(&text, problem.span);
            Diagnostic::error(
                name,
                Some(place),
                problem.title,
                problem.found,
                problem.advice,
            )
        };
        nesting::check(&text, syntax).map_err(problem)?;
        let root = match syntax {
            Syntax::Toml => toml::parse(&text),
            Syntax::Json => json::parse(&text),
        }
        .map_err(problem)?;
        Ok(Self {
            name: name.to_owned(),
            text,
            root,
        })
    }

    /// The file as the user named it.
    pub fn name(&self) -> &str {
        &self.name
    }

    /// The text without a byte order mark; spans are bytes of it.
    pub fn text(&self) -> &str {
        &self.text
    }

    /// The whole file: a table for TOML, any value for JSON.
    pub fn root(&self) -> &Node {
        &self.root
    }

    /// How to reach a node of this document from the root, such as `claims[2].at_most` (the
    /// first element is number 1). The root itself is the empty path.
    pub fn path_of(&self, wanted: &Node) -> String {
        let mut trail = vec![Step {
            node: &self.root,
            next: 0,
        }];
        while let Some(step) = trail.last_mut() {
            if std::ptr::eq(step.node, wanted) {
                break;
            }
            let child = match &step.node.value {
                Value::Array(elements) => elements.get(step.next),
                Value::Table(entries) => entries.get(step.next).map(|entry| &entry.node),
                _ => None,
            };
            step.next += 1;
            match child {
                Some(node) => trail.push(Step { node, next: 0 }),
                None => {
                    trail.pop();
                }
            }
        }
        trail.pop();
        let mut path = String::new();
        for step in &trail {
            match &step.node.value {
                Value::Table(entries) => {
                    if !path.is_empty() {
                        path.push('.');
                    }
                    path.push_str(&entries[step.next - 1].key);
                }
                _ => path.push_str(&format!("[{}]", step.next)),
            }
        }
        path
    }
}

/// A node on the way to another one, and how many of its children have been entered.
struct Step<'document> {
    node: &'document Node,
    next: usize,
}

/// What a parser objects to.
struct Problem {
    span: Range<usize>,
    title: String,
    found: String,
    advice: String,
}

impl Problem {
    fn new(
        span: Range<usize>,
        title: impl Into<String>,
        found: impl Into<String>,
        advice: impl Into<String>,
    ) -> Self {
        Self {
            span,
            title: title.into(),
            found: found.into(),
            advice: advice.into(),
        }
    }

    fn duplicate_key(key: &str, span: Range<usize>) -> Self {
        Self::new(
            span,
            "a key stands twice in one table",
            format!("`{key}` for the second time"),
            "keep one of the two",
        )
    }
}

fn not_utf8(name: &str, error: &std::string::FromUtf8Error) -> Diagnostic {
    let bytes = error.as_bytes();
    let position = error.utf8_error().valid_up_to();
    // The part before the first bad byte is valid, so it can be shown.
    let valid = String::from_utf8_lossy(&bytes[..position]);
    let end = valid.len();
    Diagnostic::error(
        name,
        Some(Place::new(&valid, end..end)),
        "the file is not valid UTF-8",
        format!("byte {position} is 0x{:02x}", bytes[position]),
        "save the file as UTF-8",
    )
}

#[cfg(test)]
mod tests;
