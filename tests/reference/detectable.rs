//! The smallest difference that a design detects with a given power.
//!
//! Sources: `data/effects/detectable.json` (30-digit quadrature and root finding; SciPy 1.17.1's noncentral t asserted there); powers of
//! designs by quadrature, 5 digits, that of the t test with n = 64 also in Cohen's (1988) tables.

use crate::accuracy::permitted;
use crate::cases::{cases, number};
use crate::one_way::agrees;
use levelwise::methods::multiplicity::Sides;
use levelwise::methods::multiplicity::detectable::Detectable;
use levelwise::numerics::distributions::{noncentral_t, student_t};

fn design(power: f64, sides: Sides) -> Detectable {
    Detectable::with_power(power, sides).expect("a design")
}

#[test]
fn noncentralities_agree_with_quadrature() {
    let allowed = permitted("detectable difference");
    for case in cases("effects/detectable") {
        let sides = if case["sides"] == "both" { Sides::Both } else { Sides::Greater };
        let (critical, df) = (number(&case["critical"]), number(&case["df"]));
        let found = design(number(&case["power"]), sides).noncentrality(critical, df).expect("a solution");
        agrees(found, number(&case["value"]), allowed, &case.to_string());
    }
}

#[test]
fn designs_of_known_power_give_their_difference_back() {
    // Two groups of 64, d = 0.5, two-sided 5 %: power 0.80146.
    let critical = student_t::upper_quantile(0.025, 126.0).expect("a quantile");
    let se = (2.0_f64 / 64.0).sqrt();
    let found = design(0.80146, Sides::Both).difference(critical, 126.0, se).expect("a difference");
    // Half a unit of the power's last digit is 5e-6, and power rises by 1.4 for each unit of d.
    assert!((found - 0.5).abs() < 5e-6, "{found}");
    // Three treatments and a control of 20 each, all differences 0.8, Dunnett's critical value: power 0.55501 each.
    let se = (2.0_f64 / 20.0).sqrt();
    let found = design(0.55501, Sides::Both).difference(2.396879, 76.0, se).expect("a difference");
    assert!((found - 0.8).abs() < 6e-6, "{found}");
}

#[test]
fn at_the_solution_the_test_has_the_power_asked_for() {
    for power in [0.1, 0.5, 0.8, 0.95, 0.999] {
        for df in [1.0, 2.5, 9.0, 80.0, 1960.0, f64::INFINITY] {
            for critical in [0.0, 0.1, 1.0, 1.96, 2.8, 4.5, 12.0] {
                for sides in [Sides::Both, Sides::Greater, Sides::Less] {
                    let delta = design(power, sides).noncentrality(critical, df).expect("a solution");
                    let above = noncentral_t::sf(critical, df, delta).expect("a tail");
                    let below = noncentral_t::cdf(-critical, df, delta).expect("a tail");
                    let reached = if sides == Sides::Both { above + below } else { above };
                    let what = format!("power {power}, df {df}, critical {critical}, {sides:?}: {delta}");
                    if delta == 0.0 {
                        assert!(reached >= power * (1.0 - 1e-9), "{what}");
                    } else {
                        agrees(reached, power, 1e-9, &what);
                    }
                }
            }
        }
    }
}

#[test]
fn it_grows_with_the_critical_value_and_the_power_and_scales_with_the_standard_error() {
    let mut last = 0.0;
    for critical in [0.5, 1.0, 2.0, 2.5, 3.9, 10.0] {
        let mut design = design(0.8, Sides::Both);
        let delta = design.noncentrality(critical, 30.0).expect("a solution");
        assert!(delta > last);
        last = delta;
        assert_eq!(design.difference(critical, 30.0, 2.5), Ok(2.5 * delta));
        assert_eq!(design.difference(critical, 30.0, 0.0), Ok(0.0));
    }
    let at = |power: f64| design(power, Sides::Both).noncentrality(2.0, 30.0).expect("a solution");
    assert!(at(0.5) < at(0.8) && at(0.8) < at(0.9));
}

#[test]
fn what_cannot_be_solved_is_refused() {
    for power in [0.0, 1.0, -0.5, 1.5, f64::NAN] {
        assert!(Detectable::with_power(power, Sides::Both).is_err(), "{power}");
    }
    let mut both = design(0.8, Sides::Both);
    for (critical, df, se) in [
        (-1.0, 5.0, 1.0),
        (f64::NAN, 5.0, 1.0),
        (1e9, 5.0, 1.0),
        (2.0, 0.0, 1.0),
        (2.0, 5.0, -1.0),
        (2.0, 5.0, f64::NAN),
    ] {
        assert!(both.difference(critical, df, se).is_err(), "{critical} {df} {se}");
    }
}
