//! Pure numbers: exact decimals, sums, distributions, quadrature, roots, random streams. Nothing here knows a level, a
//! study or a cell. Elementary functions come from `libm` by name, so that every target gives the same bits.

pub mod decimal;
pub mod distributions;
pub mod quadrature;
pub mod random;
pub mod roots;
pub mod special;
pub mod sums;

/// An argument outside the range for which a function is defined.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[error("{argument} is {value}, but must be {allowed}")]
pub struct OutOfDomain {
    /// The argument's name as documented.
    pub argument: &'static str,
    /// The value that was given.
    pub value: f64,
    /// What would have been accepted, in words: "greater than 0", "from 0 to 1".
    pub allowed: &'static str,
}
