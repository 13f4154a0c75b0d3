//! Random streams against the block function as published, and against what uniform numbers must look like.
//!
//! Source: RFC 8439 (2018), sections 2.1 to 2.3 (the block function; there with 20 rounds, a 32-bit counter and a 96-bit nonce,
//! whose last 64 bits are the nonce here) and appendix A.1, test vector 1 (from memory: its first 16 bytes).

use levelwise::numerics::random::Streams;

/// One block of 64 bytes as sixteen words, by the RFC's description.
fn block(key: &[u8; 32], counter: u64, nonce: u64, rounds: usize) -> [u32; 16] {
    let mut start = [0_u32; 16];
    start[..4].copy_from_slice(&[0x6170_7865, 0x3320_646e, 0x7962_2d32, 0x6b20_6574]); // "expand 32-byte k"
    for (word, bytes) in start[4..12].iter_mut().zip(key.chunks(4)) {
        *word = u32::from_le_bytes(bytes.try_into().expect("four bytes"));
    }
    start[12] = counter as u32;
    start[13] = (counter >> 32) as u32;
    start[14] = nonce as u32;
    start[15] = (nonce >> 32) as u32;
    let mut state = start;
    for _ in 0..rounds / 2 {
        for i in 0..4 {
            quarter(&mut state, [i, i + 4, i + 8, i + 12]);
        }
        for i in 0..4 {
            quarter(&mut state, [i, 4 + (i + 1) % 4, 8 + (i + 2) % 4, 12 + (i + 3) % 4]);
        }
    }
    std::array::from_fn(|i| state[i].wrapping_add(start[i]))
}

fn quarter(state: &mut [u32; 16], [a, b, c, d]: [usize; 4]) {
    for (x, y, z, turn) in [(a, b, d, 16), (c, d, b, 12), (a, b, d, 8), (c, d, b, 7)] {
        state[x] = state[x].wrapping_add(state[y]);
        state[z] = (state[z] ^ state[x]).rotate_left(turn);
    }
}

#[test]
fn the_block_function_here_is_the_published_one() {
    let words = block(&[0; 32], 0, 0, 20);
    let bytes: Vec<u8> = words.iter().flat_map(|word| word.to_le_bytes()).take(16).collect();
    let published =
        [0x76, 0xb8, 0xe0, 0xad, 0xa0, 0xf1, 0x3d, 0x90, 0x40, 0x5d, 0x6a, 0xe5, 0x53, 0x86, 0xbd, 0x28];
    assert_eq!(bytes, published);
}

#[test]
fn a_stream_is_the_block_function_keyed_by_seed_and_purpose_with_its_index_as_nonce() {
    for (seed, purpose, index) in
        [(0, "", 0), (1, "lattice shifts", 0), (u64::MAX, "permutations", 12_345_678_901)]
    {
        let mut key = [0; 32];
        key[..8].copy_from_slice(&u64::to_le_bytes(seed));
        key[8..8 + purpose.len()].copy_from_slice(purpose.as_bytes());
        let mut stream = Streams::new(seed, purpose).stream(index);
        for counter in 0..20 {
            let words = block(&key, counter, index, 8);
            for pair in words.chunks(2) {
                let bits = u64::from(pair[0]) | u64::from(pair[1]) << 32;
                let expected = ((bits >> 12) as f64 + 0.5) / (1_u64 << 52) as f64;
                assert_eq!(stream.uniform(), expected, "seed {seed}, stream {index}, block {counter}");
            }
        }
    }
}

#[test]
fn streams_do_not_depend_on_one_another_and_purposes_differ() {
    let streams = Streams::new(7, "permutations");
    let draws = |stream: u64| -> Vec<f64> {
        let mut stream = streams.stream(stream);
        (0..5).map(|_| stream.uniform()).collect()
    };
    let alone = draws(3);
    let among: Vec<Vec<f64>> = (0..10).rev().map(draws).collect();
    assert_eq!(among[6], alone);
    let mut all: Vec<u64> = among.concat().iter().map(|x| x.to_bits()).collect();
    all.sort_unstable();
    all.dedup();
    assert_eq!(all.len(), 50, "no number comes twice");
    assert_ne!(Streams::new(7, "simulation").stream(3).uniform(), alone[0]);
    assert_ne!(Streams::new(8, "permutations").stream(3).uniform(), alone[0]);
}

/// Critical values: the Kolmogorov-Smirnov distance exceeds 1.95/√n with probability 0.001 (Smirnov 1948), a chi-squared with
/// 99 df 148.23 with the same; the seeds are fixed, so that this cannot fail by chance from one day to the next.
#[test]
fn uniform_and_normal_numbers_and_whole_numbers_have_their_distributions() {
    let n = 100_000;
    let mut stream = Streams::new(20, "test").stream(0);
    let mut uniform: Vec<f64> = (0..n).map(|_| stream.uniform()).collect();
    let mut normal: Vec<f64> = (0..n)
        .map(|_| levelwise::numerics::distributions::normal::cdf(stream.normal()).expect("a number"))
        .collect();
    for sample in [&mut uniform, &mut normal] {
        sample.sort_by(f64::total_cmp);
        let distance = sample
            .iter()
            .enumerate()
            .map(|(i, x)| (x - i as f64 / f64::from(n)).abs().max((x - (i + 1) as f64 / f64::from(n)).abs()))
            .fold(0.0, f64::max);
        assert!(distance < 1.95 / f64::from(n).sqrt(), "{distance}");
        assert!(sample[0] > 0.0 && sample[sample.len() - 1] < 1.0);
    }
    let mut counts = [0_u32; 100];
    for _ in 0..n {
        counts[stream.below(100) as usize] += 1;
    }
    let chi_squared = chi_squared_about_1000(&counts);
    assert!(chi_squared < 148.23, "{chi_squared}");
    assert_eq!((stream.below(1), stream.below(0)), (0, 0));
}

fn chi_squared_about_1000(counts: &[u32]) -> f64 {
    let deviations = counts.iter().map(|&count| f64::from(count) - 1000.0);
    deviations.map(|deviation| deviation * deviation / 1000.0).sum()
}

#[test]
fn every_order_of_four_is_equally_likely() {
    let streams = Streams::new(3, "test");
    let mut counts = std::collections::BTreeMap::new();
    for replicate in 0..24_000 {
        let mut items = [0, 1, 2, 3];
        streams.stream(replicate).shuffle(&mut items);
        *counts.entry(items).or_insert(0_u32) += 1;
    }
    assert_eq!(counts.len(), 24);
    let chi_squared = chi_squared_about_1000(&counts.into_values().collect::<Vec<_>>());
    // 23 df, upper 0.001 point: 49.73 (Abramowitz and Stegun, table 26.8, from memory).
    assert!(chi_squared < 49.73, "{chi_squared}");
}

/// Frozen: a notebook with a seed must come to the same answer with the next version of the tool and of the libraries.
#[test]
fn the_numbers_of_a_seed_never_change() {
    let mut stream = Streams::new(42, "permutations").stream(7);
    let first = [stream.uniform(), stream.uniform()];
    let wholes = [stream.below(10), stream.below(1000), stream.below(1_000_000)];
    let mut items: Vec<u32> = (0..10).collect();
    stream.shuffle(&mut items);
    let frozen = "[0.8003031299767535, 0.3804297374374749] [3, 744, 668332] [6, 3, 4, 9, 2, 1, 8, 0, 5, 7]";
    assert_eq!(format!("{first:?} {wholes:?} {items:?}"), frozen);
}
