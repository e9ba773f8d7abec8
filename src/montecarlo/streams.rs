//! Random streams that depend on a seed, a name and a lifetime, and on nothing else.
//!
//! A quantity that joins or leaves a description does not disturb the draws of the others, and a
//! run cut into pieces of any size on any number of threads draws the same numbers as one piece.

use rand::rngs::ChaCha8Rng;
use rand::{RngExt, SeedableRng};
use rand_distr::Open01;
use sha2::{Digest, Sha256};

/// The 32-bit words of the key stream that one uniform consumes.
const WORDS_PER_UNIFORM: u128 = 2;

/// Fills `out` with uniforms in the open interval (0, 1): `out[k]` belongs to lifetime `first + k`
/// of the quantity `name`.
///
/// The key of the `ChaCha8` generator is the SHA-256 digest of the seed (little-endian) and the
/// name; the lifetime selects the position in the key stream, so that any piece can be drawn alone.
pub fn uniforms(seed: u64, name: &str, first: u64, out: &mut [f64]) {
    let mut generator = ChaCha8Rng::from_seed(key(seed, name));
    generator.set_word_pos(u128::from(first) * WORDS_PER_UNIFORM);
    for value in out {
        *value = generator.sample(Open01);
    }
}

/// As [`uniforms`], of independent Latin hypercubes of `size` lifetimes each, one after the other: in each, every one of
/// `size` equal parts of (0, 1) holds one value (M. D. `McKay`, R. J. Beckman, W. J. Conover, Technometrics 21 (1979) 239).
///
/// A value depends on the seed, the name, the size and the lifetime's number alone: which part a lifetime takes is told by a
/// permutation that can be asked anywhere.
pub fn stratified(seed: u64, name: &str, size: u64, first: u64, out: &mut [f64]) {
    uniforms(seed, name, first, out);
    let size = size.max(1);
    for (lifetime, value) in (first..).zip(out) {
        let (cube, place) = (lifetime / size, lifetime % size);
        let digest = Sha256::new().chain_update(key(seed, name)).chain_update(cube.to_le_bytes()).finalize();
        let words: [u64; 4] =
            std::array::from_fn(|k| digest[8 * k..8 * k + 8].iter().rev().fold(0, |word, byte| word << 8 | u64::from(*byte)));
        // The sum rounds at most to the edge of the part; the open interval is kept.
        *value = ((permuted(place, size, words) as f64 + *value) / size as f64).clamp(f64::MIN_POSITIVE, 1.0 - f64::EPSILON / 2.0);
    }
}

/// Where a permutation of 0..size takes `place`: a Feistel network on the next larger power of four, asked again until it
/// stays within (J. Black, P. Rogaway, CT-RSA 2002: cycle walking).
fn permuted(place: u64, size: u64, words: [u64; 4]) -> u64 {
    let half = (64 - size.saturating_sub(1).leading_zeros()).div_ceil(2).max(1);
    let mask = (1_u64 << half) - 1;
    let mut at = place;
    loop {
        let (mut left, mut right) = (at >> half, at & mask);
        for word in words {
            let mut mixed = (right ^ word).wrapping_mul(0x9E37_79B9_7F4A_7C15);
            mixed = (mixed ^ (mixed >> 29)).wrapping_mul(0xBF58_476D_1CE4_E5B9) ^ word.rotate_left(32);
            (left, right) = (right, left ^ (mixed >> 32) & mask);
        }
        at = left << half | right;
        if at < size {
            return at;
        }
    }
}

fn key(seed: u64, name: &str) -> [u8; 32] {
    // The seed has a fixed width, so no two pairs of seed and name share an encoding.
    Sha256::new().chain_update(seed.to_le_bytes()).chain_update(name.as_bytes()).finalize().into()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn drawn(name: &str, first: u64, count: usize) -> Vec<f64> {
        let mut out = vec![0.0; count];
        uniforms(7, name, first, &mut out);
        out
    }

    #[test]
    fn pieces_join_to_the_whole() {
        let whole = drawn("thrust", 0, 101);
        let pieces = [drawn("thrust", 0, 1), drawn("thrust", 1, 36), drawn("thrust", 37, 64)].concat();
        let bits = |values: &[f64]| values.iter().map(|value| value.to_bits()).collect::<Vec<_>>();
        assert_eq!(bits(&whole), bits(&pieces));
    }

    #[test]
    fn uniforms_pass_kolmogorov_smirnov() {
        let mut values = drawn("isp", 0, 20_000);
        values.sort_by(f64::total_cmp);
        let n = 20_000.0;
        let gap = values.iter().enumerate().map(|(k, value)| (value - k as f64 / n).max((k + 1) as f64 / n - value)).fold(0.0, f64::max);
        // 1.628 / sqrt(n) is the 1 % point of the Kolmogorov distribution (from memory).
        assert!(gap < 1.628 / f64::sqrt(n), "{gap}");
        assert!(values[0] > 0.0 && values[values.len() - 1] < 1.0);
    }

    #[test]
    fn names_and_seeds_give_unrelated_draws() {
        let mut other_seed = vec![0.0; 20_000];
        uniforms(8, "a", 0, &mut other_seed);
        for other in [drawn("b", 0, 20_000), other_seed] {
            let products = drawn("a", 0, 20_000).iter().zip(&other).map(|(a, b)| (a - 0.5) * (b - 0.5)).sum::<f64>();
            // The correlation of independent pairs has the standard deviation 1 / sqrt(n): 4 of them.
            let correlation = 12.0 * products / 20_000.0;
            assert!(correlation.abs() < 4.0 / 20_000_f64.sqrt(), "{correlation}");
        }
    }

    // Computed outside this project: hashlib's SHA-256 as the key of an eight-round ChaCha written from
    // its definition (D. J. Bernstein, 2008), 52 high bits of each pair of words, centred in its cell.
    #[test]
    fn the_first_value_is_frozen() {
        for (lifetime, value) in [(0, 0.162_500_654_896_598_93), (1_000_003, 0.468_529_762_217_527_6)] {
            assert!((drawn("frozen", lifetime, 1)[0] - value).abs() < 1e-15);
        }
    }
}
