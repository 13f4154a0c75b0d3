//! Comparisons by ranks.
//!
//! Sources:
//! - `data/ranks/pairwise.json`, `data/ranks/joint.json`: exact rationals, enumeration and 40-digit arithmetic (`compute.py` beside
//!   them, which also asserts SciPy 1.17.1's mannwhitneyu, exact, and asymptotic without correction for continuity).
//! - `data/values/datasets.json`: Dunn's z, p-values and their adjustments for twelve data sets; 15 digits.
//! - Blood counts (Dunnett 1955, data quoted from memory): Dunn's z, z of pairs ranked alone and the adjusted p-values of both families,
//!   computed independently by quadrature; 6 digits.
//! - Ways to choose: by hand.

use crate::accuracy::permitted;
use crate::cases::{cases, number, rounds_to};
use crate::one_way::{agrees, blood_counts, sample_of};
use levelwise::methods::multiplicity::p_values;
use levelwise::methods::multiplicity::ranks::{
    CannotRank, JointRanks, TailProbabilities, pairwise, smallest_p, steel, steel_critical, steel_dwass,
    steel_dwass_critical, steel_loadings,
};
use levelwise::methods::multiplicity::{PValueMethod, Sides};
use levelwise::numerics::distributions::rank_counts;
use levelwise::numerics::distributions::rank_counts::large_samples::{self, Continuity};
use levelwise::numerics::distributions::studentized_range::Family;
use levelwise::numerics::random::Streams;
use serde_json::Value;

const SIDES: [(Sides, &str); 3] = [(Sides::Both, "both"), (Sides::Greater, "greater"), (Sides::Less, "less")];

fn list(value: &Value) -> Vec<f64> {
    value.as_array().expect("a list").iter().map(number).collect()
}

fn groups_of(case: &Value) -> Vec<Vec<f64>> {
    case["groups"].as_array().expect("groups").iter().map(list).collect()
}

/// -1 at `from`, 1 at `to`.
fn pair(groups: usize, from: usize, to: usize) -> Vec<f64> {
    (0..groups).map(|i| if i == to { 1.0 } else { -f64::from(u8::from(i == from)) }).collect()
}

#[test]
fn pairs_ranked_alone_agree_with_the_exact_counts_and_the_normal_tails() {
    let allowed = permitted("comparisons by ranks");
    for case in cases("ranks/pairwise") {
        let found = pairwise(&list(&case["first"]), &list(&case["second"])).expect("a test");
        let what = |field: &str| format!("{field} of {case}");
        agrees(found.u, number(&case["u"]), 0.0, &what("u"));
        agrees(found.se * found.se, number(&case["variance"]), allowed, &what("variance"));
        agrees(found.z, number(&case["z"]), allowed, &what("z"));
        agrees(found.tied_share, number(&case["tied_share"]), allowed, &what("tied share"));
        let exact = found.exact.expect("all these can be counted");
        for (sides, key) in SIDES {
            agrees(found.normal.on(sides), number(&case["normal"][key]), allowed, &what(key));
            agrees(exact.on(sides), number(&case["exact"][key]), allowed, &what(key));
            assert_eq!(found.p(sides), exact.on(sides), "the exact p-value is the answer");
        }
    }
}

#[test]
fn contrasts_of_mean_ranks_agree_with_exact_rationals() {
    let allowed = permitted("comparisons by ranks");
    for case in cases("ranks/joint") {
        let joint = JointRanks::of(&groups_of(&case)).expect("ranks");
        let found = joint.test(&list(&case["coefficients"])).expect("a contrast");
        let what = |field: &str| format!("{field} of {case}");
        agrees(found.estimate, number(&case["estimate"]), allowed, &what("estimate"));
        agrees(found.se * found.se, number(&case["variance"]), allowed, &what("variance"));
        agrees(found.z, number(&case["z"]), allowed, &what("z"));
        for (sides, key) in SIDES {
            agrees(found.p(sides), number(&case[key]), allowed, &what(key));
        }
    }
}

