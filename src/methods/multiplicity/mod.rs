//! Several comparisons decided together, with the error of the whole family in view.
//!
//! [`compare`] decides every comparison once. Table, interval, effect size, figure and write-up are views of its
//! result, so they cannot disagree: the interval of a difference and that of its standardised effect use the same
//! critical value, and each excludes zero exactly when the adjusted p-value is at most alpha (single-step
//! procedures). Stepwise procedures have no such two-sided intervals; the intervals of a single-step relative are
//! shown beside them, named as such, and the rows where they disagree with the decision are listed.
//!
//! No overall test gates the comparisons: every procedure here controls its error rate without one.

mod compare;
mod control;
mod decision;
pub mod detectable;
mod explain;
mod given;
pub mod graph;
pub mod joint;
mod letters;
mod long;
mod ordered;
pub mod p_values;
pub mod permutation;
mod procedure;
pub mod protected;
mod range;
pub mod ranges;
pub mod ranks;
mod result;
mod row_effects;
mod row_test;
mod scheffe;
mod setting;
mod single_step;
pub mod step_down_control;
pub mod unequal;

pub use compare::{Comparing, Request, compare};
pub use explain::{Disagreement, Explanation, carrying_contrast, explain};
pub use given::{GivenComparisons, GivenRow, adjust_given};
pub use graph::{BoundLevel, Graph, GraphDecision, GraphStep, NoDecision, NoGraph};
pub use letters::{Letters, TooManyLetters, letters};
pub use long::Rearranged;
pub use ordered::Order;
pub use p_values::PValueMethod;
pub use procedure::{ALL, Adjust, ErrorRate, default_adjust, suitable};
pub use result::{Bounds, CannotCompare, ComparisonRow, Comparisons, IntervalKind, RowEffects, Sized};
pub use setting::{Basis, Claim, Family, Ranking, Resampling, Setting, Sides, Standardise};
