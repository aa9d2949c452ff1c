//! The audit file as a model that a proof can start from.
//!
//! Reading does everything that needs no proof: it reads numbers exactly, rounds them to the
//! storage format where one is declared, converts every polynomial basis exactly to powers, and
//! refuses what has no clear meaning. Nothing is guessed.
//!
//! # Conventions of the file
//!
//! - `stored_as` and `ends_stored_as` are "exact" where they are not given. `ends_stored_as`
//!   rounds knots, piece ends, and the ends of claims about that approximation.
//! - `order` is needed for power and Chebyshev series; Bernstein coefficients begin with that of
//!   the left end unless `order = "descending"`. `parity` may be given for Chebyshev series too:
//!   only T_1, T_3, ... or T_0, T_2, ... are listed.
//! - Hermite data are given at `knots` that neighbours share or, with
//!   `pieces = [{ on, left, right }]`, at both ends of every piece. `scaling` is "run-time" (as
//!   without the key) or "stored": the numbers are f^(j) w^j / j! with the width w of the piece, so
//!   a shared knot with derivatives lies between pieces of the same width.
//! - An array may stand in a JSON file: `{ file = "table.json", key = "model.pieces" }`, a key, keys
//!   with points between them, or no key where the file is the array. This holds for `pieces`,
//!   `knots`, `coefficients`, `taylor`, `left`, `right` and the arrays among the constants of steps.
//! - A single approximation has the id "approximant" unless it gives one.
//! - `$schema` may name a schema for editors and has no meaning here.

mod approximant;
mod claims;
mod hermite;
mod inputs;
mod numbers;
mod pieces;
mod polynomial_basis;
mod program;
mod reader;
mod reference;
mod spelling;
mod steps;
mod storage;

use std::path::Path;

use crate::approximant::piece::Approximant;
use crate::audit::diagnostic::Diagnostic;
use crate::audit::document::{DEFAULT_MAXIMUM_BYTES, Document, Syntax};
use crate::claim::model::Claim;
use crate::function::formula::Formula;

pub use inputs::Input;
use reader::{At, Reader};

/// What the reader may do.
#[derive(Clone, Debug)]
pub struct ReadOptions {
    /// The largest file that is read, in bytes.
    pub maximum_bytes: u64,
    /// Whether files outside of the folder of the audit file may be read.
    pub allow_outside: bool,
    /// Whether a file without claims is an error.
    pub require_claims: bool,
}

impl Default for ReadOptions {
    fn default() -> Self {
        Self {
            maximum_bytes: DEFAULT_MAXIMUM_BYTES,
            allow_outside: false,
            require_claims: true,
        }
    }
}

/// The function that an approximation stands for.
#[derive(Clone, Debug)]
pub enum Reference {
    /// A formula in x.
    Formula(Formula),
}

/// An approximation and its reference.
#[derive(Clone, Debug)]
pub struct AuditedApproximant {
    pub approximant: Approximant,
    pub reference: Reference,
}

/// A checked audit file.
#[derive(Clone, Debug)]
pub struct AuditFile {
    /// The file, as the user named it.
    pub name: String,
    pub title: Option<String>,
    /// At least one; [`Target::approximant`](crate::claim::model::Target::approximant) is a
    /// position in this list.
    pub approximants: Vec<AuditedApproximant>,
    /// In the order of the file.
    pub claims: Vec<Claim>,
    /// The `[program]` table as JSON text with its keys sorted.
    pub program: Option<String>,
    /// Every file read, the audit file first.
    pub inputs: Vec<Input>,
    /// Messages that do not stop the audit.
    pub notes: Vec<Diagnostic>,
}

impl AuditFile {
    /// The reference of an approximant, by its position.
    pub fn reference_of(&self, approximant: usize) -> &Formula {
        match &self.approximants[approximant].reference {
            Reference::Formula(formula) => formula,
        }
    }
}

/// Reads an audit file: JSON where the name ends in `.json`, TOML otherwise.
pub fn read(path: &Path, options: &ReadOptions) -> Result<AuditFile, Vec<Diagnostic>> {
    let name = path.display().to_string();
    let bytes = inputs::read_file(path, options.maximum_bytes)
        .map_err(|problem| vec![problem.diagnostic(&name)])?;
    let folder = match path.parent() {
        Some(folder) if !folder.as_os_str().is_empty() => folder,
        _ => Path::new("."),
    };
    read_bytes(&name, bytes, Some(folder), options)
}

/// Reads the text of an audit file; other files are found in `folder`, or refused without one.
pub fn read_text(
    name: &str,
    text: &str,
    folder: Option<&Path>,
    options: &ReadOptions,
) -> Result<AuditFile, Vec<Diagnostic>> {
    read_bytes(name, text.as_bytes().to_vec(), folder, options)
}

fn read_bytes(
    name: &str,
    bytes: Vec<u8>,
    folder: Option<&Path>,
    options: &ReadOptions,
) -> Result<AuditFile, Vec<Diagnostic>> {
    let syntax = match Path::new(name).extension() {
        Some(extension) if extension.eq_ignore_ascii_case("json") => Syntax::Json,
        _ => Syntax::Toml,
    };
    let file_name = Path::new(name)
        .file_name()
        .unwrap_or_default()
        .to_string_lossy();
    let input = Input::of(&file_name, &bytes);
    let document = Document::parse(name, bytes, syntax).map_err(|problem| vec![*problem])?;
    let mut reader = Reader::new(options, folder, input);
    let parts = read_parts(&mut reader, &document);
    let (inputs, notes) = reader.finish()?;
    // A part is missing only where an error was reported.
    let Some((title, approximants, claims, program)) = parts else {
        return Err(vec![Diagnostic::error(
            name,
            None,
            "the file cannot be read",
            "",
            "",
        )]);
    };
    Ok(AuditFile {
        name: name.to_owned(),
        title,
        approximants,
        claims,
        program,
        inputs,
        notes,
    })
}

type Parts = (
    Option<String>,
    Vec<AuditedApproximant>,
    Vec<Claim>,
    Option<String>,
);

const KEYS: [&str; 7] = [
    "$schema",
    "title",
    "reference",
    "approximant",
    "approximants",
    "program",
    "claims",
];

fn read_parts(reader: &mut Reader<'_>, document: &Document) -> Option<Parts> {
    let root = reader.table(
        At::root(document),
        "write an object with the keys of an audit file",
    )?;
    reader.check_keys(&root, &KEYS);
    let title = root
        .get("title")
        .map(|at| reader.text(at, "write a title in quotes"));
    let program = root.get("program").map(|at| program::read(reader, at));
    let approximants = approximant::read_all(reader, &root);
    let claims = claims::read_all(reader, &root, approximants.as_deref());
    let title = match title {
        Some(title) => Some(title?.to_owned()),
        None => None,
    };
    let program = match program {
        Some(program) => Some(program?),
        None => None,
    };
    Some((title, approximants?, claims?, program))
}

#[cfg(test)]
mod tests;
