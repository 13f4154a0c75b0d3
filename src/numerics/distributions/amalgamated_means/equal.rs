//! Equal sizes of all doses, by the identity of Sparre Andersen.
//!
//! Given the control's mean the walk has independent steps N(-y, 1) in units of its step's standard deviation. Hₖ, the
//! chance that k steps never exceed 0, follows from the single chances pⱼ = Φ(√j y) that the sum of j steps does not:
//! k Hₖ = Σⱼ pⱼ Hₖ₋ⱼ, j = 1..k, H₀ = 1. Put Hᵢ = 1 - Gᵢ and pⱼ = 1 - qⱼ: k = Σⱼ 1 cancels, and what is left,
//! k Gₖ = Σⱼ [qⱼ + (1 - qⱼ) Gₖ₋ⱼ], G₀ = 0, is a sum of positive terms for the upper tail as the first is for the lower.
//!
//! With r = n/n₀ and X₀ = √r z in those units, F(w) = ∫ φ(z) Gₖ(√r z + √(1+r) w) dz.

use crate::numerics::distributions::normal;
use crate::numerics::quadrature;

pub(super) struct EqualDoses {
    count: usize,
    /// √r and √(1+r)
    root: f64,
    root_of_both: f64,
    /// Step of the trapezoidal rule in z.
    step: f64,
}

impl EqualDoses {
    /// `count` doses, each with `ratio` times the observations of the control.
    pub(super) fn new(count: usize, ratio: f64) -> EqualDoses {
        // Given every mean the control's has variance 1/(1 + k r) in z, so that the integrand, as a function of z, is a
        // mixture of normal densities at least that wide, with positive weights. The rule's error relative to the
        // integral is then at most 2 exp(-(2π/h)²/(2(1 + k r))): 2e-16 with the step h here.
        let step = 0.73 / (1.0 + count as f64 * ratio).sqrt();
        EqualDoses { count, root: ratio.sqrt(), root_of_both: (1.0 + ratio).sqrt(), step }
    }

    /// P(T > w) when σ is known.
    pub(super) fn exceeds(&self, w: f64) -> f64 {
        // Given that the highest dose alone exceeds, the control lies about λw low, λ² = r/(1+r).
        let middle = if w > 0.0 { -self.root / self.root_of_both * w } else { 0.0 };
        let mut known = vec![0.0; self.count + 1];
        self.over_control(middle, w, |y, chances| {
            for (j, q) in chances.iter_mut().enumerate() {
                *q = normal::lower_in_integrals(-((j + 1) as f64).sqrt() * y);
            }
            for i in 1..known.len() {
                let terms = (1..=i).map(|j| chances[j - 1] + (1.0 - chances[j - 1]) * known[i - j]);
                known[i] = terms.sum::<f64>() / i as f64;
            }
            known[self.count]
        })
    }

    /// P(T <= w) when σ is known.
    pub(super) fn stays_below(&self, w: f64) -> f64 {
        // Where w is low the mean of all doses must be, and the control is high.
        let count = self.count as f64;
        let all = count * self.root * self.root_of_both / (1.0 + count * self.root * self.root);
        let middle = if w < 0.0 { -all * w } else { 0.0 };
        let mut known = vec![1.0; self.count + 1];
        self.over_control(middle, w, |y, chances| {
            for (j, p) in chances.iter_mut().enumerate() {
                *p = normal::lower_in_integrals(((j + 1) as f64).sqrt() * y);
            }
            for i in 1..known.len() {
                known[i] = (1..=i).map(|j| chances[j - 1] * known[i - j]).sum::<f64>() / i as f64;
            }
            known[self.count]
        })
    }

    /// ∫ φ(z) `given`(√r z + √(1+r) w) dz, from near the peak at `middle` outwards. `given` also gets room for k chances.
    fn over_control(&self, middle: f64, w: f64, mut given: impl FnMut(f64, &mut [f64]) -> f64) -> f64 {
        let mut chances = vec![0.0; self.count];
        quadrature::trapezoid_outward(middle, self.step, |index| {
            let z = self.step * f64::from(index);
            normal::density(z) * given(self.root * z + self.root_of_both * w, &mut chances)
        })
    }
}
