//! The rows of a table: every procedure that the notebook offers for a question and a basis.

use crate::cells::{DESIGNS, Design, PERMUTATION_DESIGNS, Question};
use levelwise::methods::contrasts::Set;
use levelwise::methods::multiplicity::{
    ALL, Adjust, Basis, ErrorRate, Family, Graph, NoGraph, Order, PValueMethod, Ranking, Setting,
};
use levelwise::study::Variances;

/// What the tests of a table are made from.
#[derive(Debug, Clone, Copy)]
pub struct Ground {
    pub title: &'static str,
    pub basis: Basis,
    pub variances: Variances,
    /// Rearrangements drawn in each trial.
    pub repeats: u64,
    /// Of the columns.
    pub designs: [Design; 4],
}

/// Enough to decide at 5 %: an adjusted p-value of 0.05 then has a standard error of 0.01.
const REPEATS: u64 = 499;

pub const ONE_ERROR_TERM: Ground = Ground::new("means, one error term", Basis::Means, Variances::Equal);
pub const OWN_VARIANCES: Ground =
    Ground::new("means, each level its own variance", Basis::Means, Variances::Unequal);
pub const JOINT_RANKS: Ground =
    Ground::new("ranks, all levels ranked together", Basis::Ranks(Ranking::Joint), Variances::Equal);
pub const PAIR_RANKS: Ground =
    Ground::new("ranks, each pair ranked by itself", Basis::Ranks(Ranking::PairByPair), Variances::Equal);

/// In the order of the page.
pub const GROUNDS: [Ground; 6] = [
    ONE_ERROR_TERM,
    OWN_VARIANCES,
    JOINT_RANKS,
    PAIR_RANKS,
    Ground::new("permutation, t with one error term", Basis::Permutation, Variances::Equal),
    Ground::new("permutation, t with each level's own variance", Basis::Permutation, Variances::Unequal),
];

impl Ground {
    const fn new(title: &'static str, basis: Basis, variances: Variances) -> Self {
        let designs = if matches!(basis, Basis::Permutation) { PERMUTATION_DESIGNS } else { DESIGNS };
        Self { title, basis, variances, repeats: REPEATS, designs }
    }
}

/// One procedure.
#[derive(Debug, Clone)]
pub struct Row {
    pub name: String,
    pub adjust: Adjust,
    pub order: Option<Order>,
    pub trials: u64,
}

impl Row {
    fn new(adjust: Adjust, question: Question, basis: Basis) -> Self {
        let trials = trials(adjust, question, basis);
        Self { name: adjust.name().to_string(), adjust, order: None, trials }
    }

    fn ordered(self, graph: Graph, order: &[usize], of: &str) -> Self {
        let name = if of.is_empty() { self.name } else { format!("{}, {of}", self.name) };
        Self { name, order: Some(Order { places: order.to_vec(), graph }), ..self }
    }

    pub fn controls_false_discoveries(&self) -> bool {
        self.adjust.error_rate() == ErrorRate::FalseDiscovery
    }
}

/// Trials of each cell: 20,000 give a standard error of 0.0015 at 5 %, 10,000 one of 0.0022; what takes long has fewer.
fn trials(adjust: Adjust, question: Question, basis: Basis) -> u64 {
    match (basis, adjust, question.set) {
        (Basis::Permutation, ..) => 2_000,
        // The joint distribution of all pairs has rank 3; with a control it is a single integral.
        (_, Adjust::MaxT | Adjust::StepDownMaxT, Set::AllPairs) => 3_000,
        (_, Adjust::MaxT | Adjust::StepDownMaxT | Adjust::StepDownDunnett, _) => 5_000,
        (Basis::Means, Adjust::LeastSignificantDifference | Adjust::Scheffe | Adjust::TamhaneT2, _) => 20_000,
        (Basis::Ranks(Ranking::PairByPair), ..) => 10_000,
        (_, adjust, _) if adjust.takes_p_values() => 20_000,
        _ => 10_000,
    }
}

/// The procedures that suit, each ordered one with graphs of its own.
///
/// # Errors
/// [`NoGraph`] never, with these weights.
pub fn rows(question: Question, ground: Ground, contrasts: usize) -> Result<Vec<Row>, NoGraph> {
    let setting = Setting {
        family: Family::Set(question.set),
        basis: ground.basis,
        variances: ground.variances,
        sides: question.sides,
        claim: question.claim,
    };
    let order = order(contrasts);
    let mut rows = Vec::new();
    for adjust in ALL.into_iter().filter(|adjust| adjust.unsuitable(&setting).is_none()) {
        let row = Row::new(adjust, question, ground.basis);
        match adjust {
            Adjust::FixedSequence => rows.push(row.ordered(Graph::fixed_sequence(contrasts), &order, "")),
            Adjust::Fallback => {
                let weights = vec![1.0 / contrasts as f64; contrasts];
                rows.push(row.ordered(Graph::fallback(weights)?, &order, "equal weights"));
            }
            Adjust::Graph => {
                rows.push(row.clone().ordered(Graph::holm(contrasts), &order, "even (Holm's)"));
                rows.push(row.ordered(two_gates(contrasts)?, &order, "two gates"));
            }
            _ => rows.push(row),
        }
    }
    Ok(rows)
}

/// The declared order: where some levels are alike, the hypotheses that are false come first, so that the whole error
/// rate is passed on to the true ones.
fn order(contrasts: usize) -> Vec<usize> {
    match contrasts {
        // B - A, C - A, D - A, C - B, D - B, D - C: the first and the last are the true ones.
        6 => vec![1, 2, 3, 4, 0, 5],
        // B - A, C - A, D - A: the last is the false one.
        _ => (0..contrasts).rev().collect(),
    }
}

/// The first two hypotheses hold half each and pass half to each other and the rest evenly to those behind them, which
/// pass among themselves.
fn two_gates(hypotheses: usize) -> Result<Graph, NoGraph> {
    let behind = hypotheses - 2;
    let mut weights = vec![0.0; hypotheses];
    weights[..2].fill(0.5);
    let share = |from: usize, to: usize| match (from < 2, to < 2) {
        _ if from == to => 0.0,
        (true, true) => 0.5,
        (true, false) => 0.5 / behind as f64,
        (false, true) => 0.0,
        (false, false) => 1.0 / (behind - 1).max(1) as f64,
    };
    let transitions = (0..hypotheses).map(|from| (0..hypotheses).map(|to| share(from, to)).collect());
    Graph::new(weights, transitions.collect())
}

/// The p-value method, where the procedure is one.
pub fn p_value_method(adjust: Adjust) -> Option<PValueMethod> {
    match adjust {
        Adjust::PValues(method) => Some(method),
        _ => None,
    }
}
