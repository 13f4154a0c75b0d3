//! Distributions of several comparisons together: range, maximum modulus, many to one, amalgamated means, multivariate t.

use super::INFINITY;
use crate::table::{Table, point};
use levelwise::numerics::distributions::many_to_one::{self, Sides};
use levelwise::numerics::distributions::multivariate_t::{self, Effort};
use levelwise::numerics::distributions::{amalgamated_means, studentized_maximum, studentized_range};

pub fn add(table: &mut Table) {
    add_studentized_range(table);
    add_studentized_maximum(table);
    add_many_to_one(table);
    add_amalgamated_means(table);
    add_multivariate_t(table);
}

fn add_studentized_range(table: &mut Table) {
    for groups in [2, 3, 5, 20, 200, 1000] {
        for df in [0.1, 1.0, 3.5, 10.0, 60.0, 1e5, INFINITY] {
            for q in [0.0, 1e-3, 0.6, 2.0, 3.3, 4.9, 7.5, 13.0, 40.0, 1e4] {
                point!(table, studentized_range::cdf(q, groups, df));
                point!(table, studentized_range::sf(q, groups, df));
            }
            for p in [1e-12, 0.01, 0.3, 0.95] {
                point!(table, studentized_range::quantile(p, groups, df));
                point!(table, studentized_range::upper_quantile(p, groups, df));
            }
        }
    }
    add_studentized_range_family(table);
}

fn add_studentized_range_family(table: &mut Table) {
    for groups in [2, 20, 200] {
        let Ok(mut family) = studentized_range::Family::new(groups) else { continue };
        for df in [2.5, 40.0, INFINITY] {
            for q in [0.4, 3.3, 6.0, 18.0] {
                table.add("studentized_range::Family::sf", &[&groups, &df, &q], family.sf(q, df));
            }
            let found = family.upper_quantile(0.05, df);
            table.add("studentized_range::Family::upper_quantile", &[&groups, &df], found);
        }
    }
}

fn add_studentized_maximum(table: &mut Table) {
    for count in [1, 3, 10, 190] {
        for df in [0.1, 1.0, 5.5, 30.0, 1e5, INFINITY] {
            for m in [0.0, 1e-3, 0.8, 2.1, 3.6, 6.0, 15.0, 500.0] {
                point!(table, studentized_maximum::cdf(m, count, df));
                point!(table, studentized_maximum::sf(m, count, df));
            }
            for p in [1e-12, 0.01, 0.3, 0.95] {
                point!(table, studentized_maximum::quantile(p, count, df));
                point!(table, studentized_maximum::upper_quantile(p, count, df));
            }
        }
    }
}

fn add_many_to_one(table: &mut Table) {
    let families: [&[f64]; 6] = [
        &[0.5],
        &[0.7, 0.7, 0.7],
        &[0.1, 0.45, 0.6, 0.7, 0.9],
        &[-0.3, 0.0, 0.8],
        &[0.999, 0.999, 0.999],
        &[0.707; 50],
    ];
    for loadings in families {
        for df in [0.5, 2.0, 9.5, 60.0, INFINITY] {
            for sides in [Sides::Both, Sides::Greater] {
                for d in [0.0, 0.3, 1.4, 2.3, 3.1, 5.0, 9.0, 60.0] {
                    point!(table, many_to_one::cdf(d, loadings, df, sides));
                    point!(table, many_to_one::sf(d, loadings, df, sides));
                }
                for p in [1e-9, 0.05, 0.9] {
                    point!(table, many_to_one::quantile(p, loadings, df, sides));
                    point!(table, many_to_one::upper_quantile(p, loadings, df, sides));
                }
            }
            for d in [-20.0, -2.0, -0.4] {
                point!(table, many_to_one::cdf(d, loadings, df, Sides::Greater));
                point!(table, many_to_one::sf(d, loadings, df, Sides::Greater));
            }
        }
    }
}

fn add_amalgamated_means(table: &mut Table) {
    let designs: [(&[f64], f64); 4] =
        [(&[1.0], 1.0), (&[8.0; 3], 8.0), (&[8.0; 6], 16.0), (&[5.0, 6.0, 9.0, 4.0], 7.0)];
    for (sizes, control) in designs {
        for df in [2.0, 12.5, INFINITY] {
            for t in [-4.0, -0.3, 0.0, 1.2, 2.6, 7.0] {
                point!(table, amalgamated_means::cdf(t, sizes, control, df));
                point!(table, amalgamated_means::sf(t, sizes, control, df));
            }
            for p in [1e-6, 0.05, 0.7] {
                point!(table, amalgamated_means::quantile(p, sizes, control, df));
                point!(table, amalgamated_means::upper_quantile(p, sizes, control, df));
            }
        }
    }
}

/// Ranks 1 to 4: the last is by lattices.
fn add_multivariate_t(table: &mut Table) {
    let effort = Effort { most_points: 256, ..Effort::default() };
    for correlation in &[vec![vec![1.0]], all_pairs(3), all_pairs(4), all_pairs(5)] {
        let statistics = correlation.len();
        for df in [1.0, 8.0, INFINITY] {
            for sides in [Sides::Both, Sides::Greater] {
                for c in [0.5, 2.0, 3.5, 8.0] {
                    let sf = multivariate_t::sf(c, correlation, df, sides, effort);
                    table.add("multivariate_t::sf", &[&c, &statistics, &df, &sides], sf);
                    let cdf = multivariate_t::cdf(c, correlation, df, sides, effort);
                    table.add("multivariate_t::cdf", &[&c, &statistics, &df, &sides], cdf);
                }
                for p in [1e-4, 0.05] {
                    let upper = multivariate_t::upper_quantile(p, correlation, df, sides, effort);
                    table.add("multivariate_t::upper_quantile", &[&p, &statistics, &df, &sides], upper);
                }
                let lower = multivariate_t::quantile(0.9, correlation, df, sides, effort);
                table.add("multivariate_t::quantile", &[&0.9, &statistics, &df, &sides], lower);
            }
            for (low, high) in [(-1.0, 2.0), (0.5, 3.0), (-INFINITY, 1.5)] {
                let (lower, upper) = (vec![low; statistics], vec![high; statistics]);
                let inside = multivariate_t::rectangle(&lower, &upper, correlation, df, effort);
                table.add("multivariate_t::rectangle", &[&low, &high, &statistics, &df], inside);
            }
        }
    }
}

/// Correlations of all differences of `groups` equally large groups; their rank is `groups` - 1.
fn all_pairs(groups: usize) -> Vec<Vec<f64>> {
    let pairs: Vec<_> = (0..groups).flat_map(|a| (a + 1..groups).map(move |b| (a, b))).collect();
    let half = |same: bool| if same { 0.5 } else { 0.0 };
    let row = |&(a, b): &(usize, usize)| {
        let one = |&(c, d): &(usize, usize)| half(a == c) + half(b == d) - half(a == d) - half(b == c);
        pairs.iter().map(one).collect()
    };
    pairs.iter().map(row).collect()
}
