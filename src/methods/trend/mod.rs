//! Trends over levels with numeric scores.

mod polynomial;
pub mod shapes;

pub(in crate::methods) use polynomial::scaled;
pub use polynomial::{
    LackOfFit, NoTrend, PolynomialTrend, TrendRequest, TrendRow, Weights, coefficients, degree_name,
    highest_degree, polynomial,
};
