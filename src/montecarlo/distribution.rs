//! Mean, spread, quantiles and histogram of one figure over the lifetimes.

use std::io;

use statrs::distribution::{ContinuousCDF, StudentsT};

use super::{
    Design, Moments, Proportion, QuantileEstimate, Store, lower_limit_rank, proportion, quantile, upper_limit_rank, wilks_sample_size,
};

/// Probabilities at which quantiles are given.
pub const QUANTILES: [f64; 4] = [0.50, 0.90, 0.95, 0.99];

/// Bars of a histogram, about.
const BARS: f64 = 40.0;

/// Equal bins from a first edge on.
#[derive(Debug, Clone, PartialEq)]
pub struct Histogram {
    /// Lower edge of the first bin.
    pub start: f64,
    /// Width of each.
    pub width: f64,
    /// Lifetimes in each.
    pub counts: Vec<u64>,
}

/// Mean, spread and quantiles of one figure over the lifetimes.
#[derive(Debug, Clone)]
pub struct Distribution {
    /// Value with every parameter nominal.
    pub nominal: f64,
    /// Mean.
    pub mean: f64,
    /// Standard deviation.
    pub sd: f64,
    /// Smallest and largest of the lifetimes.
    pub range: (f64, f64),
    /// At [`QUANTILES`].
    pub quantiles: Vec<QuantileEstimate>,
    /// Of the finite values.
    pub histogram: Histogram,
}

impl Distribution {
    /// Estimate at one of [`QUANTILES`].
    #[must_use]
    pub fn at(&self, p: f64) -> Option<&QuantileEstimate> {
        self.quantiles.iter().find(|estimate| (estimate.p - p).abs() < 1e-9)
    }

    /// Of a column of the lifetimes.
    ///
    /// # Errors
    /// The temporary file cannot be read.
    pub(super) fn new(store: &mut Store, column: usize, nominal: f64, confidence: f64, design: &Design) -> io::Result<Self> {
        if !store.fits() {
            return Self::long(store, column, nominal, confidence);
        }
        let values = store.column(column)?;
        let moments = Moments::from_slice(&values);
        let mut sorted = values.clone();
        sorted.sort_unstable_by(f64::total_cmp);
        let of_replicates = |p: f64| match design.replicates() {
            // A sample that was stopped has an open hypercube: its limits are not known.
            Some((size, count)) if values.len() == size * count => Some(replicated(&sorted, &values, size, p, confidence)),
            Some(_) => Some(QuantileEstimate { lower: None, upper: None, two_sided: None, ..quantile(&sorted, p, confidence) }),
            None => None,
        };
        let estimate = |p: &f64| of_replicates(*p).unwrap_or_else(|| quantile(&sorted, *p, confidence));
        Ok(Self {
            nominal,
            mean: moments.mean(),
            sd: moments.sd(),
            range: (moments.min(), moments.max()),
            quantiles: QUANTILES.iter().map(estimate).collect(),
            histogram: Histogram::new((moments.min(), moments.max()), values.iter().copied()),
        })
    }

    /// Of a column that does not fit in memory.
    fn long(store: &mut Store, column: usize, nominal: f64, confidence: f64) -> io::Result<Self> {
        let mut moments = Moments::new();
        store.scan(column, |value| moments.push(value))?;
        let n = store.rows();
        let each = 0.5 * (1.0 + confidence);
        let ranks = QUANTILES.map(|p| {
            let limits = [(p, confidence), (p, each)];
            let [lower, lower_each] = limits.map(|(p, confidence)| lower_limit_rank(n, p, confidence).unwrap_or(0));
            let [upper, upper_each] = limits.map(|(p, confidence)| upper_limit_rank(n, p, confidence).unwrap_or(0));
            [super::quantiles::point_rank(n, p), lower, upper, lower_each, upper_each]
        });
        let found = store.select(column, ranks.as_flattened())?;
        let exists = |value: f64| (!value.is_nan()).then_some(value);
        let quantiles = QUANTILES.iter().zip(found.chunks_exact(5)).map(|(p, v)| QuantileEstimate {
            p: *p,
            value: v[0],
            lower: exists(v[1]),
            upper: exists(v[2]),
            two_sided: exists(v[3]).zip(exists(v[4])),
            confidence,
            needed: v[2].is_nan().then(|| wilks_sample_size(*p, confidence, 1)),
        });
        let mut histogram = Histogram::empty((moments.min(), moments.max()));
        store.scan(column, |value| histogram.count(value))?;
        Ok(Self {
            nominal,
            mean: moments.mean(),
            sd: moments.sd(),
            range: (moments.min(), moments.max()),
            quantiles: quantiles.collect(),
            histogram,
        })
    }
}

