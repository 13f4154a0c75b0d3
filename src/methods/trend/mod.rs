//! Trends over levels with numeric scores.

mod isotonic;
mod ordered_ranks;
mod polynomial;
pub mod shapes;

pub use isotonic::{Block, Direction, MonotoneFit, NoMonotoneFit, monotone};
pub use ordered_ranks::{
    JonckheereByPermutation, JonckheereTerpstra, JonckheereWork, NoOrderedTest, jonckheere_terpstra,
};
pub(in crate::methods) use polynomial::scaled;
pub use polynomial::{
    LackOfFit, NoTrend, PolynomialTrend, TrendRequest, TrendRow, Weights, coefficients, degree_name,
    highest_degree, polynomial,
};
