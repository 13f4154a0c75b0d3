//! Printed digits that were remembered, not seen: plausibility only, beside values computed independently.
//!
//! Source: `data/values/published_table_checks.json` (cells of published tables FROM MEMORY, each beside its value in ball
//! arithmetic, 12 digits). `handbook.rs` has the remembered results of the e-Handbook.

use crate::cases::{cases, number, relative_error};
use levelwise::numerics::distributions::{amalgamated_means, many_to_one, studentized_range};

/// The loading of every comparison where all correlations are 1/2.
const HALF: f64 = std::f64::consts::FRAC_1_SQRT_2;

#[test]
fn cells_of_published_tables_come_out() {
    for case in cases("published_table_checks") {
        let (k, df) = (case["k"].as_u64().unwrap() as usize, number(&case["df"]));
        let p = number(&case["upper_p"]);
        let control = |sides| many_to_one::upper_quantile(p, &vec![HALF; k], df, sides).unwrap();
        let computed = match case["statistic"].as_str().unwrap() {
            "many-to-one, rho=0.5, two-sided" => control(many_to_one::Sides::Both),
            "many-to-one, rho=0.5, one-sided" => control(many_to_one::Sides::Greater),
            "studentized range" => studentized_range::upper_quantile(p, k, df).unwrap(),
            "Williams, equal n" => amalgamated_means::upper_quantile(p, &vec![1.0; k], 1.0, df).unwrap(),
            other => panic!("{other} is not known here"),
        };
        assert!(relative_error(computed, number(&case["value"])) < 1e-11, "{case}: {computed}");
        let table = number(&case["table_value_from_memory"]);
        // The file has the difference in units of the table's last decimal, its second or third.
        let off = number(&case["difference_in_last_place"]);
        let is_so = |unit: f64| ((table - computed) / unit - off).abs() < 0.0051;
        assert!(off.abs() <= 0.6 && (is_so(0.01) || is_so(0.001)), "{case}: {computed}");
    }
}
