//! Every procedure through `compare`, as the notebook asks for it: worked examples, and what must hold whatever the data.
//!
//! Sources: the etch-rate data of Montgomery, Design and Analysis of Experiments, table 3.1, the blood counts of Dunnett
//! (1955) and the dose set of this project (made up), each worked independently for this project by quadrature to the
//! digits written here. The procedures' own rooms have further checks.

use crate::comparisons::printed;
use crate::worked_examples::{blood, doses, estimates, etch, random, standard_normal};
use levelwise::methods::contrasts::{Contrast, Set, ready_set};
use levelwise::methods::multiplicity::{
    ALL, Adjust, Basis, Claim, ComparisonRow, Comparisons, Family, Graph, IntervalKind, Order, PValueMethod,
    Ranking, Request, Resampling, Setting, Sides, compare,
};
use levelwise::study::{Sample, Summary, Variances};
use proptest::prelude::*;

/// Groups with everything that any basis needs.
struct Study {
    labels: Vec<String>,
    sample: Sample,
    summary: Summary,
}

impl Study {
    fn of(groups: &[Vec<f64>]) -> Self {
        let sample = Sample { origin: 0.0, groups: groups.to_vec() };
        Self {
            labels: (0..groups.len()).map(|i| format!("L{i}")).collect(),
            summary: sample.summary(),
            sample,
        }
    }

    fn compared(
        &self,
        basis: Basis,
        variances: Variances,
        set: Set,
        adjust: Adjust,
        sides: Sides,
    ) -> Comparisons {
        let contrasts = ready_set(set, &self.labels);
        self.by(&contrasts, Family::Set(set), basis, variances, adjust, sides)
    }

    fn by(
        &self,
        contrasts: &[Contrast],
        family: Family,
        basis: Basis,
        variances: Variances,
        adjust: Adjust,
        sides: Sides,
    ) -> Comparisons {
        let estimates = estimates(&self.sample.groups, variances);
        let order = order_for(adjust, contrasts.len());
        let request = Request::of_means(&estimates, contrasts, family, adjust);
        compare(&Request {
            summary: Some(&self.summary),
            sample: Some(&self.sample),
            basis,
            sides,
            order: order.as_ref(),
            resampling: Resampling { repeats: 500, seed: 1 },
            ..request
        })
        .unwrap_or_else(|error| panic!("{adjust:?} {family:?}: {error}"))
    }
}

fn order_for(adjust: Adjust, m: usize) -> Option<Order> {
    let graph = match adjust {
        Adjust::FixedSequence => Graph::fixed_sequence(m),
        Adjust::Fallback => Graph::fallback(vec![1.0 / m as f64; m]).unwrap(),
        Adjust::Graph => Graph::holm(m),
        _ => return None,
    };
    Some(Order { places: (0..m).rev().collect(), graph })
}

fn column(result: &Comparisons) -> Vec<f64> {
    result.rows.iter().map(|row| row.p_adjusted).collect()
}

fn pairs(groups: &[Vec<f64>], basis: Basis, variances: Variances, adjust: Adjust) -> Comparisons {
    Study::of(groups).compared(basis, variances, Set::AllPairs, adjust, Sides::Both)
}

#[test]
fn the_etch_rates_by_every_stepwise_range() {
    let p = |adjust| column(&pairs(&etch(), Basis::Means, Variances::Equal, adjust));
    let keuls = p(Adjust::NewmanKeuls);
    printed(&[keuls[0], keuls[3]], &["0.00641622", "0.00462438"], "Newman-Keuls, 180-160 and 200-180");
    let welsch = p(Adjust::RyanEinotGabrielWelsch);
    let order = [0, 1, 3, 2, 4, 5];
    let welsch: Vec<f64> = order.iter().map(|i| welsch[*i]).collect();
    let expected = ["0.0127913", "2.39263e-5", "0.00922738", "2.0908e-9", "4.8842e-8", "5.36766e-6"];
    printed(&welsch, &expected, "Ryan-Einot-Gabriel-Welsch");
}

#[test]
fn the_blood_counts_by_every_procedure_for_unequal_variances_and_ranks() {
    let p = |adjust| column(&pairs(&blood(), Basis::Means, Variances::Unequal, adjust));
    printed(&p(Adjust::TamhaneT2), &["0.671983", "0.0445025", "0.145783"], "T2");
    printed(&p(Adjust::DunnettT3), &["0.637601", "0.0405921", "0.132485"], "T3");
    let c = pairs(&blood(), Basis::Means, Variances::Unequal, Adjust::DunnettC);
    let critical: Vec<f64> = c.rows.iter().map(|row| row.critical.unwrap()).collect();
    printed(&critical, &["3.791012", "3.491711", "3.746134"], "C, critical values");
    let ranks = Basis::Ranks(Ranking::PairByPair);
    let dwass = pairs(&blood(), ranks, Variances::Unequal, Adjust::SteelDwass);
    printed(&column(&dwass), &["0.535247", "0.0463509", "0.199646"], "Steel-Dwass");
    let steel = Study::of(&blood()).compared(
        ranks,
        Variances::Unequal,
        Set::AgainstControl(0),
        Adjust::Steel,
        Sides::Both,
    );
    printed(&column(&steel), &["0.472416", "0.0338711"], "Steel");
    // The overall p .00907701 lies below two of the raw ones.
    let least = pairs(&blood(), Basis::Means, Variances::Equal, Adjust::LeastSignificantDifference);
    printed(&column(&least), &["0.408217", "0.00907701", "0.0274298"], "least significant difference");
}

