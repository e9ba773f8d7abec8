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
