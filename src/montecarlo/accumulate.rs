//! Moments of a sample, gathered without the cancellation that sums of squares suffer.

/// Count, mean, spread and extremes of a sample, in the unit of the sample.
///
/// One value at a time follows B. P. Welford, Technometrics 4 (1962) 419; the merging of two parts
/// follows T. F. Chan, G. H. Golub and R. J. `LeVeque`, The American Statistician 37 (1983) 242.
#[derive(Clone, Copy, Debug)]
pub struct Moments {
    count: u64,
    mean: f64,
    squares: f64,
    min: f64,
    max: f64,
}

impl Default for Moments {
    fn default() -> Self {
        Self::new()
    }
}

impl Moments {
    /// The moments of no values at all.
    #[must_use]
    pub const fn new() -> Self {
        Self { count: 0, mean: 0.0, squares: 0.0, min: f64::INFINITY, max: f64::NEG_INFINITY }
    }

    /// The moments of a sample that is held in memory, in two passes: more accurate than `push`.
    ///
    /// The second pass also corrects the mean and the squares for the rounding of the first mean
    /// (the corrected two-pass algorithm of Chan, Golub and `LeVeque`).
    #[must_use]
    pub fn from_slice(values: &[f64]) -> Self {
        let count = values.len() as u64;
        if count == 0 {
            return Self::new();
        }
        let number = count as f64;
        let rough = values.iter().sum::<f64>() / number;
        let residual = values.iter().map(|value| value - rough).sum::<f64>();
        let squares = values.iter().map(|value| (value - rough).powi(2)).sum::<f64>();
        let corrected = squares - residual * residual / number;
        Self {
            count,
            mean: rough + residual / number,
            // Not `max`, which would turn NaN into a spread of zero.
            squares: if corrected < 0.0 { 0.0 } else { corrected },
            min: values.iter().copied().fold(f64::INFINITY, f64::min),
            max: values.iter().copied().fold(f64::NEG_INFINITY, f64::max),
        }
    }

    /// Takes in one more value.
    pub fn push(&mut self, value: f64) {
        self.count += 1;
        let before = value - self.mean;
        self.mean += before / self.count as f64;
        self.squares += before * (value - self.mean);
        self.min = self.min.min(value);
        self.max = self.max.max(value);
    }

    /// Takes in the values of another part of the sample.
    ///
    /// The same parts in the same order give the same bits; a different order may round differently.
    pub fn merge(&mut self, other: &Self) {
        if other.count == 0 {
            return;
        }
        if self.count == 0 {
            *self = *other;
            return;
        }
        let (mine, theirs) = (self.count as f64, other.count as f64);
        let share = theirs / (mine + theirs);
        let gap = other.mean - self.mean;
        self.count += other.count;
        self.mean += gap * share;
        self.squares += other.squares + gap * gap * mine * share;
        self.min = self.min.min(other.min);
        self.max = self.max.max(other.max);
    }

    /// The number of values.
    #[must_use]
    pub const fn count(&self) -> u64 {
        self.count
    }

    /// The arithmetic mean; NaN without values.
    #[must_use]
    pub const fn mean(&self) -> f64 {
        if self.count == 0 { f64::NAN } else { self.mean }
    }

    /// The unbiased sample variance (divisor n − 1); zero with one value and NaN without any.
    #[must_use]
    pub fn variance(&self) -> f64 {
        match self.count {
            0 => f64::NAN,
            1 => 0.0,
            count => self.squares / (count - 1) as f64,
        }
    }

    /// The square root of the sample variance.
    #[must_use]
    pub fn sd(&self) -> f64 {
        self.variance().sqrt()
    }

    /// The smallest value; positive infinity without values.
    #[must_use]
    pub const fn min(&self) -> f64 {
        self.min
    }

    /// The largest value; negative infinity without values.
    #[must_use]
    pub const fn max(&self) -> f64 {
        self.max
    }
}