#[test]
fn the_dose_set_by_the_step_down_procedure_against_a_control() {
    let doses = Study::of(&doses());
    let result = doses.compared(
        Basis::Means,
        Variances::Equal,
        Set::AgainstControl(0),
        Adjust::StepDownDunnett,
        Sides::Both,
    );
    printed(&column(&result), &["0.0530492", "0.00136879", "1.1135e-5"], "step-down Dunnett");
    assert_eq!(result.interval_kind, IntervalKind::SimultaneousBy(Adjust::Dunnett));
}

#[test]
fn bounds_of_an_ordered_one_sided_procedure_stop_at_the_border_where_it_rejects() {
    let doses = Study::of(&doses());
    let result = doses.compared(
        Basis::Means,
        Variances::Equal,
        Set::AgainstControl(0),
        Adjust::FixedSequence,
        Sides::Greater,
    );
    // From the highest dose down: all three are significant one-sided at 5 % by themselves.
    assert!(result.rows.iter().all(|row| row.rejected));
    assert_eq!(result.interval_kind, IntervalKind::Compatible);
    for row in &result.rows {
        let interval = row.interval.unwrap();
        assert!(interval.lower >= 0.0 && interval.upper == f64::INFINITY, "{row:?}");
    }
    let two = doses.compared(
        Basis::Means,
        Variances::Equal,
        Set::AgainstControl(0),
        Adjust::Fallback,
        Sides::Greater,
    );
    for row in &two.rows {
        assert_eq!(row.interval.is_some_and(|it| it.lower >= 0.0), row.rejected, "{row:?}");
    }
}

/// From two to five groups of three to eight values, some of them tied, some apart.
fn studies() -> impl Strategy<Value = Vec<Vec<f64>>> {
    (2..6_usize, 0..u64::MAX).prop_map(|(k, seed)| {
        let mut stream = random(seed);
        (0..k)
            .map(|i| {
                let n = 3 + stream.below(6) as usize;
                let shift = i as f64 * stream.uniform() * 1.5;
                (0..n).map(|_| libm::rint((standard_normal(&mut stream) + shift) * 100.0) / 100.0).collect()
            })
            .collect()
    })
}

const BASES: [Basis; 4] =
    [Basis::Means, Basis::Ranks(Ranking::Joint), Basis::Ranks(Ranking::PairByPair), Basis::Permutation];

/// Everything that suits these groups, but the rearrangements, which take long and have their own properties.
fn each_result(groups: &[Vec<f64>], mut each: impl FnMut(&Comparisons, &str)) {
    let study = Study::of(groups);
    if study.summary.groups.iter().any(|group| group.variance.is_none_or(|variance| variance == 0.0)) {
        return;
    }
    for set in [Set::AllPairs, Set::AgainstControl(0), Set::Neighbours] {
        for basis in &BASES[..3] {
            for variances in [Variances::Equal, Variances::Unequal] {
                for sides in [Sides::Both, Sides::Greater, Sides::Less] {
                    for adjust in ALL {
                        let (family, basis, claim) = (Family::Set(set), *basis, Claim::Difference);
                        if adjust.unsuitable(&Setting { family, basis, variances, sides, claim }).is_none() {
                            let result = study.compared(basis, variances, set, adjust, sides);
                            each(&result, &format!("{adjust:?} {set:?} {basis:?} {variances:?} {sides:?}"));
                        }
                    }
                }
            }
        }
    }
}

