//! How a spherical t vector T = Z/S spreads from the origin, in the forms that the exact integrals need.
//!
//! In the plane P(|T| > r) = (1 + r²/df)^(-df/2). In space the share of a ball's surface that lies beyond a plane is linear in
//! the plane's distance (Archimedes), so that everything radial comes down to the tail of one component, P(t > r).

use crate::numerics::distributions::{normal, student_t};
use crate::numerics::quadrature;
use crate::numerics::special::stirling_error;
use std::f64::consts::PI;

/// Below this the probability of a short interval is integrated, not subtracted from 1.
const SHORT: f64 = 0.7;

/// A spherical t distribution seen on a scale: lengths given to its methods are multiples of `scale`.
#[derive(Debug, Clone, Copy)]
pub(super) struct Radial {
    df: f64,
    scale: f64,
    log_peak: f64,
}

impl Radial {
    pub fn new(df: f64, scale: f64) -> Radial {
        Radial { df, scale, log_peak: log_peak(df) }
    }

    /// P(t > r) for one component, r >= 0.
    pub fn tail(&self, r: f64) -> f64 {
        let t = (r * self.scale).min(f64::MAX);
        if self.df == f64::INFINITY { normal::lower(-t) } else { student_t::sf(t, self.df).unwrap_or(0.0) }
    }

    /// P(|t| <= r) for one component, r >= 0, without cancellation.
    pub fn centre(&self, r: f64) -> f64 {
        let t = r * self.scale;
        if t > SHORT {
            return 1.0 - 2.0 * self.tail(r);
        }
        2.0 * t * quadrature::rule_16().integrate(0.0, 1.0, |u| self.density(t * u))
    }

    /// P(|T| > r) in the plane.
    pub fn tail_in_plane(&self, r: f64) -> f64 {
        libm::exp(self.log_tail_in_plane(r))
    }

    /// P(|T| <= r) in the plane.
    pub fn centre_in_plane(&self, r: f64) -> f64 {
        -libm::expm1(self.log_tail_in_plane(r))
    }

    fn log_tail_in_plane(&self, r: f64) -> f64 {
        let t = (r * self.scale).min(f64::MAX);
        if self.df == f64::INFINITY {
            return -0.5 * t * t;
        }
        let q = t / self.df.sqrt();
        // Where the square would leave the range of doubles, 1 no longer counts beside it.
        if q < 1e8 { -0.5 * self.df * libm::log1p(q * q) } else { -self.df * libm::log(q) }
    }

    /// P(|t| <= d) - (d/r) P(|t| <= r) for r² = d² + `excess`, without cancellation: d ∫ P(|T| <= ρ)/ρ² dρ from d to r in
    /// space, the radial integral of what lies between the origin and a plane at distance d.
    pub fn shell(&self, d: f64, excess: f64) -> f64 {
        let r = (d * d + excess).sqrt();
        if r * self.scale > SHORT {
            return self.centre(d) - d / r * self.centre(r);
        }
        let (near, square) = (d * self.scale, excess * self.scale * self.scale);
        let difference = |u: f64| {
            let t = near * u;
            let log_fall = if self.df == f64::INFINITY {
                -0.5 * square * u * u
            } else {
                -0.5 * (self.df + 1.0) * libm::log1p(square * u * u / (self.df + t * t))
            };
            -self.density(t) * libm::expm1(log_fall)
        };
        2.0 * near * quadrature::rule_16().integrate(0.0, 1.0, difference)
    }

    /// Over which length, in multiples of the scale, the distribution falls off at distance r.
    pub fn width(&self, r: f64) -> f64 {
        let t = r * self.scale;
        let spread = if self.df == f64::INFINITY {
            1.0
        } else {
            libm::hypot(self.df.sqrt(), t) / (self.df + 1.0).sqrt()
        };
        spread / self.scale
    }

    /// Density of one component.
    fn density(&self, t: f64) -> f64 {
        density(t, self.df, self.log_peak)
    }
}

/// Density of Student's t, given the logarithm of its peak.
pub(super) fn density(t: f64, df: f64, log_peak: f64) -> f64 {
    if df == f64::INFINITY {
        return libm::exp(log_peak - 0.5 * t * t);
    }
    let q = t.abs() / df.sqrt();
    // As in the plane.
    let log_growth = if q < 1e8 { libm::log1p(q * q) } else { 2.0 * libm::log(q) };
    libm::exp(log_peak - 0.5 * (df + 1.0) * log_growth)
}

/// log of Γ((df+1)/2) / (√(df π) Γ(df/2)), the density of Student's t at 0, by Stirling's formula with its error.
pub(super) fn log_peak(df: f64) -> f64 {
    let normal = -0.5 * libm::log(2.0 * PI);
    if df == f64::INFINITY {
        return normal;
    }
    normal + 0.5 * (df * libm::log1p(1.0 / df) - 1.0) + stirling_error(0.5 * (df + 1.0))
        - stirling_error(0.5 * df)
}
