//! The files that an audit reads: where they may lie, how large they may be, and their digests.

use std::io::Read;
use std::path::{Component, Path, PathBuf};
use std::rc::Rc;

use sha2::{Digest, Sha256};

use crate::audit::diagnostic::{Diagnostic, quoted};
use crate::audit::document::{Document, Node, Syntax, Value};

use super::reader::{At, Reader, Table};
use super::spelling::nearest;

/// A file that was read.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Input {
    /// As written in the audit file; of the audit file itself, its name without the folder.
    pub path: String,
    /// Length in bytes.
    pub bytes: u64,
    /// SHA-256 in hexadecimal digits.
    pub sha256: String,
}

impl Input {
    pub(super) fn of(path: &str, bytes: &[u8]) -> Self {
        let sha256 = Sha256::digest(bytes)
            .iter()
            .map(|byte| format!("{byte:02x}"))
            .collect();
        Self {
            path: path.to_owned(),
            bytes: bytes.len() as u64,
            sha256,
        }
    }
}

/// A file that has been read already, by its resolved path.
pub(super) struct Loaded {
    path: PathBuf,
    document: Rc<Document>,
}

/// Why a file was not read.
pub(super) struct FileProblem {
    title: &'static str,
    found: String,
    advice: String,
}

impl FileProblem {
    fn new(title: &'static str, found: impl ToString, advice: impl Into<String>) -> Self {
        Self {
            title,
            found: found.to_string(),
            advice: advice.into(),
        }
    }

    pub fn diagnostic(self, name: &str) -> Diagnostic {
        Diagnostic::error(name, None, self.title, self.found, self.advice)
    }
}

/// The bytes of a regular file of at most `maximum` bytes.
pub(super) fn read_file(path: &Path, maximum: u64) -> Result<Vec<u8>, FileProblem> {
    const CANNOT: &str = "the file cannot be read";
    let problem = |error: std::io::Error| FileProblem::new(CANNOT, error, "check the path");
    // Asked before opening: opening a pipe would wait for its other end.
    let metadata = std::fs::metadata(path).map_err(problem)?;
    if !metadata.is_file() {
        return Err(FileProblem::new(
            CANNOT,
            "this is not a regular file",
            "name a file",
        ));
    }
    let too_large = |bytes: u64| {
        FileProblem::new(
            "the file is too large",
            format!("{bytes} bytes or more; the limit is {maximum}"),
            "split the table into several files",
        )
    };
    if metadata.len() > maximum {
        return Err(too_large(metadata.len()));
    }
    let file = std::fs::File::open(path).map_err(problem)?;
    let mut bytes = Vec::new();
    // The file may have grown, or report no length at all.
    file.take(maximum.saturating_add(1))
        .read_to_end(&mut bytes)
        .map_err(problem)?;
    let length = bytes.len() as u64;
    if length > maximum {
        Err(too_large(length))
    } else {
        Ok(bytes)
    }
}

/// What may stand in place of an array: { file = "table.json", key = "pieces" }.
const KEYS: [&str; 2] = ["file", "key"];
const LATER_KEYS: [&str; 4] = ["array", "names", "columns", "column"];

