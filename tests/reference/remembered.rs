//! Printed digits that were remembered, not seen: plausibility only, beside values computed independently.
//!
//! Sources: `data/values/published_table_checks.json` (cells of published tables FROM MEMORY, each beside its value in ball
//! arithmetic, 12 digits) and `data/nist-handbook/from-memory.json` (printed results of the e-Handbook FROM MEMORY, each
//! recomputed in exact rationals and 30-digit arithmetic, 15 digits).

use crate::cases::{cases, number, relative_error};
use crate::comparisons::{by, close, handbook_groups, layout, nist, printed};
use levelwise::methods::contrasts::Contrast;
use levelwise::methods::multiplicity::{Adjust, Family, PValueMethod, Sides};
use levelwise::methods::overall::AnovaTable;
use levelwise::numerics::distributions::{amalgamated_means, fisher_f, many_to_one, studentized_range};
use levelwise::study::Variances;
use serde_json::Value;

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
        let unit = if table == (table * 100.0).round() / 100.0 { 0.01 } else { 0.001 };
        assert!((computed - table).abs() <= 0.6 * unit, "{case}: {computed}");
    }
}

/// The remembered number called `id`: its printed digits and its recomputed value.
fn remembered(file: &Value, section: &str, id: &str) -> (String, f64) {
    let sections = file["sections"].as_array().unwrap();
    let section = sections.iter().find(|found| found["section"] == section).unwrap();
    let values = section["values"].as_array().unwrap();
    let value = values.iter().find(|value| value["id"] == id).unwrap();
    (value["text"].as_str().unwrap().to_owned(), number(&value["recomputed"]))
}

#[test]
fn four_treatments_of_the_handbook_come_out() {
    let path = concat!(env!("CARGO_MANIFEST_DIR"), "/tests/reference/data/nist-handbook/from-memory.json");
    let file: Value = serde_json::from_str(&std::fs::read_to_string(path).unwrap()).unwrap();
    let agrees = |section: &str, id: &str, computed: f64| {
        let (text, recomputed) = remembered(&file, section, id);
        printed(&[computed], &[&text], id);
        close(computed, recomputed, 1e-12, id);
    };
    let data = nist();
    let layout = layout(&handbook_groups(&data), Variances::Equal);
    let table = AnovaTable::of(&layout.estimates.labels, &layout.summary).unwrap();
    for (id, computed) in [
        ("ss_treatments", table.ss_between),
        ("df_treatments", table.df_between),
        ("ms_treatments", table.ms_between),
        ("F", table.f),
        ("ss_error", table.ss_within),
        ("df_error", table.df_within),
        ("ms_error", table.ms_within),
        ("ss_total_corrected", table.ss_total()),
    ] {
        agrees("7.4.3.6", id, computed);
    }
    for (level, group) in layout.summary.groups.iter().enumerate() {
        agrees("7.4.3.6", &format!("mean_treatment_{}", level + 1), layout.summary.origin + group.mean);
    }
    agrees("7.4.7.2", "F_0.95_3_16", fisher_f::upper_quantile(0.05, 3.0, 16.0).unwrap());
    let contrasts: Vec<Contrast> = ["C1", "C2"]
        .iter()
        .map(|id| {
            let c = data["contrasts"][id]["values"].as_array().unwrap().iter().map(number).collect();
            Contrast::new(id, c, &layout.estimates.labels).unwrap()
        })
        .collect();
    let compared = |adjust| by(&layout, &contrasts, Family::Contrasts, adjust, Sides::Both, 0.05);
    let alone = compared(Adjust::PValues(PValueMethod::None));
    agrees("7.4.3.6", "t_0.975_16", alone.critical.unwrap());
    agrees("7.4.3.6", "C1_lower_single", alone.rows[0].interval.lower);
    agrees("7.4.3.6", "C1_upper_single", alone.rows[0].interval.upper);
    agrees("7.4.7.2", "C1_lower", compared(Adjust::Scheffe).rows[0].interval.lower);
    let bonferroni = compared(Adjust::PValues(PValueMethod::Bonferroni));
    agrees("7.4.7.3", "t_0.0125_16", bonferroni.critical.unwrap());
    for (row, name) in bonferroni.rows.iter().zip(["C1", "C2"]) {
        agrees("7.4.7.3", &format!("{name}_lower"), row.interval.lower);
        agrees("7.4.7.3", &format!("{name}_upper"), row.interval.upper);
    }
}
