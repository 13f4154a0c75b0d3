//! Newman-Keuls and Ryan-Einot-Gabriel-Welsch, and the protected least significant difference.
//!
//! Sources: the etch rates were worked for this project by quadrature to the digits written here; brute force: the
//! procedures as they are carried out with critical values at one alpha, by `studentized_range::upper_quantile`.

use crate::comparisons::printed;
use crate::worked_examples::{etch, random, random_groups, summary};
use levelwise::methods::multiplicity::protected;
use levelwise::methods::multiplicity::ranges::{OrderedMeans, Stepwise};
use levelwise::numerics::distributions::{student_t, studentized_range};

const BOTH: [Stepwise; 2] = [Stepwise::NewmanKeuls, Stepwise::RyanEinotGabrielWelsch];

struct Layout {
    means: Vec<f64>,
    n: Vec<usize>,
    ms_within: f64,
    df: f64,
}

impl Layout {
    fn of(groups: &[Vec<f64>]) -> Layout {
        let summary = summary(groups);
        let pooled = summary.pooled().unwrap();
        let means = summary.groups.iter().map(|group| group.mean).collect();
        let n = summary.groups.iter().map(|group| group.n).collect();
        Layout { means, n, ms_within: pooled.variance, df: pooled.df }
    }

    fn p(&self, procedure: Stepwise) -> Vec<f64> {
        let means = OrderedMeans { means: &self.means, n: &self.n, ms_within: self.ms_within, df: self.df };
        means.adjusted_p(procedure).unwrap()
    }

    fn q(&self, i: usize, j: usize) -> f64 {
        let halves = 0.5 * (1.0 / self.n[i] as f64 + 1.0 / self.n[j] as f64);
        (self.means[i] - self.means[j]).abs() / (self.ms_within * halves).sqrt()
    }
}

#[test]
fn the_etch_rates_give_the_values_computed_for_them() {
    let layout = Layout::of(&etch());
    // The order there is 180-160, 200-160, 200-180, 220-160, 220-180, 220-200.
    let ordered = |p: Vec<f64>| [0, 1, 3, 2, 4, 5].map(|i| p[i]);
    let welsch = ordered(layout.p(Stepwise::RyanEinotGabrielWelsch));
    let expected = [".0127913", "2.39263e-5", ".00922738", "2.0908e-9", "4.8842e-8", "5.36766e-6"];
    printed(&welsch, &expected, "Ryan-Einot-Gabriel-Welsch");
    let newman = ordered(layout.p(Stepwise::NewmanKeuls));
    printed(&[newman[0], newman[2]], &[".00641622", ".00462438"], "Newman-Keuls");
}

/// Layouts of many shapes; with 1 to 3 degrees of freedom the critical values of fewer means are larger.
fn layouts() -> Vec<Layout> {
    let mut stream = random(11);
    let mut layouts = Vec::new();
    for sizes in
        [&[3, 3][..], &[4, 4, 4], &[5, 5, 5, 5], &[2, 2, 2, 2, 2], &[6, 6, 6, 6, 6, 6], &[3, 9, 4, 20, 2]]
    {
        for spread in [0.0, 0.7, 2.0, 6.0] {
            layouts.push(Layout::of(&random_groups(sizes, spread, &mut stream)));
            let few = Layout {
                df: [1.0, 2.0, 3.0][layouts.len() % 3],
                ..Layout::of(&random_groups(sizes, spread, &mut stream))
            };
            layouts.push(few);
        }
    }
    layouts
}

/// The pairs (i < j) that are significant at `alpha`, by the procedure as it is carried out.
fn significant(layout: &Layout, procedure: Stepwise, alpha: f64) -> Vec<bool> {
    let k = layout.means.len();
    let mut order: Vec<usize> = (0..k).collect();
    order.sort_by(|&i, &j| layout.means[i].total_cmp(&layout.means[j]));
    let mut critical = vec![0.0_f64; k + 1];
    for p in 2..=k {
        let level = match procedure {
            Stepwise::RyanEinotGabrielWelsch if p + 2 <= k => {
                1.0 - libm::pow(1.0 - alpha, p as f64 / k as f64)
            }
            _ => alpha,
        };
        let own = studentized_range::upper_quantile(level, p, layout.df).unwrap();
        critical[p] = if procedure == Stepwise::NewmanKeuls { own } else { own.max(critical[p - 1]) };
    }
    // Of the range, by the largest q inside, and of the pair at its ends, by its own.
    let (mut of_range, mut found) = (vec![vec![false; k]; k], vec![vec![false; k]; k]);
    for p in (2..=k).rev() {
        for low in 0..=k - p {
            let high = low + p - 1;
            let inside = (low..=high).flat_map(|a| (a + 1..=high).map(move |b| (a, b)));
            let largest = inside.map(|(a, b)| layout.q(order[a], order[b])).fold(0.0, f64::max);
            let within_none = !(0..=low).any(|l| (high..k).any(|h| (l, h) != (low, high) && !of_range[l][h]));
            of_range[low][high] = within_none && largest >= critical[p];
            found[low][high] = within_none && layout.q(order[low], order[high]) >= critical[p];
        }
    }
    let rank = |i: usize| order.iter().position(|&other| other == i).unwrap();
    let pairs = (0..k).flat_map(|i| (i + 1..k).map(move |j| (i, j)));
    pairs.map(|(i, j)| found[rank(i).min(rank(j))][rank(i).max(rank(j))]).collect()
}