/// A quantile of Latin hypercubes: the estimate of all together, limits from the scatter of the estimates of the single ones,
/// taken as normal (Student's t).
fn replicated(sorted: &[f64], values: &[f64], size: usize, p: f64, confidence: f64) -> QuantileEstimate {
    let single = values.chunks_exact(size.max(1)).map(|cube| {
        let mut cube = cube.to_vec();
        cube.sort_unstable_by(f64::total_cmp);
        quantile(&cube, p, confidence).value
    });
    let moments = Moments::from_slice(&single.collect::<Vec<_>>());
    let error = moments.sd() / (moments.count() as f64).sqrt();
    let value = quantile(sorted, p, confidence).value;
    let factor = |confidence: f64| students(moments.count(), confidence);
    let (one, two) = (factor(confidence), factor(0.5 * (1.0 + confidence)));
    let limit = |factor: Option<f64>| factor.map(|t| value + t * error).filter(|limit| limit.is_finite());
    QuantileEstimate {
        p,
        value,
        lower: limit(one.map(|t| -t)),
        upper: limit(one),
        two_sided: limit(two.map(|t| -t)).zip(limit(two)),
        confidence,
        needed: None,
    }
}

/// Quantile of Student's t for the mean of `count` values.
fn students(count: u64, confidence: f64) -> Option<f64> {
    let freedom = count.checked_sub(1).filter(|freedom| *freedom > 0)?;
    StudentsT::new(0.0, 1.0, freedom as f64).ok().map(|t| t.inverse_cdf(confidence))
}

/// Share of lifetimes in which a figure does not exceed a bound.
pub(super) fn share_within(store: &mut Store, column: usize, most: f64, confidence: f64, design: &Design) -> io::Result<Proportion> {
    let rows = store.rows();
    let size = design.replicates().map_or(rows, |(size, _)| size).max(1);
    let mut covered = vec![0_usize; rows.div_ceil(size)];
    let mut row = 0;
    store.scan(column, |value| {
        if let Some(count) = covered.get_mut(row / size) {
            *count += usize::from(value <= most);
        }
        row += 1;
    })?;
    let plain = proportion(covered.iter().sum(), rows, confidence);
    if design.replicates().is_none() {
        return Ok(plain);
    }
    let moments = Moments::from_slice(&covered.iter().map(|count| *count as f64 / size as f64).collect::<Vec<_>>());
    let error = students(moments.count(), confidence).unwrap_or(f64::INFINITY) * moments.sd() / (moments.count() as f64).sqrt();
    if moments.sd() > 0.0 && rows.is_multiple_of(size) {
        return Ok(Proportion { share: plain.share, lower: (plain.share - error).max(0.0), upper: (plain.share + error).min(1.0) });
    }
    // All replicates alike say nothing of what they missed: the limits of plain draws are then the safer ones.
    Ok(plain)
}

impl Histogram {
    fn empty((low, high): (f64, f64)) -> Self {
        let spread = high - low;
        // Nothing, a constant, or a figure that may be infinite.
        if !spread.is_finite() || spread <= f64::EPSILON * high.abs().max(low.abs()) {
            return Self { start: low, width: 0.0, counts: vec![0] };
        }
        let rough = spread / BARS;
        let size = 10_f64.powf(rough.log10().floor());
        let width = [1.0, 2.0, 2.5, 5.0].iter().map(|step| step * size).find(|width| *width >= rough).unwrap_or(10.0 * size);
        let start = (low / width).floor() * width;
        #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "about forty bars")]
        let bars = ((high - start) / width).floor() as usize + 1;
        Self { start, width, counts: vec![0; bars] }
    }

    fn new(range: (f64, f64), values: impl Iterator<Item = f64>) -> Self {
        let mut all = Self::empty(range);
        values.for_each(|value| all.count(value));
        all
    }

    fn count(&mut self, value: f64) {
        if !value.is_finite() {
            return;
        }
        #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "kept within the bars")]
        let bar = if self.width > 0.0 { ((value - self.start) / self.width) as usize } else { 0 };
        let last = self.counts.len().saturating_sub(1);
        if let Some(count) = self.counts.get_mut(bar.min(last)) {
            *count += 1;
        }
    }
}
