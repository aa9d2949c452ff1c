//! The shipped approximation: its basis, its pieces, and the exact function that the stored
//! coefficients define.

pub mod bernstein;
pub mod chebyshev;
pub mod common_denominator;
pub mod hermite;
pub mod order;
pub mod piece;
pub mod polynomial;
pub mod power;
#[cfg(test)]
mod test_numbers;