impl Reader<'_> {
    /// Reads an array that stands here or, where a table with `file` stands here, in another file.
    pub fn with_array<Read>(
        &mut self,
        at: At<'_>,
        advice: &str,
        read: impl for<'found> FnOnce(&mut Self, At<'found>, &'found [Node]) -> Option<Read>,
    ) -> Option<Read> {
        let Value::Table(entries) = &at.node.value else {
            let elements = self.array(at, advice)?;
            return read(self, at, elements);
        };
        let is_known = |key: &str| KEYS.contains(&key) || LATER_KEYS.contains(&key);
        if !entries.iter().any(|entry| is_known(&entry.key)) {
            self.wrong_kind(at, "an array", advice);
            return None;
        }
        let table = Table { at, entries };
        let document = self.load(&table)?;
        let root = At::root(&document);
        let found = match table.get("key") {
            None => root,
            Some(key) => {
                let path = self.text(key, "write the key of the array in quotes")?;
                self.find(key, root, path)?
            }
        };
        let elements = self.array(found, "the key must lead to an array")?;
        read(self, found, elements)
    }

    /// Follows a key, or keys with points between them, from the root of another file.
    fn find<'document>(
        &mut self,
        key: At<'_>,
        root: At<'document>,
        path: &str,
    ) -> Option<At<'document>> {
        let mut at = root;
        for step in path.split('.') {
            let entries = match &at.node.value {
                Value::Table(entries) => entries.as_slice(),
                _ => &[],
            };
            match entries.iter().find(|entry| &*entry.key == step) {
                Some(entry) => at = at.to(&entry.node),
                None => {
                    let known: Vec<&str> = entries.iter().map(|entry| &*entry.key).collect();
                    let advice = match nearest(step, &known) {
                        Some(near) => format!("did you mean `{near}`?"),
                        None => "name a key of the other file".to_owned(),
                    };
                    let found = format!("{} has no key {}", root.document.name(), quoted(step));
                    self.error(key, "the key does not exist", found, advice);
                    return None;
                }
            }
        }
        Some(at)
    }

    fn load(&mut self, table: &Table<'_>) -> Option<Rc<Document>> {
        let advice = "write the numbers in brackets, or { file = \"table.json\", key = \"...\" }";
        for entry in table.entries {
            if LATER_KEYS.contains(&&*entry.key) {
                self.unsupported(
                    table.at.to(&entry.node),
                    "numbers from source code, archives and columns are",
                    "put the numbers into a JSON file: { file = \"table.json\", key = \"...\" }",
                );
                return None;
            }
        }
        self.check_keys(table, &KEYS);
        let file = self.required(table, "file", advice)?;
        let written = self.text(file, "write the path in quotes")?;
        if !Path::new(written)
            .extension()
            .is_some_and(|extension| extension.eq_ignore_ascii_case("json"))
        {
            self.unsupported(
                file,
                "tables in files other than JSON (.json) are",
                "put the numbers into a JSON file: { file = \"table.json\", key = \"...\" }",
            );
            return None;
        }
        match self.load_json(written) {
            Ok(document) => Some(document),
            Err(LoadProblem::File(problem)) => {
                let found = format!("{}: {}", quoted(written), problem.found);
                self.error(file, problem.title, found, problem.advice);
                None
            }
            Err(LoadProblem::Content(diagnostic)) => {
                self.push_error(*diagnostic);
                None
            }
        }
    }

    fn load_json(&mut self, written: &str) -> Result<Rc<Document>, LoadProblem> {
        let Some(folder) = self.folder.clone() else {
            return Err(LoadProblem::File(FileProblem::new(
                "other files cannot be read here",
                "this text has no folder",
                "write the numbers into the text itself",
            )));
        };
        let path = self.resolve(&folder, written).map_err(LoadProblem::File)?;
        if let Some(loaded) = self.loaded.iter().find(|loaded| loaded.path == path) {
            return Ok(loaded.document.clone());
        }
        let bytes = read_file(&path, self.options.maximum_bytes).map_err(LoadProblem::File)?;
        self.inputs.push(Input::of(written, &bytes));
        let shown = if folder == Path::new(".") {
            written.to_owned()
        } else {
            folder.join(written).display().to_string()
        };
        let document =
            Document::parse(&shown, bytes, Syntax::Json).map_err(LoadProblem::Content)?;
        let document = Rc::new(document);
        self.loaded.push(Loaded {
            path,
            document: document.clone(),
        });
        Ok(document)
    }

    /// The path without links, inside the folder of the audit file unless others are allowed.
    fn resolve(&self, folder: &Path, written: &str) -> Result<PathBuf, FileProblem> {
        const TITLE: &str = "the path leaves the folder of the audit file";
        const ADVICE: &str = "move the file into that folder, or pass --allow-outside";
        let relative = Path::new(written);
        if !self.options.allow_outside {
            let inside = |component| matches!(component, Component::Normal(_) | Component::CurDir);
            // A backslash separates folders on other systems only: the same file would be refused
            // there or, worse, mean something else.
            if !relative.components().all(inside) || written.contains('\\') {
                let found = "only relative paths without `..` and backslashes are read";
                return Err(FileProblem::new(TITLE, found, ADVICE));
            }
        }
        let cannot = |error| FileProblem::new("the file cannot be read", error, "check the path");
        let base = std::fs::canonicalize(folder).map_err(cannot)?;
        let path = std::fs::canonicalize(folder.join(relative)).map_err(cannot)?;
        if !self.options.allow_outside && !path.starts_with(&base) {
            return Err(FileProblem::new(
                TITLE,
                "a symbolic link leads outside",
                ADVICE,
            ));
        }
        Ok(path)
    }
}

enum LoadProblem {
    /// The file cannot be read.
    File(FileProblem),
    /// It is not JSON.
    Content(Box<Diagnostic>),
}
