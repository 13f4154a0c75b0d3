//! The graphical procedure: hypotheses hold shares of alpha, and a rejected one passes its share on along arrows.
//!
//! Hypothesis i starts with the weight w_i (Σ w ≤ 1) and is tested at w_i alpha. When it is rejected, the share g_ij
//! of its weight goes to hypothesis j (g_ii = 0, Σ_j g_ij ≤ 1), the arrows into it are led on to where its own arrows
//! point, and the test goes on with what is left:
//!
//! ```text
//! w_l  ←  w_l + w_j g_jl
//! g_lh ← (g_lh + g_lj g_jh) / (1 − g_lj g_jl)   for l ≠ h and g_lj g_jl < 1, else 0
//! ```
//!
//! Hypotheses: whatever the p-values test. Controlled: the family-wise error, strongly, under any dependence, because
//! the procedure is the closed test with weighted Bonferroni tests of the intersections. The order in which
//! hypotheses that could be rejected at the same time are taken changes no decision and no adjusted p-value.
//! Holm's method, the fixed sequence and the fallback are special graphs.
//!
//! Accuracy: adjusted p-values to about 1e-15 relative for each arrow that was led on; those of [`Graph::holm`]
//! and [`Graph::fixed_sequence`] are those of the direct definitions to the last bit.
//!
//! References: \[1\] Bretz, Maurer, Brannath and Posch (2009), Statistics in Medicine 28, 586–604, algorithm 1.
//! \[2\] Holm (1979), Scand. J. Statist. 6, 65–70. \[3\] Maurer, Hothorn and Lehmacher (1995), the fixed sequence.
//! \[4\] Wiens (2003), Pharmaceutical Statistics 2, 211–215, the fallback. \[5\] Guilbaud (2008), Biometrical Journal 50,
//! 678–692; \[6\] Strassburger and Bretz (2008), Statistics in Medicine 27, 4914–4927: compatible bounds.

/// By how much a sum of weights or of transitions may exceed 1: shares that are typed with a few decimals, such as
/// three times 0.3333333333, do not add up exactly. What is above 1 is scaled back to 1.
const ROUNDING: f64 = 1e-9;

/// Up to this many hypotheses every step keeps its transitions; a larger graph is not drawn, and 780 hypotheses
/// would fill 4 GB.
const KEPT: usize = 64;

/// A graph of hypotheses: their weights and what each passes on when it is rejected.
#[derive(Debug, Clone)]
pub struct Graph {
    weights: Vec<f64>,
    transitions: Transitions,
}

#[derive(Debug, Clone)]
enum Transitions {
    /// Row by row: g_ij at i m + j.
    Given(Vec<f64>),
    /// Equal shares for all that are left; it stays so whatever is rejected.
    Even(Start),
}

/// What hypotheses that pass on equal shares start with.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Start {
    /// All the same: each is 1 over the number left, always.
    Alike,
    Weighted,
}

/// Why weights and transitions make no graph. Hypotheses are counted from 0 in the fields and from 1 in the text.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum NoGraph {
    #[error("the weight of hypothesis {} is {value}; a weight is a number from 0 to 1", index + 1)]
    Weight { index: usize, value: f64 },
    #[error("the weights sum to {sum}; together they may be at most 1")]
    WeightSum { sum: f64 },
    #[error("{rows} rows of transitions were given for {hypotheses} hypotheses; each needs one")]
    Rows { rows: usize, hypotheses: usize },
    #[error("the row of hypothesis {} has {found} transitions; it needs one for each of the {hypotheses} hypotheses", index + 1)]
    RowLength { index: usize, found: usize, hypotheses: usize },
    #[error("the transition from hypothesis {} to hypothesis {} is {value}; a transition is a number from 0 to 1", from + 1, to + 1)]
    Transition { from: usize, to: usize, value: f64 },
    #[error("hypothesis {} passes {value} to itself; a transition leads to another hypothesis", index + 1)]
    ToItself { index: usize, value: f64 },
    #[error("the transitions from hypothesis {} sum to {sum}; together they may be at most 1", index + 1)]
    RowSum { index: usize, sum: f64 },
}

