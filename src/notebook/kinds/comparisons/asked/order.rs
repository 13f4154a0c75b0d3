//! Ordered hypotheses: in which order they are tested, with which weights, and where a weight goes on rejection.

use crate::methods::multiplicity::{Adjust, Graph, NoGraph, Order};
use crate::notebook::ask::{At, Reader};
use crate::notebook::diagnostics::{quoted_choices, suggestion};

/// The order that the procedure needs; `None` for procedures without one, or where something is to be mended.
pub fn order(reader: &mut Reader, adjust: Adjust, names: &[&str]) -> Option<Order> {
    if !adjust.ordered() || names.is_empty() {
        return None;
    }
    let places = places(reader, names)?;
    let m = places.len();
    let graph = match adjust {
        Adjust::FixedSequence => Ok(Graph::fixed_sequence(m)),
        Adjust::Fallback => Graph::fallback(weights(reader, names, &places, 1.0 / m as f64)?),
        _ if reader.ask().given("transitions") => {
            let weights = weights(reader, names, &places, 0.0)?;
            Graph::new(weights, transitions(reader, names, &places)?)
        }
        // A weight that nobody says where to send goes to all others equally; so passes Holm's procedure its weights on.
        _ if reader.ask().given("weights") => Graph::even(weights(reader, names, &places, 0.0)?),
        _ => Ok(Graph::holm(m)),
    };
    match graph {
        Ok(graph) => Some(Order { places, graph }),
        Err(error) => {
            let (field, message) = said(&error, names, &places);
            reader.problem(field, message);
            None
        }
    }
}

/// Every comparison's place: those named come first in the order named, which must be all of them.
fn places(reader: &mut Reader, names: &[&str]) -> Option<Vec<usize>> {
    if !reader.ask().given("order") {
        return Some((0..names.len()).collect());
    }
    let named = reader.texts("order")?;
    let mut places = Vec::with_capacity(names.len());
    for name in &named {
        let at = find(reader, "order", name, names)?;
        if places.contains(&at) {
            reader.problem_at(
                "order",
                name.span.clone(),
                format!("order: \"{}\" stands there twice.", name.value),
            );
            return None;
        }
        places.push(at);
    }
    let left: Vec<&str> = (0..names.len()).filter(|i| !places.contains(i)).map(|i| names[i]).collect();
    if !left.is_empty() {
        let message = format!(
            "order: {} of the {} comparisons are named; {} still {} a place.",
            places.len(),
            names.len(),
            quoted_choices(left.iter().copied().take(12)).replace(" or ", " and "),
            if left.len() == 1 { "needs" } else { "need" }
        );
        reader.problem("order", message);
        return None;
    }
    Some(places)
}

/// The comparison of that name; a minus may be typed as on the page.
fn find(reader: &mut Reader, field: &str, name: &At<String>, names: &[&str]) -> Option<usize> {
    let plain = |text: &str| text.replace('\u{2212}', "-").split_whitespace().collect::<Vec<_>>().join(" ");
    let at = names.iter().position(|known| plain(known) == plain(&name.value));
    if at.is_none() {
        let message = format!(
            "{field}: \"{}\" is no comparison of this family; they are {}.{}",
            name.value,
            quoted_choices(names.iter().copied().take(12)).replace(" or ", " and "),
            suggestion(&name.value, names.iter().copied())
        );
        reader.problem_at(field, name.span.clone(), message);
    }
    at
}

/// Weights by place; comparisons that are not named get 0, and without any each gets `otherwise`.
fn weights(reader: &mut Reader, names: &[&str], places: &[usize], otherwise: f64) -> Option<Vec<f64>> {
    let m = places.len();
    if !reader.ask().given("weights") {
        if otherwise == 0.0 {
            reader.problem("transitions", "Transitions are written, but no weights. Add weights = { \"first\" = 1 }: what each comparison starts with.");
            return None;
        }
        return Some(vec![otherwise; m]);
    }
    let mut weights = vec![0.0; m];
    for (name, weight) in reader.named_numbers("weights")? {
        let at = find(reader, "weights", &name, names)?;
        weights[place_of(at, places)?] = weight;
    }
    Some(weights)
}

fn place_of(comparison: usize, places: &[usize]) -> Option<usize> {
    places.iter().position(|at| *at == comparison)
}

fn transitions(reader: &mut Reader, names: &[&str], places: &[usize]) -> Option<Vec<Vec<f64>>> {
    let m = places.len();
    let mut rows = vec![vec![0.0; m]; m];
    for record in reader.records("transitions")? {
        let [from, to, share] = record.value.as_slice() else { continue };
        let end = |text: &String| At { value: text.clone(), span: record.span.clone() };
        let from = find(reader, "transitions", &end(from), names)?;
        let to = find(reader, "transitions", &end(to), names)?;
        let Some(share) =
            share.trim().replace(',', ".").parse::<f64>().ok().filter(|share| share.is_finite())
        else {
            let message =
                format!("transitions: \"{share}\" is no number. A share is from 0 to 1, such as 0.5.");
            reader.problem_at("transitions", record.span.clone(), message);
            return None;
        };
        rows[place_of(from, places)?][place_of(to, places)?] += share;
    }
    Some(rows)
}

/// The field and the sentence for what is wrong with a graph.
fn said(error: &NoGraph, names: &[&str], places: &[usize]) -> (&'static str, String) {
    let name = |place: usize| names[places[place]];
    match error {
        NoGraph::Weight { index, value } => (
            "weights",
            format!("weights: \"{}\" has {value}; a share of the error rate is from 0 to 1.", name(*index)),
        ),
        NoGraph::WeightSum { sum } => (
            "weights",
            format!(
                "weights: they sum to {}; together they may be at most 1, the whole error rate.",
                tidy(*sum)
            ),
        ),
        NoGraph::Transition { from, to, value } => (
            "transitions",
            format!(
                "transitions: from \"{}\" to \"{}\" goes {value}; a share is from 0 to 1.",
                name(*from),
                name(*to)
            ),
        ),
        NoGraph::ToItself { index, .. } => (
            "transitions",
            format!(
                "transitions: \"{}\" passes a share to itself. A share goes to another comparison.",
                name(*index)
            ),
        ),
        NoGraph::RowSum { index, sum } => (
            "transitions",
            format!(
                "transitions: \"{}\" passes on {} of its share; from one comparison they may sum to at most 1.",
                name(*index),
                tidy(*sum)
            ),
        ),
        other => ("weights", format!("The graph cannot be used: {other}.")),
    }
}

/// A sum without the last digits that binary fractions leave behind.
fn tidy(value: f64) -> String {
    crate::answer::number::plain(value)
}
