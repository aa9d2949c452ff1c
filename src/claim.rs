//! What is claimed about an approximation, and what becomes of a claim.

pub mod domain;
pub mod evaluation;
pub mod judgement;
pub mod model;
