//! The result under the names that outside checks rely on.

use super::asked::Asked;
use super::decided::Laid;
use crate::methods::contrasts::{Contrast, Partition, Set, in_words, rank};
use crate::methods::multiplicity::{
    Adjust, Basis, Claim, ComparisonRow, Disagreement, Explanation, Family, GraphDecision, IntervalKind,
    Order, PValueMethod, Ranking, Rearranged, Sized,
};
use crate::notebook::results::number;
use serde_json::{Map, Value, json};

/// All rows with full precision.
pub fn results(laid: &Laid) -> Value {
    let result = laid.comparisons;
    let mut object = family(laid.asked, &laid.study.levels.labels);
    insert(&mut object, "critical", result.critical.map(number));
    insert(&mut object, "alpha_per_comparison", result.alpha_per_comparison.map(number));
    object.insert("confidence".into(), number(result.confidence));
    insert(&mut object, "letters", letters(laid));
    insert(&mut object, "partition", laid.partition.as_ref().map(partition));
    insert(&mut object, "path", path_of(laid));
    insert(&mut object, "rearranged", result.rearranged.as_ref().map(rearranged));
    object.insert("intervals".into(), interval_kind(result.interval_kind));
    let rows = (0..result.rows.len()).map(|i| row(laid, i));
    object.insert("rows".into(), rows.collect());
    let names: Vec<&str> = result.disagreeing.iter().map(|i| result.rows[*i].name.as_str()).collect();
    object.insert("intervals_disagree".into(), json!(names));
    insert(
        &mut object,
        "overall_and_comparisons_differ",
        laid.explanation.as_ref().map(|it| explanation(laid, it)),
    );
    Value::Object(object)
}

/// What is known before there are data: the family, its size, its contrasts and the method.
pub fn planned(asked: &Asked, labels: &[String]) -> Value {
    let mut object = family(asked, labels);
    let method_alpha = match asked.adjust {
        Adjust::PValues(PValueMethod::Bonferroni) => Some(asked.alpha / asked.contrasts.len().max(1) as f64),
        Adjust::PValues(PValueMethod::None) => Some(asked.alpha),
        _ => None,
    };
    insert(&mut object, "alpha_per_comparison", method_alpha.map(number));
    let rows = asked.contrasts.iter().map(|contrast| Value::Object(named(contrast, labels)));
    object.insert("rows".into(), rows.collect());
    Value::Object(object)
}

fn family(asked: &Asked, labels: &[String]) -> Map<String, Value> {
    let mut object = Map::new();
    object.insert("family".into(), json!(asked.family_name));
    object.insert("adjust".into(), json!(asked.adjust.name()));
    object.insert("family_size".into(), json!(asked.contrasts.len()));
    object.insert("rank".into(), json!(independent(asked, labels.len())));
    object.insert("levels".into(), json!(labels));
    object.insert("sides".into(), json!(asked.sides));
    object.insert("basis".into(), json!(asked.basis.word()));
    match asked.basis {
        Basis::Ranks(Ranking::Joint) => drop(object.insert("ranking".into(), json!("joint"))),
        Basis::Ranks(Ranking::PairByPair) => drop(object.insert("ranking".into(), json!("pair by pair"))),
        Basis::Means | Basis::Permutation => {}
    }
    match asked.claim {
        Claim::Difference => drop(object.insert("claim".into(), json!("difference"))),
        Claim::NonInferiority { margin } => {
            object.insert("claim".into(), json!("non-inferiority"));
            object.insert("margin".into(), json!([margin]));
        }
        Claim::Equivalence { lower, upper } => {
            object.insert("claim".into(), json!("equivalence"));
            object.insert("margin".into(), json!([lower, upper]));
        }
    }
    object.insert("alpha".into(), number(asked.alpha));
    object
}

/// How many of the comparisons are linearly independent, of `levels` levels.
pub fn independent(asked: &Asked, levels: usize) -> usize {
    match asked.family {
        // Each of the ready sets of differences spans all that the levels can differ in.
        Family::Set(Set::AllPairs | Set::AgainstControl(_) | Set::Neighbours) => levels.saturating_sub(1),
        _ => rank(&asked.contrasts.iter().map(|contrast| contrast.coefficients.clone()).collect::<Vec<_>>()),
    }
}

fn named(contrast: &Contrast, labels: &[String]) -> Map<String, Value> {
    let mut object = Map::new();
    object.insert("name".into(), json!(contrast.name));
    object.insert("words".into(), json!(in_words(&contrast.coefficients, labels)));
    let by_level = labels.iter().zip(&contrast.coefficients).map(|(level, c)| (level.clone(), number(*c)));
    object.insert("coefficients".into(), Value::Object(by_level.collect()));
    object
}