/// Why a graph decides nothing.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum NoDecision {
    #[error("{given} p-values were given for a graph of {hypotheses} hypotheses")]
    Count { given: usize, hypotheses: usize },
    #[error("the p-value of hypothesis {} is {value}; a p-value is a number from 0 to 1", index + 1)]
    PValue { index: usize, value: f64 },
    #[error("alpha is {value}; it must lie between 0 and 1")]
    Alpha { value: f64 },
}

/// What a graph decides, every list in the order of the hypotheses.
#[derive(Debug, Clone, PartialEq)]
pub struct GraphDecision {
    /// The error rate of the whole graph.
    pub alpha: f64,
    /// The smallest alpha at which the whole procedure rejects this hypothesis; it does not depend on `alpha`. 1 where
    /// no weight ever arrives.
    pub adjusted: Vec<f64>,
    /// adjusted <= alpha.
    pub rejected: Vec<bool>,
    /// The level at which each was judged: a rejected one at its weight times alpha when it was taken, a retained
    /// one at its final weight times alpha.
    pub level: Vec<f64>,
    /// The weights when the procedure stops; 0 for the rejected.
    pub final_weights: Vec<f64>,
    /// The rejections in the order in which they were made.
    pub steps: Vec<GraphStep>,
}

/// One rejection, and the graph that it leaves.
#[derive(Debug, Clone, PartialEq)]
pub struct GraphStep {
    /// Index of the hypothesis.
    pub rejected: usize,
    /// Its weight when it was rejected.
    pub weight: f64,
    /// Its level, weight times alpha.
    pub level: f64,
    /// The weights of all; 0 for those that are rejected.
    pub weights_after: Vec<f64>,
    /// The transitions, one row a hypothesis; 0 from and to those that are rejected. Empty where the graph has more than
    /// 64 hypotheses.
    pub transitions_after: Vec<Vec<f64>>,
}

/// The level of a hypothesis's one-sided confidence bound that agrees with the decisions.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum BoundLevel {
    /// Not rejected: the bound leaves `alpha` outside. Where that is 0 there is no bound.
    Retained { alpha: f64 },
    /// Rejected while others are not: the bound is the value of the null hypothesis.
    Rejected,
    /// All are rejected: the bound leaves `alpha` outside, or is the value of the null hypothesis where that is
    /// further from the estimate.
    AllRejected { alpha: f64 },
}

impl Graph {
    /// The graph with these weights and transitions: `transitions[i][j]` is the share of the weight of i that goes to j
    /// when i is rejected.
    ///
    /// A sum that exceeds 1 by no more than 1e-9 is scaled back to 1.
    ///
    /// # Errors
    /// [`NoGraph`] if a weight or transition is no number from 0 to 1, a hypothesis passes something to itself, the
    /// weights or a row of the transitions sum to more than 1, or the transitions are not one row and one column a
    /// hypothesis.
    ///
    /// # Source
    /// \[1\], section 2.
    ///
    /// # Example
    /// ```
    /// # use levelwise::methods::multiplicity::Graph;
    /// // Two doses on the main outcome share alpha; each opens the second outcome of its dose.
    /// let graph = Graph::new(
    ///     vec![0.5, 0.5, 0.0, 0.0],
    ///     vec![
    ///         vec![0.0, 0.5, 0.5, 0.0],
    ///         vec![0.5, 0.0, 0.0, 0.5],
    ///         vec![0.0, 1.0, 0.0, 0.0],
    ///         vec![1.0, 0.0, 0.0, 0.0],
    ///     ],
    /// )?;
    /// let decision = graph.decide(&[0.01, 0.06, 0.01, 0.5], 0.05)?;
    /// assert_eq!(decision.rejected, [true, false, true, false]);
    /// # Ok::<(), Box<dyn std::error::Error>>(())
    /// ```
    pub fn new(weights: Vec<f64>, transitions: Vec<Vec<f64>>) -> Result<Self, NoGraph> {
        let hypotheses = weights.len();
        let weights = checked_weights(weights)?;
        if transitions.len() != hypotheses {
            return Err(NoGraph::Rows { rows: transitions.len(), hypotheses });
        }
        let mut flat = Vec::with_capacity(hypotheses * hypotheses);
        for (index, row) in transitions.into_iter().enumerate() {
            flat.extend(checked_row(index, row, hypotheses)?);
        }
        Ok(Self { weights, transitions: Transitions::Given(flat) })
    }

