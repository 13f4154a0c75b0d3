//! The shift of two groups and its interval: by inverting the rank sum test value by value, and against published numbers.
//!
//! Source of the published example: the permeability constants of the human chorioamnion in Hollander and Wolfe,
//! Nonparametric Statistical Methods, section 4.1 to 4.3 (from memory): shift -0.305 of the 12 to 26 weeks against term, and the
//! 95 % interval from -0.76 to 0.15.

use crate::worked_examples::{random, standard_normal};
use levelwise::methods::multiplicity::Sides;
use levelwise::methods::multiplicity::ranks::pairwise;
use levelwise::methods::multiplicity::ranks::shift::{Rejection, Shift};
use levelwise::numerics::distributions::normal;

fn of(first: &[f64], second: &[f64], rejection: Rejection, sides: Sides) -> Shift {
    let ranks = pairwise(first, second).unwrap();
    Shift::of(first, second, &ranks, rejection, sides).unwrap()
}

/// Whether the rank sum test rejects that `second` lies `shift` above `first`.
fn rejects(first: &[f64], second: &[f64], shift: f64, rejection: Rejection, sides: Sides) -> bool {
    let back: Vec<f64> = second.iter().map(|y| y - shift).collect();
    let test = pairwise(first, &back).unwrap();
    let (greater, less) = match rejection {
        Rejection::Beyond(critical) => (test.z >= critical, test.z <= -critical),
        Rejection::Counted { outside } => {
            let exact = test.exact.unwrap();
            (exact.greater <= outside, exact.less <= outside)
        }
    };
    match sides {
        Sides::Both => greater || less,
        Sides::Greater => greater,
        Sides::Less => less,
    }
}

#[test]
fn the_chorioamnion_example_has_its_published_shift_and_interval() {
    let term = [0.80, 0.83, 1.89, 1.04, 1.45, 1.38, 1.91, 1.64, 0.73, 1.46];
    let early = [1.15, 0.88, 0.90, 0.74, 1.21];
    let found = of(&term, &early, Rejection::Counted { outside: 0.025 }, Sides::Both);
    assert!((found.estimate - -0.305).abs() < 1e-12, "{found:?}");
    assert!(
        (found.interval.lower - -0.76).abs() < 1e-12 && (found.interval.upper - 0.15).abs() < 1e-12,
        "{found:?}"
    );
}

#[test]
fn the_interval_is_the_set_of_shifts_that_the_test_does_not_reject() {
    let mut stream = random(8);
    for (n, m) in [(3, 4), (5, 5), (6, 9), (8, 3)] {
        let mut group = |n: usize| -> Vec<f64> { (0..n).map(|_| standard_normal(&mut stream)).collect() };
        let (first, second) = (group(n), group(m));
        let mut differences: Vec<f64> =
            second.iter().flat_map(|y| first.iter().map(move |x| y - x)).collect();
        differences.sort_by(f64::total_cmp);
        let z = normal::upper_quantile(0.025).unwrap();
        let levels = [
            Rejection::Counted { outside: 0.025 },
            Rejection::Counted { outside: 0.2 },
            Rejection::Beyond(z),
            Rejection::Beyond(0.4),
        ];
        for rejection in levels {
            for sides in [Sides::Both, Sides::Greater, Sides::Less] {
                let found = of(&first, &second, rejection, sides);
                // Between neighbouring differences, and beyond the outermost, the test decides the same for every shift.
                let mut shifts: Vec<f64> =
                    differences.windows(2).map(|pair| (pair[0] + pair[1]) / 2.0).collect();
                shifts.extend([differences[0] - 1.0, differences[n * m - 1] + 1.0]);
                for shift in shifts {
                    let inside = found.interval.lower < shift && shift < found.interval.upper;
                    let rejected = rejects(&first, &second, shift, rejection, sides);
                    assert_eq!(inside, !rejected, "{n} {m} {rejection:?} {sides:?} {shift} {found:?}");
                }
            }
        }
    }
}

#[test]
fn too_few_values_for_the_level_leave_the_shift_without_bounds() {
    // Three against three: the smallest probability on a side is 1/20.
    let (first, second) = ([1.0, 2.0, 3.0], [4.0, 6.0, 8.0]);
    let none = of(&first, &second, Rejection::Counted { outside: 0.025 }, Sides::Both);
    assert_eq!(
        (none.estimate, none.interval.lower, none.interval.upper),
        (4.0, f64::NEG_INFINITY, f64::INFINITY)
    );
    let some = of(&first, &second, Rejection::Counted { outside: 0.05 }, Sides::Both);
    assert_eq!((some.interval.lower, some.interval.upper), (1.0, 7.0));
}

#[test]
fn another_unit_and_the_groups_in_turn_change_what_they_should() {
    let (first, second) = ([2.1, 3.4, 1.9, 2.8], [3.0, 4.4, 3.9, 2.2, 5.1]);
    let beyond = Rejection::Beyond(1.5);
    let one = of(&first, &second, beyond, Sides::Both);
    let turned = of(&second, &first, beyond, Sides::Both);
    assert_eq!((turned.estimate, turned.interval.lower), (-one.estimate, -one.interval.upper));
    let scaled = |values: &[f64]| values.iter().map(|x| 8.0 * x + 64.0).collect::<Vec<_>>();
    let other = of(&scaled(&first), &scaled(&second), beyond, Sides::Both);
    assert!(
        (other.estimate - 8.0 * one.estimate).abs() < 1e-12
            && (other.interval.upper - 8.0 * one.interval.upper).abs() < 1e-12
    );
}
