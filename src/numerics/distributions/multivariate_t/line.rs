//! Rank 1: an interval.

use super::radial::Radial;
use super::region::{HalfSpace, Tails};

/// Both tails of the interval that the half-lines leave.
pub(super) fn tails(sides: &[HalfSpace], radial: Radial) -> Tails {
    let nearest = |upwards: bool| {
        let limits = sides.iter().filter(|side| (side.normal[0] > 0.0) == upwards).map(|side| side.limit);
        limits.fold(f64::INFINITY, f64::min)
    };
    let (high, low) = (nearest(true), -nearest(false));
    if low > high {
        return Tails { inside: 0.0, outside: 1.0 };
    }
    // A tail of 0 for an infinite limit.
    let above = |limit: f64| {
        let tail = if limit.is_finite() { radial.tail(limit.abs()) } else { 0.0 };
        if limit < 0.0 { 1.0 - tail } else { tail }
    };
    if low > 0.0 || high < 0.0 {
        let (near, far) = if low > 0.0 { (low, high) } else { (-high, -low) };
        let inside = above(near) - above(far);
        return Tails { inside, outside: 1.0 - inside };
    }
    let outside = above(high) + above(-low);
    if outside > 0.75 && high.is_finite() && low.is_finite() {
        let inside = 0.5 * (radial.centre(high) + radial.centre(-low));
        return Tails { inside, outside: 1.0 - inside };
    }
    Tails { inside: 1.0 - outside, outside }
}
