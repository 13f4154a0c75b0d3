//! Ready sets of contrasts: all pairs, each against control, neighbours, each against the rest or against the earlier
//! ones, and polynomials of scores.

use super::Contrast;
use crate::methods::trend::{NoTrend, degree_name, scaled};
use crate::numerics::sums::sum;
use serde::Serialize;

/// A set of contrasts that a study's levels define by themselves.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum Set {
    /// Every later level less every earlier one: k (k - 1) / 2 differences of rank k - 1.
    AllPairs,
    /// Every other level less the level at this index: k - 1 differences.
    AgainstControl(usize),
    /// Every level less the one before it: k - 1 differences.
    Neighbours,
    /// Every level less the plain average of the means of all others: k contrasts of rank k - 1.
    AgainstRest,
    /// Every level but the first less the plain average of the means of all earlier ones: k - 1 contrasts.
    AgainstEarlier,
    /// Linear, quadratic and so on up to degree k - 1, at most 5, with the ranks 1 to k as scores.
    Polynomial,
}

/// The highest degree of a set of polynomials; a higher one has no name and nobody asks for it.
const HIGHEST_DEGREE: usize = 5;

/// The contrasts of `set`, in the order of `levels`, named like `15 min - none`.
///
/// Signs are such that a rise from an earlier to a later level, or from the control, is positive.
///
/// # Panics
/// If the control is not an index of `levels`.
pub fn ready_set(set: Set, levels: &[String]) -> Vec<Contrast> {
    let k = levels.len();
    match set {
        Set::AllPairs => {
            let pairs = (0..k).flat_map(|earlier| (earlier + 1..k).map(move |later| (later, earlier)));
            pairs.map(|(later, earlier)| difference(later, earlier, levels)).collect()
        }
        Set::AgainstControl(control) => {
            assert!(control < k, "the control is one of the levels");
            (0..k).filter(|i| *i != control).map(|i| difference(i, control, levels)).collect()
        }
        Set::Neighbours => (1..k).map(|i| difference(i, i - 1, levels)).collect(),
        Set::AgainstRest if k < 2 => Vec::new(),
        Set::AgainstRest => (0..k).map(|i| against_rest(i, levels)).collect(),
        Set::AgainstEarlier => (1..k).map(|i| against_earlier(i, levels)).collect(),
        Set::Polynomial => {
            let ranks: Vec<f64> = (1..=k).map(|rank| rank as f64).collect();
            // Ranks increase by equal steps, so there is always a set.
            polynomial_set(&ranks, levels).unwrap_or_default()
        }
    }
}

/// The contrasts "linear", "quadratic", "cubic", "quartic" and "quintic" of the level means over their scores, as far
/// as the number of levels allows: k - 1 and at most 5.
///
/// The coefficients are the polynomials that are orthogonal with equal weights, whatever the spacing of the scores,
/// each scaled to Σ|c| = 2: the difference of two weighted means. They rise with the score at the highest one. With
/// equal group sizes the contrasts are orthogonal.
///
/// # Arguments
/// `scores` are strictly increasing, one a level of `levels`, in any unit.
///
/// # Errors
/// [`NoTrend`] if there are not as many scores as levels, they are not finite and strictly increasing, or some lie
/// so close together, about 1e-10 of the range of all, that their polynomials are lost in rounding.
///
/// # Accuracy
/// Coefficients to about 1e-14 for scores of a like spacing, orthogonal to all lower degrees to 1e-15.
///
/// # Source
/// Robson (1959), Biometrics 15, 187–191.
///
/// # Example
/// ```
/// # use levelwise::methods::contrasts::polynomial_set;
/// let doses = ["none", "low", "high"].map(String::from);
/// let set = polynomial_set(&[0.0, 1.0, 2.0], &doses)?;
/// assert_eq!(set[0].coefficients, [-1.0, 0.0, 1.0]);
/// assert_eq!(set[1].name, "quadratic");
/// # Ok::<(), levelwise::methods::trend::NoTrend>(())
/// ```
pub fn polynomial_set(scores: &[f64], levels: &[String]) -> Result<Vec<Contrast>, NoTrend> {
    let k = levels.len();
    if scores.len() != k {
        return Err(NoTrend::ScoreCount { scores: scores.len(), levels: k });
    }
    if k < 2 {
        return Ok(Vec::new());
    }
    let polynomials = scaled(scores, &vec![1.0; k], HIGHEST_DEGREE.min(k - 1))?.polynomials;
    let size = |p: &[f64]| sum(p.iter().map(|p| p.abs()));
    (1..polynomials.len())
        .map(|degree| {
            let name = degree_name(degree);
            // A degree is this much smaller than the one before where two scores are that close, and then what is
            // left of it is rounding.
            let size_here = size(&polynomials[degree]);
            if !(size_here.is_finite() && size_here > 1e-10 * size(&polynomials[degree - 1])) {
                return Err(NoTrend::TooClose { name });
            }
            let coefficients = polynomials[degree].iter().map(|p| 2.0 * p / size_here).collect();
            Ok(Contrast { name: name.to_string(), coefficients })
        })
        .collect()
}

