//! Ready sets of contrasts: all pairs, each against control, neighbours, each against the rest.

use super::Contrast;
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
}

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
    }
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
    }
}
