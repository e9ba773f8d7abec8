//! Distributions against an independent sampler (`rand_distr`) and closed forms.

use couplet::uncertain::{Parameters, Spread};
use proptest::prelude::*;
use rand::{SeedableRng, rngs::ChaCha8Rng};
use rand_distr::{Distribution, LogNormal, Normal, Triangular};

/// Largest distance between the empirical distribution of `sample` and the one whose quantiles `spread` gives.
fn distance(spread: &Spread, mut sample: Vec<f64>) -> f64 {
    sample.sort_by(f64::total_cmp);
    let n = sample.len() as f64;
    // Distribution function by bisection of the quantile function, which rises.
    let share_below = |x: f64| {
        let (mut low, mut high) = (0.0, 1.0);
        for _ in 0..50 {
            let middle = 0.5 * (low + high);
            if spread.quantile(middle) < x { low = middle } else { high = middle }
        }
        low
    };
    sample
        .iter()
        .enumerate()
        .map(|(k, x)| {
            let u = share_below(*x);
            (u - k as f64 / n).abs().max((u - (k + 1) as f64 / n).abs())
        })
        .fold(0.0, f64::max)
}

const N: usize = 4000;

/// Kolmogorov–Smirnov at the 0.1 % point: 1.95 / √n.
fn agrees(spread: &Spread, draw: impl Fn(&mut ChaCha8Rng) -> f64) {
    let mut rng = ChaCha8Rng::seed_from_u64(4);
    let sample: Vec<f64> = (0..N).map(|_| draw(&mut rng)).collect();
    let found = distance(spread, sample);
    assert!(found < 1.95 / (N as f64).sqrt(), "{spread:?}: {found}");
}

#[test]
fn quantiles_agree_with_an_independent_sampler() {
    let normal = Normal::new(2.2, 0.2).unwrap();
    agrees(&Spread::normal(2.2, 0.2).unwrap(), |rng| normal.sample(rng));
    let lognormal = LogNormal::new(1.5_f64.ln(), 0.3).unwrap();
    agrees(&Spread::lognormal(1.5, 0.3).unwrap(), |rng| lognormal.sample(rng));
    let triangular = Triangular::new(1.0, 4.0, 2.0).unwrap();
    agrees(&Spread::triangular(1.0, 2.0, 4.0).unwrap(), |rng| triangular.sample(rng));
    agrees(&Spread::truncated_normal(2.2, 0.2, 2.1, 2.6).unwrap(), |rng| {
        loop {
            let x = normal.sample(rng);
            if (2.1..=2.6).contains(&x) {
                return x;
            }
        }
    });
}

/// Closed forms: median of each, ends of the bounded ones, 1.644854 sigma at 95 % (tables).
#[test]
fn known_quantiles() {
    assert!((Spread::normal(0.0, 1.0).unwrap().quantile(0.95) - 1.644_853_627).abs() < 1e-8);
    assert!((Spread::lognormal(3.0, 0.5).unwrap().quantile(0.5) - 3.0).abs() < 1e-12);
    assert!((Spread::uniform(2.0, 6.0).unwrap().quantile(0.25) - 3.0).abs() < 1e-12);
    // Density rises over 1 and falls over 3: a quarter of the area lies left of the mode.
    assert!((Spread::triangular(0.0, 1.0, 4.0).unwrap().quantile(0.25) - 1.0).abs() < 1e-12);
    // Normal draws are held at six sigma.
    let (low, high) = Spread::normal(10.0, 1.0).unwrap().support();
    assert!((low - 4.0).abs() < 0.01 && (high - 16.0).abs() < 0.01);
}

#[test]
fn impossible_parameters_are_refused() {
    assert!(Spread::normal(1.0, -0.1).is_err() && Spread::normal(1.0, f64::NAN).is_err());
    assert!(Spread::uniform(2.0, 2.0).is_err());
    assert!(Spread::lognormal(0.0, 0.3).is_err() && Spread::lognormal(1.0, 0.0).is_err());
    assert!(Spread::triangular(0.0, 5.0, 4.0).is_err());
    assert!(Spread::truncated_normal(0.0, 1.0, 20.0, 21.0).is_err());
}

#[test]
fn the_registry_takes_only_what_is_uncertain() {
    let mut parameters = Parameters::default();
    let fixed = parameters.register("a", "m", Spread::Fixed(2.0));
    let open = parameters.register("b", "m", Spread::uniform(1.0, 3.0).unwrap());
    assert!(fixed.parameter().is_none() && parameters.len() == 1);
    let draw = parameters.at_quantiles(&[0.75]);
    assert!((fixed.in_draw(&draw) - 2.0).abs() < 1e-15 && (open.in_draw(&draw) - 2.5).abs() < 1e-15);
    assert!((open.in_draw(&parameters.nominal()) - 2.0).abs() < 1e-15);
}

proptest! {
    /// Quantiles rise, stay within the support, and scale with the spread.
    #[test]
    fn quantiles_rise_within_the_support(a in 0.1_f64..10.0, b in 0.01_f64..1.0, u in 0.001_f64..0.998, which in 0..4) {
        let spread = match which {
            0 => Spread::normal(a, b),
            1 => Spread::lognormal(a, b),
            2 => Spread::triangular(a, a + 0.3 * b, a + b),
            _ => Spread::truncated_normal(a, b, a - b, a + 2.0 * b),
        }.unwrap();
        let (x, y) = (spread.quantile(u), spread.quantile(u + 0.001));
        let (low, high) = spread.support();
        prop_assert!(low <= x && x < y && y <= high);
        prop_assert!((spread.scaled(3.0).quantile(u) - 3.0 * x).abs() < 1e-12 * x.abs().max(1.0));
    }
}
