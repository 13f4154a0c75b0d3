//! How the leading statistic is drawn: t from a half-line or an interval, with the weight f(t) dt/dv that makes the mean over v in
//! (0, 1) an integral with Student's density f.
//!
//! On a half-line t follows the length of a spherical vector in the plane beyond a circle, P(length > y) =
//! ((df+y²)/(df+y₀²))^(-df/2), whose tail is that of f up to a slowly varying factor and whose inverse is elementary: from 1
//! on t is that length itself, and the weight is nearly constant. From a start below 1 the length, half as long
//! again and shifted, covers the hump of f that lies ahead.

use super::radial::{density, log_peak};

/// Stretch of the length, and its least value, where the half-line starts below 1.
const STRETCH: f64 = 1.5;
/// The square of a length is kept below this, inside the range of doubles: the weight has long become constant there.
const LONGEST: f64 = 1e290;

/// From here on only the direction counts: everything across t grows with t, and t itself need grow no further.
const FAR: f64 = 1e100;

/// Where t comes from.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) enum Stretch {
    /// From the limit upwards.
    Upwards,
    /// From the limit downwards.
    Downwards,
    /// From 0 to the limit.
    FromZero,
}

/// A stretch with its end.
#[derive(Debug, Clone, Copy)]
pub(super) struct Ray {
    stretch: Stretch,
    limit: f64,
    df: f64,
    log_peak: f64,
    sigma: f64,
    least: f64,
}

impl Ray {
    pub fn new(stretch: Stretch, limit: f64, df: f64) -> Ray {
        let ahead = if stretch == Stretch::Downwards { -limit } else { limit };
        let (sigma, least) = if ahead >= 1.0 { (1.0, ahead) } else { (STRETCH, 1.0) };
        Ray { stretch, limit, df, log_peak: log_peak(df), sigma, least }
    }

    /// t and its weight at v.
    pub fn at(&self, v: f64) -> (f64, f64) {
        let f = |t: f64| density(t, self.df, self.log_peak);
        if self.stretch == Stretch::FromZero {
            let t = v * self.limit;
            return (t, f(t) * self.limit);
        }
        if self.least > FAR {
            return (FAR.copysign(self.limit), self.far_weight());
        }
        let square = self.least * self.least;
        let (grown, v) = if self.df == f64::INFINITY {
            (square - 2.0 * libm::log(v), v)
        } else {
            // v^(-2/df) may not leave the range of doubles.
            let most = libm::log(LONGEST / (self.df + square).max(1.0)).max(0.0);
            let log_v = libm::log(v).max(-0.5 * self.df * most);
            (square + (self.df + square) * libm::expm1(-2.0 / self.df * log_v), libm::exp(log_v))
        };
        let y = grown.sqrt();
        let reach = self.sigma * (y - self.least);
        let t = if self.stretch == Stretch::Upwards { self.limit + reach } else { self.limit - reach };
        let ratio = if self.df == f64::INFINITY { 1.0 } else { 1.0 + grown / self.df };
        (t, f(t) * self.sigma * ratio / (y * v))
    }

    /// The limit of the weight for large limits y₀, where f(t) is C (t²/df)^(-(df+1)/2): C √df^(df-1) y₀^-df.
    fn far_weight(&self) -> f64 {
        if self.df == f64::INFINITY {
            return 0.0;
        }
        libm::exp(
            self.log_peak + 0.5 * (self.df - 1.0) * libm::log(self.df) - self.df * libm::log(self.least),
        )
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::numerics::distributions::student_t;
    use crate::numerics::quadrature;

    #[test]
    fn the_weights_integrate_to_the_tail() {
        for df in [0.2, 1.0, 5.0, 30.0, f64::INFINITY] {
            for limit in [-2.0, 0.0, 0.5, 1.0, 3.0, 9.0, 1e120] {
                let tail = student_t::sf(limit, df).unwrap();
                if tail == 0.0 {
                    assert_eq!(Ray::new(Stretch::Upwards, limit, df).at(0.5).1, 0.0);
                    continue;
                }
                let ray = Ray::new(Stretch::Upwards, limit, df);
                // Panels towards 0, where the weight of a shifted length is not smooth; narrow ones, as the hump of f
                // can be narrow in v.
                let mut sum = 0.0;
                let mut high = 1.0;
                for _ in 0..60 {
                    let width = 0.5 * high / 32.0;
                    for panel in 0..32 {
                        let low = 0.5 * high + width * f64::from(panel);
                        sum += quadrature::rule_32().integrate(low, low + width, |v| ray.at(v).1);
                    }
                    high *= 0.5;
                }
                assert!((sum / tail - 1.0).abs() < 1e-9, "{df} {limit}: {sum} {tail}");
                let down = Ray::new(Stretch::Downwards, -limit, df);
                assert_eq!((-down.at(0.3).0, down.at(0.3).1), ray.at(0.3));
            }
        }
    }
}
