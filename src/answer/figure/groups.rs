//! Groups of values: every value, or how many lie where, with the mean and its interval below.

use super::axis::{Axis, Direction, Place};
use super::drawing::{Anchor, Drawing, Fill, SMALL, Stroke, TEXT, WIDTH, Words};
use super::intervals::axis_title;
use super::{Span, in_words, label, precision_of, with_room_for_arrows};
use crate::answer::{Figure, number};

/// More values than this are drawn as counts.
const MOST_POINTS: usize = 1200;

/// Ranges into which many values are counted.
const BINS: usize = 72;

/// More groups than this are not drawn; the figure says so.
const MOST_GROUPS: usize = 200;

/// Radii of points, the largest that fits is used.
const RADII: [f64; 3] = [2.6, 2.1, 1.7];

/// The highest that a stack of points or a bar may be.
const HIGHEST: f64 = 36.0;

/// Height of the part of a row in which the mean stands.
const MEANS: f64 = 20.0;

/// The widest that labels may be; longer ones are wrapped or shortened.
const LABELS: f64 = 132.0;

/// The widest that letters may be; longer ones are shortened.
const LETTERS: f64 = 90.0;

/// What [`groups`] draws.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Groups {
    pub title: String,
    /// The outcome with its unit: "Words recalled (words)".
    pub axis: String,
    /// What the bars are, said inside the figure: "Bars: mean with its 95 % interval, own variance".
    pub bars: String,
    /// What the groups' letters mean; empty where they have none.
    pub letters: String,
    pub groups: Vec<Group>,
}

/// One group.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Group {
    pub label: String,
    /// The observed values; empty where only the means are known.
    pub values: Vec<f64>,
    pub mean: Option<f64>,
    pub interval: Option<Span>,
    /// Letters that stand at the right end of the group's row.
    pub letters: Option<String>,
}

/// How the values of all groups are drawn.
#[derive(Clone, Copy, PartialEq)]
enum Values {
    None,
    /// As points of this radius, the highest stack of this many.
    Points {
        radius: f64,
        highest: usize,
    },
    Counts,
}

/// The figure of the groups, one row each, over an axis that need not start at zero.
///
/// Up to 1,200 values are points, stacked where they would cover each other; more, or stacks that would be too high, are counted
/// into ranges and drawn as shaded bars, at most 72 a group. The figure says which of the two it is.
pub fn groups(spec: &Groups) -> Figure {
    let shown: Vec<&Group> = spec.groups.iter().take(MOST_GROUPS).collect();
    let total: usize = shown.iter().map(|g| g.values.len()).sum();
    let widest = shown.iter().map(|g| label::width(&g.label, TEXT)).fold(0.0, f64::max);
    let left = widest.clamp(28.0, LABELS) + 20.0;
    let lettered = |g: &&Group| g.letters.as_ref().map_or(0.0, |letters| label::width(letters, TEXT) + 10.0);
    let right = WIDTH - 14.0 - shown.iter().map(lettered).fold(0.0, f64::max).min(LETTERS);
    let place = Place { from: left, to: right, text_size: SMALL, direction: Direction::Across };
    let spans = shown.iter().filter_map(|g| g.interval.and_then(Span::usable));
    let axis = Axis::covering(with_room_for_arrows(shown.iter().flat_map(|g| numbers_of(g)), spans), place);
    let values = how(&axis, &shown, total);
    let roomiest = match values {
        Values::None if widest > LABELS => 36.0,
        Values::None => 30.0,
        Values::Points { radius, highest } => (MEANS + 10.0 + 2.0 * radius * highest as f64).max(38.0),
        Values::Counts => MEANS + HIGHEST + 6.0,
    };
    let pitch = (1600.0 / shown.len().max(1) as f64).clamp(8.0, roomiest);
    // Rows that have to be low keep their proportions.
    let scale = pitch / roomiest;
    let mut drawing = Drawing::default();
    let top = key(&mut drawing, spec, total, values);
    let bottom = top + pitch * shown.len() as f64 + 4.0;
    for tick in &axis.ticks {
        let x = axis.place(tick.value);
        drawing.line(x, top, x, bottom, Stroke::Grid);
        drawing.text(x, bottom + 18.0, &tick.label, Anchor::Middle, Words::Small);
    }
    drawing.line(left, bottom, right, bottom, Stroke::Axis);
    let every = (15.0 / pitch).ceil().max(1.0) as usize;
    for (place, group) in shown.iter().enumerate() {
        // The values stand on a floor, the mean below it.
        let end = top + pitch * (place + 1) as f64;
        let floor = end - MEANS * scale;
        let middle = if values == Values::None { end - pitch / 2.0 } else { floor + 9.0 * scale };
        if place.is_multiple_of(every) {
            let beside = if values == Values::None { middle } else { floor - 2.0 * scale };
            name(&mut drawing, &group.label, left, beside, pitch);
            if let Some(letters) = &group.letters {
                let short = label::shorten(letters, TEXT, LETTERS - 10.0);
                drawing.titled(right + 10.0, beside + 5.0, &short, letters, Anchor::Start, Words::Label);
            }
        }
        match values {
            Values::None => {}
            Values::Points { radius, .. } => {
                draw_points(&mut drawing, &axis, &group.values, floor, radius, scale)
            }
            Values::Counts => draw_counts(&mut drawing, &axis, &group.values, floor, HIGHEST * scale),
        }
        draw_mean(&mut drawing, &axis, group, middle, scale);
    }
    let end = axis_title(&mut drawing, &spec.axis, left, bottom + 38.0);
    let description = describe(spec);
    let svg = drawing.finish(end, &format!("{}. {description}", spec.title));
    Figure::new(spec.title.clone(), description, svg)
}

