//! Trends over levels with numeric scores.

mod isotonic;
mod lowest_dose;
mod ordered_ranks;
mod polynomial;
mod proportions;
mod scales;
pub mod shapes;
mod steps;

pub use isotonic::{Block, Direction, MonotoneFit, NoMonotoneFit, monotone};
pub use lowest_dose::{DoseStep, LowestDose, NoSequence, lowest_dose, lowest_levels};
pub use ordered_ranks::{
    JonckheereByPermutation, JonckheereTerpstra, JonckheereWork, NoOrderedTest, jonckheere_terpstra,
};
pub(in crate::methods) use polynomial::scaled;
pub use polynomial::{
    LackOfFit, NoTrend, PolynomialTrend, TrendRequest, TrendRow, Weights, coefficients, degree_name,
    highest_degree, polynomial,
};
pub use proportions::{CochranArmitage, LineDeparture, MOST_SUMS, NoProportionTrend, cochran_armitage};
pub use scales::{NoScaleTest, SCALES, Scale, ScaleRequest, ScaleRow, ScaleTests, scale_tests, scores_in};
pub use steps::{NoSteps, Williams, WilliamsStep, williams, williams_contrasts, williams_type};