    /// Holm's method as a graph: equal weights, and each passes equal shares to all others.
    ///
    /// # Source
    /// \[2\]; \[1\], section 3.
    pub fn holm(hypotheses: usize) -> Self {
        Self {
            weights: vec![1.0 / hypotheses as f64; hypotheses],
            transitions: Transitions::Even(Start::Alike),
        }
    }

    /// Holm's method with weights: each hypothesis passes equal shares of its own to all others. Takes time in proportion to the
    /// square of their number, where a graph of as many arrows takes its cube.
    ///
    /// # Errors
    /// [`NoGraph`] for weights that are no numbers from 0 to 1 or sum to more than 1.
    ///
    /// # Source
    /// \[1\], section 3.
    pub fn even(weights: Vec<f64>) -> Result<Self, NoGraph> {
        Ok(Self { weights: checked_weights(weights)?, transitions: Transitions::Even(Start::Weighted) })
    }

    /// Hypotheses in a declared order: each is tested at alpha, and the first that is not rejected ends it.
    ///
    /// # Source
    /// \[3\]; \[1\], section 3.
    pub fn fixed_sequence(hypotheses: usize) -> Self {
        let weights = (0..hypotheses).map(|i| if i == 0 { 1.0 } else { 0.0 }).collect();
        Self { weights, transitions: chain(hypotheses) }
    }

    /// Hypotheses in a declared order with a weight each: what a rejected one held is added to the next one's.
    ///
    /// # Errors
    /// [`NoGraph`] for weights that are no numbers from 0 to 1 or sum to more than 1.
    ///
    /// # Source
    /// \[4\]; \[1\], section 3.
    pub fn fallback(weights: Vec<f64>) -> Result<Self, NoGraph> {
        let weights = checked_weights(weights)?;
        let transitions = chain(weights.len());
        Ok(Self { weights, transitions })
    }

    /// The initial weights.
    pub fn weights(&self) -> &[f64] {
        &self.weights
    }

    /// The initial transitions, one row a hypothesis.
    pub fn transitions(&self) -> Vec<Vec<f64>> {
        Running::of(self).transitions()
    }

    /// The decision on every hypothesis from its p-value, with the family-wise error at `alpha`.
    ///
    /// Each round takes the hypothesis with the smallest p / w, the first of those that tie. Equal p-values, p = 0 and
    /// p = 1 need no care; a hypothesis that no weight reaches is retained with an adjusted p-value of 1.
    ///
    /// # Errors
    /// [`NoDecision`] if there are not as many p-values as hypotheses, one is no number from 0 to 1, or `alpha` is not
    /// between 0 and 1.
    ///
    /// # Source
    /// \[1\], algorithms 1 and 2.
    pub fn decide(&self, p: &[f64], alpha: f64) -> Result<GraphDecision, NoDecision> {
        let m = self.weights.len();
        check_decidable(p, alpha, m)?;
        let mut running = Running::of(self);
        let mut adjusted = vec![1.0; m];
        let mut level = vec![0.0; m];
        let mut steps = Vec::new();
        // What is left when the first hypothesis is retained; from there on only the adjusted p-values are found.
        let mut stopped: Option<Running> = None;
        let mut so_far = 0.0_f64;
        while let Some(next) = running.smallest(p) {
            let j = next.index;
            so_far = so_far.max(next.ratio).max(p[j]);
            if so_far >= 1.0 {
                break;
            }
            adjusted[j] = so_far;
            if so_far > alpha && stopped.is_none() {
                stopped = Some(running.clone());
            }
            if stopped.is_some() {
                running.remove(j);
                continue;
            }
            level[j] = running.level(j, alpha);
            let weight = running.weights[j];
            running.remove(j);
            steps.push(GraphStep {
                rejected: j,
                weight,
                level: level[j],
                weights_after: running.weights.clone(),
                transitions_after: if m <= KEPT { running.transitions() } else { Vec::new() },
            });
        }
        let end = stopped.unwrap_or(running);
        end.left.iter().for_each(|i| level[*i] = end.level(*i, alpha));
        let rejected = adjusted.iter().map(|p| *p <= alpha).collect();
        Ok(GraphDecision { alpha, adjusted, rejected, level, final_weights: end.weights, steps })
    }