fn supports(row: &ComparisonRow) -> Option<bool> {
    row.interval.map(|it| it.supports(Claim::Difference, Sides::Both))
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 24, failure_persistence: None, rng_seed: proptest::test_runner::RngSeed::Fixed(4), ..ProptestConfig::default() })]

    #[test]
    fn adjusted_p_values_are_never_below_raw_ones_and_single_steps_agree_with_their_intervals(groups in studies()) {
        let mut fine = Ok(());
        each_result(&groups, |result, what| {
            for row in &result.rows {
                let ranked = matches!(result.basis, Basis::Ranks(_));
                let agrees = match (result.interval_kind, supports(row)) {
                    // A difference of exactly 0 between two values may stand at the end of a rank interval.
                    (IntervalKind::Simultaneous, Some(supports)) if !ranked => supports == row.rejected,
                    _ => true,
                };
                if !(row.p_adjusted >= row.p && row.p_adjusted <= 1.0 && agrees) && fine.is_ok() {
                    fine = Err(format!("{what}: {row:?}"));
                }
            }
        });
        prop_assert!(fine.is_ok(), "{}", fine.unwrap_err());
    }

    #[test]
    fn with_one_error_term_the_order_of_adjusted_p_values_is_that_of_the_raw_ones(groups in studies()) {
        let mut fine = Ok(());
        each_result(&groups, |result, what| {
            // Logical restrictions, ranges of means and a declared order have an order of their own.
            let own_order = matches!(result.adjust, Adjust::NewmanKeuls | Adjust::RyanEinotGabrielWelsch | Adjust::StepDownMaxT);
            if own_order || result.adjust.ordered() || result.variances == Variances::Unequal || result.adjust == Adjust::Steel {
                return;
            }
            for one in &result.rows {
                for other in &result.rows {
                    if one.p < other.p && one.p_adjusted > other.p_adjusted * (1.0 + 1e-9) && fine.is_ok() {
                        fine = Err(format!("{what}: {one:?} {other:?}"));
                    }
                }
            }
        });
        prop_assert!(fine.is_ok(), "{}", fine.unwrap_err());
    }

    #[test]
    fn step_down_procedures_reject_whatever_their_single_step_relatives_reject(groups in studies()) {
        let study = Study::of(&groups);
        prop_assume!(study.summary.groups.iter().all(|group| group.variance.is_some_and(|variance| variance > 0.0)));
        for sides in [Sides::Both, Sides::Greater, Sides::Less] {
            let p = |set, adjust| column(&study.compared(Basis::Means, Variances::Equal, set, adjust, sides));
            let control = Set::AgainstControl(0);
            let mut relatives = vec![
                (p(control, Adjust::StepDownDunnett), p(control, Adjust::Dunnett)),
                (p(control, Adjust::StepDownMaxT), p(control, Adjust::MaxT)),
                (p(Set::AllPairs, Adjust::StepDownMaxT), p(Set::AllPairs, Adjust::MaxT)),
                (p(control, Adjust::PValues(PValueMethod::Holm)), p(control, Adjust::PValues(PValueMethod::Bonferroni))),
            ];
            if sides == Sides::Both {
                relatives.push((p(Set::AllPairs, Adjust::NewmanKeuls), p(Set::AllPairs, Adjust::RyanEinotGabrielWelsch)));
            }
            for (step_down, single) in relatives {
                prop_assert!(step_down.iter().zip(&single).all(|(step, single)| *step <= single * (1.0 + 1e-3)), "{step_down:?} {single:?}");
            }
        }
    }

    #[test]
    fn max_t_is_tukey_for_pairs_of_equal_groups_and_dunnett_against_a_control(k in 2..6_usize, n in 2..9_usize, seed in 0..u64::MAX) {
        let mut stream = random(seed);
        let groups: Vec<Vec<f64>> = (0..k).map(|_| (0..n).map(|_| standard_normal(&mut stream)).collect()).collect();
        let study = Study::of(&groups);
        let p = |set, adjust| column(&study.compared(Basis::Means, Variances::Equal, set, adjust, Sides::Both));
        for (set, named) in [(Set::AllPairs, Adjust::Tukey), (Set::AgainstControl(0), Adjust::Dunnett)] {
            for (joint, named) in p(set, Adjust::MaxT).iter().zip(p(set, named)) {
                prop_assert!((joint - named).abs() <= 1e-9 * named, "{set:?} {joint} {named}");
            }
        }
    }

    #[test]
    fn reordering_the_levels_changes_nothing_but_the_order(groups in studies(), turn in 1..5_usize) {
        let mut turned = groups.clone();
        let turn = turn % groups.len();
        turned.rotate_left(turn);
        let (one, other) = (Study::of(&groups), Study::of(&turned));
        prop_assume!(one.summary.groups.iter().all(|group| group.variance.is_some_and(|variance| variance > 0.0)));
        for basis in &BASES[..3] {
            for variances in [Variances::Equal, Variances::Unequal] {
                for adjust in ALL.into_iter().filter(|adjust| !adjust.ordered()) {
                    let (family, claim) = (Family::Set(Set::AllPairs), Claim::Difference);
                    let setting = Setting { family, basis: *basis, variances, sides: Sides::Both, claim };
                    if adjust.unsuitable(&setting).is_some() { continue }
                    let one = one.compared(*basis, variances, Set::AllPairs, adjust, Sides::Both);
                    let other = other.compared(*basis, variances, Set::AllPairs, adjust, Sides::Both);
                    for row in &one.rows {
                        let mut coefficients = row.coefficients.clone();
                        coefficients.rotate_left(turn);
                        let negative: Vec<f64> = coefficients.iter().map(|c| -c).collect();
                        let same = other.rows.iter().find(|r| r.coefficients == coefficients || r.coefficients == negative).unwrap();
                        // A lattice is another one for another order; its error is stated.
                        let stated = row.p_error.unwrap_or(0.0).max(same.p_error.unwrap_or(0.0));
                        let close = (same.p_adjusted - row.p_adjusted).abs() <= 1e-7 * row.p_adjusted + 6.0 * stated;
                        prop_assert!(close, "{adjust:?} {basis:?}: {row:?} {same:?}");
                    }
                }
            }
        }
    }
}
