//! Graphs of hypotheses against the definition that they are a shortcut of, and against the direct definitions of
//! their special cases. Sources: the closed test with weighted Bonferroni tests of the intersections (Bretz, Maurer,
//! Brannath and Posch 2009, Stat. Med. 28, 586–604), by all subsets of up to six hypotheses, in which the weights of an
//! intersection come not from the update rule but from a linear system: a share walks along the arrows until it meets
//! a hypothesis of the intersection; the direct definitions of Holm (1979), the fixed sequence (Maurer, Hothorn and
//! Lehmacher 1995) and the fallback (Wiens 2003). The graph of two doses and two outcomes is the kind that the
//! 2009 paper draws, from memory; its numbers are worked out by hand beside it.

use levelwise::methods::multiplicity::PValueMethod::Holm;
use levelwise::methods::multiplicity::p_values::{adjusted, alpha_per_comparison};
use levelwise::methods::multiplicity::{BoundLevel, Graph, GraphDecision, NoDecision, NoGraph};
use nalgebra::{DMatrix, DVector};
use proptest::prelude::*;

fn close(computed: &[f64], expected: &[f64], tolerance: f64) -> bool {
    computed.len() == expected.len()
        && computed.iter().zip(expected).all(|(c, e)| (c - e).abs() <= tolerance * e.abs().max(1e-300))
}

/// The weights of the intersection of `members` (bits): what reaches each when the share of a hypothesis outside
/// walks on along the arrows. Shares that can never arrive are lost.
fn weights_of_intersection(weights: &[f64], g: &[Vec<f64>], members: usize) -> Vec<f64> {
    let m = weights.len();
    let inside = |i: usize| members >> i & 1 == 1;
    // Those outside from which some member can be reached; without the others the system has a solution.
    let mut arrives: Vec<bool> = (0..m).map(inside).collect();
    for _ in 0..m {
        for i in 0..m {
            arrives[i] |= (0..m).any(|j| g[i][j] > 0.0 && arrives[j]);
        }
    }
    let walkers: Vec<usize> = (0..m).filter(|i| arrives[*i] && !inside(*i)).collect();
    let size = walkers.len();
    // x = expected share that ever stands at each: x = w + G'x.
    let matrix = DMatrix::from_fn(size, size, |r, c| f64::from(r == c) - g[walkers[c]][walkers[r]]);
    let start = DVector::from_iterator(size, walkers.iter().map(|i| weights[*i]));
    // The library has no decomposition of the matrix without rows.
    let passed = if size > 0 { matrix.lu().solve(&start).expect("every share arrives") } else { start };
    let arrived = |j: usize| (0..size).map(|r| passed[r] * g[walkers[r]][j]).sum::<f64>();
    (0..m).map(|j| if inside(j) { weights[j] + arrived(j) } else { 0.0 }).collect()
}

/// The adjusted p-values by their definition: the largest p-value of the intersections that a hypothesis is in.
fn by_closure(weights: &[f64], g: &[Vec<f64>], p: &[f64]) -> Vec<f64> {
    let m = weights.len();
    let mut adjusted = vec![0.0_f64; m];
    for members in 1..1_usize << m {
        let w = weights_of_intersection(weights, g, members);
        let weighted = (0..m).filter(|j| w[*j] > 0.0).map(|j| p[j] / w[j]);
        let p_of_intersection = weighted.fold(1.0, f64::min);
        for i in (0..m).filter(|i| members >> i & 1 == 1) {
            adjusted[i] = adjusted[i].max(p_of_intersection);
        }
    }
    adjusted
}

/// Weights and transitions in sixteenths, zeros often, sums at most 1 and often exactly 1.
fn shares(size: usize) -> impl Strategy<Value = Vec<f64>> {
    (prop::collection::vec(prop_oneof![2 => Just(0_u32), 3 => 1..9_u32], size), any::<bool>()).prop_map(
        |(parts, all)| {
            let sum: u32 = parts.iter().sum();
            let whole = if all { sum.max(1) } else { sum.max(16) };
            parts.iter().map(|part| f64::from(*part) / f64::from(whole)).collect()
        },
    )
}

