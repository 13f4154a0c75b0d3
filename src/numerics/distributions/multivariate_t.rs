//! The largest of several correlated t statistics, for any correlation matrix, singular ones included: the largest Tᵢ or
//! |Tᵢ| with T = A Z / S, A Aᵀ the correlation, Z independent standard normal and df·S² chi-squared with df degrees of
//! freedom.
//!
//! With r the rank, Z = R u for a random direction u on the sphere in r dimensions, and R²/(r S²) has the F distribution with
//! r and df degrees of freedom: P(max > c) is the mean over directions of P(F > (c/g(u))²/r), g(u) the largest aᵢ·u (or
//! |aᵢ·u|). The radius is thus integrated exactly, and even tiny probabilities keep their relative accuracy. What is left
//! depends on the rank: rank 1 has two directions; for rank 2 the circle is cut where another i takes the lead and
//! each arc is integrated by Gauss-Legendre rules; from rank 3 on the directions are a randomly shifted lattice, refined until
//! the standard error over the shifts is small enough, and that error is part of the answer. The same seed gives
//! the same answer everywhere.
//!
//! # References
//! 1. Genz and Bretz (2009), Computation of multivariate normal and t probabilities, sections 4.1 and 4.2.
//! 2. Cranley and Patterson (1976), SIAM J. Numer. Anal. 13, 904-914 (random shifts); Richtmyer (1951) (the lattice).

use super::many_to_one::Sides;
use super::{degrees_of_freedom, finite, fisher_f, normal, probability, student_t};
use crate::numerics::quadrature::{self, Estimate};
use crate::numerics::{OutOfDomain, roots};
use std::f64::consts::PI;

/// Pivots and asymmetries below this count as rounding of the correlation matrix.
const ROUNDING: f64 = 1e-9;
/// Number of random shifts; the error is that of their mean.
const SHIFTS: usize = 12;

/// How much work may be spent where the rank is above 2.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Effort {
    /// Standard error, relative to the probability, at which to stop.
    pub relative_error: f64,
    /// Most directions per shift.
    pub most_directions: usize,
    /// Seed of the shifts.
    pub seed: u64,
}

impl Default for Effort {
    /// A relative standard error of 1e-5, at most 16384 directions in each of 12 shifts.
    fn default() -> Self {
        Effort { relative_error: 1e-5, most_directions: 16_384, seed: 1 }
    }
}

/// P(max <= `c`) for statistics with the given `correlation` (rows) and `df` degrees of freedom.
///
/// # Errors
/// As for [`sf`].
pub fn cdf(
    c: f64,
    correlation: &[Vec<f64>],
    df: f64,
    sides: Sides,
    effort: Effort,
) -> Result<Estimate, OutOfDomain> {
    sf(c, correlation, df, sides, effort)
        .map(|upper| Estimate { value: 1.0 - upper.value, error: upper.error })
}

/// P(max > `c`), the single-step adjusted p-value of a statistic `c`, for statistics with the given `correlation` (rows) and
/// `df` degrees of freedom, which may be infinite. `error` is the standard error, 0 up to rank 2.
///
/// # Errors
/// [`OutOfDomain`] if `c` is not finite (or negative with both sides), `df` is not positive, or `correlation` is not a
/// correlation matrix: square, 1 on the diagonal, symmetric and positive semi-definite, each to 1e-9.
///
/// # Accuracy
/// As listed in `tests/reference/accuracy.rs` up to rank 2; beyond, the error that is returned.
///
/// # Example
/// ```
/// # use levelwise::numerics::distributions::{many_to_one::Sides, multivariate_t};
/// // All pairs of three equal groups: the correlations have rank 2.
/// let pairs = [vec![1.0, 0.5, -0.5], vec![0.5, 1.0, 0.5], vec![-0.5, 0.5, 1.0]];
/// let c = 3.876_776_75 / f64::sqrt(2.0); // the studentized range's 5 % point for 10 df
/// let p = multivariate_t::sf(c, &pairs, 10.0, Sides::Both, Default::default())?;
/// assert!((p.value - 0.05).abs() < 1e-8);
/// # Ok::<(), levelwise::numerics::OutOfDomain>(())
/// ```
pub fn sf(
    c: f64,
    correlation: &[Vec<f64>],
    df: f64,
    sides: Sides,
    effort: Effort,
) -> Result<Estimate, OutOfDomain> {
    let c = finite("c", c)?;
    if sides == Sides::Both && c < 0.0 {
        return Err(OutOfDomain { argument: "c", value: c, allowed: "at least 0 when both sides count" });
    }
    let df = degrees_of_freedom("df", df)?;
    Family::new(correlation, sides)?.upper(c, df, effort)
}

