//! Random numbers that depend on a seed, a purpose and a stream's index, and on nothing else.
//!
//! Stream i is the ChaCha block function with 8 rounds run in counter mode: the key holds the seed and the purpose, the
//! nonce is i, the counter starts at 0. A stream is therefore the same however many others there are, whoever draws them, and in
//! whatever order: replicate i of a simulation uses stream i, and the answer does not depend on the number of workers or
//! on how the work is cut into slices. Purposes keep the streams of different analyses apart, so that adding one analysis never
//! changes another.
//!
//! The generator is the `rand_chacha` crate's, whole numbers and shuffles are the `rand` crate's; the same bits come out
//! on every target. `tests/reference/random.rs` freezes them.
//!
//! # References
//! 1. Bernstein (2008), ChaCha, a variant of Salsa20; RFC 8439 (2018), section 2.3, with 20 rounds and another split of
//!    the last four words into counter and nonce (here 64 bits each, as in the paper).
//! 2. Salmon, Moraes, Dror and Shaw (2011), Parallel random numbers: as easy as 1, 2, 3 (counter mode for simulation).

use super::distributions::normal;
use rand::seq::SliceRandom;
use rand::{Rng, RngExt};
use rand_chacha::ChaCha8Rng;
use rand_chacha::rand_core::SeedableRng;

/// All the streams of one seed and purpose.
#[derive(Debug, Clone)]
pub struct Streams {
    key: [u8; 32],
}

impl Streams {
    /// The streams of `seed` for `purpose`, a few words such as "lattice shifts"; the first 24 bytes count.
    pub fn new(seed: u64, purpose: &str) -> Streams {
        let mut key = [0; 32];
        key[..8].copy_from_slice(&seed.to_le_bytes());
        for (place, byte) in key[8..].iter_mut().zip(purpose.bytes()) {
            *place = byte;
        }
        Streams { key }
    }

    /// Stream number `index`, at its beginning.
    pub fn stream(&self, index: u64) -> Stream {
        let mut generator = ChaCha8Rng::from_seed(self.key);
        generator.set_stream(index);
        Stream { generator }
    }
}

/// One stream of random numbers, which may give 2⁶⁷ of them before it repeats.
#[derive(Debug, Clone)]
pub struct Stream {
    generator: ChaCha8Rng,
}

impl Stream {
    /// A number uniformly distributed on (0, 1): an odd multiple of 2⁻⁵³, so that neither end is ever met and 1 minus it is
    /// exact.
    pub fn uniform(&mut self) -> f64 {
        const HALF_STEP: f64 = 1.0 / (1_u64 << 53) as f64;
        (2 * (self.generator.next_u64() >> 12) + 1) as f64 * HALF_STEP
    }

    /// A standard normal deviate, by inversion of one uniform number; its modulus is at most 8.21.
    pub fn normal(&mut self) -> f64 {
        normal::upper_quantile_unchecked(self.uniform())
    }

    /// A whole number from 0 to `count` - 1, each equally likely; 0 if `count` is 0.
    pub fn below(&mut self, count: u32) -> u32 {
        if count == 0 { 0 } else { self.generator.random_range(0..count) }
    }

    /// Puts `items` in random order, every order equally likely up to the generator's quality (Fisher and Yates).
    pub fn shuffle<T>(&mut self, items: &mut [T]) {
        items.shuffle(&mut self.generator);
    }
}