/// Dunn's values of the twelve data sets: z, p and two adjustments over all pairs.
#[test]
fn pairs_of_the_twelve_data_sets_agree_with_dunn() {
    for case in cases("datasets") {
        let sample = sample_of(&case);
        let joint = JointRanks::of(&sample.groups).expect("ranks");
        let pairs = case["pairs"].as_array().expect("pairs");
        let tests: Vec<_> = pairs
            .iter()
            .map(|row| {
                // The file takes the second from the first.
                let (i, j) = (number(&row["i"]) as usize - 1, number(&row["j"]) as usize - 1);
                joint.test(&pair(sample.groups.len(), j, i)).expect("a contrast")
            })
            .collect();
        let raw: Vec<f64> = tests.iter().map(|test| test.p(Sides::Both)).collect();
        let bonferroni = p_values::adjusted(&raw, PValueMethod::Bonferroni);
        let holm = p_values::adjusted(&raw, PValueMethod::Holm);
        for (row, test) in pairs.iter().enumerate() {
            let dunn = &test["dunn"];
            for (computed, key) in
                [(tests[row].z, "z"), (raw[row], "p"), (bonferroni[row], "bonferroni"), (holm[row], "holm")]
            {
                agrees(computed, number(&dunn[key]), 1e-13, &format!("{key} of {}", case["name"]));
            }
        }
    }
}

#[test]
fn blood_counts_agree_with_all_three_families() {
    let groups = blood_counts().groups;
    let joint = JointRanks::of(&groups).expect("ranks");
    let mut all_pairs = Family::new(3).expect("a range");
    // From, to, Dunn's z and p, z of the pair alone, its p adjusted over all pairs.
    let rows = [
        (0, 1, "0.866025", "0.386476", "1.066004", "0.535247"),
        (0, 2, "2.584921", "0.00974012", "2.373464", "0.0463509"),
        (1, 2, "1.500000", "0.133614", "1.714643", "0.199646"),
    ];
    for (from, to, z, p, z_alone, p_alone) in rows {
        let dunn = joint.test(&pair(3, from, to)).expect("a contrast");
        rounds_to(dunn.z, z);
        rounds_to(dunn.p(Sides::Both), p);
        let alone = pairwise(&groups[from], &groups[to]).expect("a pair");
        rounds_to(alone.z, z_alone);
        rounds_to(steel_dwass(alone.z, &mut all_pairs).expect("a p-value"), p_alone);
    }
    let loadings = steel_loadings(6, &[4, 5]).expect("loadings");
    for (to, p) in [(1, "0.472416"), (2, "0.0338711")] {
        let z = pairwise(&groups[0], &groups[to]).expect("a pair").z;
        rounds_to(steel(z, &loadings, Sides::Both).expect("a p-value"), p);
    }
}

// Steel's loadings: the correlation of two U beside one control, over all ways of dealing six and seven ranks out.
#[test]
fn loadings_give_the_correlation_of_rank_sums_beside_one_control() {
    for (control, one, other) in [(2, 2, 2), (1, 2, 3), (3, 1, 2)] {
        let total = control + one + other;
        let (mut count, mut products, mut squares) = (0.0, 0.0, [0.0; 2]);
        for_each_deal(total, &[control, one, other], &mut |dealt| {
            let u = |group: usize, size: usize| {
                let above = dealt.iter().enumerate().filter(|(_, to)| **to == group);
                let pairs =
                    above.map(|(rank, _)| dealt[..rank].iter().filter(|to| **to == 0).count()).sum::<usize>();
                pairs as f64 - (control * size) as f64 / 2.0
            };
            let (x, y) = (u(1, one), u(2, other));
            count += 1.0;
            products += x * y;
            squares = [squares[0] + x * x, squares[1] + y * y];
        });
        assert!(count > 10.0);
        let loadings = steel_loadings(control, &[one, other]).expect("loadings");
        agrees(products / (squares[0] * squares[1]).sqrt(), loadings[0] * loadings[1], 1e-14, "correlation");
    }
}

