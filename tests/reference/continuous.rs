//! Our distributions behind the traits of `statrs`, with that crate's own as a second opinion: where neither is
//! in a tail they agree to 1e-9 (its quantiles to 1e-6).

use crate::cases::relative_error;
use levelwise::numerics::distributions::continuous::Continuous;
use statrs::distribution::{Beta, ChiSquared, ContinuousCDF, FisherSnedecor, Normal, StudentsT};
use statrs::statistics::{Max, Min};

fn agrees(ours: Continuous, theirs: impl ContinuousCDF<f64, f64>, points: &[f64]) {
    for &x in points {
        assert!(relative_error(ours.cdf(x), theirs.cdf(x)) < 1e-9, "{ours:?} cdf at {x}");
        assert!(relative_error(ours.sf(x), theirs.sf(x)) < 1e-9, "{ours:?} sf at {x}");
        let p = ours.cdf(x);
        assert!((ours.inverse_cdf(p) - theirs.inverse_cdf(p)).abs() < 1e-6, "{ours:?} quantile at {p}");
    }
    assert_eq!((ours.min(), ours.max()), (theirs.min(), theirs.max()));
}

#[test]
fn the_two_crates_agree_away_from_the_tails() {
    agrees(Continuous::normal(), Normal::new(0.0, 1.0).unwrap(), &[-2.0, -0.3, 0.4, 1.7]);
    agrees(
        Continuous::student_t(7.5).unwrap(),
        StudentsT::new(0.0, 1.0, 7.5).unwrap(),
        &[-2.0, -0.3, 0.4, 1.7],
    );
    agrees(
        Continuous::fisher_f(3.0, 20.0).unwrap(),
        FisherSnedecor::new(3.0, 20.0).unwrap(),
        &[0.2, 1.0, 3.1],
    );
    agrees(Continuous::chi_squared(6.0).unwrap(), ChiSquared::new(6.0).unwrap(), &[1.0, 5.0, 12.0]);
    agrees(Continuous::beta(2.5, 4.0).unwrap(), Beta::new(2.5, 4.0).unwrap(), &[0.1, 0.4, 0.7]);
}

#[test]
fn points_outside_the_support_have_probability_0_or_1() {
    let range = Continuous::studentized_range(4, 12.0).unwrap();
    assert_eq!((range.cdf(-1.0), range.sf(-1.0)), (0.0, 1.0));
    assert_eq!((range.cdf(f64::INFINITY), range.sf(f64::INFINITY)), (1.0, 0.0));
    assert_eq!(Continuous::beta(1.0, 2.0).unwrap().cdf(3.0), 1.0);
    assert!(Continuous::student_t(-1.0).is_err() && Continuous::studentized_range(1, 5.0).is_err());
}
