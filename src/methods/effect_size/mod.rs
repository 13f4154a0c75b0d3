//! How large an effect is, in standardised terms, with intervals that agree with the tests they stand beside:
//! one number for the whole factor ([`WholeFactor`]) and one for each contrast ([`StandardisedEffect`]).
//! Labels such as "small" or "large" are on purpose not given here.

mod contrast;
pub mod control;
pub mod ratio;
pub mod superiority;
mod whole_factor;

pub use contrast::{Coverage, Interval, StandardisedBy, StandardisedEffect, Standardiser, hedges_correction};
pub use whole_factor::{EffectSize, WelchEffect, WholeFactor, rank_epsilon_squared};