#[test]
fn adjusted_p_values_decide_as_the_procedures_do_at_every_alpha() {
    let mut counts = [0, 0];
    for layout in layouts() {
        for procedure in BOTH {
            let p = layout.p(procedure);
            for alpha in [0.001, 0.01, 0.05, 0.2, 0.5] {
                let decided: Vec<bool> = p.iter().map(|p| *p <= alpha).collect();
                assert_eq!(decided, significant(&layout, procedure, alpha), "{procedure:?} {alpha} {p:?}");
                decided.iter().for_each(|yes| counts[usize::from(*yes)] += 1);
            }
        }
    }
    assert!(counts.iter().all(|count| *count > 200), "both decisions occur: {counts:?}");
}

#[test]
fn p_values_lie_between_the_raw_ones_and_one_and_welschs_are_the_larger() {
    for layout in layouts() {
        let k = layout.means.len();
        let [newman, welsch] = BOTH.map(|procedure| layout.p(procedure));
        let pairs: Vec<(usize, usize)> = (0..k).flat_map(|i| (i + 1..k).map(move |j| (i, j))).collect();
        for (row, &(i, j)) in pairs.iter().enumerate() {
            let raw = 2.0 * student_t::sf(layout.q(i, j) / 2_f64.sqrt(), layout.df).unwrap();
            assert!(
                newman[row] >= raw * (1.0 - 1e-14) && welsch[row] <= 1.0,
                "{} {raw} {}",
                newman[row],
                welsch[row]
            );
            assert!(newman[row] <= welsch[row] * (1.0 + 1e-12));
            if k == 2 {
                assert!((newman[row] / raw - 1.0).abs() < 1e-12 && (welsch[row] / raw - 1.0).abs() < 1e-12);
            }
        }
    }
}

#[test]
fn relabelling_another_unit_and_mirroring_change_nothing() {
    let groups = random_groups(&[4, 7, 3, 5, 6], 1.0, &mut random(12));
    let changed: Vec<Vec<f64>> =
        groups.iter().rev().map(|group| group.iter().map(|y| 30.0 - 8.0 * y).collect()).collect();
    let of = |i: usize, j: usize| i * (9 - i) / 2 + j - i - 1;
    for procedure in BOTH {
        let (one, other) = (Layout::of(&groups).p(procedure), Layout::of(&changed).p(procedure));
        for i in 0..5 {
            for j in i + 1..5 {
                let (p, q) = (one[of(i, j)], other[of(4 - j, 4 - i)]);
                assert!((p / q - 1.0).abs() < 1e-10, "{procedure:?}: {p} {q}");
            }
        }
    }
}

#[test]
fn what_cannot_be_ranged_is_refused_by_name() {
    let refused = |means: &[f64], n: &[usize], ms_within: f64, df: f64| {
        let layout = OrderedMeans { means, n, ms_within, df };
        layout.adjusted_p(Stepwise::NewmanKeuls).unwrap_err().to_string()
    };
    assert_eq!(refused(&[1.0], &[3], 1.0, 2.0), "number of means is 1, but must be from 2 to 1000");
    assert_eq!(refused(&[1.0, 2.0], &[3], 1.0, 2.0), "number of sizes is 1, but must be one for each mean");
    assert_eq!(refused(&[1.0, f64::NAN], &[3, 3], 1.0, 2.0), "means is NaN, but must be finite numbers");
    assert_eq!(
        refused(&[1.0, 2.0], &[3, 0], 1.0, 2.0),
        "n is 0, but must be at least 1 observation of each mean"
    );
    assert_eq!(refused(&[1.0, 2.0], &[3, 3], 0.0, 2.0), "ms_within is 0, but must be positive and finite");
    assert!(refused(&[1.0, 2.0], &[3, 3], 1.0, 0.0).starts_with("df is 0"));
}

#[test]
fn the_protected_difference_needs_both_tests() {
    assert_eq!(protected::adjusted(0.03, &[0.01, 0.03, 0.4]), [0.03, 0.03, 0.4]);
}

/// What the search among the ranges of fewer means takes for granted. Beyond a tail of 1 - 1e-4 the logarithm of the rest
/// has no digits to tell by.
#[test]
fn minus_the_logarithm_of_the_lower_tail_for_each_mean_rises_and_then_falls() {
    let mut families: Vec<studentized_range::Family> =
        (2..=40).map(|m| studentized_range::Family::new(m).unwrap()).collect();
    let (mut rising_and_falling, mut checked) = (0, 0);
    for df in [0.5, 1.0, 2.0, 3.0, 5.0, 9.0, 20.0, 100.0, f64::INFINITY] {
        for i in 0..30 {
            let q = 0.05 * libm::pow(1.3, f64::from(i));
            let upper = families.iter_mut().map(|family| family.sf(q, df).unwrap());
            let counts: Vec<f64> = upper.take_while(|p| (1e-290..0.9999).contains(p)).collect();
            let of_each = |(i, p): (usize, &f64)| -libm::log1p(-p) / (i + 2) as f64;
            let shares: Vec<f64> = counts.iter().enumerate().map(of_each).collect();
            let falls = shares.windows(2).position(|pair| pair[1] < pair[0] * (1.0 - 1e-11));
            let from = falls.unwrap_or(shares.len());
            let rises_again = shares.iter().skip(from).zip(shares.iter().skip(from + 1));
            assert!(
                rises_again.clone().all(|(one, next)| *next < one * (1.0 + 1e-11)),
                "{df} {q} {shares:?}"
            );
            checked += shares.len();
            rising_and_falling += usize::from(falls.is_some_and(|at| at > 0));
        }
    }
    assert!(checked > 2000 && rising_and_falling > 5, "{checked} {rising_and_falling}");
}
