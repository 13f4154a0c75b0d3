//! Time per call of each distribution function, native. `cargo bench --bench numerics`.
//!
//! Each row is the call that it is named for: tails near 1 %, far tails, critical values. Nothing is remembered from one
//! call to the next.

use divan::{Bencher, black_box};
use levelwise::numerics::distributions::many_to_one::{self, Sides};
use levelwise::numerics::distributions::multivariate_t::{self, Effort};
use levelwise::numerics::distributions::{
    amalgamated_means, beta, chi_squared, fisher_f, noncentral_chi_squared, noncentral_f, noncentral_t,
    normal, rank_counts, student_t, studentized_maximum, studentized_range,
};
use std::fmt;

fn main() {
    divan::main();
}

const INFINITY: f64 = f64::INFINITY;
const BOTH: Sides = Sides::Both;
/// Loadings of comparisons with a control as large as every other group.
const EQUAL_5: [f64; 5] = [std::f64::consts::FRAC_1_SQRT_2; 5];
const EQUAL_50: [f64; 50] = [std::f64::consts::FRAC_1_SQRT_2; 50];

/// A call with its name.
struct Case {
    name: &'static str,
    call: fn(),
}

impl fmt::Display for Case {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.name)
    }
}

/// The calls as written, with arguments that the compiler cannot look into.
macro_rules! cases {
    ($($module:ident::$function:ident($($argument:expr),* $(,)?)),* $(,)?) => {
        [$(Case {
            name: concat!(stringify!($module), "::", stringify!($function), "(", stringify!($($argument),*), ")"),
            call: || {
                let answer = $module::$function($(black_box($argument)),*);
                black_box(answer.expect("an answer"));
            },
        }),*]
    };
}

fn time(bencher: Bencher, case: &Case) {
    bencher.bench(case.call);
}

#[divan::bench(args = cases![
    normal::cdf(-2.3),
    normal::sf(2.3),
    normal::sf(30.0),
    normal::quantile(0.01),
    normal::upper_quantile(1e-20),
    student_t::cdf(-2.8, 10.0),
    student_t::sf(2.8, 10.0),
    student_t::sf(2.4, 1e5),
    student_t::quantile(0.01, 10.0),
    student_t::upper_quantile(1e-20, 10.0),
    fisher_f::cdf(0.05, 3.0, 40.0),
    fisher_f::sf(4.3, 3.0, 40.0),
    fisher_f::sf(1.9, 19.0, 980.0),
    fisher_f::quantile(0.01, 3.0, 40.0),
    fisher_f::upper_quantile(0.01, 19.0, 980.0),
    chi_squared::cdf(0.3, 5.0),
    chi_squared::sf(15.0, 5.0),
    chi_squared::sf(1100.0, 1000.0),
    chi_squared::quantile(0.01, 5.0),
    chi_squared::upper_quantile(0.01, 5.0),
    beta::cdf(0.03, 2.0, 5.0),
    beta::sf(0.7, 2.0, 5.0),
    beta::quantile(0.01, 2.0, 5.0),
    beta::upper_quantile(0.01, 2.0, 5.0),
])]
fn central(bencher: Bencher, case: &Case) {
    time(bencher, case);
}

#[divan::bench(args = cases![
    noncentral_t::cdf(-1.0, 10.0, 1.5),
    noncentral_t::sf(5.0, 10.0, 1.5),
    noncentral_t::sf(35.0, 10.0, 30.0),
    noncentral_t::sf(4.0, INFINITY, 1.5),
    noncentral_t::quantile(0.01, 10.0, 1.5),
    noncentral_t::upper_quantile(0.01, 10.0, 30.0),
    noncentral_t::noncentrality(2.5, 10.0, 0.975),
    noncentral_f::cdf(0.5, 3.0, 40.0, 2.0),
    noncentral_f::sf(5.0, 3.0, 40.0, 2.0),
    noncentral_f::sf(50.0, 3.0, 40.0, 100.0),
    noncentral_f::sf(1000.0, 3.0, 40.0, 3000.0),
    noncentral_f::quantile(0.01, 3.0, 40.0, 10.0),
    noncentral_f::upper_quantile(0.01, 3.0, 40.0, 10.0),
    noncentral_f::noncentrality(5.0, 3.0, 40.0, 0.975),
    noncentral_chi_squared::cdf(1.0, 3.0, 2.0),
    noncentral_chi_squared::sf(15.0, 3.0, 2.0),
    noncentral_chi_squared::sf(3100.0, 3.0, 3000.0),
    noncentral_chi_squared::quantile(0.01, 3.0, 10.0),
    noncentral_chi_squared::upper_quantile(0.01, 3.0, 10.0),
])]
fn noncentral(bencher: Bencher, case: &Case) {
    time(bencher, case);
}

