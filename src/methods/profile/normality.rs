//! Shapiro and Wilk's W with Royston's approximation of its null distribution.
//!
//! Reference: Royston (1995), Applied Statistics 44, 547–551, doi 10.2307/2986146 (algorithm AS R94). The
//! coefficients below are those of the paper, whose own accuracy is about six digits of p.

use super::NoCheck;
use crate::numerics::distributions::normal;
use crate::numerics::sums::sum;
use serde::Serialize;

/// W and its p-value; small W speaks against normality.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct ShapiroWilk {
    #[serde(rename = "W")]
    pub w: f64,
    pub p: f64,
}

/// The test on `values`, for a one-way layout the residuals from the group means.
///
/// With large samples it finds departures that harm nobody; with small ones it misses those that do. It belongs
/// beside a plot and decides nothing by itself. Residuals are not independent, which the p-value ignores.
///
/// # Errors
/// [`NoCheck::TooFew`] below 3 values, [`NoCheck::TooMany`] above 5000, [`NoCheck::NoResiduals`] if all are equal.
///
/// # Accuracy
/// W to about 1e-6 and p to about 1e-5 of the published algorithm's own tables (n 4 to 5000; exact for n 3).
pub fn shapiro_wilk(values: &[f64]) -> Result<ShapiroWilk, NoCheck> {
    let n = values.len();
    match n {
        0..3 => return Err(NoCheck::TooFew { n }),
        5001.. => return Err(NoCheck::TooMany { n }),
        _ => {}
    }
    let mut sorted = values.to_vec();
    sorted.sort_by(f64::total_cmp);
    // To unit range about the centre: squares can then neither overflow nor vanish.
    let range = sorted[n - 1] - sorted[0];
    if range == 0.0 || !range.is_finite() {
        return Err(if range == 0.0 { NoCheck::NoResiduals } else { NoCheck::OutOfRange });
    }
    let centre = sum(sorted.iter().map(|x| x / range)) / n as f64;
    let scaled: Vec<f64> = sorted.iter().map(|x| x / range - centre).collect();
    let weights = weights(n)?;
    let root = sum(scaled.iter().map(|x| x * x)).sqrt();
    let linear = sum(scaled.iter().zip(&weights).map(|(x, a)| x * a));
    // 1 - W as a product, because W is often very near to 1.
    let short = ((root - linear) * (root + linear) / (root * root)).clamp(0.0, 1.0);
    let w = 1.0 - short;
    Ok(ShapiroWilk { w, p: p_value(short, n)? })
}

/// The weights a of the order statistics: antisymmetric, of unit length.
fn weights(n: usize) -> Result<Vec<f64>, NoCheck> {
    if n == 3 {
        let a = 0.5_f64.sqrt();
        return Ok(vec![-a, 0.0, a]);
    }
    let scores = (1..=n).map(|i| normal::quantile((i as f64 - 0.375) / (n as f64 + 0.25)));
    let m: Vec<f64> = scores.collect::<Result<_, _>>()?;
    let squares = sum(m.iter().map(|m| m * m));
    let u = 1.0 / (n as f64).sqrt();
    let last = m[n - 1] / squares.sqrt()
        + u * (0.221_157 + u * (-0.147_981 + u * (-2.071_190 + u * (4.434_685 - u * 2.706_056))));
    let mut a = vec![0.0; n];
    let (ends, phi) = if n > 5 {
        let before_last = m[n - 2] / squares.sqrt()
            + u * (0.042_981 + u * (-0.293_762 + u * (-1.752_461 + u * (5.682_633 - u * 3.582_633))));
        a[n - 2] = before_last;
        a[1] = -before_last;
        let left = squares - 2.0 * m[n - 1] * m[n - 1] - 2.0 * m[n - 2] * m[n - 2];
        (2, left / (1.0 - 2.0 * last * last - 2.0 * before_last * before_last))
    } else {
        (1, (squares - 2.0 * m[n - 1] * m[n - 1]) / (1.0 - 2.0 * last * last))
    };
    a[n - 1] = last;
    a[0] = -last;
    for i in ends..n - ends {
        a[i] = m[i] / phi.sqrt();
    }
    Ok(a)
}

/// P of a W at most as large, from `short` = 1 - W.
fn p_value(short: f64, n: usize) -> Result<f64, NoCheck> {
    if n == 3 {
        let angle = libm::asin((1.0 - short).sqrt()) - libm::asin(0.75_f64.sqrt());
        return Ok((6.0 / std::f64::consts::PI * angle).clamp(0.0, 1.0));
    }
    // A perfect fit would make the logarithm infinite; the smallest number gives p = 1 as well.
    let log_short = libm::log(short.max(f64::MIN_POSITIVE));
    let n_of = n as f64;
    let (y, mean, log_sd) = if n <= 11 {
        let gamma = -2.273 + 0.459 * n_of;
        (
            -libm::log((gamma - log_short).max(f64::MIN_POSITIVE)),
            0.544 + n_of * (-0.399_78 + n_of * (0.025_054 - n_of * 0.000_671_4)),
            1.382_2 + n_of * (-0.778_57 + n_of * (0.062_767 - n_of * 0.002_032_2)),
        )
    } else {
        let x = libm::log(n_of);
        (
            log_short,
            -1.586_1 + x * (-0.310_82 + x * (-0.083_751 + x * 0.003_891_5)),
            -0.480_3 + x * (-0.082_676 + x * 0.003_030_2),
        )
    };
    Ok(normal::sf((y - mean) / libm::exp(log_sd))?)
}
