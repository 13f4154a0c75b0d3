//! Properties of the distributions over wide ranges of their arguments: order, round trips, and the special cases in which two
//! of them are the same; and the words with which an argument outside its range is refused.

use crate::cases::relative_error;
use levelwise::numerics::OutOfDomain;
use levelwise::numerics::distributions::{
    beta, chi_squared, fisher_f, noncentral_chi_squared, noncentral_f, noncentral_t, normal, student_t,
};
use proptest::prelude::*;
use proptest::test_runner::RngSeed;

/// Log-uniform from `low` to `high`.
fn spread(low: f64, high: f64) -> impl Strategy<Value = f64> {
    (libm::log(low)..libm::log(high)).prop_map(libm::exp)
}

/// Degrees of freedom, infinity now and then.
fn df() -> impl Strategy<Value = f64> {
    prop_oneof![9 => spread(0.5, 1e6), 1 => Just(f64::INFINITY)]
}

/// `later` is not below `earlier`, up to a relative error.
fn ordered(earlier: f64, later: f64, error: f64) -> Result<(), TestCaseError> {
    prop_assert!(later >= earlier * (1.0 - error), "{earlier:e} {later:e}");
    Ok(())
}

/// The two are equal up to a relative error.
fn same(one: f64, other: f64, error: f64) -> Result<(), TestCaseError> {
    prop_assert!(relative_error(one, other) <= error, "{one:e} {other:e}");
    Ok(())
}

/// A quantile leads back to its probability; what a last bit of the quantile does is allowed beside the permitted error.
fn back(p: f64, x: f64, error: f64, tail: impl Fn(f64) -> f64) -> Result<(), TestCaseError> {
    if !(1e-300..1e300).contains(&x.abs()) {
        return Ok(());
    }
    let bits = 2.0 * f64::EPSILON;
    let rounding = (tail(x * (1.0 + bits)) - tail(x * (1.0 - bits))).abs() / p;
    let reached = tail(x);
    prop_assert!(relative_error(reached, p) <= error.max(rounding), "{x:e}: {p:e} {reached:e}");
    Ok(())
}

proptest! {
    #![proptest_config(ProptestConfig { rng_seed: RngSeed::Fixed(3), failure_persistence: None, ..ProptestConfig::with_cases(500) })]

    #[test]
    fn central_quantiles_go_back_in_both_tails(p in spread(1e-300, 0.5), df1 in df(), df2 in df(), a in spread(0.5, 1e7), b in spread(0.5, 1e7)) {
        back(p, normal::quantile(p).unwrap(), 1e-12, |x| normal::cdf(x).unwrap())?;
        back(p, normal::upper_quantile(p).unwrap(), 1e-12, |x| normal::sf(x).unwrap())?;
        back(p, student_t::quantile(p, df1).unwrap(), 1e-12, |x| student_t::cdf(x, df1).unwrap())?;
        back(p, student_t::upper_quantile(p, df1).unwrap(), 1e-12, |x| student_t::sf(x, df1).unwrap())?;
        back(p, chi_squared::quantile(p, a).unwrap(), 1e-12, |x| chi_squared::cdf(x, a).unwrap())?;
        back(p, chi_squared::upper_quantile(p, a).unwrap(), 1e-12, |x| chi_squared::sf(x, a).unwrap())?;
        back(p, beta::quantile(p, a, b).unwrap(), 1e-12, |x| beta::cdf(x.min(1.0), a, b).unwrap())?;
        back(p, beta::upper_quantile(p, a, b).unwrap(), 1e-12, |x| beta::sf(x.min(1.0), a, b).unwrap())?;
        if df1.is_finite() || df2.is_finite() {
            back(p, fisher_f::quantile(p, df1, df2).unwrap(), 1e-12, |x| fisher_f::cdf(x, df1, df2).unwrap())?;
            back(p, fisher_f::upper_quantile(p, df1, df2).unwrap(), 1e-12, |x| fisher_f::sf(x, df1, df2).unwrap())?;
        }
    }

    #[test]
    fn central_tails_are_ordered_in_every_argument(x in spread(1e-3, 100.0), more in 1.0..2.0f64, df1 in spread(0.5, 1e6), df2 in spread(0.5, 1e6)) {
        ordered(normal::sf(x * more).unwrap(), normal::sf(x).unwrap(), 1e-12)?;
        ordered(student_t::sf(x * more, df1).unwrap(), student_t::sf(x, df1).unwrap(), 1e-12)?;
        ordered(student_t::sf(x, df1 * more).unwrap(), student_t::sf(x, df1).unwrap(), 1e-12)?;
        ordered(chi_squared::sf(x * more, df1).unwrap(), chi_squared::sf(x, df1).unwrap(), 1e-12)?;
        ordered(chi_squared::sf(x, df1).unwrap(), chi_squared::sf(x, df1 * more).unwrap(), 1e-12)?;
        ordered(fisher_f::sf(x * more, df1, df2).unwrap(), fisher_f::sf(x, df1, df2).unwrap(), 1e-12)?;
        let share = x / 101.0;
        ordered(beta::sf((share * more).min(1.0), df1, df2).unwrap(), beta::sf(share, df1, df2).unwrap(), 1e-12)?;
        ordered(beta::sf(share, df1, df2).unwrap(), beta::sf(share, df1 * more, df2).unwrap(), 1e-12)?;
        ordered(beta::sf(share, df1, df2 * more).unwrap(), beta::sf(share, df1, df2).unwrap(), 1e-12)?;
    }

    #[test]
    fn infinite_degrees_of_freedom_are_the_limit(x in spread(1e-2, 5.0), df1 in spread(0.5, 1e3)) {
        same(student_t::sf(x, 1e16).unwrap(), normal::sf(x).unwrap(), 1e-12)?;
        same(student_t::sf(x, f64::INFINITY).unwrap(), normal::sf(x).unwrap(), 0.0)?;
        let chi_squared = chi_squared::sf(x * df1, df1).unwrap();
        prop_assume!(chi_squared > 1e-100);
        same(fisher_f::sf(x, df1, f64::INFINITY).unwrap(), chi_squared, 1e-12)?;
        same(fisher_f::sf(x, df1, 1e25).unwrap(), chi_squared, 1e-12)?;
        same(fisher_f::cdf(1.0 / x, f64::INFINITY, df1).unwrap(), chi_squared, 1e-11)?;
    }
}

