//! Beyond rank 3, any rectangle: separation of variables for the probability inside, the standard deviation S drawn first.
//!
//! # References
//! 1. Genz and Bretz (1999), J. Statist. Comput. Simul. 63, 361-378; Genz and Bretz (2009), Computation of Multivariate
//!    Normal and t Probabilities, 4.2.

use super::conditioning::Order;
use super::deviate::Spread;
use super::estimator::Scratch;
use super::leader::times;
use super::region::Slab;

/// The integral for a rectangle.
#[derive(Debug, Clone)]
pub(super) struct Separation {
    slabs: Vec<Slab>,
    spread: Option<Spread>,
}

impl Separation {
    /// `spread` holds the quantiles for df.
    pub fn new(slabs: Vec<Slab>, spread: Option<Spread>) -> Separation {
        Separation { slabs, spread }
    }

    /// The order of the coordinates.
    pub fn prepare(&self) -> Order {
        let rows = self.slabs.iter().map(|slab| slab.row.clone()).collect();
        let low: Vec<f64> = self.slabs.iter().map(|slab| slab.low).collect();
        let high: Vec<f64> = self.slabs.iter().map(|slab| slab.high).collect();
        Order::new(rows, &low, &high)
    }

    /// How many coordinates of a point are used.
    pub fn dimension(&self, order: &Order) -> usize {
        usize::from(self.spread.is_some()) + order.dimension()
    }

    /// The integrand at one point.
    pub fn sample(&self, order: &Order, point: &[f64], scratch: &mut Scratch) -> f64 {
        let (s, rest) = match &self.spread {
            Some(spread) => (spread.quantile(point[0]), &point[1..]),
            None => (1.0, point),
        };
        scratch.low.clear();
        scratch.high.clear();
        scratch.low.extend(self.slabs.iter().map(|slab| times(slab.low, s)));
        scratch.high.extend(self.slabs.iter().map(|slab| times(slab.high, s)));
        order.product(&scratch.low, &scratch.high, rest, &mut scratch.y)
    }
}
