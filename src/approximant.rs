//! The shipped approximation: its basis, its pieces, and the exact function that the stored
//! coefficients define.

pub mod piece;
pub mod polynomial;
