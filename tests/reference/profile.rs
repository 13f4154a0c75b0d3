//! Groups described. Quartiles by hand from the definition (Hyndman and Fan 1996, definition 7: linear
//! interpolation around position (n - 1)p); t(0.975; 3) = 3.182446 and t(0.975; 4) = 2.776445 from the printed
//! tables of Student's t.

use crate::one_way::{agrees, blood_counts};
use levelwise::methods::profile::{NoCheck, OrderStatistics, Profile, quantile};
use levelwise::study::{LevelAccount, Levels, Observed, Study, Variances};

fn study(observed: Observed) -> Study {
    let labels: Vec<String> = ["control", "A", "B"].map(str::to_owned).to_vec();
    let account = |(level, n): (&String, usize)| LevelAccount {
        level: level.clone(),
        score: None,
        received: n + 3,
        n,
        missing: 1,
        excluded: 2,
    };
    Study {
        outcome: "count".to_owned(),
        factor: "drug".to_owned(),
        account: labels.iter().zip([6, 4, 5]).map(account).collect(),
        levels: Levels { labels, scores: None, control: Some(0), order_of_appearance: false },
        variances: Variances::Unequal,
        alpha: 0.05,
        confidence: 0.95,
        unit: None,
        better: None,
        observed,
    }
}

#[test]
fn quartiles_follow_the_named_definition() {
    let order = OrderStatistics::of(&[4.0, 1.0, 3.0, 2.0], 10.0).expect("values");
    assert_eq!((order.min, order.lower_quartile, order.median), (11.0, 11.75, 12.5));
    assert_eq!((order.upper_quartile, order.max), (13.25, 14.0));
    let order = OrderStatistics::of(&[7.0], 0.0).expect("values");
    assert_eq!((order.lower_quartile, order.median, order.upper_quartile), (7.0, 7.0, 7.0));
    assert_eq!(OrderStatistics::of(&[], 0.0), None);
    assert_eq!(quantile(&[-1.7e308, 1.7e308], 0.5), 0.0);
    agrees(quantile(&[-1.6e308, 1.6e308], 0.25), -0.8e308, 1e-15, "a quantile of the largest numbers");
}

#[test]
fn every_group_is_described_and_its_rows_accounted_for() {
    let profile = Profile::of(&study(Observed::Sample(blood_counts()))).expect("a profile");
    let a = &profile.groups[1];
    assert_eq!((a.level.as_str(), a.n, a.missing, a.excluded), ("A", 4, 1, 2));
    let (mean, sd) = (a.moments.mean.expect("a mean"), a.moments.sd.expect("an SD"));
    agrees(mean, 8.9, 1e-14, "mean");
    // Deviations 0.86, -0.1, -1.22, 0.46: squares 0.7396 + 0.01 + 1.4884 + 0.2116 = 2.4496.
    agrees(sd, (2.4496_f64 / 3.0).sqrt(), 1e-13, "SD");
    agrees(a.moments.se.expect("an SE"), sd / 2.0, 1e-14, "SE");
    agrees(a.moments.upper.expect("a bound"), mean + 3.182446 * sd / 2.0, 1e-6, "upper bound");
    agrees(a.moments.lower.expect("a bound"), mean - 3.182446 * sd / 2.0, 1e-6, "lower bound");
    agrees(profile.pooled_sd.expect("an SD"), 1.380523_f64.sqrt(), 1e-6, "pooled SD");
    assert!(profile.levene.is_ok() && profile.brown_forsythe.is_ok());
    assert!(profile.bartlett.is_ok() && profile.shapiro_wilk.is_ok());
}

#[test]
fn summaries_give_what_they_can_and_the_same_as_the_values() {
    let raw = Profile::of(&study(Observed::Sample(blood_counts()))).expect("a profile");
    let typed = Profile::of(&study(Observed::Summary(blood_counts().summary()))).expect("a profile");
    for (one, other) in raw.groups.iter().zip(&typed.groups) {
        assert_eq!(one.moments, other.moments);
        assert_eq!(other.order, None);
    }
    assert_eq!(raw.pooled_sd, typed.pooled_sd);
    assert_eq!(raw.bartlett, typed.bartlett);
    assert_eq!(typed.levene, Err(NoCheck::OnlySummaries));
    assert_eq!(typed.shapiro_wilk, Err(NoCheck::OnlySummaries));
    assert_eq!(Profile::of(&study(Observed::Plan)), None);
}

#[test]
fn a_group_of_one_has_a_mean_and_no_spread() {
    let mut sample = blood_counts();
    sample.groups[1] = vec![9.76];
    let profile = Profile::of(&study(Observed::Sample(sample))).expect("a profile");
    let a = &profile.groups[1];
    assert_eq!((a.moments.mean, a.moments.sd, a.moments.lower), (Some(9.76), None, None));
    let message = profile.bartlett.expect_err("no variance").to_string();
    assert_eq!(message, "level \"A\" has 1 observation and so no variance; at least 2 are needed");
}
