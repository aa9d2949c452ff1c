//! Exact numbers, storage formats, and the sets of numbers that proofs are made of.

pub mod ball;
pub mod decimal;
pub mod format;
pub mod literal;
pub mod radius;
pub mod rectangle;
pub mod wide_interval;
