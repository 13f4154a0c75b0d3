//! Numbers as people read them.

use levelwise::answer::number::*;
use levelwise::answer::{Cell, Precision};
use proptest::prelude::*;

#[test]
fn a_p_value_has_three_decimals_and_is_never_shown_as_zero() {
    let cases = [
        (0.0, "<0.001"),
        (1e-300, "<0.001"),
        (0.000_999_999, "<0.001"),
        (0.001, "0.001"),
        (0.0124, "0.012"),
        (0.0125, "0.013"), // the nearest double lies above the tie
        (0.05, "0.050"),
        (0.9994, "0.999"),
        (0.9996, ">0.999"),
        (1.0, "1.000"),
        (1.0 + 1e-12, "1.000"),
        (f64::NAN, "not available"),
        (-0.1, "not available"),
        (1.5, "not available"),
        (f64::INFINITY, "not available"),
    ];
    for (p, expected) in cases {
        assert_eq!(p_value(p), expected, "p = {p}");
    }
}

#[test]
fn a_p_value_in_a_sentence_carries_its_sign() {
    assert_eq!(p_equals(0.012), "p = 0.012");
    assert_eq!(p_equals(1e-9), "p < 0.001");
    assert_eq!(p_equals(0.9999), "p > 0.999");
    assert_eq!(p_equals(f64::NAN), "p not available");
    assert_eq!(p_named("adjusted p", 0.2), "adjusted p = 0.200");
}

#[test]
fn a_p_value_close_to_alpha_shows_on_which_side_it_lies() {
    assert_eq!(p_value_beside(0.012, 0.05), "0.012");
    assert_eq!(p_value_beside(0.049_96, 0.05), "0.04996");
    assert_eq!(p_value_beside(0.0504, 0.05), "0.0504");
    assert_eq!(p_value_beside(0.05, 0.05), "0.050");
    assert_eq!(p_value_beside(0.0001, 0.05), "<0.001");
    assert_eq!(p_value_beside(0.0166, 0.05 / 3.0), "0.0166");
    assert_eq!(p_value_beside(f64::NAN, 0.05), "not available");
}

#[test]
fn an_estimate_shows_two_digits_of_its_standard_error() {
    let shown = |x, se| estimate(x, Precision::from_spread(se));
    assert_eq!(shown(12.3456, 0.123), "12.35");
    assert_eq!(shown(12.3456, 1.23), "12.3");
    assert_eq!(shown(12.3456, 0.0996), "12.35");
    assert_eq!(shown(12345.678, 432.0), "12346");
    assert_eq!(shown(-0.04, 1.0), "0.0");
    assert_eq!(shown(-0.4, 0.21), "\u{2212}0.40");
    assert_eq!(shown(1.5, 0.0), "1.50");
    assert_eq!(shown(1.5, f64::NAN), "1.50");
}

#[test]
fn very_small_and_very_large_numbers_use_powers_of_ten() {
    assert_eq!(estimate(1.234e-9, Precision::from_spread(1e-10)), "1.23\u{a0}×\u{a0}10⁻⁹");
    assert_eq!(estimate(-3.4e21, Precision::from_spread(1.2e20)), "\u{2212}3.40\u{a0}×\u{a0}10²¹");
    assert_eq!(estimate(1e-20, Precision::from_spread(1e-10)), "0");
    assert_eq!(estimate(1e12 + 0.4, Precision::decimals(1)), "1000000000000.4");
    assert_eq!(fixed(0.0, 2), "0.00");
    assert_eq!(fixed(-0.0, 2), "0.00");
}

#[test]
fn what_is_not_finite_is_said_in_words_or_as_infinity() {
    assert_eq!(fixed(f64::NAN, 2), "not available");
    assert_eq!(fixed(f64::INFINITY, 2), "∞");
    assert_eq!(fixed(f64::NEG_INFINITY, 2), "\u{2212}∞");
    assert_eq!(df(f64::INFINITY), "∞");
    assert_eq!(percent(f64::NAN), "not available");
    assert!(Cell::estimate(f64::NAN, Precision::decimals(2)).absent);
}

#[test]
fn a_column_has_one_precision_that_one_exact_row_does_not_spoil() {
    assert_eq!(Precision::for_column([0.5, 0.41, 0.9]), Precision::decimals(2));
    assert_eq!(Precision::for_column([1.0, 1e-9]), Precision::decimals(3));
    assert_eq!(Precision::for_column([f64::NAN, 0.0]), Precision::decimals(2));
    assert_eq!(Precision::for_column([]), Precision::decimals(2));
}

