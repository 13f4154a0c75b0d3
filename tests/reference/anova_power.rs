//! Power and sample size of the one-way F test.
//!
//! Sources: `data/values/anova_power.json` and `anova_sample_size.json` (ball arithmetic, 20 digits); tables of
//! Cohen (1988), Statistical Power Analysis for the Behavioral Sciences, chapter 8, with five digits computed
//! independently; "eta squared 0.46, three groups, 5 %, 80 %: 5 per group, 15 in all" is common practice and
//! stands in `anova_sample_size.json` as well.

use crate::accuracy::agree;
use crate::cases::{cases, number};
use crate::one_way::agrees;
use levelwise::methods::power::{
    MAX_PER_GROUP, NoPower, OverallDesign, eta_squared_of_f, f_of_eta_squared, f_of_means,
};

#[test]
pub fn power_agrees_with_the_tables() {
    agree("anova_power", "power of the F test", |case| {
        let design =
            OverallDesign::new(number(&case["k"]) as usize, number(&case["alpha"])).expect("a design");
        design.power(number(&case["n_per_group"]) as usize, number(&case["f"])).expect("power")
    });
}

#[test]
fn the_smallest_sample_size_agrees_with_the_tables() {
    for case in cases("anova_sample_size") {
        let f = case.get("f").filter(|f| !f.is_null()).map(number);
        let f = f.unwrap_or_else(|| f_of_eta_squared(number(&case["eta2"])).expect("an effect"));
        let design =
            OverallDesign::new(number(&case["k"]) as usize, number(&case["alpha"])).expect("a design");
        let size = design.sample_size(f, number(&case["power"])).expect("a size");
        assert_eq!(size.per_group, number(&case["value"]) as usize, "{case}");
        assert_eq!(size.total, size.per_group * number(&case["k"]) as usize);
        agrees(size.power, number(&case["power_at_n"]), 1e-9, &case.to_string());
        match size.power_one_fewer {
            None => assert!(case["power_at_n_minus_1"].is_null(), "{case}"),
            Some(power) => agrees(power, number(&case["power_at_n_minus_1"]), 1e-9, &case.to_string()),
        }
    }
}

#[test]
fn eta_squared_of_046_needs_five_per_group_and_fifteen_in_all() {
    let design = OverallDesign::new(3, 0.05).expect("a design");
    let size = design.sample_size(f_of_eta_squared(0.46).expect("f"), 0.8).expect("a size");
    assert_eq!((size.per_group, size.total), (5, 15));
}

#[test]
fn cohens_tables_come_out() {
    for (k, n, f, power) in
        [(4, 45, 0.25, 0.80399), (3, 52, 0.25, 0.79673), (3, 22, 0.40, 0.81807), (2, 64, 0.25, 0.80146)]
    {
        let found = OverallDesign::new(k, 0.05).and_then(|design| design.power(n, f)).expect("power");
        agrees(found, power, 1e-5, &format!("k = {k}, n = {n}, f = {f}"));
    }
}

#[test]
fn size_effect_and_power_answer_each_other() {
    for (k, n) in [(2, 2), (3, 10), (5, 40), (12, 3), (3, 100_000)] {
        for target in [0.06, 0.5, 0.8, 0.999] {
            let design = OverallDesign::new(k, 0.05).expect("a design");
            let f = design.smallest_effect(n, target).expect("an effect");
            agrees(design.power(n, f).expect("power"), target, 1e-9, &format!("k = {k}, n = {n}"));
            let size = design.sample_size(f * 1.000_001, target).expect("a size");
            assert_eq!(size.per_group, n, "k = {k}, target {target}");
        }
    }
}

#[test]
fn conversions_go_both_ways() {
    for f in [0.0, 0.1, 0.25, 0.4, 1.0, 50.0] {
        let there = eta_squared_of_f(f).expect("eta squared");
        agrees(f_of_eta_squared(there).expect("f"), f, 1e-12, "f");
    }
    // Cohen (1988), section 8.2: two means one SD apart have f = d/2.
    agrees(f_of_means(&[10.0, 11.0], 1.0).expect("f"), 0.5, 1e-15, "f of two means");
    assert_eq!(f_of_means(&[0.1, 0.1, 0.1], 0.3), Ok(0.0));
}

#[test]
fn curves_rise_to_their_end() {
    let design = OverallDesign::new(3, 0.05).expect("a design");
    let curve = design.curve(0.4, 44, 20).expect("a curve");
    assert_eq!((curve[0].per_group, curve[curve.len() - 1].per_group), (2, 44));
    assert!(
        curve.windows(2).all(|pair| pair[0].power < pair[1].power && pair[0].per_group < pair[1].per_group)
    );
}

#[test]
fn what_cannot_be_planned_is_refused_in_words() {
    let design = OverallDesign::new(3, 0.05).expect("a design");
    let message = |error: Result<_, NoPower>| error.map(|_: f64| ()).expect_err("refused").to_string();
    let size = |f, target| design.sample_size(f, target).map(|size| size.power);
    assert_eq!(
        message(size(0.0, 0.8)),
        "the effect is 0: then no sample size raises the power above alpha. Give means that differ, or an effect above 0"
    );
    assert_eq!(
        message(size(0.25, 0.04)),
        "the target power 0.04 is not above alpha 0.05: a test without any effect already reaches alpha"
    );
    assert_eq!(message(size(0.25, 1.0)), "the target power is 1 and must lie between 0 and 1");
    assert!(
        message(size(1e-5, 0.8)).starts_with("the target power 0.8 is not reached with 10000000 per group")
    );
    assert_eq!(message(size(f64::NAN, 0.8)), "Cohen's f is NaN and must be a number from 0 up");
    assert_eq!(
        message(design.power(1, 0.4)),
        "1 per group is too few; at least 2 are needed, or nothing shows the variation inside groups"
    );
    assert!(design.power(MAX_PER_GROUP + 1, 0.4).is_err());
    assert_eq!(message(f_of_eta_squared(1.0)), "eta squared is 1 and must be from 0 to below 1");
    assert_eq!(message(f_of_means(&[1.0, 2.0], 0.0)), "the standard deviation is 0 and must be above 0");
    assert!(OverallDesign::new(1, 0.05).is_err() && OverallDesign::new(3, 0.0).is_err());
    assert!(OverallDesign::new(usize::MAX, 0.05).is_err());
}