fn graphs() -> impl Strategy<Value = (Vec<f64>, Vec<Vec<f64>>, Vec<f64>)> {
    (1..7_usize).prop_flat_map(|m| {
        let rows = prop::collection::vec(shares(m.saturating_sub(1)), m).prop_map(move |rows| {
            let widened = rows.into_iter().enumerate().map(|(i, mut row)| {
                row.insert(i, 0.0);
                row
            });
            widened.collect::<Vec<_>>()
        });
        (shares(m), rows, p_values(m))
    })
}

/// P-values with ties, zeros and ones among them.
fn p_values(m: usize) -> impl Strategy<Value = Vec<f64>> {
    prop::collection::vec(
        prop_oneof![4 => 0.0..0.06_f64, 1 => 0.0..1.0_f64, 2 => prop::sample::select(vec![0.0, 0.01, 0.02, 1.0])],
        m,
    )
}

fn decided(graph: &Graph, p: &[f64], alpha: f64) -> GraphDecision {
    graph.decide(p, alpha).expect("decidable")
}

#[test]
fn two_doses_and_two_outcomes_pass_on_what_is_worked_out_by_hand() {
    let (weights, g) = two_doses();
    let graph = Graph::new(weights, g).unwrap();
    // p / w: 0.02 for the first; then w = 3/4, 1/4, and 0.01 / (1/4) = 0.04 for the third; then the second has all
    // but what the fourth can get: 0.06 / 1.
    let result = decided(&graph, &[0.01, 0.06, 0.01, 0.5], 0.05);
    assert!(close(&result.adjusted, &[0.02, 0.06, 0.04, 0.5], 1e-15), "{result:?}");
    assert_eq!(result.rejected, [true, false, true, false]);
    let order: Vec<usize> = result.steps.iter().map(|step| step.rejected).collect();
    assert_eq!(order, [0, 2]);
    // Removing the first: w2 = 1/2 + 1/2 · 1/2, w3 = 1/2 · 1/2; g23 = (1/2 · 1/2) / (1 - 1/4) = 1/3,
    // g24 = (1/2) / (3/4) = 2/3, g32 = 1, g42 = g43 = 1/2.
    let first = &result.steps[0];
    assert_eq!(first.weights_after, [0.0, 0.75, 0.25, 0.0]);
    let expected =
        [[0.0, 0.0, 0.0, 0.0], [0.0, 0.0, 1.0 / 3.0, 2.0 / 3.0], [0.0, 1.0, 0.0, 0.0], [0.0, 0.5, 0.5, 0.0]];
    for (row, expected) in first.transitions_after.iter().zip(expected) {
        assert!(row.iter().zip(expected).all(|(g, e)| (g - e).abs() < 1e-15), "{first:?}");
    }
    // Then the third: all of it goes to the second, which leads 2/3 / (1 - 1/3) = 1 to the fourth, and that
    // leads 1/2 + 1/2 back.
    assert_eq!(result.steps[1].weights_after, [0.0, 1.0, 0.0, 0.0]);
    assert!((result.steps[1].transitions_after[1][3] - 1.0).abs() < 1e-15);
    assert!((result.steps[1].transitions_after[3][1] - 1.0).abs() < 1e-15);
    assert!(close(&result.level, &[0.025, 0.05, 0.0125, 0.0], 1e-15), "{:?}", result.level);
    assert_eq!(result.final_weights, [0.0, 1.0, 0.0, 0.0]);
    assert_eq!(
        graph.compatible_levels(&result),
        [
            BoundLevel::Rejected,
            BoundLevel::Retained { alpha: 0.05 },
            BoundLevel::Rejected,
            BoundLevel::Retained { alpha: 0.0 }
        ]
    );
}

fn two_doses() -> (Vec<f64>, Vec<Vec<f64>>) {
    let g = [[0.0, 0.5, 0.5, 0.0], [0.5, 0.0, 0.0, 0.5], [0.0, 1.0, 0.0, 0.0], [1.0, 0.0, 0.0, 0.0]];
    (vec![0.5, 0.5, 0.0, 0.0], g.map(Vec::from).to_vec())
}

