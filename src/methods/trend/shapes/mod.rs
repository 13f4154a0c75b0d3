//! Shapes of dose-response curves: a test for a trend of any of several candidate shapes, their least-squares fits, and the dose
//! that has a wanted effect.
//!
//! The candidates and their guesses are chosen before the data are seen. [`ShapesWork`] tests all of them at once, each with the
//! contrast that is best for it; a shape that is significant is evidence of a trend, at the family-wise level asked for. The
//! curve of a shape is then fitted ([`DoseResponse::fit`]), and read for the dose with a target effect ([`target_dose`],
//! [`BootstrapWork`]).

mod bootstrap;
mod contrasts;
mod dose;
mod fit;
mod least_squares;
mod search;
mod shape;

pub use bootstrap::{Bootstrap, BootstrapWork};
pub use contrasts::{NoShapes, Refused, ShapeRow, ShapeTests, ShapesWork, optimal_contrast};
pub use dose::{TargetDose, target_dose};
pub use fit::{Curve, DoseResponse, NoDoseResponse, NoFit, Parameter, ShapeFit};
pub use shape::{Doses, NoDoses, NoShape, Shape};
