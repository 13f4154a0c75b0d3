//! Beyond rank 3, around the origin: integration over the statistic that leads.
//!
//! The region is written as M <= c with M the largest of the bₖ·T (a limit of its own for each becomes a factor). Exactly one
//! leads, so that P(M > c) = Σₖ ∫ fₖ(t) P(no other exceeds t | bₖ·T = t) dt from c on, or from below up to c for P(M <= c).
//! Given bₖ·T = t the part of T across bₖ is again a spherical t vector, with df + 1 degrees of freedom and scale
//! √((df+t²)/(df+1)); the conditional probability is found by separation of variables (`conditioning`). In the
//! upper tail it tends to 1 and is integrated as what is missing from Bonferroni's sum Σ P(bₖ·T > c), so that the relative
//! error vanishes with the probability; and as the neighbours of the leader limit the others narrowly, the integrand is
//! smooth where that of P(M <= c) itself is not.
//!
//! # References
//! 1. The density of the largest of several variables by the one that leads: common practice, e.g. Azaïs and Wschebor (2009),
//!    Level Sets and Extrema of Random Processes and Fields (from memory).
//! 2. Kotz and Nadarajah (2004), Multivariate t Distributions and Their Applications, 1.10 (conditional distributions;
//!    from memory).

use super::conditioning::Order;
use super::deviate::Spread;
use super::estimator::{Part, Scratch};
use super::ray::{Ray, Stretch};
use super::region::{SAME, Slab};
use crate::numerics::distributions::student_t;

/// Which side of the region is integrated.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Side {
    Inside,
    Outside,
}

/// How much of the limits counts.
#[derive(Debug, Clone, Copy)]
pub(super) struct Level {
    pub level: f64,
    /// The level whose limits decide the order of the coordinates. Any will do; a fixed one keeps the answer as a function
    /// of the level free of jumps.
    pub typical: f64,
}

/// A face of the region: `sign` times the row of `slab` leads beyond `ratio` times the level.
#[derive(Debug, Clone, Copy)]
struct Front {
    slab: usize,
    sign: f64,
    ratio: f64,
}

/// The integral over the leader.
#[derive(Debug, Clone)]
pub(super) struct Leader {
    /// Limits as multiples of the level.
    slabs: Vec<Slab>,
    fronts: Vec<Front>,
    level: f64,
    df: f64,
    side: Side,
    mirrored: bool,
    /// The level whose limits decide the order of the coordinates.
    typical: f64,
    spread: Option<Spread>,
}

/// What one front needs.
#[derive(Debug, Clone)]
pub(super) struct Prepared {
    front: Front,
    ray: Ray,
    order: Order,
    /// For each row of the order: the correlation with the leader and the limits.
    others: Vec<(f64, f64, f64)>,
    /// The leader's own limit on the other side.
    own_low: f64,
}

impl Leader {
    /// For limits `slabs` times `level`. `spread` holds the quantiles for df + 1.
    pub fn new(slabs: Vec<Slab>, level: Level, df: f64, side: Side, spread: Option<Spread>) -> Leader {
        let Level { level, typical } = level;
        let mirrored = slabs.iter().all(|slab| slab.low == -slab.high);
        let mut fronts = Vec::new();
        for (slab, limits) in slabs.iter().enumerate() {
            if limits.high.is_finite() {
                fronts.push(Front { slab, sign: 1.0, ratio: limits.high });
            }
            if limits.low.is_finite() && !mirrored {
                fronts.push(Front { slab, sign: -1.0, ratio: -limits.low });
            }
        }
        Leader { slabs, fronts, level, df, side, mirrored, typical, spread }
    }

    pub fn side(&self) -> Side {
        self.side
    }

    /// The parts, whose sum is the probability of the side.
    pub fn parts(&self) -> Vec<Part> {
        let weight = if self.mirrored { 2.0 } else { 1.0 };
        let part = |front: &Front| {
            let alone = weight * student_t::sf(front.ratio * self.level, self.df).unwrap_or(0.0);
            match self.side {
                Side::Outside => Part { constant: alone, factor: -weight, importance: alone },
                Side::Inside => Part { constant: 0.0, factor: weight, importance: 1.0 },
            }
        };
        self.fronts.iter().map(part).collect()
    }

    /// Everything about one part that does not depend on the point.
    pub fn prepare(&self, part: usize) -> Prepared {
        let front = self.fronts[part];
        let own = &self.slabs[front.slab];
        let ahead: Vec<f64> = own.row.iter().map(|x| front.sign * x).collect();
        let (mut rows, mut others) = (Vec::new(), Vec::new());
        let (mut low, mut high) = (Vec::new(), Vec::new());
        let typical = self.typical * front.ratio.abs();
        for slab in self.slabs.iter().enumerate().filter(|(j, _)| *j != front.slab).map(|(_, slab)| slab) {
            let rho: f64 = slab.row.iter().zip(&ahead).map(|(a, b)| a * b).sum();
            let across: Vec<f64> = slab.row.iter().zip(&ahead).map(|(a, b)| a - rho * b).collect();
            let limits = [slab.low, slab.high].map(|ratio| times(ratio, self.typical) - rho * typical);
            // Rows were merged before: what is left across the leader is at least this long.
            if across.iter().map(|x| x * x).sum::<f64>() > SAME * SAME {
                rows.push(across);
                others.push((rho, slab.low, slab.high));
                low.push(limits[0]);
                high.push(limits[1]);
            }
        }
        let stretch = match (self.side, self.mirrored) {
            (Side::Outside, _) => Stretch::Upwards,
            (Side::Inside, true) => Stretch::FromZero,
            (Side::Inside, false) => Stretch::Downwards,
        };
        let own_low = if front.sign > 0.0 { own.low } else { -own.high };
        Prepared {
            front,
            ray: Ray::new(stretch, front.ratio * self.level, self.df),
            order: Order::new(rows, &low, &high),
            others,
            own_low,
        }
    }

    /// How many coordinates of a point are used.
    pub fn dimension(&self, prepared: &Prepared) -> usize {
        1 + usize::from(self.spread.is_some()) + prepared.order.dimension()
    }

    /// The integrand at one point.
    pub fn sample(&self, prepared: &Prepared, point: &[f64], scratch: &mut Scratch) -> f64 {
        let (t, weight) = prepared.ray.at(point[0]);
        let level = t / prepared.front.ratio;
        let (scale, rest) = match &self.spread {
            Some(spread) => {
                let wider = libm::hypot(self.df.sqrt(), t) / (self.df + 1.0).sqrt();
                (spread.quantile(point[1]) / wider, &point[2..])
            }
            None => (1.0, &point[1..]),
        };
        let none_exceeds = if t < times(prepared.own_low, level) {
            0.0
        } else {
            scratch.low.clear();
            scratch.high.clear();
            for &(rho, low, high) in &prepared.others {
                scratch.low.push((times(low, level) - rho * t) * scale);
                scratch.high.push((times(high, level) - rho * t) * scale);
            }
            prepared.order.product(&scratch.low, &scratch.high, rest, &mut scratch.y)
        };
        match self.side {
            Side::Outside => weight * (1.0 - none_exceeds),
            Side::Inside => weight * none_exceeds,
        }
    }
}

impl Prepared {
    /// About how many multiplications one point takes.
    pub fn work(&self) -> usize {
        self.order.work() + 4 * self.others.len() + 300
    }
}

/// A limit at this level: no limit stays none.
pub(super) fn times(ratio: f64, level: f64) -> f64 {
    if ratio.is_infinite() { ratio } else { ratio * level }
}