/// The c with P(max > c) = `upper_p`: the critical value of the family; infinite at 0. Found on one fixed set of directions,
/// so that it is smooth in its arguments; `error` is the standard error of c.
///
/// # Errors
/// [`OutOfDomain`] if `upper_p` is not from 0 to 1, or as for [`sf`].
pub fn upper_quantile(
    upper_p: f64,
    correlation: &[Vec<f64>],
    df: f64,
    sides: Sides,
    effort: Effort,
) -> Result<Estimate, OutOfDomain> {
    let p = probability("upper_p", upper_p)?;
    let df = degrees_of_freedom("df", df)?;
    let family = Family::new(correlation, sides)?;
    if p == 0.0 || p == 1.0 {
        let least = if sides == Sides::Both { 0.0 } else { f64::NEG_INFINITY };
        return Ok(Estimate { value: if p == 0.0 { f64::INFINITY } else { least }, error: 0.0 });
    }
    let share = p / (family.rows.len() as f64 * if sides == Sides::Both { 2.0 } else { 1.0 });
    let start = student_t::upper_quantile(share, df)?.max(0.01);
    // How many directions the error needs is decided once, at the start; the root is then found on those.
    let enough = family.directions_needed(start, df, effort);
    let mut relative_error = 0.0;
    let mut slope = (0.0, 0.0);
    let c = libm::sinh(roots::increasing_secant(
        |x| {
            let c = libm::sinh(x);
            if sides == Sides::Both && c <= 0.0 {
                return f64::NEG_INFINITY;
            }
            let upper = family.upper_by(c, df, enough, effort.seed);
            relative_error = upper.error / upper.value;
            slope = (c, upper.value);
            libm::log(p / upper.value)
        },
        libm::asinh(start),
        1.0,
    ));
    let beside = family.upper_by(c * (1.0 + 1e-4), df, enough, effort.seed).value;
    let log_slope = libm::log(slope.1 / beside) / (c * (1.0 + 1e-4) - slope.0);
    let error = if relative_error > 0.0 { (relative_error / log_slope).abs() } else { 0.0 };
    Ok(Estimate { value: c, error })
}

/// The c with P(max <= c) = `p`.
///
/// # Errors
/// As for [`upper_quantile`].
pub fn quantile(
    p: f64,
    correlation: &[Vec<f64>],
    df: f64,
    sides: Sides,
    effort: Effort,
) -> Result<Estimate, OutOfDomain> {
    let p = probability("p", p)?;
    upper_quantile(1.0 - p, correlation, df, sides, effort)
}

/// The rows aᵢ of a factor of the correlation matrix.
struct Family {
    rows: Vec<Vec<f64>>,
    rank: usize,
    sides: Sides,
}

