//! Figures as SVG, each from plain numbers and words.
//!
//! A drawing is [`WIDTH`](drawing::WIDTH) units wide and scales with its place; it has classes for the style sheet and
//! presentation attributes for when it stands alone. Colour repeats what shape, weight or words already say.
//! The same numbers give the same drawing: points are spread by their rank, never by chance. A number that is not
//! finite is left out of the drawing and said to be missing in the description.

mod axis;
mod curve;
mod drawing;
mod groups;
mod intervals;
mod label;
mod network;
mod trend;

pub use curve::{Curve, curve};
pub use groups::{Group, Groups, groups};
pub use intervals::{IntervalRow, Intervals, Mark, intervals};
pub use network::{Network, NetworkArrow, NetworkNode, network};
pub use trend::{Trend, TrendPoint, trend};

use super::number::{self, Precision};

/// An interval. A side without a limit is infinite and drawn as an arrow.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Span {
    pub lower: f64,
    pub upper: f64,
}

/// A point of a curve.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Point {
    pub x: f64,
    pub y: f64,
}

impl Span {
    /// The interval, unless a limit is not a number or the limits are the wrong way round: then there is nothing to draw.
    fn usable(self) -> Option<Span> {
        (self.lower <= self.upper).then_some(self)
    }

    /// The limits that are finite.
    fn limits(self) -> impl Iterator<Item = f64> {
        [self.lower, self.upper].into_iter().filter(|limit| limit.is_finite())
    }

    /// About the standard error behind a usual interval.
    fn spread(self) -> f64 {
        self.upper / 4.0 - self.lower / 4.0
    }
}

/// The numbers that an axis shall cover, and beyond them some room on a side where an interval ends in an arrow: the arrow
/// must not meet a mark.
fn with_room_for_arrows(
    numbers: impl Iterator<Item = f64>,
    mut spans: impl Iterator<Item = Span> + Clone,
) -> Vec<f64> {
    let mut numbers: Vec<f64> = numbers.filter(|x| x.is_finite()).collect();
    let (low, high) =
        numbers.iter().fold((f64::INFINITY, f64::NEG_INFINITY), |(l, h), &x| (l.min(x), h.max(x)));
    let room = (high - low) * 0.12;
    if spans.clone().any(|span| span.upper == f64::INFINITY) {
        numbers.push(high + room);
    }
    if spans.any(|span| span.lower == f64::NEG_INFINITY) {
        numbers.push(low - room);
    }
    numbers
}

/// One precision for the numbers in a description: from the intervals, or else from the numbers' own range.
fn precision_of(numbers: &[f64], spans: impl Iterator<Item = Option<Span>>) -> Precision {
    let spreads: Vec<f64> = spans.flatten().map(Span::spread).filter(|s| s.is_finite() && *s > 0.0).collect();
    if spreads.is_empty() { Precision::for_values(numbers) } else { Precision::for_column(spreads) }
}

/// "1.25, interval 0.3 to 2.2".
fn in_words(estimate: f64, span: Option<Span>, precision: Precision) -> String {
    let shown = number::estimate(estimate, precision);
    match span {
        Some(span) => {
            format!("{shown}, interval {}", number::interval_in_words(span.lower, span.upper, precision))
        }
        None => shown,
    }
}
