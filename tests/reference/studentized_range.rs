//! The studentized range against values in ball arithmetic and published tables.
//!
//! Sources: `data/values/studentized_range_*.json`, 20 digits, each file telling how.

use crate::accuracy::agree;
use crate::cases::number;
use levelwise::numerics::distributions::studentized_range;
use serde_json::Value;

fn groups(case: &Value) -> usize {
    case["k"].as_u64().unwrap() as usize
}

#[test]
pub fn both_tails_of_the_studentized_range_agree_with_the_reference_values() {
    agree("studentized_range_sf", "studentized range, tail", |case| {
        studentized_range::sf(number(&case["q"]), groups(case), number(&case["df"])).unwrap()
    });
    agree("studentized_range_cdf", "studentized range, tail", |case| {
        studentized_range::cdf(number(&case["q"]), groups(case), number(&case["df"])).unwrap()
    });
}

#[test]
pub fn quantiles_of_the_studentized_range_agree_with_the_reference_values() {
    agree("studentized_range_quantile", "studentized range, quantile", |case| {
        let p = number(&case["upper_p"]);
        studentized_range::upper_quantile(p, groups(case), number(&case["df"])).unwrap()
    });
}