impl Family {
    /// Factors the matrix by Cholesky's method with pivoting, which reveals the rank.
    fn new(correlation: &[Vec<f64>], sides: Sides) -> Result<Family, OutOfDomain> {
        check_matrix(correlation)?;
        let count = correlation.len();
        let mut rest: Vec<Vec<f64>> = correlation.to_vec();
        let mut rows = vec![Vec::new(); count];
        loop {
            let mut pivot = 0;
            for (i, row) in rest.iter().enumerate() {
                if row[i] < -ROUNDING {
                    let allowed = "positive semi-definite (no negative pivot)";
                    return Err(OutOfDomain { argument: "correlation", value: row[i], allowed });
                }
                if row[i] > rest[pivot][pivot] {
                    pivot = i;
                }
            }
            if rest[pivot][pivot] <= ROUNDING {
                break;
            }
            let root = rest[pivot][pivot].sqrt();
            let column: Vec<f64> = rest.iter().map(|row| row[pivot] / root).collect();
            for i in 0..count {
                rows[i].push(column[i]);
                for j in 0..count {
                    rest[i][j] -= column[i] * column[j];
                }
            }
            rest[pivot].fill(0.0);
            rest.iter_mut().for_each(|row| row[pivot] = 0.0);
        }
        if let Some(&value) = rest.iter().flatten().find(|value| value.abs() > 1e-6) {
            let allowed = "positive semi-definite (a remainder of 0)";
            return Err(OutOfDomain { argument: "correlation", value, allowed });
        }
        let rank = rows[0].len();
        Ok(Family { rows, rank, sides })
    }

    fn upper(&self, c: f64, df: f64, effort: Effort) -> Result<Estimate, OutOfDomain> {
        let directions = self.directions_needed(c, df, effort);
        Ok(self.upper_by(c, df, directions, effort.seed))
    }

    /// The number of directions per shift at which the error is small enough, or the most that are allowed.
    fn directions_needed(&self, c: f64, df: f64, effort: Effort) -> usize {
        let mut directions = 256;
        while self.rank > 2 && directions < effort.most_directions {
            let upper = self.upper_by(c, df, directions, effort.seed);
            if upper.error <= effort.relative_error * upper.value {
                break;
            }
            directions *= 4;
        }
        directions.min(effort.most_directions.max(1))
    }

    /// P(max > c) with so many directions per shift.
    fn upper_by(&self, c: f64, df: f64, directions: usize, seed: u64) -> Estimate {
        match self.rank {
            1 => {
                let both = [1.0, -1.0].map(|u| self.beyond(c, df, &[u]));
                Estimate { value: 0.5 * (both[0] + both[1]), error: 0.0 }
            }
            2 => Estimate { value: self.over_circle(c, df), error: 0.0 },
            _ => self.over_lattice(c, df, directions, seed),
        }
    }

    /// P(max > c) given the direction u.
    fn beyond(&self, c: f64, df: f64, u: &[f64]) -> f64 {
        let products = self.rows.iter().map(|row| row.iter().zip(u).map(|(a, u)| a * u).sum::<f64>());
        let lead = match self.sides {
            Sides::Both => products.fold(0.0, |lead: f64, product| lead.max(product.abs())),
            Sides::Greater => products.fold(f64::NEG_INFINITY, f64::max),
        };
        let rank = self.rank as f64;
        // The tail of the radius; a lead of 0 is never left behind.
        let radius_above = |r: f64| {
            let f = r * r / rank;
            if f < 1e300 { fisher_f::sf(f, rank, df).unwrap_or(0.0) } else { 0.0 }
        };
        if c >= 0.0 {
            if lead > 0.0 { radius_above(c / lead) } else { 0.0 }
        } else if lead < 0.0 {
            1.0 - radius_above(c / lead)
        } else {
            1.0
        }
    }

    /// The mean over the circle, arc by arc between the directions where the lead changes or vanishes.
    fn over_circle(&self, c: f64, df: f64) -> f64 {
        let mut cuts = vec![0.0, 2.0 * PI];
        let mut cut_at_normal = |x: f64, y: f64| {
            // Directions orthogonal to (x, y).
            let angle = libm::atan2(x, -y);
            for turn in [angle, angle + PI, angle + 2.0 * PI] {
                if turn > 0.0 && turn < 2.0 * PI {
                    cuts.push(turn);
                }
            }
        };
        for (i, a) in self.rows.iter().enumerate() {
            cut_at_normal(a[0], a[1]);
            for b in &self.rows[..i] {
                for (x, y) in [(a[0] - b[0], a[1] - b[1]), (a[0] + b[0], a[1] + b[1])] {
                    if x.abs() + y.abs() > ROUNDING {
                        cut_at_normal(x, y);
                    }
                }
            }
        }
        cuts.sort_by(f64::total_cmp);
        let rule = quadrature::rule_32();
        let arcs = cuts.windows(2).filter(|arc| arc[1] - arc[0] > 1e-13);
        let beyond = |angle: f64| self.beyond(c, df, &[libm::cos(angle), libm::sin(angle)]);
        // Where the lead vanishes at an end, all derivatives do, but the function is not analytic: narrower pieces there.
        const PIECES: [f64; 7] = [0.0, 0.03, 0.15, 0.5, 0.85, 0.97, 1.0];
        let sum: f64 = arcs
            .flat_map(|arc| {
                PIECES
                    .windows(2)
                    .map(|piece| [piece[0], piece[1]].map(|share| arc[0] + share * (arc[1] - arc[0])))
            })
            .map(|piece| rule.integrate(piece[0], piece[1], beyond))
            .sum();
        (sum / (2.0 * PI)).min(1.0)
    }