#[test]
fn when_all_are_rejected_the_bounds_share_alpha_by_the_initial_weights() {
    let (weights, g) = two_doses();
    let graph = Graph::new(weights, g).unwrap();
    let result = decided(&graph, &[0.001, 0.002, 0.003, 0.004], 0.05);
    assert!(result.rejected.iter().all(|rejected| *rejected));
    assert_eq!(result.final_weights, [0.0; 4]);
    let expected = [0.025, 0.025, 0.0, 0.0].map(|alpha| BoundLevel::AllRejected { alpha });
    assert_eq!(graph.compatible_levels(&result), expected);
}

#[test]
fn one_hypothesis_no_hypothesis_and_no_weight() {
    for graph in [Graph::holm(1), Graph::fixed_sequence(1), Graph::fallback(vec![1.0]).unwrap()] {
        for p in [0.0, 0.03, 0.05, 1.0] {
            let result = decided(&graph, &[p], 0.05);
            assert_eq!(
                (result.adjusted, result.rejected, result.level),
                (vec![p], vec![p <= 0.05], vec![0.05])
            );
        }
    }
    for graph in [Graph::holm(0), Graph::fixed_sequence(0), Graph::new(Vec::new(), Vec::new()).unwrap()] {
        assert!(decided(&graph, &[], 0.05).adjusted.is_empty());
        assert!(graph.transitions().is_empty());
    }
    let nothing = Graph::new(vec![0.0; 3], vec![vec![0.0; 3]; 3]).unwrap();
    let result = decided(&nothing, &[0.0, 0.5, 1.0], 0.05);
    assert_eq!((result.adjusted, result.level), (vec![1.0; 3], vec![0.0; 3]));
    assert!(result.steps.is_empty());
}

#[test]
fn what_is_no_graph_is_said_with_the_place_the_value_and_what_is_allowed() {
    let none = || vec![vec![0.0; 2]; 2];
    let said = |weights: [f64; 2], g: Vec<Vec<f64>>| Graph::new(weights.to_vec(), g).unwrap_err().to_string();
    assert_eq!(
        said([-0.1, 0.5], none()),
        "the weight of hypothesis 1 is -0.1; a weight is a number from 0 to 1"
    );
    assert_eq!(
        said([0.5, f64::NAN], none()),
        "the weight of hypothesis 2 is NaN; a weight is a number from 0 to 1"
    );
    assert_eq!(said([0.75, 0.5], none()), "the weights sum to 1.25; together they may be at most 1");
    assert_eq!(
        said([0.5, 0.5], vec![vec![0.0; 2]]),
        "1 rows of transitions were given for 2 hypotheses; each needs one"
    );
    assert_eq!(
        said([0.5, 0.5], vec![vec![0.0; 2], vec![0.0; 3]]),
        "the row of hypothesis 2 has 3 transitions; it needs one for each of the 2 hypotheses"
    );
    assert_eq!(
        said([0.5, 0.5], vec![vec![0.0, 2.0], vec![0.0; 2]]),
        "the transition from hypothesis 1 to hypothesis 2 is 2; a transition is a number from 0 to 1"
    );
    assert_eq!(
        said([0.5, 0.5], vec![vec![0.0; 2], vec![0.0, 0.5]]),
        "hypothesis 2 passes 0.5 to itself; a transition leads to another hypothesis"
    );
    let row = vec![vec![0.0, 0.75, 0.5], vec![0.0; 3], vec![0.0; 3]];
    assert_eq!(Graph::new(vec![0.0; 3], row).unwrap_err(), NoGraph::RowSum { index: 0, sum: 1.25 });
    assert!(Graph::fallback(vec![0.6, 0.6]).is_err());
    // Thirds with ten decimals that were rounded up are no mistake.
    assert!(Graph::fallback(vec![0.333_333_333_4; 3]).is_ok());
    assert!(Graph::fallback(vec![0.3334; 3]).is_err());
    let holm = Graph::holm(2);
    assert_eq!(holm.decide(&[0.1], 0.05), Err(NoDecision::Count { given: 1, hypotheses: 2 }));
    assert_eq!(holm.decide(&[0.1, 1.5], 0.05), Err(NoDecision::PValue { index: 1, value: 1.5 }));
    assert_eq!(holm.decide(&[0.1, 0.5], 1.0), Err(NoDecision::Alpha { value: 1.0 }));
    assert!(holm.decide(&[0.1, f64::NAN], 0.05).is_err());
}