proptest! {
    #![proptest_config(ProptestConfig { rng_seed: RngSeed::Fixed(4), failure_persistence: None, ..ProptestConfig::with_cases(100) })]

    #[test]
    fn noncentral_quantiles_go_back_in_both_tails(p in spread(1e-60, 0.5), df1 in spread(1.0, 1e4), df2 in df(), ncp in spread(1e-3, 1e4), sign in prop::sample::select(vec![-1.0, 1.0])) {
        let delta = sign * libm::sqrt(ncp);
        back(p, noncentral_t::quantile(p, df2, delta).unwrap(), 1e-10, |x| noncentral_t::cdf(x, df2, delta).unwrap())?;
        back(p, noncentral_t::upper_quantile(p, df2, delta).unwrap(), 1e-10, |x| noncentral_t::sf(x, df2, delta).unwrap())?;
        let (low, high) = (noncentral_f::quantile(p, df1, df2, ncp).unwrap(), noncentral_f::upper_quantile(p, df1, df2, ncp).unwrap());
        back(p, low, 1e-10, |x| noncentral_f::cdf(x, df1, df2, ncp).unwrap())?;
        back(p, high, 1e-10, |x| noncentral_f::sf(x, df1, df2, ncp).unwrap())?;
        let (low, high) = (noncentral_chi_squared::quantile(p, df1, ncp).unwrap(), noncentral_chi_squared::upper_quantile(p, df1, ncp).unwrap());
        back(p, low, 1e-10, |x| noncentral_chi_squared::cdf(x, df1, ncp).unwrap())?;
        back(p, high, 1e-10, |x| noncentral_chi_squared::sf(x, df1, ncp).unwrap())?;
    }

    #[test]
    fn noncentral_tails_are_ordered_and_add_to_one(x in spread(1e-2, 100.0), more in 1.0..1.5f64, df1 in spread(0.5, 1e4), df2 in df(), ncp in spread(1e-3, 1e3)) {
        let t = |x: f64, ncp: f64| noncentral_t::sf(x, df2, ncp).unwrap();
        let f = |x: f64, ncp: f64| noncentral_f::sf(x, df1, df2, ncp).unwrap();
        let chi_squared = |x: f64, ncp: f64| noncentral_chi_squared::sf(x, df1, ncp).unwrap();
        ordered(t(x * more, ncp), t(x, ncp), 1e-11)?;
        ordered(t(x, ncp), t(x, ncp * more), 1e-11)?;
        ordered(f(x * more, ncp), f(x, ncp), 1e-11)?;
        ordered(f(x, ncp), f(x, ncp * more), 1e-11)?;
        ordered(chi_squared(x * more, ncp), chi_squared(x, ncp), 1e-11)?;
        ordered(chi_squared(x, ncp), chi_squared(x, ncp * more), 1e-11)?;
        same(t(x, ncp) + noncentral_t::cdf(x, df2, ncp).unwrap(), 1.0, 1e-13)?;
        same(f(x, ncp) + noncentral_f::cdf(x, df1, df2, ncp).unwrap(), 1.0, 1e-12)?;
        same(chi_squared(x, ncp) + noncentral_chi_squared::cdf(x, df1, ncp).unwrap(), 1.0, 1e-12)?;
    }

    #[test]
    fn noncentral_distributions_coincide_in_their_special_cases(x in spread(1e-2, 10.0), df1 in spread(0.5, 1e3), df2 in df(), delta in spread(1e-2, 30.0)) {
        same(noncentral_t::sf(x, df2, 0.0).unwrap(), student_t::sf(x, df2).unwrap(), 1e-12)?;
        let central = fisher_f::sf(x, df1, df2).unwrap();
        prop_assume!(central > 1e-200);
        same(noncentral_f::sf(x, df1, df2, 0.0).unwrap(), central, 1e-12)?;
        same(noncentral_chi_squared::sf(x, df1, 0.0).unwrap(), chi_squared::sf(x, df1).unwrap(), 1e-12)?;
        let ncp = delta * delta;
        let chi_squared = noncentral_chi_squared::cdf(x * df1, df1, ncp).unwrap();
        prop_assume!(chi_squared > 1e-200);
        same(noncentral_f::cdf(x, df1, f64::INFINITY, ncp).unwrap(), chi_squared, 1e-11)?;
        let square = noncentral_f::sf(x * x, 1.0, df2, ncp).unwrap();
        same(noncentral_t::sf(x, df2, delta).unwrap() + noncentral_t::cdf(-x, df2, delta).unwrap(), square, 1e-11)?;
        same(noncentral_t::sf(x, f64::INFINITY, delta).unwrap(), normal::sf(x - delta).unwrap(), 1e-12)?;
    }

    #[test]
    fn a_solved_noncentrality_of_chi_squared_solves(x in spread(1e-2, 1e4), df in spread(0.5, 1e4), p in spread(1e-6, 0.999)) {
        let ncp = noncentral_chi_squared::noncentrality(x, df, p).unwrap();
        let reached = noncentral_chi_squared::cdf(x, df, ncp).unwrap();
        prop_assert!(relative_error(reached, p) < 1e-11 || ncp == 0.0 && reached <= p, "{reached:e} {p:e}");
        same(ncp, noncentral_f::noncentrality(x / df, df, f64::INFINITY, p).unwrap(), 1e-9)?;
    }
}

