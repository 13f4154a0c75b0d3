//! Properties that hold for every argument: no panic, no NaN, tails that add to 1, round trips.

use levelwise::numerics::OutOfDomain;
use levelwise::numerics::distributions::{beta, chi_squared, fisher_f, normal, student_t};
use proptest::prelude::*;

/// Any f64 at all, with the troublesome ones often.
fn any_number() -> impl Strategy<Value = f64> {
    prop_oneof![
        3 => any::<f64>(),
        1 => prop::sample::select(vec![
            0.0, -0.0, 1.0, -1.0, 0.5, 2.0, 1e-308, 5e-324, 1e308, f64::MAX, f64::MIN, f64::INFINITY,
            f64::NEG_INFINITY, f64::NAN, 1e-20, 1e20, 1e30, 1.0 - f64::EPSILON, 40.0,
        ]),
        3 => -50.0..50.0,
        2 => 0.0..1.0,
    ]
}

fn is_probability(result: Result<f64, OutOfDomain>) -> Result<(), TestCaseError> {
    if let Ok(p) = result {
        prop_assert!((0.0..=1.0).contains(&p), "{p}");
    }
    Ok(())
}

fn is_number(result: Result<f64, OutOfDomain>) -> Result<(), TestCaseError> {
    if let Ok(x) = result {
        prop_assert!(!x.is_nan(), "{x}");
    }
    Ok(())
}

proptest! {
    #![proptest_config(ProptestConfig { failure_persistence: None, ..ProptestConfig::with_cases(2000) })]

    #[test]
    fn central_distributions_answer_or_refuse_every_number(x in any_number(), a in any_number(), b in any_number()) {
        for p in [normal::cdf(x), normal::sf(x), student_t::cdf(x, a), student_t::sf(x, a), chi_squared::cdf(x, a),
            chi_squared::sf(x, a), fisher_f::cdf(x, a, b), fisher_f::sf(x, a, b), beta::cdf(x, a, b), beta::sf(x, a, b)]
        {
            is_probability(p)?;
        }
        for quantile in [normal::quantile(x), normal::upper_quantile(x), student_t::quantile(x, a),
            student_t::upper_quantile(x, a), chi_squared::quantile(x, a), chi_squared::upper_quantile(x, a),
            fisher_f::quantile(x, a, b), fisher_f::upper_quantile(x, a, b), beta::quantile(x, a, b),
            beta::upper_quantile(x, a, b)]
        {
            is_number(quantile)?;
        }
    }

    #[test]
    fn central_tails_add_to_one(x in -20.0..20.0f64, a in 0.5..200.0f64, b in 0.5..200.0f64) {
        let sums = [
            normal::cdf(x).unwrap() + normal::sf(x).unwrap(),
            student_t::cdf(x, a).unwrap() + student_t::sf(x, a).unwrap(),
            fisher_f::cdf(x.abs(), a, b).unwrap() + fisher_f::sf(x.abs(), a, b).unwrap(),
            chi_squared::cdf(x.abs(), a).unwrap() + chi_squared::sf(x.abs(), a).unwrap(),
        ];
        for sum in sums {
            prop_assert!((sum - 1.0).abs() < 1e-15, "{sum}");
        }
    }

    #[test]
    fn f_with_one_numerator_df_is_a_squared_t(t in 0.0..30.0f64, df in 0.5..500.0f64) {
        let two_sided = 2.0 * student_t::sf(t, df).unwrap();
        let f = fisher_f::sf(t * t, 1.0, df).unwrap();
        prop_assert!((f / two_sided - 1.0).abs() < 1e-12, "{f} {two_sided}");
    }
}
