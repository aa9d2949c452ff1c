//! Walking the tree of the file: values of the wanted kind, and a message for everything else.

use std::ops::Range;
use std::path::{Path, PathBuf};

use crate::audit::diagnostic::{Diagnostic, Place, Severity, quoted};
use crate::audit::document::{Document, Entry, Node, Value};

use super::ReadOptions;
use super::inputs::{Input, Loaded};
use super::spelling::{list, nearest};

/// Messages that are shown at once.
const MAXIMUM_ERRORS: usize = 20;

/// A node and the file that it stands in.
#[derive(Clone, Copy)]
pub(super) struct At<'document> {
    pub document: &'document Document,
    pub node: &'document Node,
}

impl<'document> At<'document> {
    pub fn root(document: &'document Document) -> Self {
        Self {
            document,
            node: document.root(),
        }
    }

    /// Another node of the same file.
    pub fn to(self, node: &'document Node) -> Self {
        Self {
            document: self.document,
            node,
        }
    }

    /// What stands here, for a message.
    fn describe(self) -> String {
        let kind = self.node.kind();
        match &self.node.value {
            Value::Text(text) => format!("{kind}, {}", quoted(text)),
            Value::Integer(text) | Value::Float(text) | Value::DateTime(text) => {
                format!("{kind}, {text}")
            }
            Value::Boolean(value) => format!("{kind}, {value}"),
            Value::Null | Value::Array(_) | Value::Table(_) => kind.to_owned(),
        }
    }
}

/// A table whose keys are looked up by name.
pub(super) struct Table<'document> {
    pub at: At<'document>,
    pub entries: &'document [Entry],
}

impl<'document> Table<'document> {
    pub fn get(&self, key: &str) -> Option<At<'document>> {
        self.entry(key).map(|entry| self.at.to(&entry.node))
    }

    pub fn entry(&self, key: &str) -> Option<&'document Entry> {
        self.entries.iter().find(|entry| &*entry.key == key)
    }
}

/// The state of reading: files, and what was found wrong in them.
pub(super) struct Reader<'options> {
    pub options: &'options ReadOptions,
    /// Where other files are looked for.
    pub folder: Option<PathBuf>,
    pub inputs: Vec<Input>,
    pub loaded: Vec<Loaded>,
    errors: Vec<Diagnostic>,
    suppressed: usize,
    notes: Vec<Diagnostic>,
}

impl<'options> Reader<'options> {
    pub fn new(options: &'options ReadOptions, folder: Option<&Path>, input: Input) -> Self {
        Self {
            options,
            folder: folder.map(Path::to_owned),
            inputs: vec![input],
            loaded: Vec::new(),
            errors: Vec::new(),
            suppressed: 0,
            notes: Vec::new(),
        }
    }

    /// The files and notes, or the errors.
    pub fn finish(mut self) -> Result<(Vec<Input>, Vec<Diagnostic>), Vec<Diagnostic>> {
        if self.suppressed > 0
            && let Some(last) = self.errors.last_mut()
        {
            last.advice
                .push_str(&format!(" ({} more errors are not shown)", self.suppressed));
        }
        if self.errors.is_empty() {
            Ok((self.inputs, self.notes))
        } else {
            Err(self.errors)
        }
    }

    /// Reports an error at a node; `found` is completed with the path of the node.
    pub fn error(
        &mut self,
        at: At<'_>,
        title: impl Into<String>,
        found: impl Into<String>,
        advice: impl Into<String>,
    ) {
        if self.is_full() {
            return;
        }
        let found = with_path(at, found.into());
        self.error_at_span(at.document, at.node.span(), title, found, advice);
    }

    /// Reports an error at bytes of a file.
    pub fn error_at_span(
        &mut self,
        document: &Document,
        span: Range<usize>,
        title: impl Into<String>,
        found: impl Into<String>,
        advice: impl Into<String>,
    ) {
        if self.is_full() {
            return;
        }
        let place = Place::new(document.text(), span);
        self.errors.push(Diagnostic::error(
            document.name(),
            Some(place),
            title,
            found,
            advice,
        ));
    }

    /// Reports an error that was found elsewhere.
    pub fn push_error(&mut self, error: Diagnostic) {
        if !self.is_full() {
            self.errors.push(error);
        }
    }

