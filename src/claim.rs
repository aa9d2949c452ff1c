//! What is claimed about an approximation.

pub mod model;