    /// The levels of one-sided confidence bounds that agree with `decision`, one a hypothesis: together they hold with
    /// probability 1 - alpha at least.
    ///
    /// For hypotheses that a parameter is at most (or at least) some value. While one is retained, a rejected
    /// hypothesis's bound says no more than its rejection; when all are rejected every bound leaves its initial
    /// weight times alpha outside. (For the fixed sequence there are sharper bounds in that case: Hsu and
    /// Berger 1999, J. Am. Stat. Assoc. 94, 468–482.)
    ///
    /// # Source
    /// \[5\], \[6\].
    pub fn compatible_levels(&self, decision: &GraphDecision) -> Vec<BoundLevel> {
        if decision.rejected.iter().all(|rejected| *rejected) {
            let all = self.weights.iter().map(|w| BoundLevel::AllRejected { alpha: w * decision.alpha });
            return all.collect();
        }
        let each = decision.rejected.iter().zip(&decision.level);
        each.map(|(rejected, level)| match rejected {
            true => BoundLevel::Rejected,
            false => BoundLevel::Retained { alpha: *level },
        })
        .collect()
    }
}

fn checked_weights(mut weights: Vec<f64>) -> Result<Vec<f64>, NoGraph> {
    if let Some(index) = weights.iter().position(|w| !(0.0..=1.0 + ROUNDING).contains(w)) {
        return Err(NoGraph::Weight { index, value: weights[index] });
    }
    match at_most_one(&mut weights) {
        Ok(()) => Ok(weights),
        Err(sum) => Err(NoGraph::WeightSum { sum }),
    }
}

fn checked_row(index: usize, mut row: Vec<f64>, hypotheses: usize) -> Result<Vec<f64>, NoGraph> {
    if row.len() != hypotheses {
        return Err(NoGraph::RowLength { index, found: row.len(), hypotheses });
    }
    if let Some(to) = row.iter().position(|g| !(0.0..=1.0 + ROUNDING).contains(g)) {
        return Err(NoGraph::Transition { from: index, to, value: row[to] });
    }
    if row[index] != 0.0 {
        return Err(NoGraph::ToItself { index, value: row[index] });
    }
    match at_most_one(&mut row) {
        Ok(()) => Ok(row),
        Err(sum) => Err(NoGraph::RowSum { index, sum }),
    }
}

/// Scales shares whose sum exceeds 1 by rounding back to a sum of 1; a larger sum is handed back.
fn at_most_one(shares: &mut [f64]) -> Result<(), f64> {
    let sum = crate::numerics::sums::sum(shares.iter().copied());
    if sum > 1.0 + ROUNDING {
        return Err(sum);
    }
    if sum > 1.0 {
        shares.iter_mut().for_each(|share| *share /= sum);
    }
    Ok(())
}

/// Each passes all to the next one.
fn chain(hypotheses: usize) -> Transitions {
    let mut flat = vec![0.0; hypotheses * hypotheses];
    (1..hypotheses).for_each(|to| flat[(to - 1) * hypotheses + to] = 1.0);
    Transitions::Given(flat)
}

fn check_decidable(p: &[f64], alpha: f64, hypotheses: usize) -> Result<(), NoDecision> {
    if p.len() != hypotheses {
        return Err(NoDecision::Count { given: p.len(), hypotheses });
    }
    if let Some(index) = p.iter().position(|p| !(0.0..=1.0).contains(p)) {
        return Err(NoDecision::PValue { index, value: p[index] });
    }
    if !(alpha > 0.0 && alpha < 1.0) {
        return Err(NoDecision::Alpha { value: alpha });
    }
    Ok(())
}