#[test]
fn observed_values_keep_the_decimals_they_were_recorded_with() {
    assert_eq!(Precision::for_values(&[12.5, 13.25, 9.0]), Precision::decimals(2));
    assert_eq!(Precision::for_values(&[1.0, 2.0, 7.0]), Precision::decimals(0));
    assert_eq!(Precision::for_values(&[0.1 + 0.2, 4.0]), Precision::decimals(3));
    assert_eq!(Precision::for_values(&[2.5, 2.5]), Precision::decimals(1));
    assert_eq!(Precision::for_values(&[]), Precision::decimals(0));
}

#[test]
fn degrees_of_freedom_statistics_percentages_and_counts() {
    assert_eq!(df(12.0), "12");
    assert_eq!(df(12.000_000_000_001), "12");
    assert_eq!(df(6.3333), "6.33");
    assert_eq!(statistic(-2.345), "\u{2212}2.35");
    assert_eq!(statistic(1.2e6), "1200000");
    assert_eq!(percent(0.05), "5\u{a0}%");
    assert_eq!(percent(0.05 / 3.0), "1.67\u{a0}%");
    assert_eq!(percent(0.125), "12.5\u{a0}%");
    assert_eq!(percent(1.0), "100\u{a0}%");
    assert_eq!(percent(0.0), "0\u{a0}%");
    assert_eq!(percent(0.000_01), "<0.01\u{a0}%");
    assert_eq!(percent(0.999_99), ">99.99\u{a0}%");
    assert_eq!(count(9999), "9999");
    assert_eq!(count(1_234_567), "1\u{202f}234\u{202f}567");
    assert_eq!(signed(1.25, Precision::decimals(2)), "+1.25");
    assert_eq!(signed(-1.25, Precision::decimals(2)), "\u{2212}1.25");
    assert_eq!(signed(0.001, Precision::decimals(2)), "0.00");
    assert_eq!(plain(0.05), "0.05");
    assert_eq!(plain(-15.0), "\u{2212}15");
    assert_eq!(plain(1.5e-9), "1.5\u{a0}×\u{a0}10⁻⁹");
}

#[test]
fn an_interval_says_which_side_is_open() {
    let one = Precision::decimals(1);
    assert_eq!(interval(1.2, 3.4, one), "[1.2, 3.4]");
    assert_eq!(interval(1.2, f64::INFINITY, one), "[1.2, ∞)");
    assert_eq!(interval(f64::NEG_INFINITY, 3.4, one), "(\u{2212}∞, 3.4]");
    assert_eq!(interval(f64::NAN, 3.4, one), "not available");
    assert_eq!(interval_in_words(-1.2, 3.4, one), "\u{2212}1.2 to 3.4");
    assert_eq!(interval_in_words(1.2, f64::INFINITY, one), "at least 1.2");
    assert_eq!(interval_in_words(f64::NEG_INFINITY, 3.4, one), "at most 3.4");
}

proptest! {
    #[test]
    fn no_number_is_shown_as_nan_or_with_a_hyphen(x in any::<f64>(), spread in any::<f64>()) {
        let precision = Precision::for_column([spread]);
        for text in [
            p_value(x), p_value_beside(x, spread), estimate(x, precision), signed(x, precision), statistic(x), df(x), percent(x), plain(x),
            interval(x, spread, precision), interval_in_words(x, spread, precision),
            estimate(x, Precision::for_values(&[x, spread]).finer()),
        ] {
            prop_assert!(!text.contains("NaN") && !text.contains("inf") && !text.contains('-'), "{text}");
            prop_assert!(text.chars().count() < 90, "{text}");
        }
    }

    #[test]
    fn an_estimate_is_within_half_of_its_last_place(x in -1e6..1e6f64, exponent in -5..5i32) {
        let spread = 2.5 * libm::pow(10.0, f64::from(exponent));
        let text = estimate(x, Precision::from_spread(spread)).replace(MINUS, "-");
        let read: f64 = text.parse().unwrap();
        prop_assert!((read - x).abs() <= (spread / 25.0).max(1.0) * 0.500_001, "{x} as {text}");
    }
}
