//! The share of lifetimes in which something happens, with exact binomial limits.

use statrs::function::beta::inv_beta_reg;

/// A share between 0 and 1 with its one-sided limits.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Proportion {
    /// Successes over trials; NaN without trials.
    pub share: f64,
    /// The limit that the true probability exceeds with the full confidence.
    pub lower: f64,
    /// The limit that the true probability stays below with the full confidence.
    pub upper: f64,
}

/// Estimates a probability from the number of successes among independent trials.
///
/// Each limit holds with the full confidence taken alone (C. J. Clopper and E. S. Pearson,
/// Biometrika 26 (1934) 404, in the beta form); both together form an interval of confidence
/// 2 × confidence − 1. Successes beyond the trials count as the trials; the confidence is kept
/// within 0 and 1.
#[must_use]
pub fn proportion(successes: usize, trials: usize, confidence: f64) -> Proportion {
    let successes = successes.min(trials);
    let confidence = confidence.clamp(0.0, 1.0);
    let (hits, misses) = (successes as f64, (trials - successes) as f64);
    let lower = if successes == 0 { 0.0 } else { inv_beta_reg(hits, misses + 1.0, 1.0 - confidence) };
    let upper = if successes == trials { 1.0 } else { inv_beta_reg(hits + 1.0, misses, confidence) };
    Proportion { share: hits / (hits + misses), lower, upper }
}