/// A graph from which hypotheses are removed one after the other.
#[derive(Clone)]
struct Running {
    weights: Vec<f64>,
    transitions: Transitions,
    /// Those not removed, in ascending order.
    left: Vec<usize>,
}

struct Next {
    index: usize,
    /// p / w.
    ratio: f64,
}

impl Running {
    fn of(graph: &Graph) -> Self {
        Self {
            weights: graph.weights.clone(),
            transitions: graph.transitions.clone(),
            left: (0..graph.weights.len()).collect(),
        }
    }

    /// The hypothesis with the smallest p / w, the first of those that tie; none where no weight is left.
    fn smallest(&self, p: &[f64]) -> Option<Next> {
        let weighted = self.left.iter().filter(|i| self.weights[**i] > 0.0);
        let each = weighted.map(|&index| Next { index, ratio: self.ratio(index, p[index]) });
        each.reduce(|best, next| if next.ratio < best.ratio { next } else { best })
    }

    fn ratio(&self, index: usize, p: f64) -> f64 {
        match self.transitions {
            // The weight is 1 over the number left; not to divide by its rounded value keeps the last bit.
            Transitions::Even(Start::Alike) => p * self.left.len() as f64,
            _ => p / self.weights[index],
        }
    }

    fn level(&self, index: usize, alpha: f64) -> f64 {
        match self.transitions {
            Transitions::Even(Start::Alike) => alpha / self.left.len() as f64,
            _ => self.weights[index] * alpha,
        }
    }

    /// Removes hypothesis `j` and passes on its weight and its arrows, as \[1\], algorithm 1.
    fn remove(&mut self, j: usize) {
        self.left.retain(|i| *i != j);
        let m = self.weights.len();
        let weight = std::mem::take(&mut self.weights[j]);
        match &mut self.transitions {
            Transitions::Even(start) => {
                let share = 1.0 / self.left.len() as f64;
                match start {
                    Start::Alike => self.left.iter().for_each(|i| self.weights[*i] = share),
                    Start::Weighted => self.left.iter().for_each(|i| self.weights[*i] += weight * share),
                }
            }
            Transitions::Given(g) => {
                let from_j: Vec<f64> = g[j * m..][..m].to_vec();
                self.left.iter().for_each(|l| self.weights[*l] += weight * from_j[*l]);
                g[j * m..][..m].fill(0.0);
                for l in self.left.iter().copied() {
                    let from_l = &mut g[l * m..][..m];
                    let to_j = std::mem::take(&mut from_l[j]);
                    // An arrow that is not there leads nowhere else: chains cost one row a step.
                    if to_j > 0.0 {
                        lead_on(from_l, l, to_j, &from_j, &self.left);
                    }
                }
            }
        }
    }

    fn transitions(&self) -> Vec<Vec<f64>> {
        let m = self.weights.len();
        match &self.transitions {
            // `chunks` refuses a width of 0, which only the empty graph has.
            Transitions::Given(g) => g.chunks(m.max(1)).map(<[f64]>::to_vec).collect(),
            Transitions::Even(_) => {
                let mut rows = vec![vec![0.0; m]; m];
                let share = 1.0 / (self.left.len() as f64 - 1.0);
                for l in &self.left {
                    self.left.iter().filter(|h| *h != l).for_each(|h| rows[*l][*h] = share);
                }
                rows
            }
        }
    }
}

/// The row of hypothesis `l` after the removal of the hypothesis that it passed `to_j` to.
fn lead_on(row: &mut [f64], l: usize, to_j: f64, from_j: &[f64], left: &[usize]) {
    let back = to_j * from_j[l];
    for h in left.iter().copied().filter(|h| *h != l) {
        row[h] = if back < 1.0 { (row[h] + to_j * from_j[h]) / (1.0 - back) } else { 0.0 };
    }
    // The sum never exceeds 1 but by rounding, which a small 1 - back can magnify; more than 1 would cost the
    // control of the error rate.
    let sum: f64 = row.iter().sum();
    if sum > 1.0 {
        row.iter_mut().for_each(|g| *g /= sum);
    }
}