/// Points as large as the highest stack allows; counts where there are too many or they would be specks.
fn how(axis: &Axis, groups: &[&Group], total: usize) -> Values {
    if total == 0 {
        return Values::None;
    }
    if total > MOST_POINTS {
        return Values::Counts;
    }
    let places: Vec<Vec<f64>> = groups.iter().map(|g| sorted_places(axis, &g.values)).collect();
    let candidates = RADII.iter().map(|&radius| {
        let highest = places.iter().map(|p| height_of(&stacked(p, radius))).max().unwrap_or(0);
        (radius, highest)
    });
    let fitting = candidates.into_iter().find(|&(radius, highest)| 2.0 * radius * highest as f64 <= HIGHEST);
    fitting.map_or(Values::Counts, |(radius, highest)| Values::Points { radius, highest })
}

fn numbers_of(group: &Group) -> impl Iterator<Item = f64> {
    let limits = group.interval.and_then(Span::usable).into_iter().flat_map(Span::limits);
    group.values.iter().copied().chain(group.mean).chain(limits)
}

fn key(drawing: &mut Drawing, spec: &Groups, total: usize, values: Values) -> f64 {
    let mut y = 16.0;
    let all = number::count(total);
    if values == Values::Counts {
        y = drawing.paragraph(y, &format!("Shaded: where the {all} values lie, heights within each group."));
    } else if total > 0 {
        y = drawing.paragraph(y, "Points: every value.");
    }
    if !spec.bars.is_empty() {
        y = drawing.paragraph(y, &spec.bars);
    }
    if !spec.letters.is_empty() {
        y = drawing.paragraph(y, &spec.letters);
    }
    if spec.groups.len() > MOST_GROUPS {
        let all = number::count(spec.groups.len());
        y = drawing.paragraph(y, &format!("Drawn are the first {MOST_GROUPS} of {all} groups."));
    }
    y - 8.0
}

fn name(drawing: &mut Drawing, text: &str, left: f64, middle: f64, pitch: f64) {
    let (size, words, lines) = if pitch < 18.0 {
        (SMALL, Words::Small, 1)
    } else {
        (TEXT, Words::Label, if pitch > 34.0 { 2 } else { 1 })
    };
    let lines = label::wrap(text, size, left - 18.0, lines);
    let whole = lines.join(" ") == text;
    let first = middle + 5.0 - 8.0 * (lines.len() as f64 - 1.0);
    for (i, line) in lines.iter().enumerate() {
        let full = if whole { line } else { text };
        drawing.titled(left - 14.0, first + 16.0 * i as f64, line, full, Anchor::End, words);
    }
}

/// Points at their true place along the axis, stacked upwards from `floor` where they would cover each other. Which point is
/// how high follows from the sorted values alone.
fn draw_points(drawing: &mut Drawing, axis: &Axis, values: &[f64], floor: f64, radius: f64, scale: f64) {
    let places = sorted_places(axis, values);
    let layers = stacked(&places, radius);
    for (x, layer) in places.into_iter().zip(layers) {
        drawing.circle(
            x,
            floor - (radius + 2.0 * radius * layer as f64) * scale,
            radius * scale,
            Fill::Value,
        );
    }
}

fn sorted_places(axis: &Axis, values: &[f64]) -> Vec<f64> {
    let mut places: Vec<f64> = values.iter().filter(|v| v.is_finite()).map(|&v| axis.place(v)).collect();
    places.sort_by(f64::total_cmp);
    places
}