fn row(laid: &Laid, i: usize) -> Value {
    let row = &laid.comparisons.rows[i];
    let mut object = named(&laid.asked.contrasts[i], &laid.study.levels.labels);
    let numbers = [
        ("estimate", Some(row.estimate)),
        ("se", row.se),
        ("df", Some(row.df)),
        ("t", Some(row.t)),
        ("statistic", Some(row.statistic)),
        ("p", Some(row.p)),
        ("p_adjusted", Some(row.p_adjusted)),
        ("critical", row.critical),
        ("p_error", row.p_error),
        ("alpha", row.alpha),
        ("detectable", row.detectable),
    ];
    numbers.into_iter().for_each(|(key, value)| insert(&mut object, key, value.map(number)));
    object.insert("statistic_name".into(), json!(row.statistic_name));
    if laid.comparisons.basis != Basis::Means {
        object.insert("p_counted".into(), json!(row.p_counted));
    }
    object.insert("rejected".into(), json!(row.rejected));
    let own = procedure_has_intervals(laid);
    let bound = |value: fn(&crate::methods::multiplicity::Bounds) -> f64| {
        row.interval.as_ref().map(value).map(number)
    };
    for (key, shown, value) in
        [("lower", "shown_lower", bound(|it| it.lower)), ("upper", "shown_upper", bound(|it| it.upper))]
    {
        object.insert(key.into(), value.clone().filter(|_| own).unwrap_or(Value::Null));
        insert(&mut object, shown, value);
    }
    effect(row, &mut object);
    if !laid.also.is_empty() {
        let also = laid.also.iter().map(|(adjust, p)| (adjust.name().to_string(), number(p[i])));
        object.insert("also".into(), Value::Object(also.collect()));
    }
    Value::Object(object)
}

/// Whether the shown intervals are the procedure's own, so that they belong to its decisions.
fn procedure_has_intervals(laid: &Laid) -> bool {
    let result = laid.comparisons;
    result.adjust.single_step() || result.family_size == 1 || result.interval_kind == IntervalKind::Compatible
}

fn effect(row: &ComparisonRow, object: &mut Map<String, Value>) {
    if let Some(effect) = &row.effects.standardised {
        object.insert("standardiser".into(), number(effect.standardiser.sd));
        size(object, "d", Sized { estimate: effect.d, interval: effect.d_interval });
        size(object, "g", Sized { estimate: effect.g, interval: effect.g_interval });
    }
    let others = [
        ("delta", row.effects.control_sd),
        ("ratio", row.effects.ratio),
        ("superiority", row.effects.superiority),
    ];
    others
        .into_iter()
        .for_each(|(name, found)| found.into_iter().for_each(|found| size(object, name, found)));
}

fn size(object: &mut Map<String, Value>, name: &str, size: Sized) {
    object.insert(name.into(), number(size.estimate));
    if let Some(interval) = size.interval {
        object.insert(format!("{name}_lower"), number(interval.lower));
        object.insert(format!("{name}_upper"), number(interval.upper));
    }
}

/// Letters by level.
fn letters(laid: &Laid) -> Option<Value> {
    let letters = laid.comparisons.letters.as_ref()?;
    let by_level = laid.study.levels.labels.iter().zip(&letters.of_level);
    Some(Value::Object(by_level.map(|(level, shared)| (level.clone(), json!(shared))).collect()))
}

fn partition(found: &Partition) -> Value {
    let parts = found.parts.iter().map(|part| {
        let mut object = Map::new();
        object.insert("name".into(), json!(part.name));
        object.insert("ss".into(), number(part.ss));
        insert(&mut object, "share", part.share.map(number));
        Value::Object(object)
    });
    json!({
        "parts": parts.collect::<Vec<_>>(),
        "ss_between": number(found.ss_between),
        "df_between": found.df_between,
        "complete": found.complete(),
        "correlations": found.correlations,
    })
}

/// How an ordered procedure went: its order, the rejections one after the other, and the weights that are left.
pub fn path(names: &[&str], order: &Order, found: &GraphDecision) -> Value {
    let name = |place: usize| names[order.places[place]];
    let steps = found.steps.iter().map(|step| {
        json!({
            "rejected": name(step.rejected),
            "weight": number(step.weight),
            "alpha": number(step.level),
        })
    });
    json!({
        "order": (0..order.places.len()).map(name).collect::<Vec<_>>(),
        "weights": order.graph.weights(),
        "steps": steps.collect::<Vec<_>>(),
        "weights_left": found.final_weights,
    })
}

fn path_of(laid: &Laid) -> Option<Value> {
    let names: Vec<&str> = laid.comparisons.rows.iter().map(|row| row.name.as_str()).collect();
    Some(path(&names, laid.asked.order.as_ref()?, laid.comparisons.path.as_ref()?))
}

fn rearranged(found: &Rearranged) -> Value {
    json!({
        "counted": found.counted,
        "repeats": found.repeats,
        "seed": found.seed,
        "partitions": found.partitions,
    })
}

fn interval_kind(kind: IntervalKind) -> Value {
    match kind {
        IntervalKind::Simultaneous => json!("simultaneous"),
        IntervalKind::SimultaneousBy(adjust) => json!(format!("simultaneous by {}", adjust.name())),
        IntervalKind::Compatible => json!("bounds that go with the decisions"),
        IntervalKind::PerComparison => json!("per comparison"),
        IntervalKind::None => json!("none"),
    }
}

fn explanation(laid: &Laid, found: &Explanation) -> Value {
    json!({
        "significant": match found.disagreement {
            Disagreement::OverallOnly => "overall test only",
            Disagreement::ComparisonsOnly => "comparisons only",
        },
        "overall": found.overall,
        "carrying_contrast": named(&found.carrying, &laid.study.levels.labels),
        "carrying_estimate": number(found.carrying_estimate.estimate),
        "carrying_t": number(found.carrying_estimate.estimate / found.carrying_estimate.se),
        "nearest": laid.comparisons.rows[found.nearest].name,
    })
}

fn insert(object: &mut Map<String, Value>, key: &str, value: Option<Value>) {
    if let Some(value) = value {
        object.insert(key.into(), value);
    }
}
