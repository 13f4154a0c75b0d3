//! A curve with a target line and the point that was chosen: power against sample size.

use super::axis::{Axis, Direction, Place};
use super::drawing::{Anchor, Drawing, Fill, SMALL, Stroke, TEXT, WIDTH, Words};
use super::intervals::axis_title;
use super::trend::{Frame, thinned};
use super::{Point, Span, label};
use crate::answer::{Figure, Precision, number};

const HEIGHT: f64 = 240.0;

/// What [`curve`] draws.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Curve {
    pub title: String,
    /// "Observations per group".
    pub x_axis: String,
    /// "Power".
    pub y_axis: String,
    pub points: Vec<Point>,
    /// The range of the upward axis; for a probability 0 to 1. None: that of the points.
    pub y_range: Option<Span>,
    /// The line to be reached, with its words: "target 0.8".
    pub target: Option<f64>,
    pub target_words: String,
    /// The point that answers the question, with its words: "5 per group: power 0.83".
    pub chosen: Option<Point>,
    pub chosen_words: String,
}

/// The figure of a curve.
pub fn curve(spec: &Curve) -> Figure {
    let points: Vec<Point> =
        spec.points.iter().copied().filter(|p| p.x.is_finite() && p.y.is_finite()).collect();
    let chosen = spec.chosen.filter(|p| p.x.is_finite() && p.y.is_finite());
    let target = spec.target.filter(|t| t.is_finite());
    let mut drawing = Drawing::default();
    let frame = Frame::new(&mut drawing, 10.0, &spec.y_axis, HEIGHT, |place| {
        match spec.y_range.and_then(Span::usable) {
            Some(range) => Axis::over(range.lower, range.upper, place),
            None => Axis::covering(points.iter().chain(&chosen).map(|p| p.y).chain(target), place),
        }
    });
    let right = WIDTH - 14.0;
    let place = Place { from: frame.left, to: right, text_size: SMALL, direction: Direction::Across };
    let x_axis = Axis::covering(points.iter().chain(&chosen).map(|p| p.x), place);
    for tick in &x_axis.ticks {
        let x = x_axis.place(tick.value);
        drawing.line(x, frame.bottom, x, frame.bottom + 5.0, Stroke::Axis);
        drawing.text(x, frame.bottom + 19.0, &tick.label, Anchor::Middle, Words::Small);
    }
    if let Some(target) = target {
        let y = frame.y_axis.place(target);
        drawing.line(frame.left, y, right, y, Stroke::Guide);
        let shown = label::shorten(&spec.target_words, SMALL, 180.0);
        // At the right, where a rising curve has left the line behind, unless the chosen point's line runs through there.
        let words_left = right - 2.0 - label::width(&shown, SMALL) - 8.0;
        let (x, anchor) = match chosen {
            Some(chosen) if x_axis.place(chosen.x) > words_left => (frame.left + 5.0, Anchor::Start),
            _ => (right - 2.0, Anchor::End),
        };
        drawing.titled(x, y - 5.0, &shown, &spec.target_words, anchor, Words::Small);
    }
    let places = || thinned(&points).into_iter().map(|p| (x_axis.place(p.x), frame.y_axis.place(p.y)));
    drawing.polyline(places(), Stroke::Interval);
    if points.len() <= 40 {
        for (x, y) in places() {
            drawing.circle(x, y, 2.4, Fill::Solid);
        }
    }
    if let Some(chosen) = chosen {
        let (x, y) = (x_axis.place(chosen.x), frame.y_axis.place(chosen.y));
        let line = target.map(|target| frame.y_axis.place(target));
        draw_chosen(&mut drawing, spec, (x, y), &places().collect::<Vec<_>>(), line, &frame);
    }
    let end = axis_title(&mut drawing, &spec.x_axis, frame.left, frame.bottom + 40.0);
    let description = describe(spec, &points);
    let svg = drawing.finish(end, &format!("{}. {description}", spec.title));
    Figure::new(spec.title.clone(), description, svg)
}

/// The chosen point, a line down to its axis, and its words at that side where there is room, below the curve and clear of
/// the target line.
fn draw_chosen(
    drawing: &mut Drawing,
    spec: &Curve,
    (x, y): (f64, f64),
    curve: &[(f64, f64)],
    target: Option<f64>,
    frame: &Frame,
) {
    drawing.line(x, y, x, frame.bottom, Stroke::Guide);
    drawing.circle(x, y, 5.2, Fill::Chosen);
    let shown = label::shorten(&spec.chosen_words, TEXT, WIDTH - frame.left - 40.0);
    let width = label::width(&shown, TEXT);
    let right = WIDTH - 14.0;
    let (left, anchor) = if x + 10.0 + width <= right {
        (x + 10.0, Anchor::Start)
    } else if x - 10.0 - width >= frame.left {
        (x - 10.0 - width, Anchor::End)
    } else {
        (right - width, Anchor::End)
    };
    // The lowest that the curve runs over these words.
    let over = curve.iter().filter(|(cx, _)| (left - 12.0..=left + width + 12.0).contains(cx));
    let lowest = over.map(|&(_, cy)| cy).fold(y, f64::max);
    let mut baseline = lowest + 24.0;
    if let Some(target) = target.filter(|target| (baseline - 16.0..=baseline + 20.0).contains(target)) {
        baseline = target + 18.0;
    }
    let baseline = baseline.clamp(frame.top + 14.0, frame.bottom - 10.0);
    let at = if anchor == Anchor::Start { left } else { left + width };
    drawing.titled(at, baseline, &shown, &spec.chosen_words, anchor, Words::Chosen);
}

fn describe(spec: &Curve, points: &[Point]) -> String {
    let mut sentences = vec![format!("{} against {}", spec.y_axis, spec.x_axis)];
    if let (Some(first), Some(last)) = (points.first(), points.last()) {
        let ys: Vec<f64> = points.iter().map(|p| p.y).collect();
        let precision = Precision::for_values(&ys);
        let at = |p: &Point| format!("{} at {}", number::estimate(p.y, precision), number::plain(p.x));
        sentences.push(format!("From {} to {}", at(first), at(last)));
    }
    sentences.extend([&spec.target_words, &spec.chosen_words].into_iter().filter(|s| !s.is_empty()).cloned());
    sentences.iter().map(|s| format!("{}.", s.trim_end_matches('.'))).collect::<Vec<_>>().join(" ")
}
