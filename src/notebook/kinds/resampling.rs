//! How often values are rearranged at random, as the kinds that do it ask for it.

use crate::methods::multiplicity::Resampling;
use crate::notebook::ask::Reader;

/// The fields `repeats` and `seed`, with their defaults.
pub fn resampling(reader: &mut Reader) -> Resampling {
    let default = Resampling::default();
    let whole = |number: Option<f64>| number.map(|number| number as u64);
    Resampling {
        repeats: whole(reader.number("repeats")).unwrap_or(default.repeats),
        seed: whole(reader.number("seed")).unwrap_or(default.seed),
    }
}
