//! The certificate: its data model and its canonical bytes.

pub mod build;
pub mod canonical;
pub mod model;
