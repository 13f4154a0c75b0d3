//! Means over a real numeric axis, with their intervals and a fitted curve.

use super::axis::{Axis, Direction, Place};
use super::drawing::{Anchor, Drawing, Fill, SMALL, Stroke, WIDTH, Words};
use super::intervals::axis_title;
use super::{Point, Span, in_words, label, precision_of};
use crate::answer::{Figure, number};

const HEIGHT: f64 = 250.0;

/// Points of a curve beyond which it is thinned: more could not be told apart.
const MOST_POINTS: usize = 400;

/// What [`trend`] draws.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Trend {
    pub title: String,
    /// What the scores are: "Training (minutes)".
    pub x_axis: String,
    /// The outcome with its unit.
    pub y_axis: String,
    /// What the bars are, said inside the figure.
    pub bars: String,
    /// What the curve is, said inside the figure: "Curve: cubic through the means". Unused without a curve.
    pub curve_words: String,
    pub points: Vec<TrendPoint>,
    pub curve: Vec<Point>,
}

/// One level of a [`Trend`].
#[derive(Debug, Clone, PartialEq)]
pub struct TrendPoint {
    pub label: String,
    /// The level's score: its true place on the axis.
    pub x: f64,
    pub mean: f64,
    pub interval: Option<Span>,
}

/// The figure of means over their scores.
///
/// Ticks stand at the scores and carry the levels' labels, in up to three lines where they are close; a label without room is
/// left to pointing at its tick. Neither axis needs to start at zero.
pub fn trend(spec: &Trend) -> Figure {
    let points: Vec<&TrendPoint> = spec.points.iter().filter(|p| p.x.is_finite()).collect();
    let curve: Vec<Point> =
        spec.curve.iter().copied().filter(|p| p.x.is_finite() && p.y.is_finite()).collect();
    let mut drawing = Drawing::default();
    let mut top = 16.0;
    if !spec.bars.is_empty() {
        top = drawing.paragraph(top, &spec.bars);
    }
    if !curve.is_empty() && !spec.curve_words.is_empty() {
        drawing.line(4.0, top - 4.5, 24.0, top - 4.5, Stroke::Curve);
        let shown = label::shorten(&spec.curve_words, SMALL, WIDTH - 40.0);
        drawing.titled(30.0, top, &shown, &spec.curve_words, Anchor::Start, Words::Small);
        top += 17.0;
    }
    let frame = Frame::new(&mut drawing, top, &spec.y_axis, HEIGHT, |place| {
        let limits =
            points.iter().flat_map(|p| p.interval.and_then(Span::usable).into_iter().flat_map(Span::limits));
        Axis::covering(limits.chain(points.iter().map(|p| p.mean)).chain(curve.iter().map(|p| p.y)), place)
    });
    let (low, high) = x_range(&points, &curve);
    let inset = 14.0;
    let place = Place {
        from: frame.left + inset,
        to: WIDTH - 14.0 - inset,
        text_size: SMALL,
        direction: Direction::Across,
    };
    let x_axis = Axis::over(low, high, place);
    let rows = level_ticks(&mut drawing, &x_axis, &points, frame.bottom);
    drawing.polyline(
        thinned(&curve).into_iter().map(|p| (x_axis.place(p.x), frame.y_axis.place(p.y))),
        Stroke::Curve,
    );
    for point in &points {
        draw_point(&mut drawing, point, x_axis.place(point.x), &frame);
    }
    let end = axis_title(&mut drawing, &spec.x_axis, frame.left, frame.bottom + 21.0 + 16.0 * rows as f64);
    let description = describe(spec);
    let svg = drawing.finish(end, &format!("{}. {description}", spec.title));
    Figure::new(spec.title.clone(), description, svg)
}

/// The area of a figure with an upward axis at its left.
pub struct Frame {
    pub left: f64,
    pub top: f64,
    pub bottom: f64,
    pub y_axis: Axis,
}

impl Frame {
    /// Draws the upward axis with its title above and its grid.
    pub fn new(
        drawing: &mut Drawing,
        top: f64,
        title: &str,
        height: f64,
        axis: impl Fn(Place) -> Axis,
    ) -> Frame {
        let lines = label::wrap(title, super::drawing::TEXT, WIDTH - 8.0, 2);
        let mut y = top + 6.0;
        for line in &lines {
            drawing.titled(4.0, y, line, title, Anchor::Start, Words::Label);
            y += 17.0;
        }
        let top = y;
        let bottom = top + height;
        let y_axis = axis(Place { from: bottom, to: top, text_size: SMALL, direction: Direction::Up });
        let widest = y_axis.ticks.iter().map(|t| label::width(&t.label, SMALL)).fold(0.0, f64::max);
        let left = widest.clamp(14.0, 150.0) + 14.0;
        for tick in &y_axis.ticks {
            let y = y_axis.place(tick.value);
            drawing.line(left, y, WIDTH - 14.0, y, Stroke::Grid);
            drawing.text(left - 8.0, y + 4.5, &tick.label, Anchor::End, Words::Small);
        }
        drawing.line(left, bottom, WIDTH - 14.0, bottom, Stroke::Axis);
        Frame { left, top, bottom, y_axis }
    }
}

