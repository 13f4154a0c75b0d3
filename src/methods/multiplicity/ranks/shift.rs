//! How far a group is shifted against another: the median of all differences (Hodges and Lehmann 1963, Ann. Math. Statist.
//! 34, 598-611), with the interval of all shifts that the rank sum test of the two groups does not reject.
//!
//! With D_(1) <= ... <= D_(nm) the differences of a value of the second group less one of the first, and k the largest
//! whole number for which at most k - 1 differences below a shift still lead to its rejection, the interval is from
//! D_(k) to D_(nm + 1 - k) (Lehmann 1963, Ann. Math. Statist. 34, 1507-1512; Moses 1953). It excludes 0 exactly when the
//! test rejects, unless differences of exactly 0 stand at its end.

use super::PairwiseRanks;
use crate::methods::effect_size::Interval;
use crate::methods::multiplicity::Sides;
use crate::numerics::OutOfDomain;
use crate::numerics::distributions::rank_counts::rank_sum;

/// When the rank sum test rejects.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Rejection {
    /// When z reaches this, by its size or on the side that counts.
    Beyond(f64),
    /// When the counted probability on a side is at most this.
    Counted { outside: f64 },
}

/// A shift with its interval.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Shift {
    /// The median of all differences.
    pub estimate: f64,
    /// Infinite on a side that is not bounded: not asked for, or too few values for the level.
    pub interval: Interval,
}

impl Shift {
    /// The shift of `second` against `first`; `ranks` is their test, and both have at least one value.
    ///
    /// Takes time in proportion to n times m.
    ///
    /// # Errors
    /// [`OutOfDomain`] from the counted distribution, for sizes beyond what it counts.
    ///
    /// # Accuracy
    /// The bounds are differences of observed values, without further rounding. Which of them: exact without ties; with ties
    /// the counted levels are those of untied values, which makes the interval somewhat wide.
    pub fn of(
        first: &[f64],
        second: &[f64],
        ranks: &PairwiseRanks,
        rejection: Rejection,
        sides: Sides,
    ) -> Result<Self, OutOfDomain> {
        let mut differences: Vec<f64> =
            second.iter().flat_map(|y| first.iter().map(move |x| y - x)).collect();
        let count = differences.len();
        let k = match rejection {
            Rejection::Beyond(critical) => {
                // At shift 0 it reads: at most nm/2 - c √V differences are below.
                let most = count as f64 / 2.0 - critical * ranks.se;
                if most >= 0.0 { most.floor() as usize + 1 } else { 0 }
            }
            Rejection::Counted { outside } => counted(ranks.first, ranks.second, outside)?,
        };
        let estimate = median(&mut differences);
        let mut bound = |place: usize| *differences.select_nth_unstable_by(place, f64::total_cmp).1;
        let (lower, upper) = match k {
            0 => (f64::NEG_INFINITY, f64::INFINITY),
            k => {
                let k = k.min(count.div_ceil(2));
                (bound(k - 1), bound(count - k))
            }
        };
        Ok(Self {
            estimate,
            interval: Interval {
                lower: if sides == Sides::Less { f64::NEG_INFINITY } else { lower },
                upper: if sides == Sides::Greater { f64::INFINITY } else { upper },
            },
        })
    }
}

fn median(values: &mut [f64]) -> f64 {
    let half = values.len() / 2;
    let upper = *values.select_nth_unstable_by(half, f64::total_cmp).1;
    if values.len() % 2 == 1 {
        return upper;
    }
    let lower = values[..half].iter().copied().fold(f64::NEG_INFINITY, f64::max);
    lower / 2.0 + upper / 2.0
}

/// The largest k with P(U <= k - 1) <= `outside`, by halving.
fn counted(n: usize, m: usize, outside: f64) -> Result<usize, OutOfDomain> {
    let (mut below, mut above) = (0, n * m + 1);
    while above - below > 1 {
        let middle = usize::midpoint(below, above);
        if rank_sum((middle - 1) as f64, n, m)?.lower <= outside { below = middle } else { above = middle }
    }
    Ok(below)
}
