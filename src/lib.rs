//! Proves how far a shipped function approximation is from the function it stands for.
//!
//! Data flows one way through the modules, and a module imports only from those before it:
//! `number -> function -> approximant -> bound -> claim -> audit -> certificate -> output -> cli`.

pub mod approximant;
pub mod audit;
pub mod bound;
pub mod certificate;
pub mod claim;
pub mod cli;
pub mod function;
pub mod number;
pub mod output;
