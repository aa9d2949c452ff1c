//! What a certificate says, field by field.
//!
//! Everything needed to check the claims again years later stands in here: the reference as
//! text, the stored coefficients exactly, the claims as asked, and the proved results. Numbers
//! are strings: exact ones in the literal forms of the audit file, bounds in decimal rounded
//! outward (lower ends down, upper ends up).

use std::collections::BTreeMap;

use serde::{Deserialize, Serialize};

/// Names the format of a certificate.
pub const FORMAT: &str = "boundmark/1";

/// A whole certificate.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Certificate {
    /// [`FORMAT`].
    pub certificate: String,
    /// The program that made it.
    pub made_by: MadeBy,
    /// Every file read.
    pub inputs: Vec<Input>,
    /// What is compared.
    pub subject: Subject,
    /// What is taken on trust, one sentence each.
    pub assumptions: Vec<String>,
    /// One entry a claim and approximant.
    pub claims: Vec<Claim>,
    /// One entry a piece.
    pub pieces: Vec<Piece>,
}

/// Program and libraries.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct MadeBy {
    /// "boundmark".
    pub program: String,
    /// Its version.
    pub version: String,
    /// Versions of the arithmetic libraries.
    pub libraries: BTreeMap<String, String>,
}

/// A file that was read.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Input {
    /// Path as written in the audit file (the audit file itself: its file name).
    pub path: String,
    /// Length in bytes.
    pub bytes: u64,
    /// SHA-256, hexadecimal.
    pub sha256: String,
}

/// What is compared.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Subject {
    /// Title of the audit.
    pub title: String,
    /// The approximants.
    pub approximants: Vec<Approximant>,
    /// The declared program, as JSON text with its keys sorted.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub program: Option<String>,
}

/// A reference function.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Reference {
    /// The formula as given.
    pub formula: String,
}

/// An approximant and its reference.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Approximant {
    /// Its name in the audit file.
    pub id: String,
    /// What it stands for.
    pub reference: Reference,
    /// Name of the basis.
    pub basis: String,
    /// What the basis needs beside the coefficients, by the keys of the audit file: order,
    /// parity, first, scaling.
    #[serde(default, skip_serializing_if = "BTreeMap::is_empty")]
    pub conventions: BTreeMap<String, String>,
    /// Format in which the coefficients are stored, or "exact".
    pub stored_as: String,
    /// Which piece owns a boundary: "left" or "right".
    pub owner: String,
    /// Constants and steps of straight-line code (basis "steps").
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub steps: Option<Steps>,
    /// The pieces in order, as stored.
    pub pieces: Vec<StoredPiece>,
}

/// Straight-line code.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Steps {
    /// The named constants.
    pub constants: BTreeMap<String, StepConstant>,
    /// The steps as given.
    pub steps: Vec<String>,
}

/// A constant of straight-line code.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(untagged)]
pub enum StepConstant {
    /// One number.
    Number(String),
    /// A list of numbers.
    Array(Vec<String>),
}

/// One piece as stored.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct StoredPiece {
    /// Its ends: exact numbers or constant formulas.
    pub on: [String; 2],
    /// The local variable is u = (x - origin)/scale; absent for steps.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub origin: Option<String>,
    /// See `origin`.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub scale: Option<String>,
    /// Stored numbers of a power, Chebyshev or Bernstein piece, in the order of the file.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub coefficients: Option<Vec<String>>,
    /// Taylor data f^(j)/j! at the left end of a Hermite piece.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub left_taylor: Option<Vec<String>>,
    /// Taylor data at its right end.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub right_taylor: Option<Vec<String>>,
}

/// The outcome of a claim.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, Serialize, Deserialize)]
#[serde(rename_all = "lowercase")]
pub enum Verdict {
    /// Proved: the error is at most the bound.
    Holds,
    /// Refuted, with a witness.
    Fails,
    /// Neither proved nor refuted.
    Undecided,
    /// No bound was given.
    Measured,
}

