//! The audit file: reading it, checking it, and saying where it is wrong.

pub mod diagnostic;
pub mod document;
pub mod file;
