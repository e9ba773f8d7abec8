//! The statistics of many lifetimes against published tables and certified values.

use couplet::montecarlo::{Moments, lower_limit_rank, proportion, quantile, uniforms, upper_limit_rank, wilks_sample_size};

// S. S. Wilks, Ann. Math. Stat. 12 (1941) 91 and 13 (1942) 400: 59, 93, 124 and 181 from memory, the
// rest recomputed outside this project with exact binomial sums.
#[test]
fn wilks_sample_sizes() {
    let table: [(f64, f64, &[usize]); 10] = [
        (0.95, 0.95, &[59, 93, 124, 153, 181, 208, 234, 260, 286, 311]),
        (0.99, 0.95, &[299, 473, 628, 773]),
        (0.95, 0.90, &[45, 77, 105, 132]),
        (0.90, 0.95, &[29, 46, 61, 76]),
        (0.99, 0.90, &[230, 388, 531, 667]),
        (0.99, 0.99, &[459, 662, 838, 1001]),
        (0.9973, 0.90, &[852, 1440, 1970, 2473]),
        (0.9973, 0.95, &[1109, 1756, 2330, 2870]),
        (0.99865, 0.90, &[1705, 2880, 3941, 4947]),
        (0.99865, 0.95, &[2218, 3513, 4662, 5742]),
    ];
    for (p, confidence, sizes) in table {
        for (index, &size) in sizes.iter().enumerate() {
            assert_eq!(wilks_sample_size(p, confidence, index + 1), size, "{p}/{confidence} rank {}", index + 1);
            assert_eq!(upper_limit_rank(size, p, confidence), Some(size - index), "{p}/{confidence} of {size}");
            assert_eq!(lower_limit_rank(size, 1.0 - p, confidence), Some(index + 1), "{p}/{confidence} of {size}");
        }
        assert_eq!(upper_limit_rank(sizes[0] - 1, p, confidence), None);
    }
}

// Derived outside this project from exact binomial sums.
#[test]
fn rank_of_the_upper_limit() {
    assert_eq!(upper_limit_rank(1000, 0.99, 0.95), Some(996));
    assert_eq!(upper_limit_rank(1000, 0.95, 0.95), Some(962));
    assert_eq!(upper_limit_rank(10_000, 0.9973, 0.95), Some(9982));
    assert_eq!(upper_limit_rank(500, 0.9973, 0.95), None);
}

#[test]
fn a_sample_too_small_says_what_it_needs() {
    let sorted: Vec<f64> = (1..=500).map(f64::from).collect();
    let estimate = quantile(&sorted, 0.9973, 0.95);
    assert_eq!(estimate.upper, None);
    assert_eq!(estimate.needed, Some(1109));
    assert!(estimate.lower.is_some_and(|lower| lower < estimate.value));
    let empty = quantile(&[], 0.5, 0.95);
    assert!(empty.value.is_nan() && empty.lower.is_none() && empty.upper.is_none());
}

#[test]
fn point_estimates_take_the_naive_rank() {
    // The naive ranks 990 of 1000, 9973 of 10000, and 7 of 100, whose product rounds up in floats.
    for (n, p, rank) in [(1000, 0.99, 990.0), (10_000, 0.9973, 9973.0), (100, 0.07, 7.0), (59, 0.95, 57.0)] {
        let sorted: Vec<f64> = (1..=n).map(f64::from).collect();
        assert!((quantile(&sorted, p, 0.95).value - rank).abs() < 0.5);
    }
}

#[test]
fn impossible_requests_have_no_limit() {
    for (p, confidence) in [(0.0, 0.95), (1.0, 0.95), (0.95, 0.0), (0.95, 1.0), (f64::NAN, 0.95), (0.95, f64::NAN)] {
        assert_eq!(wilks_sample_size(p, confidence, 1), usize::MAX);
        assert_eq!(upper_limit_rank(100, p, confidence), None);
        assert_eq!(lower_limit_rank(100, p, confidence), None);
    }
}

#[test]
fn limits_hold_as_often_as_they_promise() {
    // One-sided 3-sigma of the normal distribution covers 0.9986501020; 0.95 stands in for the rest.
    for (p, n, repeats) in [(0.998_650_102, 3000_u32, 1000_u32), (0.95, 200, 4000)] {
        let (mut above, mut below) = (0_u32, 0_u32);
        for repeat in 0..repeats {
            let mut sample = vec![0.0; n as usize];
            uniforms(11, "coverage", u64::from(repeat) * u64::from(n), &mut sample);
            sample.sort_by(f64::total_cmp);
            let estimate = quantile(&sample, p, 0.9);
            // The p quantile of a uniform is p.
            above += u32::from(estimate.upper.is_some_and(|upper| upper >= p));
            below += u32::from(estimate.lower.is_some_and(|lower| lower <= p));
        }
        // Three standard deviations of a share of 0.9 under the promise; ranks are whole numbers, so
        // the true confidence lies above 0.9, yet by less than the jump of one rank (0.1).
        let slack = 3.0 * (0.09 / f64::from(repeats)).sqrt();
        for held in [above, below] {
            let share = f64::from(held) / f64::from(repeats);
            assert!(share > 0.9 - slack && share < 0.999, "{share} at p = {p}");
        }
    }
}

