//! Properties that hold for every argument: no panic, no NaN, tails that add to 1, round trips.

use levelwise::numerics::OutOfDomain;
use levelwise::numerics::distributions::{
    beta, chi_squared, fisher_f, many_to_one, noncentral_chi_squared, noncentral_f, noncentral_t, normal,
    student_t, studentized_maximum, studentized_range,
};
use proptest::prelude::*;
use proptest::test_runner::RngSeed;

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
    #![proptest_config(ProptestConfig { rng_seed: RngSeed::Fixed(1), failure_persistence: None, ..ProptestConfig::with_cases(2000) })]

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

    #[test]
    fn two_groups_make_the_studentized_range_a_t(q in 0.0..60.0f64, df in 0.5..500.0f64) {
        let t = 2.0 * student_t::sf(q / std::f64::consts::SQRT_2, df).unwrap();
        let range = studentized_range::sf(q, 2, df).unwrap();
        prop_assert!((range / t - 1.0).abs() < 1e-12, "{range} {t}");
    }
}

proptest! {
    #![proptest_config(ProptestConfig { rng_seed: RngSeed::Fixed(2), failure_persistence: None, ..ProptestConfig::with_cases(300) })]

    #[test]
    fn the_studentized_range_answers_or_refuses_every_number(q in any_number(), df in any_number(), groups in 0..40usize) {
        is_probability(studentized_range::cdf(q, groups, df))?;
        is_probability(studentized_range::sf(q, groups, df))?;
        is_number(studentized_range::quantile(q, groups, df))?;
        is_number(studentized_range::upper_quantile(q, groups, df))?;
    }

    #[test]
    fn the_studentized_range_falls_with_q_and_rises_with_the_groups(
        q in 0.1..12.0f64, more in 0.01..1.0f64, df in 1.0..200.0f64, groups in 2..30usize
    ) {
        let sf = |q, groups| studentized_range::sf(q, groups, df).unwrap();
        // Where the tail is nearly 1, neighbours may differ by the error allowed for it.
        prop_assert!(sf(q + more, groups) <= sf(q, groups) + 1e-12);
        prop_assert!(sf(q, groups + 1) >= sf(q, groups) - 1e-12);
        prop_assert!((studentized_range::cdf(q, groups, df).unwrap() + sf(q, groups) - 1.0).abs() < 1e-12);
        let back = studentized_range::upper_quantile(sf(q, groups), groups, df).unwrap();
        // Where the tail is nearly 1 its complement decides, and it has lost digits on the way.
        prop_assume!(sf(q, groups) < 0.999);
        prop_assert!((back / q - 1.0).abs() < 1e-10, "{back} {q}");
    }

    #[test]
    fn noncentral_distributions_answer_or_refuse_every_number(
        x in any_number(), a in any_number(), b in any_number(), ncp in any_number()
    ) {
        for p in [noncentral_t::cdf(x, a, ncp), noncentral_t::sf(x, a, ncp), noncentral_f::cdf(x, a, b, ncp),
            noncentral_f::sf(x, a, b, ncp), noncentral_chi_squared::cdf(x, a, ncp), noncentral_chi_squared::sf(x, a, ncp)]
        {
            is_probability(p)?;
        }
        for value in [noncentral_t::quantile(x, a, ncp), noncentral_t::upper_quantile(x, a, ncp),
            noncentral_t::noncentrality(x, a, b), noncentral_f::quantile(x, a, b, ncp),
            noncentral_f::upper_quantile(x, a, b, ncp), noncentral_f::noncentrality(x, a, b, ncp),
            noncentral_chi_squared::quantile(x, a, ncp), noncentral_chi_squared::upper_quantile(x, a, ncp)]
        {
            is_number(value)?;
        }
    }

    #[test]
    fn noncentral_tails_add_to_one_and_a_solved_noncentrality_solves(
        t in -10.0..30.0f64, df in 1.0..200.0f64, df1 in 0.5..20.0f64, ncp in 0.0..300.0f64, p in 0.01..0.99f64
    ) {
        let delta = ncp.sqrt();
        let sum = noncentral_t::cdf(t, df, delta).unwrap() + noncentral_t::sf(t, df, delta).unwrap();
        prop_assert!((sum - 1.0).abs() < 1e-13, "t: {sum}");
        let f = t.abs();
        let sum = noncentral_f::cdf(f, df1, df, ncp).unwrap() + noncentral_f::sf(f, df1, df, ncp).unwrap();
        prop_assert!((sum - 1.0).abs() < 1e-13, "F: {sum}");
        let solved = noncentral_t::noncentrality(t, df, p).unwrap();
        let back = noncentral_t::cdf(t, df, solved).unwrap();
        prop_assert!((back / p - 1.0).abs() < 1e-10, "t: {back} {p}");
        let solved = noncentral_f::noncentrality(f, df1, df, p).unwrap();
        let back = noncentral_f::cdf(f, df1, df, solved).unwrap();
        prop_assert!((back / p - 1.0).abs() < 1e-10 || solved == 0.0 && back <= p, "F: {back} {p}");
    }

    #[test]
    fn comparisons_with_a_control_answer_or_refuse_every_number(
        d in any_number(), df in any_number(), loadings in prop::collection::vec(-1.0..1.0f64, 0..5), any in any_number()
    ) {
        let with_any: Vec<f64> = loadings.iter().copied().chain([any]).collect();
        for sides in [many_to_one::Sides::Both, many_to_one::Sides::Greater] {
            is_probability(many_to_one::cdf(d, &loadings, df, sides))?;
            is_probability(many_to_one::sf(d, &with_any, df, sides))?;
            is_number(many_to_one::quantile(d, &loadings, df, sides))?;
            is_number(many_to_one::upper_quantile(d, &with_any, df, sides))?;
        }
        is_probability(studentized_maximum::cdf(d, loadings.len(), df))?;
        is_probability(studentized_maximum::sf(d, loadings.len(), df))?;
        is_number(studentized_maximum::quantile(d, loadings.len(), df))?;
        is_number(studentized_maximum::upper_quantile(d, loadings.len(), df))?;
    }
}

/// Upper tails near 1 once had three digits fewer than their complements here.
#[test]
fn noncentral_t_tails_add_to_one_where_the_mixture_turns_far_from_its_middle() {
    for (t, df, ncp) in [
        (7.581_953_411_705_737, 11.216_824_485_436_774, 16.767_920_95),
        (7.113_775_126, 10.266_221_539, 16.265_647_145),
    ] {
        let sum = noncentral_t::cdf(t, df, ncp).unwrap() + noncentral_t::sf(t, df, ncp).unwrap();
        assert!((sum - 1.0).abs() < 1e-14, "{t}: {sum}");
    }
}

/// At the smallest degrees of freedom allowed the quantiles spread over hundreds of powers of ten; the integrals still end.
#[test]
fn quantiles_of_the_studentized_range_end_at_tiny_degrees_of_freedom() {
    for df in [0.001, 0.003, 0.03] {
        for p in [5e-324, 1e-20, 0.01, 0.5, 0.999_99] {
            for found in [studentized_range::quantile(p, 3, df), studentized_range::upper_quantile(p, 3, df)]
            {
                assert!(!found.unwrap().is_nan(), "{df} {p}");
            }
        }
    }
}
