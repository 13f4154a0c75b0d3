//! A numeric axis: a range with round ends, ticks at 1, 2 or 5 times a power of ten, and their labels.

use super::label;
use crate::answer::number::{self, Precision};
use libm::{ceil, floor, log10, pow};

/// Beyond this size a range could not be subtracted.
const LARGEST: f64 = 1e300;

/// A linear axis that maps numbers to places in the drawing.
#[derive(Debug, Clone, PartialEq)]
pub struct Axis {
    low: f64,
    high: f64,
    from: f64,
    to: f64,
    pub ticks: Vec<Tick>,
}

/// A tick: its number and its label.
#[derive(Debug, Clone, PartialEq)]
pub struct Tick {
    pub value: f64,
    pub label: String,
}

/// Where an axis runs in the drawing, and how its labels share the room.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Place {
    /// The place of the lowest number.
    pub from: f64,
    /// The place of the highest number; less than `from` for an axis that runs upwards.
    pub to: f64,
    pub text_size: f64,
    /// Labels stand side by side (a horizontal axis) and must not touch, or one above the other.
    pub direction: Direction,
}

#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Direction {
    Across,
    Up,
}

impl Axis {
    /// An axis that covers every finite one of `numbers`, with round ends. It need not start at zero. Without a finite number: 0 to 1.
    pub fn covering(numbers: impl IntoIterator<Item = f64>, place: Place) -> Axis {
        let (low, high) = padded(numbers);
        let most = match place.direction {
            Direction::Across => 8,
            Direction::Up => ((place.from - place.to).abs() / 44.0).clamp(2.0, 8.0) as usize,
        };
        // Long labels (1000000000000.4) leave room for fewer of them.
        let candidates = (1..=most).rev().map(|parts| Axis::with_parts(low, high, parts, place));
        candidates
            .into_iter()
            .find(|axis| axis.labels_fit(place))
            .unwrap_or_else(|| Axis::bare(low, high, place))
    }

    /// An axis over exactly this range, with ticks where they are round.
    pub fn over(low: f64, high: f64, place: Place) -> Axis {
        let mut axis = Axis::covering([low, high], place);
        if low.is_finite() && high.is_finite() && low < high && high - low < LARGEST {
            axis.ticks.retain(|tick| (low..=high).contains(&tick.value));
            (axis.low, axis.high) = (low, high);
        }
        axis
    }

    /// The place of a number in the drawing, on the axis in any case: a number beyond its ends stands at the end.
    pub fn place(&self, value: f64) -> f64 {
        let share = (value.clamp(-LARGEST, LARGEST) - self.low) / (self.high - self.low);
        let share = if share.is_finite() { share.clamp(0.0, 1.0) } else { 0.5 };
        self.from + share * (self.to - self.from)
    }

    /// The place where the axis begins.
    pub fn from(&self) -> f64 {
        self.from
    }

    /// The place where the axis ends.
    pub fn to(&self) -> f64 {
        self.to
    }

    fn with_parts(low: f64, high: f64, parts: usize, place: Place) -> Axis {
        let step = round_step((high - low) / parts as f64);
        let first = floor(low / step);
        let last = ceil(high / step);
        let usable =
            step > 0.0 && step.is_finite() && (last - first) <= 50.0 && first.abs().max(last.abs()) < 9e15;
        if !usable {
            return Axis::bare(low, high, place);
        }
        let exponent = floor(log10(step * 1.000_001)) as i32;
        let precision = Precision::at_place(-exponent);
        let ticks = (0..=(last - first) as i32).map(|i| {
            let value = (first + f64::from(i)) * step;
            Tick { value, label: number::estimate(value, precision) }
        });
        let ticks: Vec<Tick> = ticks.collect();
        Axis { low: first * step, high: last * step, from: place.from, to: place.to, ticks }
    }

    /// The last resort, for ranges at the limits of the numbers: the ends as they are, without ticks.
    fn bare(low: f64, high: f64, place: Place) -> Axis {
        Axis { low, high, from: place.from, to: place.to, ticks: Vec::new() }
    }

    fn labels_fit(&self, place: Place) -> bool {
        if self.ticks.len() < 2 || self.ticks.windows(2).any(|pair| pair[0].label == pair[1].label) {
            return false;
        }
        place.direction == Direction::Up
            || self.ticks.windows(2).all(|pair| {
                let half = |tick: &Tick| label::width(&tick.label, place.text_size) / 2.0;
                let distance = (self.place(pair[1].value) - self.place(pair[0].value)).abs();
                half(&pair[0]) + half(&pair[1]) + 8.0 <= distance
            })
    }
}

/// The range of the finite numbers, widened where it is a single point.
fn padded(numbers: impl IntoIterator<Item = f64>) -> (f64, f64) {
    let finite = numbers.into_iter().filter(|x| x.is_finite()).map(|x| x.clamp(-LARGEST, LARGEST));
    let (low, high) = finite.fold((f64::INFINITY, f64::NEG_INFINITY), |(l, h), x| (l.min(x), h.max(x)));
    if low > high {
        return (0.0, 1.0);
    }
    // Closer than a double can divide into ticks counts as a single point too.
    let size = low.abs().max(high.abs());
    if high - low > size * 1e-14 {
        return (low, high);
    }
    let room = if size > 0.0 { (size * 0.05).max(f64::MIN_POSITIVE * 1e10) } else { 1.0 };
    (low - room, high + room)
}

/// The smallest of 1, 2, 5 times a power of ten that is not below `step`.
fn round_step(step: f64) -> f64 {
    let power = pow(10.0, floor(log10(step)));
    let candidates = [1.0, 2.0, 5.0, 10.0];
    candidates.into_iter().map(|c| c * power).find(|&c| c >= step * 0.999_999).unwrap_or(10.0 * power)
}

#[cfg(test)]
mod tests {
    use super::*;

    const ACROSS: Place = Place { from: 100.0, to: 460.0, text_size: 12.0, direction: Direction::Across };

    fn labels(numbers: &[f64]) -> Vec<String> {
        Axis::covering(numbers.iter().copied(), ACROSS).ticks.into_iter().map(|t| t.label).collect()
    }

    #[test]
    fn ticks_are_round_and_need_not_start_at_zero() {
        assert_eq!(labels(&[12.3, 18.9]), ["12", "13", "14", "15", "16", "17", "18", "19"]);
        assert_eq!(
            labels(&[-0.31, 1.12]),
            ["\u{2212}0.4", "\u{2212}0.2", "0.0", "0.2", "0.4", "0.6", "0.8", "1.0", "1.2"]
        );
        assert_eq!(labels(&[]), ["0.0", "0.2", "0.4", "0.6", "0.8", "1.0"]);
    }

    #[test]
    fn long_labels_get_fewer_ticks() {
        let long = labels(&[1e12 + 0.2, 1e12 + 0.6]);
        assert!(long.len() >= 2 && long.iter().all(|l| l.starts_with("1000000000000.")), "{long:?}");
    }

    #[test]
    fn every_number_has_a_place_on_the_axis() {
        for numbers in [
            [0.0, 0.0],
            [5.0, 5.0],
            [-1e308, 1e308],
            [1e-310, 2e-310],
            [1.0, 1.0 + 1e-15],
            [f64::NAN, f64::INFINITY],
        ] {
            let axis = Axis::covering(numbers, ACROSS);
            for x in numbers.into_iter().chain([0.0, f64::NAN, f64::NEG_INFINITY]) {
                assert!((100.0..=460.0).contains(&axis.place(x)), "{numbers:?} at {x}: {axis:?}");
            }
        }
    }
}
