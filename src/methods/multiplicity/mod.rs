//! Several comparisons decided together, with the error of the whole family in view.

pub mod p_values;

pub use p_values::PValueMethod;
