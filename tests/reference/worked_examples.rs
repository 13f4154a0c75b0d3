//! Data sets that several checks of comparisons share, and random layouts.
//!
//! Sources: the etch rates are those of Montgomery, Design and Analysis of Experiments, table 3.1; the blood counts
//! those of Dunnett (1955), from memory; the doses were made up for these tests.

use levelwise::numerics::distributions::normal;
use levelwise::numerics::random::{Stream, Streams};
use levelwise::study::{Estimates, Sample, Summary, Variances};

/// Power 160, 180, 200, 220.
pub fn etch() -> Vec<Vec<f64>> {
    whole(&[
        &[575, 542, 530, 539, 570],
        &[565, 593, 590, 579, 610],
        &[600, 651, 610, 637, 629],
        &[725, 700, 715, 685, 710],
    ])
}

/// Control, A, B.
pub fn blood() -> Vec<Vec<f64>> {
    vec![
        vec![7.40, 8.50, 7.20, 8.24, 9.84, 8.32],
        vec![9.76, 8.80, 7.68, 9.36],
        vec![12.80, 9.68, 12.16, 9.20, 10.55],
    ]
}

/// Doses 0, 10, 30, 100.
pub fn doses() -> Vec<Vec<f64>> {
    whole(&[&[12, 15, 14, 11, 13, 13], &[14, 16, 15, 13, 17], &[18, 17, 15, 19, 16], &[19, 21, 18, 22]])
}

fn whole(groups: &[&[i32]]) -> Vec<Vec<f64>> {
    groups.iter().map(|group| group.iter().map(|y| f64::from(*y)).collect()).collect()
}

pub fn summary(groups: &[Vec<f64>]) -> Summary {
    Sample { origin: 0.0, groups: groups.to_vec() }.summary()
}

pub fn estimates(groups: &[Vec<f64>], variances: Variances) -> Estimates {
    let labels: Vec<String> = (0..groups.len()).map(|i| format!("L{i}")).collect();
    Estimates::one_way(&labels, &summary(groups), variances).unwrap()
}

/// Random numbers for one test; the same every time.
pub fn random(seed: u64) -> Stream {
    Streams::new(seed, "test layouts").stream(0)
}

/// A standard normal number.
pub fn standard_normal(stream: &mut Stream) -> f64 {
    normal::quantile(stream.uniform()).unwrap()
}

/// Groups of these sizes, with some spread of their means.
pub fn random_groups(sizes: &[usize], spread: f64, stream: &mut Stream) -> Vec<Vec<f64>> {
    let group = |&n: &usize| {
        let mean = spread * standard_normal(stream);
        (0..n).map(|_| mean + standard_normal(stream)).collect()
    };
    sizes.iter().map(group).collect()
}
