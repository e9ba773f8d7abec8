//! Two budgets on common random numbers: what changed, and how sure that is.

use std::io;

use rayon::prelude::*;

use super::{Budget, Distribution, Figure, Moments, Store, uniforms};
use crate::propellant::ROWS;

/// Resamples behind the intervals of quantiles.
const RESAMPLES: u64 = 200;
/// Confidence of the two-sided intervals.
const CONFIDENCE: f64 = 0.95;
/// Two-sided 95 % of a normal.
const Z: f64 = 1.959_964;

/// A change with its 95 % interval.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Change {
    /// In the base.
    pub base: f64,
    /// In the alternative.
    pub other: f64,
    /// Interval of the difference; of a nominal value there is none.
    pub interval: Option<(f64, f64)>,
}

impl Change {
    /// The alternative less the base.
    #[must_use]
    pub fn difference(&self) -> f64 {
        self.other - self.base
    }
}

/// How one figure changes.
#[derive(Debug, Clone, PartialEq)]
pub struct FigureChange {
    /// Key of the row, `attitude_total` or `needed`.
    pub figure: &'static str,
    /// Nominal.
    pub nominal: Change,
    /// Mean, with the interval of the paired differences.
    pub mean: Change,
    /// Quantiles: probability and change, with the interval of a paired bootstrap.
    pub quantiles: Vec<(f64, Change)>,
}

/// Figures that are compared: name and column.
fn compared() -> Vec<(&'static str, Figure)> {
    let rows = ROWS.iter().enumerate().map(|(k, row)| (row.key(), Figure::Row(k)));
    rows.chain([("attitude_total", Figure::AttitudeTotal), ("needed", Figure::Needed)]).collect()
}

/// Compares the lifetimes of two samples of the same design, pair by pair.
///
/// # Errors
/// The temporary files cannot be read, or have not as many lifetimes.
pub fn compare(base: (&Budget, &mut Store), other: (&Budget, &mut Store), seed: u64) -> io::Result<Vec<FigureChange>> {
    let ((base, base_store), (other, other_store)) = (base, other);
    let rows = base_store.rows();
    if rows != other_store.rows() {
        return Err(io::Error::other("the two runs have not the same number of lifetimes"));
    }
    let of = |budget: &Budget, figure: Figure| -> Distribution {
        match figure {
            Figure::Row(row) => budget.rows[row].clone(),
            Figure::Needed => budget.needed.clone(),
            _ => budget.attitude.clone(),
        }
    };
    let mut all = Vec::new();
    for (name, figure) in compared() {
        let (a, b) = (base_store.column(figure.column())?, other_store.column(figure.column())?);
        let (before, after) = (of(base, figure), of(other, figure));
        let differences: Vec<f64> = a.iter().zip(&b).map(|(a, b)| b - a).collect();
        let moments = Moments::from_slice(&differences);
        let half = Z * moments.sd() / (rows as f64).sqrt();
        let mean = moments.mean();
        let intervals = bootstrap(&a, &b, seed, &before);
        let quantiles = before.quantiles.iter().zip(&after.quantiles).zip(intervals);
        all.push(FigureChange {
            figure: name,
            nominal: Change { base: before.nominal, other: after.nominal, interval: None },
            mean: Change { base: before.mean, other: after.mean, interval: Some((mean - half, mean + half)) },
            quantiles: quantiles
                .map(|((a, b), interval)| (a.p, Change { base: a.value, other: b.value, interval: Some(interval) }))
                .collect(),
        });
    }
    Ok(all)
}

/// Intervals of the differences of quantiles: pairs of lifetimes are drawn with repetition, the same ones for both.
fn bootstrap(a: &[f64], b: &[f64], seed: u64, like: &Distribution) -> Vec<(f64, f64)> {
    let alike = a.iter().zip(b).all(|(a, b)| a.to_bits() == b.to_bits());
    let ranks: Vec<usize> = like.quantiles.iter().map(|estimate| super::quantiles::point_rank(a.len(), estimate.p)).collect();
    if alike || a.is_empty() {
        return vec![(0.0, 0.0); ranks.len()];
    }
    let resampled: Vec<Vec<f64>> = (0..RESAMPLES)
        .into_par_iter()
        .map(|resample| {
            let mut drawn = vec![0.0; a.len()];
            uniforms(seed, "compare#bootstrap", resample * a.len() as u64, &mut drawn);
            #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "below the number of lifetimes")]
            let places: Vec<usize> = drawn.iter().map(|u| (u * a.len() as f64) as usize).collect();
            let sorted = |values: &[f64]| {
                let mut own: Vec<f64> = places.iter().map(|place| values[*place]).collect();
                own.sort_unstable_by(f64::total_cmp);
                own
            };
            let (a, b) = (sorted(a), sorted(b));
            ranks.iter().map(|rank| b[rank - 1] - a[rank - 1]).collect()
        })
        .collect();
    (0..ranks.len())
        .map(|k| {
            let mut differences: Vec<f64> = resampled.iter().map(|all| all[k]).collect();
            differences.sort_unstable_by(f64::total_cmp);
            let at = |p: f64| super::quantile(&differences, p, CONFIDENCE).value;
            (at(0.5 * (1.0 - CONFIDENCE)), at(0.5 * (1.0 + CONFIDENCE)))
        })
        .collect()
}
