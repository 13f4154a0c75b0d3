//! The noncentral t, F and chi-squared distributions, tails, quantiles and limits of the noncentrality.

use super::INFINITY;
use crate::table::{Table, point};
use levelwise::numerics::distributions::{noncentral_chi_squared, noncentral_f, noncentral_t};

const P: [f64; 7] = [1e-30, 1e-6, 0.025, 0.4, 0.8, 0.975, 0.999_99];

pub fn add(table: &mut Table) {
    add_noncentral_t(table);
    add_noncentral_f(table);
    add_noncentral_chi_squared(table);
}

fn add_noncentral_t(table: &mut Table) {
    for df in [0.5, 1.0, 4.0, 17.5, 120.0, 1e6, INFINITY] {
        for ncp in [-30.0, -2.0, 0.0, 1e-6, 0.7, 3.0, 11.0, 1e4] {
            for t in [-50.0, -3.0, -0.5, 0.0, 1.0, 2.9, 12.5, 200.0, 1e6] {
                point!(table, noncentral_t::cdf(t, df, ncp));
                point!(table, noncentral_t::sf(t, df, ncp));
            }
        }
        for ncp in [-2.0, 0.7, 11.0] {
            for p in P {
                point!(table, noncentral_t::quantile(p, df, ncp));
                point!(table, noncentral_t::upper_quantile(p, df, ncp));
            }
        }
        for t in [-8.0, 0.0, 0.3, 2.5, 40.0] {
            for p in [0.005, 0.025, 0.5, 0.975] {
                point!(table, noncentral_t::noncentrality(t, df, p));
            }
        }
    }
}

fn add_noncentral_f(table: &mut Table) {
    for (df1, df2) in [(1.0, 5.0), (2.0, 27.0), (3.5, 8.25), (6.0, INFINITY), (19.0, 980.0)] {
        for ncp in [0.0, 1e-3, 1.0, 9.5, 80.0, 5e3] {
            for f in [0.0, 1e-8, 0.2, 1.0, 3.3, 14.0, 250.0] {
                point!(table, noncentral_f::cdf(f, df1, df2, ncp));
                point!(table, noncentral_f::sf(f, df1, df2, ncp));
            }
        }
        for ncp in [1.0, 80.0] {
            for p in P {
                point!(table, noncentral_f::quantile(p, df1, df2, ncp));
                point!(table, noncentral_f::upper_quantile(p, df1, df2, ncp));
            }
        }
        for f in [0.5, 2.0, 9.0, 60.0] {
            for p in [0.005, 0.05, 0.5, 0.975] {
                point!(table, noncentral_f::noncentrality(f, df1, df2, p));
            }
        }
    }
}

fn add_noncentral_chi_squared(table: &mut Table) {
    for df in [0.5, 1.0, 4.0, 33.0, 1e4] {
        for x in [0.7, 28.0, 1.1e4] {
            for p in [1e-6, 0.025, 0.5, 0.975] {
                point!(table, noncentral_chi_squared::noncentrality(x, df, p));
            }
        }
        for ncp in [0.0, 1e-3, 2.0, 30.0, 1e4] {
            for x in [0.0, 1e-6, 0.7, 5.0, 28.0, 160.0, 1.1e4] {
                point!(table, noncentral_chi_squared::cdf(x, df, ncp));
                point!(table, noncentral_chi_squared::sf(x, df, ncp));
            }
            for p in P {
                point!(table, noncentral_chi_squared::quantile(p, df, ncp));
                point!(table, noncentral_chi_squared::upper_quantile(p, df, ncp));
            }
        }
    }
}
