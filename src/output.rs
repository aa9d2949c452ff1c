//! What a person or a program reads of a result. Everything here is made from certificates.

pub mod json;
pub mod text;
