//! Points that fill the unit cube evenly: a lattice in every number 2⁶ to 2¹⁴ of them, shifted at random and folded.
//!
//! Point k is the fractional part of φ(k) z + shift, φ(k) the binary digits of k mirrored at the point (van der Corput), so
//! that the first 2ᵐ points are a lattice for every m and more points refine the same lattice. The fold x → |2x - 1|
//! makes smooth integrands periodic (its mirror image is the tent transformation). A uniformly distributed shift makes the
//! mean over the points unbiased whatever z is; z only makes it accurate.
//!
//! # References
//! 1. Cranley and Patterson (1976), SIAM J. Numer. Anal. 13, 904-914 (random shifts).
//! 2. Sloan and Reztsov (2002), Math. Comp. 71, 263-273 (construction component by component).
//! 3. Cools, Kuo and Nuyens (2006), SIAM J. Sci. Comput. 28, 2162-2188 (one vector for every number of points).
//! 4. Hickernell (2002), in Monte Carlo and Quasi-Monte Carlo Methods 2000, 274-289 (the fold).

/// Fewest points of one lattice that are used.
pub(super) const FEWEST: usize = 1 << 6;
/// Most points, the largest lattice for which the vector was made.
pub(super) const MOST: usize = 1 << 14;

/// The generating vector z, made by `tests/reference/data/multivariate/lattice.py`, which says by which criterion. Beyond its
/// end it is used again from the start, with other shifts.
const GENERATOR: [u32; 100] = [
    1, 3535, 6251, 6779, 4471, 225, 4073, 6387, 3785, 1091, 7431, 1139, 8089, 2801, 2547, 6975, 3205, 2195,
    6377, 2205, 4789, 297, 35, 7695, 7231, 695, 7625, 6575, 2081, 4127, 1885, 2807, 3733, 827, 2673, 7957,
    1419, 7041, 5977, 4457, 5321, 8025, 3995, 7493, 1159, 823, 1753, 3405, 4463, 5783, 2739, 1681, 3465,
    2475, 2017, 3663, 6445, 3669, 5117, 433, 5051, 1153, 1621, 4853, 6967, 3003, 691, 3267, 1423, 889, 2343,
    361, 493, 5387, 1483, 5255, 625, 4919, 3603, 163, 1687, 427, 3801, 6571, 3471, 229, 4985, 2541, 6901,
    2409, 233, 31, 7567, 7897, 4589, 6505, 1819, 2211, 6637, 101,
];

/// A coordinate is kept at least this far from 0 and 1, where quantiles are infinite.
const EDGE: f64 = 1e-16;

/// Writes point `k` of the lattice with this `shift` to `point`.
pub(super) fn point(k: usize, shift: &[f64], point: &mut [f64]) {
    let mirrored = (k as u32).reverse_bits();
    for (axis, (coordinate, offset)) in point.iter_mut().zip(shift).enumerate() {
        // The product modulo 2³² is the fractional part of φ(k) z, exactly.
        let place = mirrored.wrapping_mul(GENERATOR[axis % GENERATOR.len()]);
        let moved = f64::from(place) / 4_294_967_296.0 + offset;
        let place = if moved >= 1.0 { moved - 1.0 } else { moved };
        *coordinate = (2.0 * place - 1.0).abs().clamp(EDGE, 1.0 - EDGE);
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_first_points_of_every_axis_are_evenly_spaced() {
        for count in [32_usize, 256, 4096] {
            let mut places = vec![vec![0.0; 3]; count];
            for (k, place) in places.iter_mut().enumerate() {
                point(k, &[0.0; 3], place);
            }
            for axis in 0..3 {
                let mut along: Vec<f64> = places.iter().map(|place| place[axis]).collect();
                along.sort_by(f64::total_cmp);
                // Folded, the multiples of 1/n are the even multiples of 1/n, all but the ends twice.
                let expected = |i: usize| (2 * i.div_ceil(2)) as f64 / count as f64;
                let even = along.iter().enumerate().all(|(i, x)| (x - expected(i)).abs() < 1e-12);
                assert!(even, "{count} {axis}: {:?}", &along[..6]);
            }
        }
    }
}