/// Holm's graph with its transitions written out, which takes the general way.
fn holm_written_out(m: usize) -> Graph {
    let share = 1.0 / (m as f64 - 1.0);
    let row = |i: usize| (0..m).map(|j| if i == j { 0.0 } else { share }).collect();
    Graph::new(vec![1.0 / m as f64; m], (0..m).map(row).collect()).unwrap()
}

/// Wiens (2003): level_j = w_j alpha, and what the one before held if it was rejected.
fn fallback_directly(weights: &[f64], p: &[f64], alpha: f64) -> Vec<bool> {
    let mut carried = 0.0;
    let each = weights.iter().zip(p).map(|(w, p)| {
        let level = w * alpha + carried;
        let rejected = *p <= level && level > 0.0;
        carried = if rejected { level } else { 0.0 };
        rejected
    });
    each.collect()
}

#[test]
fn seven_hundred_and_eighty_hypotheses_are_decided_by_every_special_graph() {
    let m = 780;
    let p: Vec<f64> = (0..m).map(|i| (i * 389 % m) as f64 / 1e7).collect();
    assert_eq!(decided(&Graph::holm(m), &p, 0.05).adjusted, adjusted(&p, Holm));
    let sequence = decided(&Graph::fixed_sequence(m), &p, 0.05);
    let expected = p.iter().scan(0.0_f64, |most, p| {
        *most = most.max(*p);
        Some(*most)
    });
    assert_eq!(sequence.adjusted, expected.collect::<Vec<_>>());
    let weights = vec![1.0 / m as f64; m];
    let fallback = decided(&Graph::fallback(weights.clone()).unwrap(), &p, 0.05);
    assert_eq!(fallback.rejected, fallback_directly(&weights, &p, 0.05));
}

