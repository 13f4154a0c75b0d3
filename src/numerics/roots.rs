//! Roots of monotone functions of one variable. Every quantile and every solved-for parameter goes through here.
//!
//! Newton's iteration, kept inside the bracket that the signs seen so far give; where the slope is not known
//! in closed form, the chord through the last two points takes its place (the secant method).
//! Callers pose the equation so that it is nearly straight, log p against log x for a tail, for example.

/// Largest number of evaluations: bisection alone would exhaust the doubles of one sign in about as many.
const MAX_EVALUATIONS: usize = 200;
/// A step below this fraction of the caller's scale ends the iteration; the step itself is still taken, so that
/// the root is better than that: the error after a Newton step is of the order of its square.
const STEP: f64 = 1e-8;
/// After a step along a chord the error is of the order of the product of their lengths: the iteration may end when
/// that is below this fraction of the square of the scale.
const PRODUCT: f64 = 1e-14;

/// What a function is at a point.
#[derive(Debug, Clone, Copy)]
pub struct Value {
    /// Its value; infinite values are allowed and only tell the side.
    pub value: f64,
    /// Its derivative, or the slope of a chord that ends there.
    pub slope: f64,
    /// Length of that chord; 0 for a derivative.
    pub chord: f64,
}

/// The root of the increasing function `f` on the line, from `start`; `scale` is a length over which its
/// slope changes noticeably.
pub fn increasing(mut f: impl FnMut(f64) -> Value, start: f64, scale: f64) -> f64 {
    let (mut low, mut high) = (f64::NEG_INFINITY, f64::INFINITY);
    let mut x = start;
    let mut leap = scale;
    for _ in 0..MAX_EVALUATIONS {
        let Value { value, slope, chord } = f(x);
        if value == 0.0 {
            return x;
        }
        if value < 0.0 {
            low = x;
        } else {
            high = x;
        }
        let step = -value / slope;
        let newton = x + step;
        let usable = slope > 0.0 && slope.is_finite() && newton > low && newton < high;
        // A step that rounding swallows may seem to lead out of the bracket: x is then one of its ends.
        if slope > 0.0 && slope.is_finite() && step.abs() <= f64::EPSILON * x.abs() {
            return x;
        }
        let small = step.abs() <= STEP * scale && step.abs() * chord <= PRODUCT * scale * scale;
        if usable && small {
            return newton;
        }
        let next = if usable {
            newton
        } else if low.is_finite() && high.is_finite() {
            0.5 * low + 0.5 * high
        } else {
            // One side is still open: leap outwards, twice as far each time.
            leap *= 2.0;
            if low.is_finite() { low + leap } else { high - leap }
        };
        if next == x || next <= low || next >= high {
            return next.clamp(low, high);
        }
        x = next;
    }
    x
}

/// The root of the increasing function `f`, known by its values alone.
pub fn increasing_secant(mut f: impl FnMut(f64) -> f64, start: f64, scale: f64) -> f64 {
    let mut last: Option<(f64, f64)> = None;
    increasing(
        |x| {
            let value = f(x);
            let (x0, value0) = match last {
                Some(last) => last,
                None => (x + 1e-3 * scale, f(x + 1e-3 * scale)),
            };
            last = Some((x, value));
            Value { value, slope: (value - value0) / (x - x0), chord: (x - x0).abs() }
        },
        start,
        scale,
    )
}

/// The root of the increasing function `f`, known by its values, with its `slope` at the start about known: one evaluation fewer than
/// [`increasing_secant`].
pub fn increasing_secant_from(mut f: impl FnMut(f64) -> f64, start: f64, scale: f64, slope: f64) -> f64 {
    let mut last: Option<(f64, f64)> = None;
    increasing(
        |x| {
            let value = f(x);
            let (slope, chord) = match last {
                Some((x0, value0)) => ((value - value0) / (x - x0), (x - x0).abs()),
                // As good as a chord of the whole scale: it never ends the iteration.
                None => (slope, scale),
            };
            last = Some((x, value));
            Value { value, slope, chord }
        },
        start,
        scale,
    )
}

/// The root of log(tail(x)) = log(`target`) for a tail that rises with x or, `falling`, falls; `tail` gives its value and the
/// derivative of its logarithm, or NaN where that is not known.
pub fn log_tail(mut tail: impl FnMut(f64) -> (f64, f64), target: f64, falling: bool, start: f64) -> f64 {
    let sign = if falling { -1.0 } else { 1.0 };
    let mut at = |x: f64| {
        let (value, slope) = tail(x);
        (sign * libm::log(value / target), sign * slope)
    };
    let mut first = Some(at(start));
    if first.is_some_and(|(_, slope)| slope.is_nan()) {
        return increasing_secant(|x| first.take().unwrap_or_else(|| at(x)).0, start, 1.0);
    }
    increasing(
        |x| {
            let (value, slope) = first.take().unwrap_or_else(|| at(x));
            Value { value, slope, chord: 0.0 }
        },
        start,
        1.0,
    )
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_root_is_found_from_far_away_and_with_a_useless_slope() {
        let cube =
            increasing(|x| Value { value: x * x * x - 8.0, slope: 3.0 * x * x, chord: 0.0 }, -50.0, 1.0);
        assert!((cube - 2.0).abs() < 1e-14, "{cube}");
        let flat = increasing(|x| Value { value: libm::atan(x - 3.0), slope: 0.0, chord: 0.0 }, 1e6, 1.0);
        assert!((flat - 3.0).abs() < 1e-12, "{flat}");
        let secant = increasing_secant(|x| libm::exp(x) - 5.0, 0.0, 1.0);
        assert!((secant - libm::log(5.0)).abs() < 1e-14, "{secant}");
    }
}
