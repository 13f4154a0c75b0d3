//! Published procedures: data in, result struct out. Nothing here knows a cell or a page.

pub mod contrasts;
pub mod departure;
pub mod effect_size;
pub mod multiplicity;
pub mod overall;
pub mod power;
pub mod profile;
pub mod slices;
pub mod trend;