proptest! {
    #[test]
    fn any_graph_decides_as_the_closed_test_by_all_subsets((weights, g, p) in graphs()) {
        let result = decided(&Graph::new(weights.clone(), g.clone()).unwrap(), &p, 0.05);
        let expected = by_closure(&weights, &g, &p);
        prop_assert!(close(&result.adjusted, &expected, 1e-12), "{:?}, expected {expected:?}", result.adjusted);
    }

    #[test]
    fn the_parts_of_a_decision_agree((weights, g, p) in graphs(), alpha in 0.001..0.2_f64) {
        let graph = Graph::new(weights, g).unwrap();
        let result = decided(&graph, &p, alpha);
        prop_assert_eq!(&result.adjusted, &decided(&graph, &p, 0.9).adjusted);
        let mut taken = vec![false; p.len()];
        for step in &result.steps {
            taken[step.rejected] = true;
            prop_assert!((step.weight * alpha - step.level).abs() < 1e-15);
            prop_assert!(step.weights_after.iter().sum::<f64>() <= 1.0 + 1e-12);
            for (i, row) in step.transitions_after.iter().enumerate() {
                prop_assert!(row.iter().sum::<f64>() <= 1.0 + 1e-12 && row.iter().all(|g| *g >= 0.0));
                prop_assert!(row[i] == 0.0 && (!taken[i] || row.iter().all(|g| *g == 0.0)));
                prop_assert!(row.iter().zip(&taken).all(|(g, taken)| !taken || *g == 0.0));
            }
        }
        prop_assert_eq!(&taken, &result.rejected);
        for (i, p) in p.iter().copied().enumerate() {
            prop_assert!(result.adjusted[i] >= p && result.adjusted[i] <= 1.0);
            prop_assert_eq!(result.rejected[i], result.adjusted[i] <= alpha);
            // At its own level, too, but for the last bit.
            let level = result.level[i];
            let slack = if result.rejected[i] { level * (1.0 + 1e-12) - p } else { p - level * (1.0 - 1e-12) };
            prop_assert!(slack >= 0.0, "{result:?}");
            prop_assert!(!result.rejected[i] || result.final_weights[i] == 0.0);
        }
    }

    #[test]
    fn relabelled_hypotheses_have_the_same_adjusted_p_values((weights, g, p) in graphs()) {
        let m = p.len();
        let turned = |i: usize| m - 1 - i;
        let weights_turned = (0..m).map(|i| weights[turned(i)]).collect();
        let g_turned = (0..m).map(|i| (0..m).map(|j| g[turned(i)][turned(j)]).collect()).collect();
        let p_turned: Vec<f64> = (0..m).map(|i| p[turned(i)]).collect();
        let one = decided(&Graph::new(weights, g).unwrap(), &p, 0.05).adjusted;
        let mut other = decided(&Graph::new(weights_turned, g_turned).unwrap(), &p_turned, 0.05).adjusted;
        other.reverse();
        prop_assert!(close(&one, &other, 1e-12), "{one:?} and {other:?}");
    }

    #[test]
    fn holm_is_a_graph(p in (1..40_usize).prop_flat_map(p_values), alpha in 0.001..0.2_f64) {
        let result = decided(&Graph::holm(p.len()), &p, alpha);
        let holm = adjusted(&p, Holm);
        prop_assert_eq!(&result.adjusted, &holm);
        prop_assert!(close(&result.level, &alpha_per_comparison(&p, Holm, alpha).unwrap(), 1e-14));
        if p.len() > 1 {
            let written_out = decided(&holm_written_out(p.len()), &p, alpha);
            prop_assert!(close(&written_out.adjusted, &holm, 1e-12));
        }
    }

    #[test]
    fn equal_shares_with_any_weights_are_a_graph((weights, _, p) in graphs(), alpha in 0.001..0.2_f64) {
        let m = weights.len();
        prop_assume!(m > 1);
        let share = 1.0 / (m - 1) as f64;
        let arrows = (0..m).map(|i| (0..m).map(|j| if i == j { 0.0 } else { share }).collect()).collect();
        let (direct, written) = (Graph::even(weights.clone()).unwrap(), Graph::new(weights, arrows).unwrap());
        let (direct, written) = (decided(&direct, &p, alpha), decided(&written, &p, alpha));
        prop_assert!(close(&direct.adjusted, &written.adjusted, 1e-12), "{direct:?} {written:?}");
        prop_assert!(close(&direct.final_weights, &written.final_weights, 1e-9));
    }

    #[test]
    fn the_fixed_sequence_is_a_graph(p in (1..40_usize).prop_flat_map(p_values), alpha in 0.001..0.2_f64) {
        let result = decided(&Graph::fixed_sequence(p.len()), &p, alpha);
        let failed = p.iter().position(|p| *p > alpha).unwrap_or(p.len());
        for i in 0..p.len() {
            prop_assert_eq!(result.adjusted[i], p[..=i].iter().copied().fold(0.0, f64::max));
            prop_assert_eq!(result.rejected[i], i < failed);
            prop_assert_eq!(result.level[i], if i <= failed { alpha } else { 0.0 });
        }
    }

    #[test]
    fn the_fallback_is_a_graph(
        (weights, p) in (1..12_usize).prop_flat_map(|m| (shares(m), p_values(m))), alpha in 0.001..0.2_f64
    ) {
        let result = decided(&Graph::fallback(weights.clone()).unwrap(), &p, alpha);
        prop_assert_eq!(&result.rejected, &fallback_directly(&weights, &p, alpha));
        // The adjusted p-value is the level at which the direct definition changes its mind.
        for (i, adjusted) in result.adjusted.iter().enumerate().filter(|(_, p)| **p > 0.0 && **p < 1.0) {
            prop_assert!(fallback_directly(&weights, &p, adjusted * (1.0 + 1e-9))[i]);
            prop_assert!(!fallback_directly(&weights, &p, adjusted * (1.0 - 1e-9))[i]);
        }
    }
}
