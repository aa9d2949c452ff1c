//! The approximations of the file, whatever their basis.

use crate::approximant::piece::{Approximant, Basis, Owner, Piece};
use crate::audit::diagnostic::quoted;

use super::reader::{At, Reader, Table};
use super::spelling::list;
use super::storage::Storage;
use super::{AuditedApproximant, Reference, hermite, polynomial_basis, reference, steps};

/// The identity of the only approximation of a file where it gives none.
const DEFAULT_ID: &str = "approximant";

/// The longest identity, in characters.
const LONGEST_ID: usize = 100;

const COMMON_KEYS: [&str; 5] = ["id", "basis", "stored_as", "ends_stored_as", "owner"];

/// Keys that have a meaning in one basis or another.
const BASIS_KEYS: [&str; 9] = [
    "variable",
    "order",
    "parity",
    "first",
    "pieces",
    "knots",
    "scaling",
    "constants",
    "steps",
];

#[derive(Clone, Copy)]
enum Kind {
    Polynomial(polynomial_basis::Kind),
    Hermite,
    Steps,
}

/// What reading a basis gives.
pub(super) struct Content {
    pub basis: Basis,
    pub pieces: Vec<Piece>,
}

/// Reads `[approximant]` or every `[[approximants]]`, each with its reference.
pub(super) fn read_all(
    reader: &mut Reader<'_>,
    root: &Table<'_>,
) -> Option<Vec<AuditedApproximant>> {
    let shared = root.get("reference").map(|at| reference::read(reader, at));
    match (root.get("approximant"), root.get("approximants")) {
        (None, None) => {
            reader.error(
                root.at,
                "`approximant` is missing",
                "no such key here",
                "write [approximant] and below it its basis and its coefficients",
            );
            None
        }
        (Some(_), Some(second)) => {
            reader.error(
                second,
                "`approximant` and `approximants` exclude each other",
                "both stand in the file",
                "write every approximation as [[approximants]]",
            );
            None
        }
        (Some(at), None) => {
            let approximant = read_one(reader, at, false);
            let Some(shared) = shared else {
                reader.error(
                    root.at,
                    "`reference` is missing",
                    "no such key here",
                    "write [reference] and below it formula = \"exp(x)\"",
                );
                return None;
            };
            let (approximant, _) = approximant?;
            Some(vec![AuditedApproximant {
                approximant,
                reference: shared?,
            }])
        }
        (None, Some(at)) => read_several(reader, at, shared),
    }
}

fn read_several(
    reader: &mut Reader<'_>,
    at: At<'_>,
    shared: Option<Option<Reference>>,
) -> Option<Vec<AuditedApproximant>> {
    let advice = "write each approximation below a line [[approximants]]";
    let elements = reader.array(at, advice)?;
    if elements.is_empty() {
        reader.error(at, "there is no approximation", "an empty array", advice);
        return None;
    }
    let mut approximants: Vec<AuditedApproximant> = Vec::new();
    let mut complete = true;
    for element in elements {
        let at = at.to(element);
        let Some((approximant, own)) = read_one(reader, at, true) else {
            complete = false;
            continue;
        };
        if approximants
            .iter()
            .any(|other| other.approximant.id == approximant.id)
        {
            let found = quoted(&approximant.id);
            reader.error(
                at,
                "two approximations have the same id",
                found,
                "rename one of them",
            );
            complete = false;
        }
        match own.or_else(|| shared.clone()) {
            Some(Some(reference)) => {
                approximants.push(AuditedApproximant {
                    approximant,
                    reference,
                });
            }
            Some(None) => complete = false,
            None => {
                reader.error(
                    at,
                    "`reference` is missing",
                    "neither this approximation nor the file has one",
                    "write [approximants.reference] below it, or [reference] for all",
                );
                complete = false;
            }
        }
    }
    complete.then_some(approximants)
}