/// Every way to deal ranks 0, 1, ... to groups of these sizes.
fn for_each_deal(total: usize, sizes: &[usize], each: &mut impl FnMut(&[usize])) {
    fn go(left: &mut [usize], dealt: &mut Vec<usize>, total: usize, each: &mut impl FnMut(&[usize])) {
        if dealt.len() == total {
            each(dealt);
            return;
        }
        for group in 0..left.len() {
            if left[group] > 0 {
                left[group] -= 1;
                dealt.push(group);
                go(left, dealt, total, each);
                dealt.pop();
                left[group] += 1;
            }
        }
    }
    go(&mut sizes.to_vec(), &mut Vec::new(), total, each);
}

#[test]
fn critical_values_are_where_the_adjusted_p_value_is_the_level() {
    let loadings = steel_loadings(12, &[7, 9, 12, 30]).expect("loadings");
    for alpha in [0.2, 0.05, 0.001, 1e-9] {
        for groups in [2, 5, 40] {
            let mut range = Family::new(groups).expect("a range");
            let critical = steel_dwass_critical(alpha, &mut range).expect("a value");
            agrees(steel_dwass(critical, &mut range).expect("a p-value"), alpha, 1e-11, "all pairs");
            agrees(steel_dwass(-critical, &mut range).expect("a p-value"), alpha, 1e-11, "all pairs");
        }
        for (sides, sign) in [(Sides::Both, -1.0), (Sides::Greater, 1.0), (Sides::Less, -1.0)] {
            let critical = steel_critical(alpha, &loadings, sides).expect("a value");
            let p = steel(sign * critical, &loadings, sides).expect("a p-value");
            agrees(p, alpha, 1e-10, "against a control");
        }
    }
}

#[test]
fn two_groups_are_the_two_sample_test_in_every_family() {
    let mut stream = Streams::new(4, "two groups by ranks").stream(0);
    for (n, m, grid) in [(5, 9, 1e6), (14, 14, 3.0), (40, 31, 8.0), (90, 2, 1e6)] {
        let mut draw = |size: usize, shift: f64| -> Vec<f64> {
            (0..size).map(|_| ((stream.normal() + shift) * grid).round() / grid).collect()
        };
        let groups = vec![draw(n, 0.0), draw(m, 0.6)];
        let alone = pairwise(&groups[0], &groups[1]).expect("a pair");
        let dunn = JointRanks::of(&groups).expect("ranks").test(&[-1.0, 1.0]).expect("a contrast");
        agrees(dunn.z, alone.z, 1e-13, "Dunn's z");
        for (sides, _) in SIDES {
            agrees(dunn.p(sides), alone.normal.on(sides), 1e-12, "Dunn's p");
            let loadings = steel_loadings(n, &[m]).expect("loadings");
            let against = steel(alone.z, &loadings, sides).expect("a p-value");
            agrees(against, alone.normal.on(sides), 1e-11, "Steel's p");
        }
        let all = steel_dwass(alone.z, &mut Family::new(2).expect("a range")).expect("a p-value");
        agrees(all, alone.normal.both, 1e-11, "p over all pairs");
    }
}

#[test]
fn swapping_two_groups_turns_the_signs_and_the_sides() {
    for case in cases("ranks/pairwise") {
        let (first, second) = (list(&case["first"]), list(&case["second"]));
        let (one, other) =
            (pairwise(&first, &second).expect("a pair"), pairwise(&second, &first).expect("a pair"));
        assert_eq!((one.z, one.estimate, one.se), (-other.z, -other.estimate, other.se));
        assert_eq!(one.u + other.u, (first.len() * second.len()) as f64);
        let turned =
            |p: TailProbabilities| TailProbabilities { both: p.both, greater: p.less, less: p.greater };
        let exact = (one.exact.expect("counted"), turned(other.exact.expect("counted")));
        for (p, q) in [(one.normal, turned(other.normal)), exact] {
            for (sides, key) in SIDES {
                agrees(p.on(sides), q.on(sides), 1e-13, key);
            }
        }
    }
}

