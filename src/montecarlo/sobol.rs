//! Variance-based sensitivity: which driver the spread of a result comes from.
//!
//! Two independent samples A and B and, for each driver, A with that driver's columns from B: the
//! design of A. Saltelli, Comput. Phys. Commun. 145 (2002) 280.

use rayon::prelude::*;

use super::{Moments, uniforms};

/// Rows in one call of the model: bounds the memory that a block holds.
const BLOCK: usize = 256;

/// Bootstrap resamples behind the intervals.
const RESAMPLES: u64 = 300;

/// The confidence of the two-sided bootstrap intervals.
const CONFIDENCE: f64 = 0.95;

/// The shares of the variance of a result that its drivers explain, in the order of the drivers.
///
/// Estimates scatter about the truth, so a small share may come out below zero.
#[derive(Clone, Debug, PartialEq)]
pub struct Indices {
    /// The share that each driver explains alone.
    pub first_order: Vec<f64>,
    /// The share that each driver explains alone or together with others.
    pub total: Vec<f64>,
    /// The 95 % bootstrap percentile interval of each first-order share.
    pub first_order_interval: Vec<(f64, f64)>,
    /// The 95 % bootstrap percentile interval of each total share.
    pub total_interval: Vec<(f64, f64)>,
    /// The variance of the result, in its unit squared.
    pub variance: f64,
}

/// Estimates the first-order and total indices of each driver from `base` × (drivers + 2) rows.
///
/// `names` names the columns, `groups` lists the columns of each driver, and `evaluate` maps
/// row-major uniforms (rows × columns) to one result a row; blocks may be evaluated at the same
/// time. The estimators are
///
/// ```text
/// S_i  = mean( (f(B) − m) (f(A_B^i) − f(A)) ) / V        Saltelli et al., Comput. Phys. Commun. 181 (2010) 259
/// ST_i = mean( (f(A) − f(A_B^i))² ) / (2 V)              M. J. W. Jansen, Comput. Phys. Commun. 117 (1999) 35
/// ```
///
/// with the mean m and the variance V of f(A) and f(B) together. The same seed and names give the
/// same answer whatever the number of threads. A result that does not vary gives zeros; one that is
/// not finite leaves estimates that are not finite. Columns that no driver lists vary with A and B.
///
/// # Panics
///
/// If `evaluate` returns another number of results than rows.
#[must_use]
pub fn indices(
    groups: &[Vec<usize>],
    names: &[String],
    base: usize,
    seed: u64,
    evaluate: &(dyn Fn(&[f64], usize) -> Vec<f64> + Sync),
) -> Indices {
    let results = Results::sample(groups, names, base, seed, evaluate);
    let (variance, shares) = results.shares(0..base);
    let resamples: Vec<Vec<Share>> =
        (0..RESAMPLES).into_par_iter().map(|resample| results.shares(redraw(seed, resample, base)).1).collect();
    let interval = |driver: usize, pick: fn(&Share) -> f64| {
        percentile_interval(resamples.iter().filter_map(|shares| shares.get(driver).map(pick)).collect())
    };
    Indices {
        first_order: shares.iter().map(|share| share.alone).collect(),
        total: shares.iter().map(|share| share.total).collect(),
        first_order_interval: (0..groups.len()).map(|driver| interval(driver, |share| share.alone)).collect(),
        total_interval: (0..groups.len()).map(|driver| interval(driver, |share| share.total)).collect(),
        variance,
    }
}

#[derive(Clone, Copy)]
struct Share {
    alone: f64,
    total: f64,
}

/// The results of one base row: of A, of B, and of A with each driver in turn from B.
struct Row {
    a: f64,
    b: f64,
    mixed: Vec<f64>,
}

struct Results {
    rows: Vec<Row>,
    drivers: usize,
}

