//! Doses of any sizes, by one-dimensional integrals from step to step of the walk.
//!
//! Let Sᵥ be the sum of the v highest doses' nⱼ(Xⱼ - y) and Nᵥ their number of observations. Given its end Sᵥ = x the walk
//! does not depend on y, nor on the control: Sᵥ tells all about the common mean. So
//! Pᵥ(x) = P(S₁, ..., Sᵥ₋₁ <= 0 | Sᵥ = x) serves for every w. P₁ = 1, and as Sᵥ given Sᵥ₊₁ = x is normal,
//!
//! Pᵥ₊₁(x) = ∫ Pᵥ(u) N(u; x Nᵥ/Nᵥ₊₁, Nᵥnᵥ₊₁/Nᵥ₊₁) du over u <= 0.
//!
//! Let y be the control's mean plus b = w √(1/nₖ + 1/n₀). Then Sᵥ is normal with mean -Nᵥb and variance Nᵥ + Nᵥ²/n₀, and
//! the walk first exceeds 0 at step v or never:
//!
//! P(T > w) = Σᵥ ∫ Pᵥ(x) N(x; -Nᵥb, Nᵥ + Nᵥ²/n₀) dx over x > 0,
//! P(T <= w) = ∫ Pₖ(x) N(x; -Nₖb, Nₖ + Nₖ²/n₀) dx over x <= 0.
//!
//! The sizes here are those of the study divided by nₖ, so that N₁ = 1. Gauss-Legendre rules with 32 nodes on panels no
//! longer than five standard deviations of whatever normal density or distribution function stands in the integrand.

use super::Tail;
use crate::numerics::distributions::normal;
use crate::numerics::quadrature::rule_32;

/// Standard deviations beyond which a normal density is left out: Φ(-9.5) is 1e-21.
const REACH: f64 = 9.5;
/// Standard deviations that one panel spans.
const SPAN: f64 = 5.0;

/// An interval with Pᵥ at the nodes of the rule there.
struct Panel {
    from: f64,
    to: f64,
    values: Vec<f64>,
}

pub(super) struct Walk {
    /// √(1/nₖ + 1/n₀)
    unit: f64,
    /// Every step after the first.
    steps: Vec<Step>,
    last: Last,
}

/// What Pᵥ is above 0.
struct Step {
    total: f64,
    sd: f64,
    above: Vec<Panel>,
}

/// What Pₖ is below 0.
struct Last {
    total: f64,
    sd: f64,
    below: Below,
}

/// Pᵥ at and below 0: 1 up to `low`, then as on the panels.
struct Below {
    low: f64,
    panels: Vec<Panel>,
}

impl Walk {
    /// Doses with `sizes` in ascending order of the doses, the last of them 1, and `control` observations beside.
    ///
    /// The lower tail needs Pₖ as far down as Sₖ may come; for the upper tail alone the walk ends above 0.
    pub(super) fn new(sizes: &[f64], control: f64, tail: Tail) -> Walk {
        let all: f64 = sizes.iter().sum();
        let sd_with_control = |total: f64| (total + total * total / control).sqrt();
        // How far down a walk may come that ends at or above the lowest end that counts: REACH of its own standard
        // deviations, and its share of the lowest end.
        let end = match tail {
            Tail::Upper => 0.0,
            Tail::Lower => (1.0 / all + 1.0 / control).sqrt(),
        };
        let lowest = |total: f64| REACH * (total.sqrt() + total * end);
        let mut steps = Vec::new();
        let mut total = 1.0;
        let mut below = Below { low: 0.0, panels: Vec::new() };
        for (place, &size) in sizes.iter().rev().enumerate().skip(1) {
            let bridge = Bridge { before: total, size, after: total + size };
            total = bridge.after;
            let sd = sd_with_control(total);
            let smooth = bridge.smooth();
            let next_sd = match sizes.len() - 1 - place {
                0 => sd / SPAN,
                next => (total * sizes[next - 1] / (total + sizes[next - 1])).sqrt(),
            };
            let above = bridge.panels(&below, 0.0, REACH * smooth, (SPAN * smooth).min(sd));
            // A walk that ends lower has stayed low all the way: its first step, the most likely to exceed, is
            // REACH standard deviations below 0.
            let low = lowest(total).min(REACH * (total * (total - 1.0)).sqrt());
            let panels = bridge.panels(&below, -low, 0.0, SPAN * smooth.min(next_sd));
            below = Below { low: -low, panels };
            steps.push(Step { total, sd, above });
        }
        let last = Last { total, sd: sd_with_control(total), below };
        Walk { unit: (1.0 + 1.0 / control).sqrt(), steps, last }
    }

    /// P(T > w) when σ is known.
    pub(super) fn exceeds(&self, w: f64) -> f64 {
        let b = w * self.unit;
        let later = self.steps.iter().map(|step| over(&step.above, -step.total * b, step.sd));
        normal::lower(-w) + later.sum::<f64>()
    }

    /// P(T <= w) when σ is known.
    pub(super) fn stays_below(&self, w: f64) -> f64 {
        if w > 0.0 {
            // No tail any more, and the walk ends lower than has been prepared.
            return 1.0 - self.exceeds(w);
        }
        let Last { total, sd, below } = &self.last;
        below.chance(-total * w * self.unit, *sd)
    }
}

impl Below {
    /// The chance of a walk that has stayed at or below 0, its place being normal with this mean and standard deviation.
    fn chance(&self, mean: f64, sd: f64) -> f64 {
        normal::lower((self.low - mean) / sd) + over(&self.panels, mean, sd)
    }
}

/// ∫ P(x) N(x; mean, sd²) dx over the panels, leaving out those too far away to count.
fn over(panels: &[Panel], mean: f64, sd: f64) -> f64 {
    let (Some(first), Some(last)) = (panels.first(), panels.last()) else { return 0.0 };
    // Where the mean is outside, the density falls from the nearest end even faster than from the mean.
    let nearest = mean.clamp(first.from, last.to);
    let counts = |panel: &&Panel| panel.to > nearest - REACH * sd && panel.from < nearest + REACH * sd;
    let parts = panels.iter().filter(counts).map(|panel| {
        let mut values = panel.values.iter();
        rule_32().integrate(panel.from, panel.to, |x| {
            let value = values.next().expect("a value for every node");
            value * normal::density((x - mean) / sd)
        })
    });
    parts.sum::<f64>() / sd
}

/// One step of the walk, from `before` to `after` observations in all, seen from its end.
struct Bridge {
    before: f64,
    size: f64,
    after: f64,
}

impl Bridge {
    /// The distance over which Pᵥ changes: it is a function of x smoothed by a normal density of this width.
    fn smooth(&self) -> f64 {
        (self.size * self.after / self.before).sqrt()
    }

    /// The next P from that of the step before, on panels no longer than `longest` from `from` to `to`.
    fn panels(&self, below: &Below, from: f64, to: f64, longest: f64) -> Vec<Panel> {
        let share = self.before / self.after;
        let sd = (share * self.size).sqrt();
        let count = libm::ceil((to - from) / longest);
        let end = |index: usize| from + (to - from) * (index as f64 / count);
        let panel = |index: usize| {
            let (from, to) = (end(index), end(index + 1));
            let mut values = Vec::new();
            // The rule tells its nodes; what they add up to is of no use yet.
            rule_32().integrate(from, to, |x| {
                values.push(below.chance(x * share, sd));
                0.0
            });
            Panel { from, to, values }
        };
        (0..count as usize).map(panel).collect()
    }
}
