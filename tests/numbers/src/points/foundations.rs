//! What the distributions stand on: special functions, integrals, roots, sums, decimals, random streams.

use crate::table::{Table, point};
use levelwise::numerics::decimal::{self, Decimal, DecimalMark};
use levelwise::numerics::quadrature::{self, Rule};
use levelwise::numerics::random::Streams;
use levelwise::numerics::roots::{self, Value};
use levelwise::numerics::special::{self, Share, Tail};
use levelwise::numerics::sums;

pub fn add(table: &mut Table) {
    add_elementary(table);
    add_gamma(table);
    add_beta(table);
    add_integrals(table);
    add_roots(table);
    add_sums_and_decimals(table);
    add_random(table);
}

fn add_elementary(table: &mut Table) {
    for u in [-0.999_999, -0.7, -0.2, -1e-4, 0.0, 1e-12, 0.01, 0.3, 1.0, 7.0, 1e6, 1e200] {
        point!(table, special::log_minus_linear(u));
        point!(table, special::log_ratio_minus_linear(1.0 + u, u));
    }
    for h in [-700.0, -30.0, -1.0, -1e-3, 0.0, 1e-8, 0.2, 0.9, 4.0, 50.0, 700.0] {
        point!(table, special::exp_minus_linear(h));
    }
    for z in [1e-10, 0.01, 0.5, 1.0, 2.3, 7.9, 8.0, 31.0, 1e4, 1e20] {
        point!(table, special::stirling_error(z));
    }
}

fn add_gamma(table: &mut Table) {
    for a in [1e-3, 0.5, 1.0, 4.2, 30.0, 999.0, 1e8] {
        for x in [1e-100, 1e-3, 0.4, 1.1, 5.0, 33.0, 210.0, 1010.0, 1.000_2e8] {
            point!(table, special::incomplete_gamma(a, x, x - a));
            point!(table, special::log_gamma_density(a, x, x - a));
            if x >= a {
                point!(table, special::upper_gamma_over_density(x, x - a));
            } else {
                point!(table, special::lower_gamma_over_density(a, x, x - a));
            }
        }
        for p in [1e-200, 1e-5, 0.3, 0.99] {
            for tail in [Tail::Lower, Tail::Upper] {
                point!(table, special::log_gamma_quantile(a, p, tail));
            }
        }
    }
}

fn add_beta(table: &mut Table) {
    for (a, b) in [(0.5, 0.5), (1.0, 8.0), (3.2, 0.01), (55.0, 45.0), (1e4, 3e4), (2e9, 2e9)] {
        for x in [0.125, 0.5, 0.75, 0.996_093_75] {
            let share = Share::at(x, a, b);
            point!(table, special::product_minus(x, a + b, a));
            point!(table, special::incomplete_beta(a, b, share));
            point!(table, special::log_beta_density(a, b, share));
            if share.excess <= 0.0 {
                point!(table, special::lower_beta_over_density(a, b, share));
            }
        }
        for p in [1e-200, 1e-5, 0.3, 0.99] {
            for tail in [Tail::Lower, Tail::Upper] {
                point!(table, special::log_beta_quantile(a, b, p, tail));
            }
        }
    }
}

