//! Logarithms and exponentials with their leading terms taken off, free of cancellation.

/// log(1 + u) - u, for u > -1.
///
/// # Accuracy
/// A few units in the last place.
///
/// # Source
/// log(1 + u) = 2 artanh r with r = u / (2 + u); since 2r - u = -r u, the difference is
/// r (2 (r²/3 + r⁴/5 + ...) - u): Abramowitz and Stegun (1964), 4.1.27.
pub fn log_minus_linear(u: f64) -> f64 {
    if !(-0.5..=0.7).contains(&u) {
        return libm::log1p(u) - u;
    }
    let r = u / (2.0 + u);
    let square = r * r;
    // r² is at most 1/9: the first term left out is below 1e-17 of the sum's leading term u.
    let mut sum = 0.0;
    for j in (1..=16).rev() {
        sum = square * (1.0 / (2 * j + 1) as f64 + sum);
    }
    r * (2.0 * sum - u)
}

/// log(`ratio`) - (`ratio` - 1), where `excess` is ratio - 1 computed without cancellation.
///
/// Two forms of one argument: near 1 the excess carries the digits, near 0 the ratio does.
pub fn log_ratio_minus_linear(ratio: f64, excess: f64) -> f64 {
    if excess.abs() <= 0.5 { log_minus_linear(excess) } else { libm::log(ratio) - excess }
}

/// exp(h) - 1 - h.
///
/// # Accuracy
/// A few units in the last place.
pub fn exp_minus_linear(h: f64) -> f64 {
    if h.abs() > 0.5 {
        return libm::expm1(h) - h;
    }
    // Taylor's series in Horner's form; the first term left out is below 0.5^16 / 18! of the leading one.
    let mut sum = 1.0;
    for j in (3..=17).rev() {
        sum = 1.0 + h / j as f64 * sum;
    }
    0.5 * h * h * sum
}

/// `a` · `b` - `c`, rounded once or twice at the end: nothing is lost where the product nearly equals `c`.
///
/// # Accuracy
/// A few units in the last place, for factors below 1e150.
///
/// # Source
/// Dekker (1971), Numer. Math. 18, 224-242: the rounding error of a product, from factors split into halves of 26 bits.
pub fn product_minus(a: f64, b: f64, c: f64) -> f64 {
    const SPLITTER: f64 = 134_217_729.0; // 2²⁷ + 1
    let halves = |number: f64| {
        let shifted = SPLITTER * number;
        let high = shifted - (shifted - number);
        (high, number - high)
    };
    let product = a * b;
    let ((a1, a2), (b1, b2)) = (halves(a), halves(b));
    let error = ((a1 * b1 - product) + a1 * b2 + a2 * b1) + a2 * b2;
    (product - c) + error
}

/// The error of Stirling's formula: log Γ(z) - [(z - 1/2) log z - z + log(2π)/2], for z > 0.
///
/// With it, ratios of gamma functions of large arguments need no difference of large logarithms.
///
/// # Accuracy
/// Absolute error below 3e-15 (z < 8), relative error of a few units in the last place (z >= 8).
///
/// # Source
/// Abramowitz and Stegun (1964), 6.1.42: terms B₂ₖ / (2k (2k-1) z²ᵏ⁻¹). The use in binomial probabilities is
/// Loader's (2000), Fast and accurate computation of binomial probabilities.
pub fn stirling_error(z: f64) -> f64 {
    if z < 8.0 {
        let half_log_two_pi = 0.918_938_533_204_672_8; // log(2π) / 2
        return libm::lgamma(z) - ((z - 0.5) * libm::log(z) - z + half_log_two_pi);
    }
    // B₂ₖ / (2k (2k-1)) for k = 1..10, from the exact Bernoulli numbers.
    const TERMS: [f64; 10] = [
        1.0 / 12.0,
        -1.0 / 360.0,
        1.0 / 1260.0,
        -1.0 / 1680.0,
        1.0 / 1188.0,
        -691.0 / 360_360.0,
        1.0 / 156.0,
        -3617.0 / 122_400.0,
        43867.0 / 244_188.0,
        -174_611.0 / 125_400.0,
    ];
    let inverse = 1.0 / z;
    let square = inverse * inverse;
    TERMS.iter().rev().fold(0.0, |sum, term| sum * square + term) * inverse
}
