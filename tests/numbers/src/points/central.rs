//! The normal, t, chi-squared, F and beta distributions, and the same through the traits.

use super::{INFINITY, PROBABILITIES};
use crate::table::{Table, point};
use levelwise::numerics::distributions::continuous::Continuous;
use levelwise::numerics::distributions::{beta, chi_squared, fisher_f, normal, student_t};
use statrs::distribution::ContinuousCDF;

pub fn add(table: &mut Table) {
    add_normal(table);
    add_student_t(table);
    add_chi_squared(table);
    add_fisher_f(table);
    add_beta(table);
    add_continuous(table);
}

fn add_normal(table: &mut Table) {
    for x in [
        -1e300, -38.5, -37.0, -20.0, -8.3, -5.0, -3.0, -1.96, -1.0, -0.4, -1e-9, 0.0, 1e-300, 0.1, 0.67, 1.5,
        2.6, 4.0, 6.1, 9.0, 15.0, 30.0, 38.4, 50.0,
    ] {
        point!(table, normal::cdf(x));
        point!(table, normal::sf(x));
    }
    for p in PROBABILITIES.into_iter().chain([5e-324, 1e-50, 0.05, 0.3, 0.499_999_99, 0.61, 0.9, 0.99]) {
        point!(table, normal::quantile(p));
        point!(table, normal::upper_quantile(p));
    }
}

fn add_student_t(table: &mut Table) {
    for df in [0.001, 0.1, 0.5, 1.0, 2.0, 3.7, 10.0, 45.5, 200.0, 1e5, 1e12, INFINITY] {
        for t in
            [-1e150, -1e8, -40.0, -9.5, -3.0, -1.1, -0.2, 0.0, 1e-12, 0.6, 2.2, 4.75, 17.0, 36.0, 1e4, 1e120]
        {
            point!(table, student_t::cdf(t, df));
            point!(table, student_t::sf(t, df));
        }
        for p in PROBABILITIES {
            point!(table, student_t::quantile(p, df));
            point!(table, student_t::upper_quantile(p, df));
        }
    }
}

fn add_chi_squared(table: &mut Table) {
    for df in [0.001, 0.3, 1.0, 2.0, 3.0, 7.5, 25.0, 100.0, 1234.0, 1e6, 1e15] {
        for x in [0.0, 1e-300, 1e-30, 1e-5, 0.04, 0.5, 1.0, 3.84, 9.2, 30.0, 105.0, 700.0, 1300.0, 1.002e6] {
            point!(table, chi_squared::cdf(x, df));
            point!(table, chi_squared::sf(x, df));
        }
        for p in PROBABILITIES {
            point!(table, chi_squared::quantile(p, df));
            point!(table, chi_squared::upper_quantile(p, df));
        }
    }
}

fn add_fisher_f(table: &mut Table) {
    for (df1, df2) in [
        (0.01, 0.02),
        (1.0, 1.0),
        (1.0, 12.0),
        (2.0, 2.0),
        (2.5, 7.25),
        (3.0, 40.0),
        (5.0, 1e6),
        (19.0, 980.0),
        (4.0, INFINITY),
        (INFINITY, 8.0),
        (300.0, 3.0),
        (1e9, 1e9),
    ] {
        for f in [0.0, 1e-200, 1e-12, 0.01, 0.3, 0.9, 1.0, 1.000_02, 1.8, 4.5, 22.0, 350.0, 1e6, 1e100] {
            point!(table, fisher_f::cdf(f, df1, df2));
            point!(table, fisher_f::sf(f, df1, df2));
        }
        for p in PROBABILITIES {
            point!(table, fisher_f::quantile(p, df1, df2));
            point!(table, fisher_f::upper_quantile(p, df1, df2));
        }
    }
}

fn add_beta(table: &mut Table) {
    for (a, b) in [
        (0.001, 0.002),
        (0.5, 0.5),
        (1.0, 1.0),
        (0.5, 30.0),
        (2.0, 3.5),
        (12.0, 0.7),
        (40.0, 60.0),
        (1e3, 1.0),
        (1e6, 2e6),
        (1e12, 1e10),
    ] {
        for x in [0.0, 1e-300, 1e-20, 1e-6, 0.02, 0.25, 0.333_333, 0.5, 0.7, 0.95, 0.990_1, 0.999_999, 1.0] {
            point!(table, beta::cdf(x, a, b));
            point!(table, beta::sf(x, a, b));
        }
        for p in PROBABILITIES {
            point!(table, beta::quantile(p, a, b));
            point!(table, beta::upper_quantile(p, a, b));
        }
    }
}

/// The traits pass everything on, so that a few points say enough.
fn add_continuous(table: &mut Table) {
    let distributions = [
        Ok(Continuous::normal()),
        Continuous::student_t(4.5),
        Continuous::fisher_f(3.0, 17.0),
        Continuous::chi_squared(6.0),
        Continuous::beta(2.0, 5.0),
        Continuous::studentized_range(4, 12.0),
    ];
    for distribution in distributions.into_iter().flatten() {
        for x in [-2.0, 0.1, 0.8, 3.0, 1e3] {
            table.add("continuous::cdf", &[&distribution, &x], distribution.cdf(x));
            table.add("continuous::sf", &[&distribution, &x], distribution.sf(x));
        }
        for p in [1e-9, 0.3, 0.99] {
            table.add("continuous::inverse_cdf", &[&distribution, &p], distribution.inverse_cdf(p));
        }
    }
}