#[test]
fn an_increasing_change_of_scale_and_another_order_of_rows_change_nothing() {
    for case in cases("ranks/joint") {
        let groups = groups_of(&case);
        let changed: Vec<Vec<f64>> = groups
            .iter()
            .map(|values| values.iter().rev().map(|value| libm::exp(value / 3.0) - 7.0).collect())
            .collect();
        assert_eq!(JointRanks::of(&groups).expect("ranks"), JointRanks::of(&changed).expect("ranks"));
        let alone = |groups: &[Vec<f64>]| pairwise(&groups[0], &groups[1]).expect("a pair");
        assert_eq!(alone(&groups), alone(&changed));
        // Downwards, greater and less change places.
        let down: Vec<Vec<f64>> =
            groups.iter().map(|values| values.iter().map(|value| -value).collect()).collect();
        assert_eq!(alone(&groups).z, -alone(&down).z);
    }
}

#[test]
fn other_labels_give_the_same_contrast() {
    for case in cases("ranks/joint") {
        let (mut groups, mut coefficients) = (groups_of(&case), list(&case["coefficients"]));
        let before = JointRanks::of(&groups).expect("ranks").test(&coefficients).expect("a contrast");
        groups.rotate_left(1);
        coefficients.rotate_left(1);
        let joint = JointRanks::of(&groups).expect("ranks");
        let after = joint.test(&coefficients).expect("a contrast");
        agrees(after.z, before.z, 1e-14, "z");
        for factor in [1e-200, 7.0, 1e200] {
            let scaled: Vec<f64> = coefficients.iter().map(|c| c * factor).collect();
            agrees(joint.test(&scaled).expect("a contrast").z, before.z, 1e-14, "z of a multiple");
        }
    }
}

#[test]
fn beyond_the_limits_of_counting_the_answer_is_the_normal_one() {
    let run = |count: usize, from: f64| (0..count).map(|i| from + 2.0 * i as f64).collect::<Vec<f64>>();
    let counted = |n: usize, m: usize, tied: bool| {
        let mut first = run(n, 0.0);
        if tied {
            first[0] = first[1];
        }
        let found = pairwise(&first, &run(m, 7.0)).expect("a pair");
        assert_eq!(found.exact.is_none(), found.p(Sides::Both) == found.normal.both);
        found.exact.is_some()
    };
    assert!(counted(30, 30, false) && !counted(30, 31, false));
    assert!(counted(20, 20, true) && !counted(20, 21, true));
    assert!(counted(2, 450, false) && !counted(2, 451, false));
}

// What the comment on `pairwise` says of the normal shape, from another count of the arrangements.
#[test]
fn far_out_the_normal_p_value_is_as_much_too_large_as_is_said() {
    let sizes = [(31, 31, [1.05, 1.23, 1.58]), (21, 21, [1.07, 1.35, 1.99]), (5, 181, [1.32, 2.80, 9.1])];
    for (n, m, factors) in sizes {
        for (level, factor) in [0.01, 0.001, 0.0001].into_iter().zip(factors) {
            let exact = |u: usize| rank_counts::rank_sum(u as f64, n, m).expect("a count").two_sided();
            let u = (0..n * m / 2).rev().find(|u| exact(*u) <= level).expect("a value");
            let normal = large_samples::rank_sum(u as f64, n, m, &[], Continuity::Uncorrected);
            let ratio = normal.expect("a tail").two_sided() / exact(u);
            assert!((ratio / factor - 1.0).abs() < 0.006, "{n} {m} {level}: {ratio}");
        }
    }
}