    /// Whether no further error is shown; counts the one that was to be reported. Asked before
    /// the path of a node is looked for, which takes a walk over the whole file.
    pub fn is_full(&mut self) -> bool {
        let full = self.errors.len() >= MAXIMUM_ERRORS;
        self.suppressed += usize::from(full);
        full
    }

    /// A remark on something that does not stop the audit.
    pub fn note(
        &self,
        at: At<'_>,
        title: impl Into<String>,
        found: impl Into<String>,
        advice: impl Into<String>,
    ) -> Diagnostic {
        let place = Place::new(at.document.text(), at.node.span());
        let found = with_path(at, found.into());
        let mut note = Diagnostic::error(at.document.name(), Some(place), title, found, advice);
        note.severity = Severity::Note;
        note
    }

    pub fn push_note(&mut self, note: Diagnostic) {
        self.notes.push(note);
    }

    /// A table, or an error that says what to write.
    pub fn table<'document>(
        &mut self,
        at: At<'document>,
        advice: &str,
    ) -> Option<Table<'document>> {
        match &at.node.value {
            Value::Table(entries) => Some(Table { at, entries }),
            _ => {
                self.wrong_kind(at, "a table", advice);
                None
            }
        }
    }

    /// The elements of an array.
    pub fn array<'document>(
        &mut self,
        at: At<'document>,
        advice: &str,
    ) -> Option<&'document [Node]> {
        match &at.node.value {
            Value::Array(elements) => Some(elements),
            _ => {
                self.wrong_kind(at, "an array", advice);
                None
            }
        }
    }

    /// A string.
    pub fn text<'document>(&mut self, at: At<'document>, advice: &str) -> Option<&'document str> {
        match &at.node.value {
            Value::Text(text) => Some(text),
            _ => {
                self.wrong_kind(at, "a string", advice);
                None
            }
        }
    }

    /// One of a few words.
    pub fn word<Meaning: Copy>(
        &mut self,
        at: At<'_>,
        words: &[(&str, Meaning)],
    ) -> Option<Meaning> {
        let names: Vec<&str> = words.iter().map(|&(name, _)| name).collect();
        let advice = format!("write one of {}", list(&names));
        let text = self.text(at, &advice)?;
        if let Some(&(_, meaning)) = words.iter().find(|&&(name, _)| name == text) {
            return Some(meaning);
        }
        let advice = match nearest(text, &names) {
            Some(near) => format!("did you mean \"{near}\"? Possible are {}", list(&names)),
            None => advice,
        };
        self.error(at, "an unknown word", quoted(text), advice);
        None
    }

    /// The value of a key that has no default.
    pub fn required<'document>(
        &mut self,
        table: &Table<'document>,
        key: &str,
        advice: &str,
    ) -> Option<At<'document>> {
        let found = table.get(key);
        if found.is_none() {
            self.error(
                table.at,
                format!("`{key}` is missing"),
                "no such key here",
                advice,
            );
        }
        found
    }

    /// Reports every key that is not known, with the nearest one that is.
    pub fn check_keys(&mut self, table: &Table<'_>, known: &[&str]) {
        for entry in table.entries {
            if !known.contains(&&*entry.key) {
                let advice = match nearest(&entry.key, known) {
                    Some(near) => format!("did you mean `{near}`?"),
                    None => format!("known here are {}", list(known)),
                };
                self.key_error(table, entry, "an unknown key", advice);
            }
        }
    }

    /// Reports a key rather than its value.
    pub fn key_error(
        &mut self,
        table: &Table<'_>,
        entry: &Entry,
        title: impl Into<String>,
        advice: impl Into<String>,
    ) {
        if self.is_full() {
            return;
        }
        let found = with_path(table.at.to(&entry.node), quoted(&entry.key));
        self.error_at_span(table.at.document, entry.key_span(), title, found, advice);
    }

    /// Reports something that the file format has and this version does not.
    pub fn unsupported(&mut self, at: At<'_>, what: &str, advice: &str) {
        let title = format!("{what} not supported yet by this version");
        self.error(at, title, at.describe(), advice);
    }

    /// Reports a value of the wrong kind.
    pub fn wrong_kind(&mut self, at: At<'_>, wanted: &str, advice: &str) {
        let found = at.describe();
        self.error(at, format!("{wanted} is needed here"), found, advice);
    }
}

fn with_path(at: At<'_>, found: String) -> String {
    let path = at.document.path_of(at.node);
    if path.is_empty() {
        found
    } else {
        format!("{found} (in `{path}`)")
    }
}