fn add_integrals(table: &mut Table) {
    let wave = |x: f64| libm::exp(-0.5 * x * x) * (1.0 + 0.3 * libm::sin(3.0 * x));
    let log_bell = |x: f64| 0.7 * x - libm::exp(x);
    for count in [1, 5, 16, 64] {
        let value = Rule::gauss_legendre(count).integrate(-1.0, 2.5, wave);
        table.add("quadrature::gauss_legendre", &[&count], value);
    }
    for high in [4.0, f64::INFINITY] {
        let peaked = |x: f64| libm::exp(-0.5 * x * x) / (x * x + 1e-6);
        let graded = quadrature::graded(-2.0, high, 1e-3, 1.0, peaked);
        table.add("quadrature::graded", &[&high], graded);
    }
    table.add("quadrature::rule_16", &[], quadrature::rule_16().integrate(0.0, 3.0, wave));
    table.add("quadrature::rule_32", &[], quadrature::rule_32().integrate(0.0, 3.0, wave));
    for tolerance in [1e-6, 1e-15] {
        let refined = quadrature::trapezoid_refined(-9.0, 9.0, 12, tolerance, wave);
        table.add("quadrature::trapezoid_refined", &[&tolerance], refined);
        table.add("quadrature::bell", &[&tolerance], quadrature::bell(log_bell, 4.0, 1.0, tolerance));
    }
    for step in [0.5, 0.125] {
        let outward = quadrature::trapezoid_outward(0.2, step, |i| wave(step * f64::from(i)));
        table.add("quadrature::trapezoid_outward", &[&step], outward);
        let even = quadrature::trapezoid_even(9.0, step, |x| libm::exp(-x * x));
        table.add("quadrature::trapezoid_even", &[&step], even);
        table.add("quadrature::trapezoid", &[&step], quadrature::trapezoid(-9.0, 8.0, step, wave));
    }
    table.add("quadrature::peak", &[], quadrature::peak(log_bell, 4.0, 1.0));
    table.add("quadrature::fall", &[], quadrature::fall(log_bell, log_bell(-0.35), 1.0));
}

fn add_roots(table: &mut Table) {
    for target in [1e-9, 0.2, 5.0, 1e9] {
        let newton = |x: f64| {
            let value = libm::exp(x);
            Value { value: value - target, slope: value, chord: 0.0 }
        };
        table.add("roots::increasing", &[&target], roots::increasing(newton, 0.5, 1.0));
        let secant = roots::increasing_secant(|x| libm::sinh(x) - target, 0.5, 1.0);
        table.add("roots::increasing_secant", &[&target], secant);
        let guided = roots::increasing_secant_from(|x| libm::sinh(x) - target, 0.5, 1.0, 1.1);
        table.add("roots::increasing_secant_from", &[&target], guided);
    }
    for target in [1e-200, 0.02, 0.7] {
        // The tail exp(-x), with and without its slope.
        for slope in [-1.0, f64::NAN] {
            let found = roots::log_tail(|x| (libm::exp(-x), slope), target, true, 0.5);
            table.add("roots::log_tail", &[&target, &slope], found);
        }
    }
}

fn add_sums_and_decimals(table: &mut Table) {
    for values in [&[0.1; 10][..], &[1e16, 1.0, -1e16, 0.3], &[1e308, 1e308, -1e308], &[]] {
        table.add("sums::sum", &[&values], sums::sum(values.iter().copied()));
    }
    let texts = [
        "0.1",
        "-17.25",
        "1000000000000.4",
        "1000000000000.3",
        "9007199254740993",
        "123456789012345678901234567890",
        "2.2250738585072011e-308",
        "4.9e-324",
        "1.7976931348623157e308",
        "8.5e-46",
        "0.3e5",
    ];
    let numbers: Vec<Decimal> =
        texts.iter().filter_map(|text| Decimal::parse(text, DecimalMark::Point).ok()).collect();
    assert_eq!(numbers.len(), texts.len(), "every text is a decimal");
    for (text, number) in texts.iter().zip(&numbers) {
        table.add("decimal::to_f64", &[text], number.to_f64());
        for (other_text, other) in texts.iter().zip(&numbers) {
            table.add("decimal::minus", &[text, other_text], number.minus(*other));
        }
        let origin = decimal::common_origin(numbers[0], *number).to_f64();
        table.add("decimal::common_origin", &[&texts[0], text], origin);
    }
}

fn add_random(table: &mut Table) {
    for index in [0, 1, 1 << 40] {
        let mut stream = Streams::new(20_261_201, "agreement").stream(index);
        for draw in 0..50 {
            table.add("random::uniform", &[&index, &draw], stream.uniform());
            table.add("random::normal", &[&index, &draw], stream.normal());
            table.add("random::below", &[&index, &draw], f64::from(stream.below(97)));
        }
    }
}