fn alternating(base: f64) -> Vec<f64> {
    let mut values = vec![base + 0.2];
    for _ in 0..500 {
        values.extend([base + 0.1, base + 0.3]);
    }
    values
}

// NIST StRD univariate NumAcc1 to NumAcc4 (https://www.itl.nist.gov/div898/strd/), certified values.
#[test]
fn moments_reproduce_certified_values() {
    let sets = [
        (vec![10_000_001.0, 10_000_003.0, 10_000_002.0], 10_000_002.0, 1.0),
        (alternating(1.0), 1.2, 0.1),
        (alternating(1_000_000.0), 1_000_000.2, 0.1),
        (alternating(10_000_000.0), 10_000_000.2, 0.1),
    ];
    for (values, mean, sd) in sets {
        let mut pushed = Moments::new();
        for &value in &values {
            pushed.push(value);
        }
        let mut merged = Moments::new();
        for part in values.chunks(97) {
            merged.merge(&Moments::from_slice(part));
        }
        for (moments, rounding) in [(Moments::from_slice(&values), 1.0), (pushed, 4.0), (merged, 4.0)] {
            // The decimal data are not floats: each is off by up to half a unit in the last place,
            // 1e-16 of the mean, and so is each deviation.
            let unit = f64::EPSILON * mean;
            assert!((moments.mean() - mean).abs() <= rounding * unit, "mean {}", moments.mean());
            assert!((moments.sd() - sd).abs() <= rounding * unit, "sd {} of {sd}", moments.sd());
            assert_eq!(moments.count(), values.len() as u64);
        }
    }
}

#[test]
fn extremes_and_small_samples() {
    let mut moments = Moments::from_slice(&[3.0, -1.0]);
    moments.merge(&Moments::new());
    moments.push(8.0);
    assert!((moments.min() + 1.0).abs() < 1e-15 && (moments.max() - 8.0).abs() < 1e-15);
    assert!(Moments::new().mean().is_nan() && Moments::new().variance().is_nan());
    assert!(Moments::from_slice(&[5.0]).variance().abs() < 1e-15);
}

// The rule of three made exact: no success in 59 trials leaves 1 − 0.05^(1/59) = 0.0495 (S. S. Wilks
// 1941, as 0.95^59 = 0.0485 but 0.95^58 = 0.0510).
#[test]
fn proportions_at_the_edges() {
    let none = proportion(0, 59, 0.95);
    let closed = 1.0 - 0.05_f64.powf(1.0 / 59.0);
    assert!(none.share.abs() < 1e-15 && none.lower.abs() < 1e-15);
    assert!((none.upper - closed).abs() < 1e-10, "{}", none.upper);
    let all = proportion(59, 59, 0.95);
    assert!((all.upper - 1.0).abs() < 1e-15 && (all.lower - (1.0 - closed)).abs() < 1e-10, "{}", all.lower);
    let nothing = proportion(0, 0, 0.95);
    assert!(nothing.share.is_nan() && nothing.lower.abs() < 1e-15 && (nothing.upper - 1.0).abs() < 1e-15);
}

/// The probability of at most `successes` of `trials`, summed term by term.
fn at_most(successes: u32, trials: u32, probability: f64) -> f64 {
    let mut logarithm = f64::from(trials) * (1.0 - probability).ln();
    let mut sum = 0.0;
    for k in 0..=successes {
        sum += logarithm.exp();
        logarithm += (f64::from(trials - k) / f64::from(k + 1)).ln() + (probability / (1.0 - probability)).ln();
    }
    sum
}

// The definition of Clopper and Pearson, Biometrika 26 (1934) 404: at each limit the observation or
// one more extreme has the probability 1 − confidence.
#[test]
fn proportions_meet_the_definition() {
    for (successes, trials) in [(1, 10), (5, 10), (9, 10), (3, 1000), (500, 1000), (999, 1000), (27, 10_000), (9973, 10_000)] {
        let estimate = proportion(successes as usize, trials as usize, 0.95);
        let low = 1.0 - at_most(successes - 1, trials, estimate.lower);
        let high = at_most(successes, trials, estimate.upper);
        assert!((low - 0.05).abs() < 1e-7, "lower {low} for {successes} of {trials}");
        assert!((high - 0.05).abs() < 1e-7, "upper {high} for {successes} of {trials}");
    }
}
