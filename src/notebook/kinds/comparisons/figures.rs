//! The figures: differences with their intervals, and the groups with their means.

use super::decided::Laid;
use super::{letters, rows, words};
use crate::answer::figure::{
    self, Group, Groups, IntervalRow, Intervals, Mark, Network, NetworkArrow, NetworkNode, Span,
};
use crate::answer::{Figure, number};
use crate::methods::multiplicity::{Basis, Claim, GraphDecision, IntervalKind, Order, Ranking};
use crate::notebook::kinds::wording::outcome_with_unit;
use crate::numerics::distributions::student_t;
use crate::study::{Observed, Variances};

/// The differences with the intervals of the table, one row a comparison.
pub fn differences(laid: &Laid) -> Figure {
    let result = laid.comparisons;
    let what = rows::capital(laid.estimate_word());
    let rows = result.rows.iter().map(|row| IntervalRow {
        label: laid.name(row),
        estimate: row.estimate,
        interval: row.interval.map(|interval| Span { lower: interval.lower, upper: interval.upper }),
        mark: if row.rejected { Mark::Solid } else { Mark::Hollow },
    });
    let bars = match result.interval_kind {
        IntervalKind::None => format!("No intervals: {} has none here", words::procedure(result.adjust)),
        _ => format!("Bars: {} ({})", words::interval(result), words::procedure(result.adjust)),
    };
    let margins = match result.claim {
        Claim::Difference => Vec::new(),
        Claim::NonInferiority { .. } => vec![result.claim.null(result.sides)],
        Claim::Equivalence { lower, upper } => vec![lower, upper],
    };
    let shown = words::shown(result.claim);
    let unit = match result.basis {
        Basis::Ranks(Ranking::Joint) => laid.study.outcome.clone(),
        _ => outcome_with_unit(laid.study),
    };
    figure::intervals(&Intervals {
        title: format!("{} of {}", rows::capital(words::estimates(laid.estimate_word())), laid.study.outcome),
        axis: format!("{what} in {unit}"),
        bars,
        solid: format!("{shown} is shown"),
        hollow: if result.claim == Claim::Difference {
            "not shown to differ".into()
        } else {
            "not shown".into()
        },
        reference: Some(0.0),
        margins,
        rows: rows.collect(),
    })
}

/// Every value where it is known, with the means and their own intervals.
pub fn groups(laid: &Laid) -> Figure {
    let study = laid.study;
    let values = |i: usize| match &study.observed {
        Observed::Sample(sample) => sample.groups[i].iter().map(|offset| sample.origin + offset).collect(),
        _ => Vec::new(),
    };
    let groups = (0..study.levels.count()).map(|i| Group {
        label: study.levels.labels[i].clone(),
        values: values(i),
        mean: Some(laid.summary.origin + laid.summary.groups[i].mean),
        letters: laid.comparisons.letters.as_ref().map(|letters| letters.of_level[i].clone()),
        interval: mean_interval(laid, i),
    });
    let spread = match study.variances {
        Variances::Equal => "SD pooled over all levels",
        Variances::Unequal => "own SD",
    };
    let level = number::percent(laid.comparisons.confidence);
    figure::groups(&Groups {
        title: format!("{} by {}", study.outcome, study.factor),
        axis: outcome_with_unit(study),
        bars: format!(
            "Bars: mean with its {level} interval, each level by itself ({spread}); they do not decide the comparisons"
        ),
        letters: if laid.comparisons.letters.is_some() {
            letters::CAPTION.to_string()
        } else {
            String::new()
        },
        groups: groups.collect(),
    })
}

/// The mean with t times its standard error, from the same error term as the comparisons.
fn mean_interval(laid: &Laid, i: usize) -> Option<Span> {
    let estimates = laid.estimates?;
    let df = match &estimates.df {
        crate::study::DegreesOfFreedom::Common(df) => *df,
        crate::study::DegreesOfFreedom::PerMean(dfs) => dfs[i],
    };
    let t = student_t::upper_quantile((1.0 - laid.comparisons.confidence) / 2.0, df).ok()?;
    let (mean, reach) = (estimates.origin + estimates.means[i], t * estimates.covariance[(i, i)].sqrt());
    Some(Span { lower: mean - reach, upper: mean + reach })
}

/// The graphs of an ordered procedure: as it was declared, and as it stands after the rejections.
pub fn path(laid: &Laid) -> Vec<Figure> {
    let (Some(order), Some(path)) = (&laid.asked.order, &laid.comparisons.path) else { return Vec::new() };
    let names: Vec<String> = laid.comparisons.rows.iter().map(|row| laid.name(row)).collect();
    graphs(&names, order, path)
}

/// The declared graph of the hypotheses of these `names`, with what was rejected; and where some were and others not, what
/// the rejections left.
pub fn graphs(names: &[String], order: &Order, path: &GraphDecision) -> Vec<Figure> {
    let rejected = |place: usize| path.rejected[place];
    let declared = graph(
        DECLARED,
        &nodes(names, order, &|place| Some(order.graph.weights()[place]), &rejected),
        &order.graph.transitions(),
        true,
    );
    let Some(last) = path.steps.last().filter(|_| path.steps.len() < names.len()) else {
        return vec![declared];
    };
    let left = graph(
        ("The graph after the rejections", "What is left: the weights at which the others were judged."),
        &nodes(names, order, &|place| (!rejected(place)).then(|| path.final_weights[place]), &rejected),
        &last.transitions_after,
        true,
    );
    vec![declared, left]
}

/// The declared graph while nothing is decided yet.
pub fn planned_graph(names: &[String], order: &Order) -> Figure {
    let nodes = nodes(names, order, &|place| Some(order.graph.weights()[place]), &|_| false);
    graph(DECLARED, &nodes, &order.graph.transitions(), false)
}

/// Title and words of a graph before its first rejection.
const DECLARED: (&str, &str) = (
    "The graph as declared",
    "Weights: each comparison's share of the error rate. Arrows: where it goes on rejection.",
);

fn nodes(
    names: &[String],
    order: &Order,
    weight: &dyn Fn(usize) -> Option<f64>,
    rejected: &dyn Fn(usize) -> bool,
) -> Vec<NetworkNode> {
    let node = |(place, row): (usize, &usize)| NetworkNode {
        label: names[*row].clone(),
        weight: weight(place),
        mark: if rejected(place) { Mark::Solid } else { Mark::Hollow },
    };
    order.places.iter().enumerate().map(node).collect()
}

fn graph(
    (title, words): (&str, &str),
    nodes: &[NetworkNode],
    transitions: &[Vec<f64>],
    decided: bool,
) -> Figure {
    let meaning = |words: &str| if decided { words.to_string() } else { String::new() };
    figure::network(&Network {
        title: title.to_string(),
        words: words.to_string(),
        solid: meaning("rejected"),
        hollow: meaning("not rejected"),
        nodes: nodes.to_vec(),
        arrows: arrows(transitions),
    })
}

fn arrows(transitions: &[Vec<f64>]) -> Vec<NetworkArrow> {
    let row = |(from, row): (usize, &Vec<f64>)| -> Vec<NetworkArrow> {
        let arrow = |(to, share): (usize, &f64)| NetworkArrow { from, to, share: *share };
        row.iter().enumerate().filter(|(_, share)| **share > 0.0).map(arrow).collect()
    };
    transitions.iter().enumerate().flat_map(row).collect()
}