    /// The mean over randomly shifted lattices of directions.
    fn over_lattice(&self, c: f64, df: f64, directions: usize, seed: u64) -> Estimate {
        let generators: Vec<f64> = primes(self.rank).map(|prime| (prime as f64).sqrt().fract()).collect();
        let mut u = vec![0.0; self.rank];
        let means: Vec<f64> = (0..SHIFTS)
            .map(|shift| {
                let mut sum = 0.0;
                for point in 1..=directions {
                    for (axis, generator) in generators.iter().enumerate() {
                        let offset = uniform(seed, (shift * self.rank + axis) as u64);
                        let place = (point as f64 * generator + offset).fract();
                        // The baker's transformation makes the integrand periodic.
                        let folded = (2.0 * place - 1.0).abs().clamp(1e-16, 1.0 - 1e-16);
                        u[axis] = normal::upper_quantile_unchecked(folded);
                    }
                    let length = u.iter().map(|x| x * x).sum::<f64>().sqrt();
                    u.iter_mut().for_each(|x| *x /= length);
                    sum += self.beyond(c, df, &u);
                }
                sum / directions as f64
            })
            .collect();
        let count = SHIFTS as f64;
        let mean = means.iter().sum::<f64>() / count;
        let squares: f64 = means.iter().map(|each| (each - mean) * (each - mean)).sum();
        Estimate { value: mean, error: (squares / (count * (count - 1.0))).sqrt() }
    }
}

/// The first `count` prime numbers.
fn primes(count: usize) -> impl Iterator<Item = u64> {
    (2_u64..).filter(|n| (2..*n).take_while(|d| d * d <= *n).all(|d| n % d != 0)).take(count)
}

/// A number from 0 to 1 that depends on the seed and the index alone: Steele, Lea and Flood's (2014) mixing function.
fn uniform(seed: u64, index: u64) -> f64 {
    let mut z = seed.wrapping_add(index.wrapping_add(1).wrapping_mul(0x9e37_79b9_7f4a_7c15));
    z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
    z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
    ((z ^ (z >> 31)) >> 11) as f64 / (1_u64 << 53) as f64
}

fn check_matrix(correlation: &[Vec<f64>]) -> Result<(), OutOfDomain> {
    let refuse = |value, allowed| Err(OutOfDomain { argument: "correlation", value, allowed });
    let count = correlation.len();
    if count == 0 || count > 1000 {
        return refuse(count as f64, "a matrix with 1 to 1000 rows");
    }
    for (i, row) in correlation.iter().enumerate() {
        if row.len() != count {
            return refuse(row.len() as f64, "square: as many columns as rows");
        }
        for (j, &value) in row.iter().enumerate() {
            if !value.is_finite() || value.abs() > 1.0 + ROUNDING {
                return refuse(value, "made of numbers from -1 to 1");
            }
            if i == j && (value - 1.0).abs() > ROUNDING {
                return refuse(value, "1 on the diagonal");
            }
            if (value - correlation.get(j).and_then(|row| row.get(i)).copied().unwrap_or(value)).abs()
                > ROUNDING
            {
                return refuse(value, "symmetric");
            }
        }
    }
    Ok(())
}
