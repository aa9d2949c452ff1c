//! The heart: from a piece and its reference to a proved enclosure of the supremum of the error.
//!
//! # The way of a proof
//!
//! 1. [`search`] cuts a piece into cells and keeps a queue of those that can still matter.
//! 2. [`patch`] writes the error on a cell as a polynomial in t plus a proved tail: power series
//!    of reference and approximant in balls, subtracted before anything is dropped to doubles,
//!    and Cauchy's estimate on a disc for the rest.
//! 3. [`extremes`] encloses minimum and maximum of that polynomial (or of its quotient by the
//!    reference) by second-order forms on a mesh refined where it still matters.
//! 4. Where no disc of analyticity fits (an endpoint singularity), [`plain`] encloses the error
//!    by the natural interval extension on a geometrically graded mesh.
//! 5. [`zeros`] finds exact zeros: of a denominator (removable singularities) and of the
//!    reference (shared zeros of a relative error), around which a cell is then centred.
//! 6. [`pole`] proves that a formula has no value somewhere in the domain, and [`unbounded`] that a
//!    relative error is unbounded: neither can be resolved by refinement.
//! 7. [`point`] evaluates the error at one exact argument: every lower end and every witness
//!    comes from there ([`confirm`]).

pub mod cell;
pub mod confirm;
pub mod double_polynomial;
pub mod extremes;
pub mod measure;
pub mod patch;
pub mod plain;
pub mod point;
pub mod pole;
pub mod remainder;
pub mod search;
pub mod shift;
pub mod steering;
pub mod task;
pub mod unbounded;
pub mod zeros;