/// An approximation, and its own reference where it has one (`None` inside: it has errors).
fn read_one(
    reader: &mut Reader<'_>,
    at: At<'_>,
    among_others: bool,
) -> Option<(Approximant, Option<Option<Reference>>)> {
    let table = reader.table(
        at,
        "write a table with basis = \"...\"; several approximations are [[approximants]]",
    )?;
    let own = table
        .get("reference")
        .filter(|_| among_others)
        .map(|at| reference::read(reader, at));
    let id = match table.get("id") {
        Some(at) => identity(reader, at),
        None if among_others => {
            reader.required(&table, "id", "name the approximation: id = \"left-part\"");
            None
        }
        None => Some(DEFAULT_ID.to_owned()),
    };
    let storage = reader.storage(&table);
    let owner = match table.get("owner") {
        Some(at) => reader.word(at, &[("left", Owner::Left), ("right", Owner::Right)]),
        None => Some(Owner::Right),
    };
    let kind = kind(reader, &table)?;
    check_keys(reader, &table, kind, among_others);
    let mut storage = storage?;
    let content = read_content(reader, &table, kind, &mut storage);
    reader.finish_storage(&storage);
    let Content { basis, pieces } = content?;
    let approximant = Approximant {
        id: id?,
        basis,
        stored_as: storage.format,
        ends_stored_as: storage.ends,
        storage_rounding: storage.rounding,
        owner: owner?,
        pieces,
    };
    Some((approximant, own))
}

fn kind(reader: &mut Reader<'_>, table: &Table<'_>) -> Option<Kind> {
    use polynomial_basis::Kind as Polynomial;
    let advice = "write basis = \"power\", \"chebyshev\", \"bernstein\", \"hermite\" or \"steps\"";
    let at = reader.required(table, "basis", advice)?;
    reader.word(
        at,
        &[
            ("power", Kind::Polynomial(Polynomial::Power)),
            ("chebyshev", Kind::Polynomial(Polynomial::Chebyshev)),
            ("bernstein", Kind::Polynomial(Polynomial::Bernstein)),
            ("hermite", Kind::Hermite),
            ("steps", Kind::Steps),
        ],
    )
}

fn check_keys(reader: &mut Reader<'_>, table: &Table<'_>, kind: Kind, among_others: bool) {
    let own: &[&str] = match kind {
        Kind::Polynomial(kind) => kind.keys(),
        Kind::Hermite => &hermite::KEYS,
        Kind::Steps => &steps::KEYS,
    };
    let mut known: Vec<&str> = COMMON_KEYS.to_vec();
    known.extend(own);
    if matches!(kind, Kind::Steps) {
        known.extend(steps::LATER_KEYS);
    }
    if among_others {
        known.push("reference");
    }
    let mut misplaced = Vec::new();
    for entry in table.entries {
        if BASIS_KEYS.contains(&&*entry.key) && !known.contains(&&*entry.key) {
            misplaced.push(entry);
        }
    }
    known.extend(misplaced.iter().map(|entry| &*entry.key));
    reader.check_keys(table, &known);
    for entry in misplaced {
        let advice = format!(
            "remove it, or choose the basis that has it; this one has {}",
            list(own)
        );
        reader.key_error(table, entry, "a key of another basis", advice);
    }
}

fn read_content(
    reader: &mut Reader<'_>,
    table: &Table<'_>,
    kind: Kind,
    storage: &mut Storage,
) -> Option<Content> {
    match kind {
        Kind::Polynomial(kind) => polynomial_basis::read(reader, table, kind, storage),
        Kind::Hermite => hermite::read(reader, table, storage),
        Kind::Steps => steps::read(reader, table, storage),
    }
}

/// A name that reports and tools can repeat.
pub(super) fn identity(reader: &mut Reader<'_>, at: At<'_>) -> Option<String> {
    let text = reader.text(at, "write a short name in quotes")?;
    let printable = !text.chars().any(char::is_control);
    let length = text.chars().count();
    if text.trim().is_empty() || !printable || length > LONGEST_ID {
        let advice = format!("write one to {LONGEST_ID} printable characters");
        reader.error(at, "this is not a name", quoted(text), advice);
        return None;
    }
    Some(text.to_owned())
}