/// A claim as asked, and what is proved about it.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Claim {
    /// Its name.
    pub id: String,
    /// The approximant it is about.
    pub approximant: String,
    /// "exact": the function that the stored coefficients define.
    pub of: String,
    /// "absolute", "relative" or "mixed".
    pub error: String,
    /// A of |p-f|/(A + R|f|).
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub absolute_part: Option<String>,
    /// R of |p-f|/(A + R|f|).
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub relative_part: Option<String>,
    /// The set of arguments: closed intervals in order.
    pub on: Vec<[String; 2]>,
    /// The claimed bound.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub at_most: Option<String>,
    /// The outcome.
    pub verdict: Verdict,
    /// The supremum of the modulus lies in [lo, hi]; hi may be "inf".
    pub enclosure: [String; 2],
    /// Enclosures of the least and of the greatest signed error p - f (over the measure's divisor).
    pub signed: [[String; 2]; 2],
    /// An argument where the lower end of the enclosure is reached.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub worst_at: Option<Place>,
    /// Values at an argument where the bound is broken.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub witness: Option<Witness>,
    /// Why nothing was decided, and what more effort would cost.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub reason: Option<String>,
    /// What a reader should know: values taken by continuity, an unbounded relative error.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub notes: Vec<String>,
}

/// An argument.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Place {
    /// Exactly: a literal, or a formula such as "0x1p-3 + 1/2*pi".
    pub exact: String,
    /// About, in decimal (rounded down).
    pub decimal: String,
    /// Index of the piece that owns it, from 0.
    pub piece: usize,
}

/// Proof that a claim fails.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Witness {
    /// The argument.
    pub at: Place,
    /// Enclosure of the signed error there.
    pub error: [String; 2],
    /// Enclosure of the approximant there.
    pub approximant: [String; 2],
    /// Enclosure of the reference there.
    pub reference: [String; 2],
}

/// What is proved about one piece.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Piece {
    /// The approximant it belongs to.
    pub approximant: String,
    /// Index from 0.
    pub piece: usize,
    /// Its ends.
    pub on: [String; 2],
    /// One entry a claim that concerns this piece.
    pub errors: Vec<PieceError>,
}

/// The error of one claim on one piece.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct PieceError {
    /// Name of the claim.
    pub claim: String,
    /// The supremum on this piece.
    pub enclosure: [String; 2],
    /// Least and greatest signed error.
    pub signed: [[String; 2]; 2],
    /// Where the lower end is reached.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub worst_at: Option<Place>,
    /// Its division into sources.
    pub budget: Budget,
    /// The remainder of the patch with the largest error.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub remainder: Option<Remainder>,
    /// Cells bounded by a series, and cells bounded by plain interval extension.
    pub cells: [u64; 2],
    /// Units of work.
    pub work: u64,
}

/// Sources of the error on a piece, each as an enclosure of its supremum, in the claim's measure
/// for the truncation and in absolute terms for the storage.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Budget {
    /// Error of the approximant with the coefficients as written, before they were stored.
    pub truncation: [String; 2],
    /// Largest change of the approximant's value by the rounding of its coefficients.
    pub storage: [String; 2],
}

/// A truncated series and what bounds the rest: with t = (x - centre)/scale, terms t^0 ...
/// t^(terms-1) are kept, the function is analytic and at most `magnitude` in modulus on
/// |t| <= `radius`, and the rest is at most `tail` for |t| <= 1.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Remainder {
    /// Expansion point, exact.
    pub centre: String,
    /// Distance of t = 1, exact.
    pub scale: String,
    /// Radius of the disc in t, exact.
    pub radius: String,
    /// Terms kept.
    pub terms: usize,
    /// Bound on the disc, rounded up.
    pub magnitude: String,
    /// Bound of the rest, rounded up.
    pub tail: String,
}
