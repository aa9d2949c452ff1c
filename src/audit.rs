//! The audit file: reading it, checking it, saying where it is wrong, and carrying it out.

pub mod diagnostic;
pub mod document;
pub mod file;
pub mod run;
