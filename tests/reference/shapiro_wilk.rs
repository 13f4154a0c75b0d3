//! Shapiro and Wilk's W.
//!
//! Sources: `data/values/shapiro_wilk.json`, another implementation of algorithm AS R94 (a second opinion, to be
//! compared to about 1e-6); Shapiro and Wilk (1965), Biometrika 52, 591–611, whose example has W = 0.79.

use crate::accuracy::{agree, agree_on};
use crate::cases::number;
use crate::one_way::agrees;
use levelwise::methods::profile::{NoCheck, shapiro_wilk};
use serde_json::Value;

#[test]
pub fn w_and_p_follow_the_published_algorithm() {
    let test = |case: &Value| {
        let data: Vec<f64> = case["data"].as_array().expect("data").iter().map(number).collect();
        shapiro_wilk(&data).expect("W")
    };
    agree_on("shapiro_wilk", "W", "Shapiro-Wilk, W", |case| Some(test(case).w));
    agree("shapiro_wilk", "Shapiro-Wilk, p", |case| test(case).p);
}

#[test]
fn the_papers_own_example_comes_out() {
    let data = [148.0, 154.0, 158.0, 160.0, 161.0, 162.0, 166.0, 170.0, 182.0, 195.0, 236.0];
    let test = shapiro_wilk(&data).expect("W");
    // 0.79 is printed in the paper; the six digits are an independent computation.
    assert_eq!(format!("{:.2}", test.w), "0.79");
    agrees(test.w, 0.788815, 1e-6, "W");
    agrees(test.p, 0.0067038, 1e-5, "p");
}

#[test]
fn scale_and_shift_change_nothing_and_bad_samples_are_refused() {
    let data = [148.0, 154.0, 158.0, 160.0, 161.0, 162.0, 166.0, 170.0, 182.0, 195.0, 236.0];
    let plain = shapiro_wilk(&data).expect("W");
    for scale in [1e-200, 1e-6, 1e200] {
        let scaled = shapiro_wilk(&data.map(|x| (x - 160.0) * scale)).expect("W");
        agrees(scaled.w, plain.w, 1e-12, "W of scaled values");
        agrees(scaled.p, plain.p, 1e-10, "p of scaled values");
    }
    assert_eq!(shapiro_wilk(&[1.0, 2.0]), Err(NoCheck::TooFew { n: 2 }));
    assert_eq!(shapiro_wilk(&[3.0; 12]), Err(NoCheck::NoResiduals));
    assert_eq!(shapiro_wilk(&[0.5; 5001]), Err(NoCheck::TooMany { n: 5001 }));
}

#[test]
fn a_perfect_line_of_three_is_no_evidence() {
    let test = shapiro_wilk(&[1.0, 2.0, 3.0]).expect("W");
    agrees(test.w, 1.0, 1e-12, "W");
    agrees(test.p, 1.0, 1e-6, "p");
}