fn x_range(points: &[&TrendPoint], curve: &[Point]) -> (f64, f64) {
    let all = points.iter().map(|p| p.x).chain(curve.iter().map(|p| p.x));
    all.fold((f64::INFINITY, f64::NEG_INFINITY), |(low, high), x| (low.min(x), high.max(x)))
}

/// The levels' ticks and labels. Returns the number of lines that the labels take.
fn level_ticks(drawing: &mut Drawing, axis: &Axis, points: &[&TrendPoint], bottom: f64) -> usize {
    let mut sorted: Vec<&TrendPoint> = points.to_vec();
    sorted.sort_by(|a, b| a.x.total_cmp(&b.x));
    // The labels of each line as (left, right), in order.
    let mut taken: [Vec<(f64, f64)>; 3] = Default::default();
    let mut lines = 1;
    for point in sorted {
        let x = axis.place(point.x);
        let shown = label::shorten(&point.label, SMALL, 130.0);
        let half = label::width(&shown, SMALL) / 2.0;
        let centre = x.min(WIDTH - 4.0 - half).max(4.0 + half);
        let has_room =
            |line: &Vec<(f64, f64)>| line.last().is_none_or(|&(_, right)| centre - half >= right + 7.0);
        let free = taken.iter().position(has_room);
        // The tick reaches down to its label unless it would cross another one.
        let above = &taken[..free.unwrap_or(0)];
        let crosses = above.iter().flatten().any(|&(left, right)| (left - 2.0..right + 2.0).contains(&x));
        let drop = if crosses { 5.0 } else { 5.0 + 16.0 * free.unwrap_or(0) as f64 };
        drawing.named(&point.label, |drawing| drawing.line(x, bottom, x, bottom + drop, Stroke::Axis));
        if let Some(line) = free {
            taken[line].push((centre - half, centre + half));
            lines = lines.max(line + 1);
            let y = bottom + 18.0 + 16.0 * line as f64;
            drawing.titled(centre, y, &shown, &point.label, Anchor::Middle, Words::Small);
        }
    }
    lines
}

fn draw_point(drawing: &mut Drawing, point: &TrendPoint, x: f64, frame: &Frame) {
    if let Some(span) = point.interval.and_then(Span::usable) {
        let (low, high) = (frame.y_axis.place(span.lower), frame.y_axis.place(span.upper));
        drawing.line(x, low, x, high, Stroke::Interval);
        for (limit, y) in [(span.lower, low), (span.upper, high)] {
            if limit.is_finite() {
                drawing.line(x - 4.0, y, x + 4.0, y, Stroke::Interval);
            }
        }
    }
    if point.mean.is_finite() {
        drawing.circle(x, frame.y_axis.place(point.mean), 4.4, Fill::Solid);
    }
}

/// Every k-th point, and the last, so that a curve has a bounded number of them.
pub fn thinned(curve: &[Point]) -> Vec<Point> {
    let every = curve.len().div_ceil(MOST_POINTS).max(1);
    let mut points: Vec<Point> = curve.iter().copied().step_by(every).collect();
    if every > 1 {
        points.extend(curve.last());
    }
    points
}

fn describe(spec: &Trend) -> String {
    let means: Vec<f64> = spec.points.iter().map(|p| p.mean).collect();
    let precision = precision_of(&means, spec.points.iter().map(|p| p.interval.and_then(Span::usable)));
    let mut sentences = vec![format!("{} over {}, {} levels", spec.y_axis, spec.x_axis, spec.points.len())];
    sentences.extend([&spec.bars].into_iter().filter(|s| !s.is_empty()).cloned());
    if !spec.curve.is_empty() && !spec.curve_words.is_empty() {
        sentences.push(spec.curve_words.clone());
    }
    if spec.points.len() <= 12 {
        for point in &spec.points {
            let numbers = in_words(point.mean, point.interval.and_then(Span::usable), precision);
            sentences.push(format!("{} (at {}): mean {numbers}", point.label, number::plain(point.x)));
        }
    } else {
        sentences.push("The table lists every level".to_owned());
    }
    sentences.iter().map(|s| format!("{}.", s.trim_end_matches('.'))).collect::<Vec<_>>().join(" ")
}
