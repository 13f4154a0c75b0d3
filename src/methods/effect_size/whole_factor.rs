//! How much of the variation the whole factor explains: eta², omega², epsilon² and Cohen's f, with intervals
//! by inverting the noncentral F; the same for Welch's F; and rank epsilon².
//!
//! References: \[1\] Steiger (2004), Psychol. Methods 9, 164–182, doi 10.1037/1082-989X.9.2.164 (intervals).
//! \[2\] Hays (1963), Statistics for Psychologists (omega²). \[3\] Kelley (1935), Proc. Natl. Acad. Sci. 21,
//! 554–559 (epsilon²). \[4\] Cohen (1988), Statistical Power Analysis for the Behavioral Sciences (f).

use crate::methods::overall::{AnovaTable, WelchTest};
use crate::numerics::distributions::noncentral_f;
use serde::Serialize;

/// An estimate with its interval, where there is one.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct EffectSize {
    pub estimate: f64,
    #[serde(skip_serializing_if = "Option::is_none")]
    pub lower: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    pub upper: Option<f64>,
}

/// Effect sizes of a one-way layout under equal variances.
///
/// Eta², omega² and epsilon² estimate one and the same population quantity, λ / (λ + N) in terms of the
/// noncentrality λ, so they share one interval; eta² itself estimates it with an upward bias and may lie above
/// the interval's middle. Omega² and epsilon² keep their negative values.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct WholeFactor {
    /// SS between / SS total.
    pub eta_squared: EffectSize,
    /// (SS between - df between · MS within) / (SS total + MS within) \[2\].
    pub omega_squared: EffectSize,
    /// (SS between - df between · MS within) / SS total \[3\].
    pub epsilon_squared: EffectSize,
    /// √(eta² / (1 - eta²)) \[4\].
    pub f: EffectSize,
    /// Confidence of the intervals.
    pub confidence: f64,
}

impl WholeFactor {
    /// Effect sizes of the F test in `table`, with two-sided intervals of the given `confidence`.
    ///
    /// An interval of confidence 1 - 2·alpha has a lower bound above 0 exactly when the F test rejects at alpha,
    /// because the F test looks at one side only; a bound at 0 means that no noncentrality makes so small an F
    /// improbable. Intervals are left out where the noncentral F gives none.
    ///
    /// # Source
    /// \[1\]: bounds of λ, then λ / (λ + N) and √(λ / N).
    pub fn of(table: &AnovaTable, confidence: f64) -> Self {
        let n = table.n as f64;
        let bounds = noncentralities(table.f, table.df_between, table.df_within, confidence);
        let share = bounds.map(|(lower, upper)| (lower / (lower + n), upper / (upper + n)));
        let ratio = bounds.map(|(lower, upper)| ((lower / n).sqrt(), (upper / n).sqrt()));
        let above_chance = table.ss_between - table.df_between * table.ms_within;
        let total = table.ss_between + table.ss_within;
        Self {
            eta_squared: EffectSize::new(table.ss_between / total, share),
            omega_squared: EffectSize::new(above_chance / (total + table.ms_within), share),
            epsilon_squared: EffectSize::new(above_chance / total, share),
            f: EffectSize::new((table.ss_between / table.ss_within).sqrt(), ratio),
            confidence,
        }
    }
}

/// Effect sizes that go with Welch's F.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct WelchEffect {
    /// df1 (F - 1) / (df1 (F - 1) + N): omega² with Welch's F in the place of the classical one. May be negative.
    pub omega_squared: EffectSize,
    /// √(λ / N) for λ = df1 · F, the counterpart of Cohen's f.
    pub f: EffectSize,
    /// Confidence of the intervals.
    pub confidence: f64,
}

impl WelchEffect {
    /// Effect sizes of Welch's test on `n` observations in all, with intervals of the given `confidence`.
    ///
    /// The population value is λ / (λ + N) with λ = Σ w (μ - μ_w)², w = n/σ²: groups weigh by size over variance.
    /// The interval takes Welch's F as noncentral F on its own df, an approximation as the test itself is one; at
    /// confidence 1 - 2·alpha its lower bound is above 0 exactly when Welch's test rejects at alpha.
    pub fn of(test: &WelchTest, n: usize, confidence: f64) -> Self {
        let n = n as f64;
        let bounds = noncentralities(test.f, test.df1, test.df2, confidence);
        let share = bounds.map(|(lower, upper)| (lower / (lower + n), upper / (upper + n)));
        let ratio = bounds.map(|(lower, upper)| ((lower / n).sqrt(), (upper / n).sqrt()));
        let above_chance = test.df1 * (test.f - 1.0);
        Self {
            omega_squared: EffectSize::new(above_chance / (above_chance + n), share),
            f: EffectSize::new((test.df1 * test.f / n).sqrt(), ratio),
            confidence,
        }
    }
}

impl EffectSize {
    fn new(estimate: f64, interval: Option<(f64, f64)>) -> Self {
        Self { estimate, lower: interval.map(|it| it.0), upper: interval.map(|it| it.1) }
    }
}

/// Lower and upper bound of the noncentrality of an observed F, each 0 where no noncentrality reaches it \[1\].
fn noncentralities(f: f64, df1: f64, df2: f64, confidence: f64) -> Option<(f64, f64)> {
    let outside = (1.0 - confidence) / 2.0;
    let lower = noncentral_f::noncentrality(f, df1, df2, 1.0 - outside).ok()?;
    let upper = noncentral_f::noncentrality(f, df1, df2, outside).ok()?;
    (lower <= upper).then_some((lower, upper))
}

/// H / (N - 1): the share of the variation of the ranks that lies between the groups (eta² of the ranks).
pub fn rank_epsilon_squared(h: f64, n: usize) -> f64 {
    h / (n as f64 - 1.0)
}