/// One case: what was computed, and the words of the refusal.
type Refusal = (Result<f64, OutOfDomain>, &'static str);

fn refused(cases: &[Refusal]) {
    for (found, expected) in cases {
        assert_eq!(found.as_ref().expect_err(expected).to_string(), *expected);
    }
}

const NAN: f64 = f64::NAN;
const INF: f64 = f64::INFINITY;

#[test]
fn central_distributions_say_which_argument_is_wrong_and_what_it_must_be() {
    refused(&[
        (normal::cdf(NAN), "x is NaN, but must be a finite number"),
        (normal::sf(INF), "x is inf, but must be a finite number"),
        (normal::quantile(1.5), "p is 1.5, but must be from 0 to 1"),
        (normal::upper_quantile(-0.5), "upper_p is -0.5, but must be from 0 to 1"),
        (student_t::cdf(-INF, 3.0), "t is -inf, but must be a finite number"),
        (
            student_t::cdf(1.0, 0.0),
            "df is 0, but must be greater than 0 (at least 0.001; infinity is allowed)",
        ),
        (student_t::sf(NAN, 3.0), "t is NaN, but must be a finite number"),
        (
            student_t::sf(1.0, -1.0),
            "df is -1, but must be greater than 0 (at least 0.001; infinity is allowed)",
        ),
        (student_t::quantile(NAN, 3.0), "p is NaN, but must be from 0 to 1"),
        (student_t::upper_quantile(2.0, 3.0), "upper_p is 2, but must be from 0 to 1"),
        (
            student_t::upper_quantile(0.2, NAN),
            "df is NaN, but must be greater than 0 (at least 0.001; infinity is allowed)",
        ),
        (chi_squared::cdf(-1.0, 3.0), "x is -1, but must be a finite number, at least 0"),
        (chi_squared::sf(1.0, INF), "df is inf, but must be greater than 0 (from 0.001 to 1e30)"),
        (chi_squared::quantile(-1.0, 3.0), "p is -1, but must be from 0 to 1"),
        (chi_squared::upper_quantile(0.5, 0.0), "df is 0, but must be greater than 0 (from 0.001 to 1e30)"),
        (fisher_f::cdf(-1.0, 1.0, 1.0), "f is -1, but must be a finite number, at least 0"),
        (
            fisher_f::sf(1.0, 0.0, 1.0),
            "df1 is 0, but must be greater than 0 (at least 0.001; infinity is allowed)",
        ),
        (
            fisher_f::quantile(0.5, 1.0, -2.0),
            "df2 is -2, but must be greater than 0 (at least 0.001; infinity is allowed)",
        ),
        (fisher_f::upper_quantile(1.1, 1.0, 1.0), "upper_p is 1.1, but must be from 0 to 1"),
        (beta::cdf(-0.5, 1.0, 1.0), "x is -0.5, but must be from 0 to 1"),
        (beta::sf(0.5, 0.0, 1.0), "a is 0, but must be greater than 0 (from 0.001 to 1e30)"),
        (beta::quantile(0.5, 1.0, INF), "b is inf, but must be greater than 0 (from 0.001 to 1e30)"),
        (beta::upper_quantile(NAN, 1.0, 1.0), "upper_p is NaN, but must be from 0 to 1"),
    ]);
}

#[test]
fn noncentral_distributions_say_which_argument_is_wrong_and_what_it_must_be() {
    refused(&[
        (noncentral_t::cdf(INF, 3.0, 1.0), "t is inf, but must be a finite number"),
        (noncentral_t::sf(1.0, 3.0, NAN), "ncp is NaN, but must be from -1e8 to 1e8"),
        (
            noncentral_t::quantile(0.5, 0.0, 1.0),
            "df is 0, but must be greater than 0 (at least 0.001; infinity is allowed)",
        ),
        (noncentral_t::upper_quantile(7.0, 3.0, 1.0), "upper_p is 7, but must be from 0 to 1"),
        (noncentral_t::upper_quantile(0.5, 3.0, 1e9), "ncp is 1000000000, but must be from -1e8 to 1e8"),
        (
            noncentral_t::noncentrality(1.0, 3.0, 1.0),
            "lower_p is 1, but must be greater than 0 and less than 1",
        ),
        (noncentral_t::noncentrality(1e9, 3.0, 0.5), "t is 1000000000, but must be from -1e8 to 1e8"),
        (noncentral_chi_squared::cdf(-1.0, 3.0, 1.0), "x is -1, but must be a finite number, at least 0"),
        (noncentral_chi_squared::sf(1.0, 3.0, -1.0), "ncp is -1, but must be from 0 to 1e7"),
        (
            noncentral_chi_squared::quantile(0.5, INF, 1.0),
            "df is inf, but must be greater than 0 (from 0.001 to 1e30)",
        ),
        (noncentral_chi_squared::upper_quantile(-1.0, 3.0, 1.0), "upper_p is -1, but must be from 0 to 1"),
        (
            noncentral_chi_squared::noncentrality(NAN, 3.0, 0.5),
            "x is NaN, but must be a finite number, at least 0",
        ),
        (
            noncentral_chi_squared::noncentrality(1.0, 3.0, 0.0),
            "lower_p is 0, but must be greater than 0 and less than 1",
        ),
        (
            noncentral_chi_squared::noncentrality(2e7, 3.0, 0.5),
            "x is 20000000, but must be so small that the noncentrality stays below 1e7",
        ),
        (noncentral_f::cdf(NAN, 1.0, 1.0, 1.0), "f is NaN, but must be a finite number, at least 0"),
        (noncentral_f::sf(1.0, INF, 1.0, 1.0), "df1 is inf, but must be greater than 0 (from 0.001 to 1e30)"),
        (
            noncentral_f::quantile(0.5, 1.0, 0.0, 1.0),
            "df2 is 0, but must be greater than 0 (at least 0.001; infinity is allowed)",
        ),
        (noncentral_f::upper_quantile(0.5, 1.0, 1.0, 1e8), "ncp is 100000000, but must be from 0 to 1e7"),
        (
            noncentral_f::noncentrality(1.0, 1.0, 1.0, NAN),
            "lower_p is NaN, but must be greater than 0 and less than 1",
        ),
        (
            noncentral_f::noncentrality(1e9, 3.0, 50.0, 0.5),
            "f is 1000000000, but must be so small that the noncentrality stays below 1e7",
        ),
    ]);
}
