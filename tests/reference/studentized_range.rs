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
    // By the table that serves a family of comparisons.
    agree("studentized_range_sf", "studentized range, tabulated tail", |case| {
        let mut family = studentized_range::Family::new(groups(case)).unwrap();
        family.sf(number(&case["q"]), number(&case["df"])).unwrap()
    });
}

#[test]
pub fn quantiles_of_the_studentized_range_agree_with_the_reference_values() {
    agree("studentized_range_quantile", "studentized range, quantile", |case| {
        let p = number(&case["upper_p"]);
        studentized_range::upper_quantile(p, groups(case), number(&case["df"])).unwrap()
    });
}

/// A table that has been filled by other values gives the same as one that is new, and as the integrals.
#[test]
fn a_family_gives_what_the_single_functions_give_in_any_order() {
    for groups in [2, 5, 40, 200] {
        let mut family = studentized_range::Family::new(groups).unwrap();
        for df in [0.7, 3.0, 12.5, 300.0, f64::INFINITY] {
            for q in [0.0, 4.4, 0.3, 60.0, 1e300, 7.7, 1e-9] {
                let (one, all) = (studentized_range::sf(q, groups, df).unwrap(), family.sf(q, df).unwrap());
                assert!((all - one).abs() <= 1e-12 * one, "{groups} {df} {q}: {all:e} {one:e}");
            }
            for p in [0.0, 0.05, 1e-9, 0.7, 1.0] {
                let one = studentized_range::upper_quantile(p, groups, df).unwrap();
                let all = family.upper_quantile(p, df).unwrap();
                assert!(all == one || (all / one - 1.0).abs() < 1e-11, "{groups} {df} {p}: {all} {one}");
            }
        }
        for (q, df) in [(f64::NAN, 5.0), (-1.0, 5.0), (1.0, 0.0), (1.0, f64::NAN)] {
            let one = studentized_range::sf(q, groups, df).unwrap_err();
            assert_eq!(family.sf(q, df).unwrap_err().to_string(), one.to_string());
        }
    }
    let one = studentized_range::sf(1.0, 1, 5.0).unwrap_err();
    assert_eq!(studentized_range::Family::new(1).err(), Some(one));
}
