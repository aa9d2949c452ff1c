//! The reference function: its formula, and the three ways in which a formula is evaluated
//! (power series in balls, complex discs, real ranges).

pub mod constant;
pub mod disc;
pub mod exact;
pub mod formula;
pub mod parser;
pub mod range;
pub mod refusal;
pub mod series;

#[cfg(test)]
mod random;
