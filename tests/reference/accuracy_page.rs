//! The page of accuracies, `ACCURACY.md` beside this file: how closely every function that has a list of reference values
//! agrees with it, and where it agrees least. Results have the same bits on every target, so that the page can be compared
//! with what is computed here; `UPDATE_ACCURACY=1 cargo test --test reference accuracy_page` writes it.

use crate::accuracy::{Agreement, take_found};
use crate::{
    amalgamated_means, anova_power, central, many_to_one, multivariate_t, noncentral_f, noncentral_t,
    permutation, rank_counts, shapiro_wilk, studentized_families, studentized_range, wide,
};
use serde_json::Value;
use std::fmt::Write;

/// Every check that calls `agree`, `agree_on` or `agree_each` (`tests/coverage.rs` sees to it that none is left out).
const CHECKS: &[fn()] = &[
    amalgamated_means::doses_of_unequal_sizes_agree_with_the_walk_followed_density_by_density,
    amalgamated_means::tails_and_quantiles_of_williamss_statistic_agree_with_the_reference_values,
    anova_power::power_agrees_with_the_tables,
    central::central_tails_agree_with_the_reference_values,
    many_to_one::tails_and_quantiles_for_comparisons_with_a_control_agree_with_the_reference_values,
    many_to_one::the_studentized_maximum_modulus_agrees_with_the_reference_values,
    multivariate_t::quantiles_for_general_correlations_agree_with_the_reference_values,
    multivariate_t::regions_of_rank_3_agree_with_values_in_high_precision,
    multivariate_t::tails_for_general_correlations_agree_with_the_reference_values,
    noncentral_f::both_tails_of_the_noncentral_f_agree_with_the_reference_values,
    noncentral_f::limits_of_the_noncentrality_of_f_agree_with_the_reference_values,
    noncentral_t::both_tails_of_the_noncentral_t_agree_with_the_reference_values,
    noncentral_t::limits_of_the_noncentrality_of_t_agree_with_the_reference_values,
    permutation::shares_of_assignments_agree_with_full_enumeration,
    rank_counts::both_tails_of_jonckheeres_statistic_agree_with_the_exact_counts,
    rank_counts::the_upper_tail_of_kruskal_and_walliss_statistic_agrees_with_the_exact_counts,
    rank_counts::tails_of_rank_sums_with_ties_agree_with_the_exact_counts,
    rank_counts::tails_of_jonckheeres_statistic_with_ties_agree_with_every_assignment,
    rank_counts::the_kruskal_wallis_test_of_tied_samples_agrees_with_every_assignment,
    shapiro_wilk::w_and_p_follow_the_published_algorithm,
    studentized_families::the_studentized_range_agrees_with_values_at_random_points,
    studentized_families::the_studentized_maximum_agrees_with_values_at_random_points,
    studentized_families::comparisons_with_a_control_agree_with_values_at_random_points,
    studentized_range::both_tails_of_the_studentized_range_agree_with_the_reference_values,
    studentized_range::quantiles_of_the_studentized_range_agree_with_the_reference_values,
    wide::central_distributions_agree_with_ball_arithmetic_over_wide_ranges,
    wide::noncentral_distributions_agree_with_ball_arithmetic_over_wide_ranges,
    wide::solved_noncentralities_agree_with_ball_arithmetic_over_wide_ranges,
];

const HEAD: &str = "\
# Accuracy reached

Generated: every row is computed by the tests and compared with this page; `UPDATE_ACCURACY=1 cargo test --test reference
accuracy_page` writes it anew. The reference values are in `data`, each file with its source and digits; a name without a folder is
in `data/values`. Permitted errors are the table in `accuracy.rs`. Errors are relative (absolute where 0 is expected), the worst
over all cases of the row; 0 means that every case has the reference's nearest double.

| reference file, field | quantity | cases | permitted | worst | at |
| --- | --- | ---: | ---: | ---: | --- |
";

#[test]
fn the_page_of_accuracies_shows_what_is_reached() {
    take_found();
    for check in CHECKS {
        check();
    }
    let mut page = HEAD.to_owned();
    for Agreement { file, field, row, cases, permitted, worst, at } in take_found() {
        let field = if field == "value" { String::new() } else { format!(", {field}") };
        let worst = if worst == 0.0 { "0".to_owned() } else { format!("{worst:.1e}") };
        let at = place(&at);
        writeln!(page, "| `{file}`{field} | {row} | {cases} | {permitted} | {worst} | {at} |").unwrap();
    }
    let path = concat!(env!("CARGO_MANIFEST_DIR"), "/tests/reference/ACCURACY.md");
    if std::env::var_os("UPDATE_ACCURACY").is_some() {
        std::fs::write(path, &page).unwrap();
    }
    let committed = std::fs::read_to_string(path).unwrap();
    for (now, then) in page.lines().zip(committed.lines()) {
        assert_eq!(now, then, "ACCURACY.md is out of date: UPDATE_ACCURACY=1 writes it");
    }
    assert_eq!(page.lines().count(), committed.lines().count(), "ACCURACY.md is out of date");
}

/// The parameters of a case in short: what was computed from them, and long lists, are left out.
fn place(case: &Value) -> String {
    let Some(fields) = case.as_object() else { return String::new() };
    let short = fields.iter().filter_map(|(name, value)| {
        let text = match value {
            Value::String(text) => text.clone(),
            Value::Number(_) | Value::Array(_) => value.to_string().replace(',', ", "),
            _ => return None,
        };
        // Decimals of many digits and fractions are results; how they were computed stands in the file.
        let result =
            value.is_string() && (text.len() > 12 || text.contains('/') || name == "how" || name == "exact");
        (!result && text.len() <= 40).then(|| format!("{name} {text}"))
    });
    short.collect::<Vec<_>>().join(", ")
}
