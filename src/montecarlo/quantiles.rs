//! Quantiles of a sample with limits that assume nothing of the distribution.
//!
//! The number of samples above the true p quantile is binomial, whatever the (continuous)
//! distribution: S. S. Wilks, Ann. Math. Stat. 12 (1941) 91 and 13 (1942) 400.

/// The estimate of one quantile, in the unit of the sample.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct QuantileEstimate {
    /// The share of the distribution at or below the quantile, between 0 and 1.
    pub p: f64,
    /// The point estimate: the order statistic of rank ⌈n p⌉; NaN without samples.
    pub value: f64,
    /// The limit that the quantile exceeds with the stated confidence, if the sample supports one.
    pub lower: Option<f64>,
    /// The limit that the quantile stays below with the stated confidence, if the sample supports
    /// one.
    pub upper: Option<f64>,
    /// Both limits together: the quantile lies between them with the stated confidence, if the sample supports them.
    pub two_sided: Option<(f64, f64)>,
    /// The confidence of each one-sided limit taken alone.
    pub confidence: f64,
    /// The sample size that would support an upper limit, where this sample does not.
    pub needed: Option<usize>,
}

/// The 1-based rank of the smallest order statistic among `n` that lies at or above the `p`
/// quantile with at least the given confidence; `None` where even the largest does not.
#[must_use]
pub fn upper_limit_rank(n: usize, p: f64, confidence: f64) -> Option<usize> {
    // The k-th largest is above the quantile if k or more samples are.
    most_certain(n, 1.0 - p, confidence).map(|from_top| n + 1 - from_top)
}

/// The 1-based rank of the largest order statistic among `n` that lies at or below the `p` quantile
/// with at least the given confidence; `None` where even the smallest does not.
#[must_use]
pub fn lower_limit_rank(n: usize, p: f64, confidence: f64) -> Option<usize> {
    most_certain(n, p, confidence)
}

/// The smallest sample whose `rank_from_top`-th largest value (1 is the maximum) lies above the `p`
/// quantile with at least the given confidence.
///
/// A rank of zero counts as one. The answer is `usize::MAX` where no sample is large enough, as for
/// `p` or `confidence` of one.
#[must_use]
pub fn wilks_sample_size(p: f64, confidence: f64, rank_from_top: usize) -> usize {
    if !inside(p) || !inside(confidence) {
        return usize::MAX;
    }
    let rank = rank_from_top.max(1);
    let enough = |n: usize| fewer_than(n, 1.0 - p, rank) <= 1.0 - confidence;
    let (mut short, mut long) = (rank - 1, rank);
    while !enough(long) {
        short = long;
        match long.checked_mul(2) {
            Some(doubled) => long = doubled,
            None => return usize::MAX,
        }
    }
    while long - short > 1 {
        let middle = short + (long - short) / 2;
        if enough(middle) {
            long = middle;
        } else {
            short = middle;
        }
    }
    long
}

/// Estimates the `p` quantile of a sample in ascending order, with a lower and an upper limit that
/// each hold with the full confidence.
#[must_use]
pub fn quantile(sorted: &[f64], p: f64, confidence: f64) -> QuantileEstimate {
    let n = sorted.len();
    let at = |rank: usize| rank.checked_sub(1).and_then(|index| sorted.get(index)).copied();
    // Each of two limits may fail half as often.
    let each = 0.5 * (1.0 + confidence);
    let upper = upper_limit_rank(n, p, confidence).and_then(at);
    QuantileEstimate {
        p,
        value: at(point_rank(n, p)).unwrap_or(f64::NAN),
        lower: lower_limit_rank(n, p, confidence).and_then(at),
        upper,
        two_sided: lower_limit_rank(n, p, each).and_then(at).zip(upper_limit_rank(n, p, each).and_then(at)),
        confidence,
        needed: upper.is_none().then(|| wilks_sample_size(p, confidence, 1)),
    }
}

/// ⌈n p⌉, kept within 1 and n.
#[expect(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "the cast saturates, and the result is clamped to the ranks that exist"
)]
pub(super) fn point_rank(n: usize, p: f64) -> usize {
    // A product that should be whole may round up a little (100 × 0.07): that must not add a rank.
    let exact = n as f64 * p * (1.0 - 4.0 * f64::EPSILON);
    (exact.ceil() as usize).clamp(1, n.max(1))
}

/// The largest k of 1 to n for which k or more of n trials succeed with at least the confidence.
fn most_certain(n: usize, success: f64, confidence: f64) -> Option<usize> {
    if !inside(success) || !inside(confidence) {
        return None;
    }
    let mut cumulated = 0.0;
    let within = terms(n, success)
        .take(n)
        .take_while(|term| {
            cumulated += term;
            cumulated <= 1.0 - confidence
        })
        .count();
    (within > 0).then_some(within)
}

/// The probability that fewer than `count` of `n` trials succeed.
fn fewer_than(n: usize, success: f64, count: usize) -> f64 {
    terms(n, success).take(count).sum()
}

/// The binomial probabilities of 0, 1, … n successes, carried as logarithms so that a first term
/// below the smallest float does not silence the rest.
fn terms(n: usize, success: f64) -> impl Iterator<Item = f64> {
    let odds = success.ln() - (-success).ln_1p();
    let mut logarithm = n as f64 * (-success).ln_1p();
    (0..=n).map(move |k| {
        let term = logarithm.exp();
        logarithm += ((n - k) as f64 / (k + 1) as f64).ln() + odds;
        term
    })
}

fn inside(probability: f64) -> bool {
    probability > 0.0 && probability < 1.0
}