/// The layer of each point (sorted places): the lowest one whose last point lies far enough to the left.
fn stacked(places: &[f64], radius: f64) -> Vec<usize> {
    let mut last_on_layer: Vec<f64> = Vec::new();
    let layer_of = |&x: &f64| {
        let free = last_on_layer.iter().position(|&last| x - last >= 2.0 * radius);
        match free {
            Some(layer) => last_on_layer[layer] = x,
            None => last_on_layer.push(x),
        }
        free.unwrap_or(last_on_layer.len() - 1)
    };
    places.iter().map(layer_of).collect()
}

fn height_of(layers: &[usize]) -> usize {
    layers.iter().max().map_or(0, |top| top + 1)
}

/// Bars whose heights are counts, the highest as high as there is room: one at each value where there are few
/// different ones, or else over equal ranges of the axis.
fn draw_counts(drawing: &mut Drawing, axis: &Axis, values: &[f64], floor: f64, room: f64) {
    let places = sorted_places(axis, values);
    let width = (axis.to() - axis.from()) / BINS as f64;
    let runs = places.chunk_by(|a, b| b - a < 0.01).map(|run| (run[0], run.len()));
    let mut bars: Vec<(f64, usize)> = runs.take(BINS / 2).collect();
    let all_apart = bars.windows(2).all(|pair| pair[1].0 - pair[0].0 > 1.2 * width);
    if bars.iter().map(|bar| bar.1).sum::<usize>() < places.len() || !all_apart {
        let mut counts = [0usize; BINS];
        for place in places {
            counts[(((place - axis.from()) / width) as usize).min(BINS - 1)] += 1;
        }
        bars = counts.iter().enumerate().map(|(i, &n)| (axis.from() + width * (i as f64 + 0.5), n)).collect();
        bars.retain(|bar| bar.1 > 0);
    }
    let most = bars.iter().map(|bar| bar.1).max().unwrap_or(1) as f64;
    // A single value among many thousand is still seen.
    let height = |count: usize| (room * count as f64 / most).max(0.8);
    drawing.bars(floor, bars.iter().map(|&(x, n)| (x - width / 2.0, floor - height(n), width)), Fill::Shade);
}

fn draw_mean(drawing: &mut Drawing, axis: &Axis, group: &Group, y: f64, scale: f64) {
    let half = 4.0 * scale;
    if let Some(span) = group.interval.and_then(Span::usable) {
        drawing.line(axis.place(span.lower), y, axis.place(span.upper), y, Stroke::Interval);
        for (limit, edge, direction) in [(span.lower, axis.from(), -1.0), (span.upper, axis.to(), 1.0)] {
            if limit.is_finite() {
                let x = axis.place(limit);
                drawing.line(x, y - half, x, y + half, Stroke::Interval);
            } else {
                drawing.arrow(edge, y, direction);
            }
        }
    }
    if let Some(mean) = group.mean.filter(|mean| mean.is_finite()) {
        drawing.circle(axis.place(mean), y, 4.4 * scale, Fill::Solid);
    }
}

fn describe(spec: &Groups) -> String {
    let means: Vec<f64> = spec.groups.iter().filter_map(|g| g.mean).collect();
    let precision = precision_of(&means, spec.groups.iter().map(|g| g.interval.and_then(Span::usable)));
    let mut sentences = vec![format!("{} in {} groups", spec.axis, spec.groups.len())];
    if !spec.bars.is_empty() {
        sentences.push(spec.bars.clone());
    }
    if !spec.letters.is_empty() {
        sentences.push(spec.letters.clone());
    }
    if spec.groups.len() <= 12 {
        for group in &spec.groups {
            let mean = group.mean.map(|mean| {
                format!("mean {}", in_words(mean, group.interval.and_then(Span::usable), precision))
            });
            let n =
                (!group.values.is_empty()).then(|| format!("{} values", number::count(group.values.len())));
            let letters = group.letters.as_ref().map(|letters| format!("letters {letters}"));
            let parts: Vec<String> = n.into_iter().chain(mean).chain(letters).collect();
            sentences.push(format!(
                "{}: {}",
                group.label,
                if parts.is_empty() { "no values".to_owned() } else { parts.join(", ") }
            ));
        }
    } else {
        sentences.push("The table lists every group".to_owned());
    }
    sentences.iter().map(|s| format!("{}.", s.trim_end_matches('.'))).collect::<Vec<_>>().join(" ")
}