#[test]
fn three_against_three_cannot_reach_five_per_cent() {
    // 1 / C(n+m, n): 20, 70, 6 and C(100, 50) = 1.0089e29 ways.
    for (n, m, ways) in [(3, 3, 20.0), (4, 4, 70.0), (5, 1, 6.0), (50, 50, 1.008_913_445_455_641_9e29)] {
        agrees(smallest_p(n, m, Sides::Both).expect("a p-value"), 2.0 / ways, 1e-13, "both");
        agrees(smallest_p(n, m, Sides::Less).expect("a p-value"), 1.0 / ways, 1e-13, "less");
    }
    assert_eq!(smallest_p(1, 1, Sides::Both), Ok(1.0));
    assert_eq!(smallest_p(1_000_000, 1_000_000, Sides::Both), Ok(0.0));
    // It is reached where all values of one group exceed those of the other, and with ties not undercut.
    for case in cases("ranks/pairwise") {
        let (first, second) = (list(&case["first"]), list(&case["second"]));
        let least = smallest_p(first.len(), second.len(), Sides::Both).expect("a p-value");
        let found = pairwise(&first, &second).expect("a pair");
        assert!(found.p(Sides::Both) >= least * (1.0 - 1e-12), "{case}");
        let apart: Vec<f64> = (0..second.len()).map(|i| 1e6 + i as f64).collect();
        let below: Vec<f64> = (0..first.len()).map(|i| i as f64).collect();
        agrees(pairwise(&below, &apart).expect("a pair").p(Sides::Both), least, 1e-12, "separate groups");
    }
}

#[test]
fn what_cannot_be_ranked_is_named() {
    let said = |error: CannotRank| error.to_string();
    let joint = |groups: &[&[f64]]| {
        let groups: Vec<Vec<f64>> = groups.iter().map(|values| values.to_vec()).collect();
        said(JointRanks::of(&groups).expect_err("no ranks"))
    };
    assert_eq!(joint(&[&[1.0]]), "there are 1 groups, and a comparison needs at least 2");
    assert_eq!(joint(&[&[1.0], &[]]), "group 2 has no observation");
    assert_eq!(joint(&[&[1.0], &[2.0, f64::NAN]]), "group 2 has the value NaN, which is no finite number");
    let tied = "all values of groups 1, 2 and 3 are equal, so there is nothing to rank";
    assert_eq!(joint(&[&[2.0], &[2.0, 2.0], &[2.0]]), tied);
    let alone = pairwise(&[0.0, -0.0], &[0.0]).expect_err("no ranks");
    assert_eq!(said(alone.clone()), "all values of groups 1 and 2 are equal, so there is nothing to rank");
    assert_eq!(alone.among(&[4, 2]), CannotRank::AllTied { groups: vec![4, 2] });
    let empty = pairwise(&[], &[1.0]).expect_err("no ranks").among(&[4, 2]);
    assert_eq!(empty, CannotRank::EmptyGroup { group: 4 });
    let infinite = pairwise(&[1.0], &[f64::INFINITY]).expect_err("no ranks").among(&[4, 2]);
    assert_eq!(infinite, CannotRank::NotFinite { group: 2, value: f64::INFINITY });

    let ranks = JointRanks::of(&[vec![1.0], vec![2.0]]).expect("ranks");
    let refused = |coefficients: &[f64]| said(ranks.test(coefficients).expect_err("no contrast"));
    assert_eq!(refused(&[1.0]), "1 coefficients were given for 2 groups");
    let no_contrast =
        "the coefficients are no contrast: they must be finite, not all 0, and sum to 0; their sum is ";
    assert_eq!(refused(&[1.0, 1.0]), format!("{no_contrast}2"));
    assert_eq!(refused(&[0.0, 0.0]), format!("{no_contrast}0"));
    assert_eq!(refused(&[f64::NAN, 1.0]), format!("{no_contrast}NaN"));
    assert!(refused(&[f64::MAX, -f64::MAX]).starts_with(no_contrast));

    let mut range = Family::new(3).expect("a range");
    assert!(steel_dwass(f64::NAN, &mut range).is_err() && steel_dwass_critical(2.0, &mut range).is_err());
    assert!(steel_loadings(0, &[1]).is_err() && steel_loadings(1, &[0]).is_err());
    assert!(steel(f64::INFINITY, &[0.5], Sides::Both).is_err() && smallest_p(0, 3, Sides::Both).is_err());
}