impl Results {
    fn sample(
        groups: &[Vec<usize>],
        names: &[String],
        base: usize,
        seed: u64,
        evaluate: &(dyn Fn(&[f64], usize) -> Vec<f64> + Sync),
    ) -> Self {
        let checked = |uniforms: &[f64], rows: usize| {
            let results = evaluate(uniforms, rows);
            assert_eq!(results.len(), rows, "the model must return one result a row");
            results
        };
        let block = |first: usize| -> Vec<Row> {
            let rows = BLOCK.min(base - first);
            let a = matrix(names, "A", first, rows, seed);
            let b = matrix(names, "B", first, rows, seed);
            let mixed: Vec<Vec<f64>> = groups.iter().map(|group| checked(&exchanged(&a, &b, group, names.len()), rows)).collect();
            let column = |row: usize| mixed.iter().map(|results| results[row]).collect();
            checked(&a, rows).into_iter().zip(checked(&b, rows)).enumerate().map(|(row, (a, b))| Row { a, b, mixed: column(row) }).collect()
        };
        let starts: Vec<usize> = (0..base).step_by(BLOCK).collect();
        let rows = starts.into_par_iter().flat_map_iter(block).collect();
        Self { rows, drivers: groups.len() }
    }

    /// The variance and the shares that the given rows (with repetition) give.
    fn shares(&self, rows: impl IntoIterator<Item = usize>) -> (f64, Vec<Share>) {
        let rows: Vec<&Row> = rows.into_iter().filter_map(|row| self.rows.get(row)).collect();
        let moments = Moments::from_slice(&rows.iter().flat_map(|row| [row.a, row.b]).collect::<Vec<_>>());
        if !varies(&moments) {
            return (0.0, vec![Share { alone: 0.0, total: 0.0 }; self.drivers]);
        }
        let mut sums = vec![Share { alone: 0.0, total: 0.0 }; self.drivers];
        for row in &rows {
            let centred = row.b - moments.mean();
            for (sum, mixed) in sums.iter_mut().zip(&row.mixed) {
                let change = mixed - row.a;
                sum.alone += centred * change;
                sum.total += change * change;
            }
        }
        let scale = rows.len() as f64 * moments.variance();
        let shares = sums.iter().map(|sum| Share { alone: sum.alone / scale, total: sum.total / (2.0 * scale) });
        (moments.variance(), shares.collect())
    }
}

/// False where the spread is nothing but the rounding of a constant; true where it is not a number,
/// so that the caller sees NaN and not a reassuring zero.
fn varies(moments: &Moments) -> bool {
    let rounding = 8.0 * f64::EPSILON * moments.max().abs().max(moments.min().abs());
    moments.count() > 0 && (moments.variance().is_nan() || moments.sd() > rounding)
}

/// Rows `first` to `first + rows` of the sample `sample`, row-major.
fn matrix(names: &[String], sample: &str, first: usize, rows: usize, seed: u64) -> Vec<f64> {
    let mut matrix = vec![0.0; rows * names.len()];
    let mut drawn = vec![0.0; rows];
    for (column, name) in names.iter().enumerate() {
        uniforms(seed, &format!("{name}#{sample}"), first as u64, &mut drawn);
        for (cell, value) in matrix.iter_mut().skip(column).step_by(names.len()).zip(&drawn) {
            *cell = *value;
        }
    }
    matrix
}

/// The matrix `a` with the columns of `group` taken from `b`.
fn exchanged(a: &[f64], b: &[f64], group: &[usize], columns: usize) -> Vec<f64> {
    let mut mixed = a.to_vec();
    for &column in group {
        for (cell, value) in mixed.iter_mut().zip(b).skip(column).step_by(columns) {
            *cell = *value;
        }
    }
    mixed
}

/// Which rows make up one bootstrap resample.
#[expect(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "a uniform below one times the number of rows is a valid row once truncated"
)]
fn redraw(seed: u64, resample: u64, base: usize) -> Vec<usize> {
    let mut drawn = vec![0.0; base];
    uniforms(seed, "sobol#bootstrap", resample * base as u64, &mut drawn);
    drawn.iter().map(|uniform| (uniform * base as f64) as usize).collect()
}

/// The interval between the outer percentiles of the resampled estimates.
fn percentile_interval(mut estimates: Vec<f64>) -> (f64, f64) {
    estimates.sort_by(f64::total_cmp);
    let at = |p: f64| super::quantile(&estimates, p, CONFIDENCE).value;
    (at(0.5 * (1.0 - CONFIDENCE)), at(0.5 * (1.0 + CONFIDENCE)))
}
