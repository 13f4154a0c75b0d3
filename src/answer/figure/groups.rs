//! Groups of values: every value, or how many lie where, with the mean and its interval below.

use super::axis::{Axis, Direction, Place};
use super::drawing::{Anchor, Drawing, Fill, SMALL, Stroke, TEXT, WIDTH, Words};
use super::intervals::axis_title;
use super::{Span, in_words, label, precision_of};
use crate::answer::{Figure, number};

/// More values than this are drawn as counts.
const MOST_POINTS: usize = 1200;

/// Ranges into which many values are counted.
const BINS: usize = 72;

/// More groups than this are not drawn; the figure says so.
const MOST_GROUPS: usize = 200;

const RADIUS: f64 = 2.6;

/// What [`groups`] draws.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Groups {
    pub title: String,
    /// The outcome with its unit: "Words recalled (words)".
    pub axis: String,
    /// What the bars are, said inside the figure: "Bars: mean with its 95 % interval, own variance".
    pub bars: String,
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
}

/// The figure of the groups, one row each, over an axis that need not start at zero.
///
/// Up to 1,200 values are points, stacked where they would cover each other; more are counted into ranges and drawn as shaded bars, at
/// most 72 a group. The figure says which of the two it is.
pub fn groups(spec: &Groups) -> Figure {
    let shown: Vec<&Group> = spec.groups.iter().take(MOST_GROUPS).collect();
    let total: usize = shown.iter().map(|g| g.values.len()).sum();
    let counted = total > MOST_POINTS;
    let mut drawing = Drawing::default();
    let top = key(&mut drawing, spec, total, counted);
    let widest = shown.iter().map(|g| label::width(&g.label, TEXT)).fold(0.0, f64::max);
    let left = widest.clamp(28.0, 140.0) + 20.0;
    let roomiest = if total == 0 { 30.0 } else { 58.0 };
    let pitch = (1600.0 / shown.len().max(1) as f64).clamp(8.0, roomiest);
    let bottom = top + pitch * shown.len() as f64 + 4.0;
    let place = Place { from: left, to: WIDTH - 14.0, text_size: SMALL, direction: Direction::Across };
    let axis = Axis::covering(shown.iter().flat_map(|g| numbers_of(g)), place);
    for tick in &axis.ticks {
        let x = axis.place(tick.value);
        drawing.line(x, top, x, bottom, Stroke::Grid);
        drawing.text(x, bottom + 18.0, &tick.label, Anchor::Middle, Words::Small);
    }
    drawing.line(left, bottom, WIDTH - 14.0, bottom, Stroke::Axis);
    let every = (15.0 / pitch).ceil().max(1.0) as usize;
    for (place, group) in shown.iter().enumerate() {
        let y = top + pitch * place as f64;
        if place.is_multiple_of(every) {
            name(&mut drawing, &group.label, left, y + pitch / 2.0, pitch);
        }
        // The values fill the upper part of the row, the mean stands below them.
        let floor = if total == 0 { y } else { y + pitch * 0.66 };
        if counted {
            draw_counts(&mut drawing, &axis, &group.values, floor, pitch * 0.56);
        } else {
            draw_points(&mut drawing, &axis, &group.values, floor, pitch * 0.58);
        }
        let middle = if total == 0 { y + pitch / 2.0 } else { y + pitch * 0.82 };
        draw_mean(&mut drawing, &axis, group, middle, pitch);
    }
    let end = axis_title(&mut drawing, &spec.axis, left, bottom + 38.0);
    let description = describe(spec);
    let svg = drawing.finish(end, &format!("{}. {description}", spec.title));
    Figure::new(spec.title.clone(), description, svg)
}

fn numbers_of(group: &Group) -> impl Iterator<Item = f64> {
    let limits = group.interval.and_then(Span::usable).into_iter().flat_map(Span::limits);
    group.values.iter().copied().chain(group.mean).chain(limits)
}

fn key(drawing: &mut Drawing, spec: &Groups, total: usize, counted: bool) -> f64 {
    let mut y = 16.0;
    let all = number::count(total);
    if counted {
        y = drawing.paragraph(
            y,
            &format!("Shaded: where the values lie ({all} in all), each group to its own height."),
        );
    } else if total > 0 {
        y = drawing.paragraph(y, "Points: every value.");
    }
    if !spec.bars.is_empty() {
        y = drawing.paragraph(y, &spec.bars);
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
fn draw_points(drawing: &mut Drawing, axis: &Axis, values: &[f64], floor: f64, room: f64) {
    let mut places: Vec<f64> = values.iter().filter(|v| v.is_finite()).map(|&v| axis.place(v)).collect();
    places.sort_by(f64::total_cmp);
    // A point goes on the lowest layer whose last point lies far enough to the left.
    let mut last_on_layer: Vec<f64> = Vec::new();
    let mut layers = Vec::with_capacity(places.len());
    for &x in &places {
        let free = last_on_layer.iter().position(|&last| x - last >= 2.0 * RADIUS);
        match free {
            Some(layer) => last_on_layer[layer] = x,
            None => last_on_layer.push(x),
        }
        layers.push(free.unwrap_or(last_on_layer.len() - 1));
    }
    let deepest = last_on_layer.len().saturating_sub(1).max(1) as f64;
    let radius = RADIUS.min(room / 2.0);
    let step = (2.0 * radius).min((room - 2.0 * radius).max(0.0) / deepest);
    for (x, layer) in places.into_iter().zip(layers) {
        drawing.circle(x, floor - radius - step * layer as f64, radius, Fill::Value);
    }
}

/// Bars over equal ranges of the axis, the highest as high as there is room.
fn draw_counts(drawing: &mut Drawing, axis: &Axis, values: &[f64], floor: f64, room: f64) {
    let width = (axis.to() - axis.from()) / BINS as f64;
    let mut counts = [0usize; BINS];
    for &value in values.iter().filter(|v| v.is_finite()) {
        let bin = ((axis.place(value) - axis.from()) / width) as usize;
        counts[bin.min(BINS - 1)] += 1;
    }
    let most = counts.iter().copied().max().unwrap_or(0).max(1) as f64;
    let filled = counts.iter().enumerate().filter(|(_, count)| **count > 0);
    let bars = filled.map(|(bin, &count)| {
        // A single value among many thousand is still seen.
        let height = (room * count as f64 / most).max(0.8);
        (axis.from() + width * bin as f64, floor - height, width)
    });
    drawing.bars(floor, bars, Fill::Shade);
}

fn draw_mean(drawing: &mut Drawing, axis: &Axis, group: &Group, y: f64, pitch: f64) {
    let half = (pitch * 0.12).min(4.0);
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
        drawing.circle(axis.place(mean), y, (pitch * 0.13).min(4.4), Fill::Solid);
    }
}

fn describe(spec: &Groups) -> String {
    let means: Vec<f64> = spec.groups.iter().filter_map(|g| g.mean).collect();
    let precision = precision_of(&means, spec.groups.iter().map(|g| g.interval.and_then(Span::usable)));
    let mut sentences = vec![format!("{} in {} groups", spec.axis, spec.groups.len())];
    if !spec.bars.is_empty() {
        sentences.push(spec.bars.clone());
    }
    if spec.groups.len() <= 12 {
        for group in &spec.groups {
            let mean = group.mean.map(|mean| {
                format!("mean {}", in_words(mean, group.interval.and_then(Span::usable), precision))
            });
            let n =
                (!group.values.is_empty()).then(|| format!("{} values", number::count(group.values.len())));
            let parts: Vec<String> = n.into_iter().chain(mean).collect();
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