fn difference(plus: usize, minus: usize, levels: &[String]) -> Contrast {
    let mut coefficients = vec![0.0; levels.len()];
    coefficients[plus] = 1.0;
    coefficients[minus] = -1.0;
    Contrast { name: format!("{} - {}", levels[plus], levels[minus]), coefficients }
}

fn against_rest(one: usize, levels: &[String]) -> Contrast {
    let others = (levels.len() - 1) as f64;
    let coefficients = (0..levels.len()).map(|i| if i == one { 1.0 } else { -1.0 / others }).collect();
    let name = match levels.len() {
        2 => format!("{} - {}", levels[one], levels[1 - one]),
        _ => format!("{} - rest", levels[one]),
    };
    Contrast { name, coefficients }
}

fn against_earlier(one: usize, levels: &[String]) -> Contrast {
    if one == 1 {
        return difference(1, 0, levels);
    }
    let share = -1.0 / one as f64;
    let coefficient = |i: usize| if i < one { share } else { f64::from(i == one) };
    let coefficients = (0..levels.len()).map(coefficient).collect();
    Contrast { name: format!("{} - earlier", levels[one]), coefficients }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::methods::contrasts::rank;

    fn levels(k: usize) -> Vec<String> {
        (0..k).map(|i| format!("L{i}")).collect()
    }

    fn coefficients(set: Set, k: usize) -> Vec<Vec<f64>> {
        ready_set(set, &levels(k)).into_iter().map(|contrast| contrast.coefficients).collect()
    }

    #[test]
    fn sets_have_the_sizes_and_ranks_that_they_promise() {
        for k in 2..8 {
            for (set, size) in [
                (Set::AllPairs, k * (k - 1) / 2),
                (Set::AgainstControl(1), k - 1),
                (Set::Neighbours, k - 1),
                (Set::AgainstRest, k),
                (Set::AgainstEarlier, k - 1),
            ] {
                let rows = coefficients(set, k);
                assert_eq!((rows.len(), rank(&rows)), (size, k - 1), "{set:?} of {k}");
                assert!(
                    ready_set(set, &levels(k))
                        .iter()
                        .all(|c| c.coefficients.iter().sum::<f64>().abs() < 1e-15)
                );
            }
        }
    }

    #[test]
    fn names_say_which_is_taken_from_which() {
        let names = |set| ready_set(set, &levels(3)).into_iter().map(|c| c.name).collect::<Vec<_>>();
        assert_eq!(names(Set::AllPairs), ["L1 - L0", "L2 - L0", "L2 - L1"]);
        assert_eq!(names(Set::AgainstControl(2)), ["L0 - L2", "L1 - L2"]);
        assert_eq!(names(Set::Neighbours), ["L1 - L0", "L2 - L1"]);
        assert_eq!(names(Set::AgainstRest), ["L0 - rest", "L1 - rest", "L2 - rest"]);
        assert_eq!(names(Set::AgainstEarlier), ["L1 - L0", "L2 - earlier"]);
        assert_eq!(names(Set::Polynomial), ["linear", "quadratic"]);
    }

    #[test]
    fn a_later_level_is_held_against_the_plain_mean_of_the_earlier_ones() {
        let rows = coefficients(Set::AgainstEarlier, 4);
        assert_eq!(rows[1], [-0.5, -0.5, 1.0, 0.0]);
        let third = 1.0 / 3.0;
        assert_eq!(rows[2], [-third, -third, -third, 1.0]);
    }

    #[test]
    fn polynomials_stop_at_the_fifth_degree_and_there_are_none_of_one_level() {
        let sizes = [0, 1, 2, 5, 6, 7, 40].map(|k| ready_set(Set::Polynomial, &levels(k)).len());
        assert_eq!(sizes, [0, 0, 1, 4, 5, 5, 5]);
        assert_eq!(ready_set(Set::Polynomial, &levels(9))[4].name, "quintic");
    }

    #[test]
    fn scores_that_make_no_polynomials_are_refused() {
        let of = |scores: &[f64]| polynomial_set(scores, &levels(3));
        assert_eq!(of(&[1.0, 2.0]), Err(NoTrend::ScoreCount { scores: 2, levels: 3 }));
        assert_eq!(of(&[1.0, 2.0, 2.0]), Err(NoTrend::NotIncreasing { before: 2.0, after: 2.0 }));
        assert!(of(&[1.0, f64::NAN, 2.0]).is_err());
        assert_eq!(of(&[0.0, 1e-300, 1.0]), Err(NoTrend::TooClose { name: "quadratic" }));
        assert!(of(&[0.0, 1e-6, 1.0]).is_ok());
        assert!(of(&[-f64::MAX, 0.0, f64::MAX]).is_ok());
    }
}