#[divan::bench(args = cases![
    studentized_range::cdf(0.5, 3, 10.0),
    studentized_range::sf(5.3, 3, 10.0),
    studentized_range::sf(5.9, 20, 980.0),
    studentized_range::sf(5.9, 20, INFINITY),
    studentized_range::sf(30.0, 20, 10.0),
    studentized_range::sf(10.5, 200, 10.0),
    studentized_range::sf(7.0, 200, 980.0),
    studentized_range::sf(7.0, 200, INFINITY),
    studentized_range::quantile(0.05, 3, 10.0),
    studentized_range::upper_quantile(0.05, 3, 10.0),
    studentized_range::upper_quantile(0.05, 20, 980.0),
    studentized_range::upper_quantile(0.05, 200, 10.0),
    studentized_range::upper_quantile(0.05, 200, INFINITY),
    studentized_maximum::cdf(0.5, 10, 20.0),
    studentized_maximum::sf(3.6, 10, 20.0),
    studentized_maximum::sf(4.2, 190, INFINITY),
    studentized_maximum::quantile(0.05, 10, 20.0),
    studentized_maximum::upper_quantile(0.05, 10, 20.0),
])]
fn range_and_maximum(bencher: Bencher, case: &Case) {
    time(bencher, case);
}

#[divan::bench(args = cases![
    many_to_one::cdf(0.5, &EQUAL_5, 60.0, BOTH),
    many_to_one::sf(3.2, &EQUAL_5, 60.0, BOTH),
    many_to_one::sf(3.0, &EQUAL_5, 60.0, Sides::Greater),
    many_to_one::sf(3.2, &EQUAL_5, INFINITY, BOTH),
    many_to_one::sf(12.0, &EQUAL_5, 60.0, BOTH),
    many_to_one::sf(3.8, &EQUAL_50, 60.0, BOTH),
    many_to_one::quantile(0.05, &EQUAL_5, 60.0, BOTH),
    many_to_one::upper_quantile(0.05, &EQUAL_5, 60.0, BOTH),
    many_to_one::upper_quantile(0.05, &EQUAL_50, 60.0, BOTH),
    amalgamated_means::sf(2.4, &[8.0; 6], 8.0, 42.0),
    amalgamated_means::sf(2.4, &[5.0, 6.0, 9.0, 4.0], 7.0, 26.0),
    amalgamated_means::upper_quantile(0.05, &[8.0; 6], 8.0, 42.0),
])]
fn control(bencher: Bencher, case: &Case) {
    time(bencher, case);
}

/// All pairs of so many groups: their correlations have rank groups - 1.
#[divan::bench(args = [3, 4, 6], sample_count = 5)]
fn multivariate_t_sf_of_all_pairs(bencher: Bencher, groups: usize) {
    let correlation = all_pairs(groups);
    bencher.bench(|| multivariate_t::sf(black_box(3.0), &correlation, 30.0, BOTH, Effort::default()));
}

/// All pairs of so many groups: their correlations have rank groups - 1.
#[divan::bench(args = [3, 4, 6], sample_count = 5)]
fn multivariate_t_upper_quantile_of_all_pairs(bencher: Bencher, groups: usize) {
    let correlation = all_pairs(groups);
    let effort = Effort::default();
    bencher.bench(|| multivariate_t::upper_quantile(black_box(0.05), &correlation, 30.0, BOTH, effort));
}

#[divan::bench(args = cases![
    rank_counts::jonckheere(40.0, &[5, 5, 5]),
    rank_counts::jonckheere(2500.0, &[36, 36, 36]),
    rank_counts::jonckheere_with_ties(40.0, &[5, 5, 5], &[3, 1, 2, 2, 1, 1, 2, 3]),
    rank_counts::kruskal_wallis(&[2, 4, 6, 8, 10, 12, 14, 16, 18, 20], &[4, 3, 3], &[24, 40, 46]),
])]
fn counts(bencher: Bencher, case: &Case) {
    time(bencher, case);
}

/// Correlations of all differences of equally large groups.
fn all_pairs(groups: usize) -> Vec<Vec<f64>> {
    let pairs: Vec<_> = (0..groups).flat_map(|a| (a + 1..groups).map(move |b| (a, b))).collect();
    let half = |same: bool| if same { 0.5 } else { 0.0 };
    let row = |&(a, b): &(usize, usize)| {
        let one = |&(c, d): &(usize, usize)| half(a == c) + half(b == d) - half(a == d) - half(b == c);
        pairs.iter().map(one).collect()
    };
    pairs.iter().map(row).collect()
}
