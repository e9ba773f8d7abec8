//! Values with probabilities: a few that a user lists, or a sample read from a file.

/// Values in ascending order, each with the probability of it or less.
#[derive(Debug, Clone, PartialEq)]
pub struct Table {
    values: Vec<f64>,
    cumulated: Vec<f64>,
    nominal: f64,
}

impl Table {
    /// Values, each with a weight above zero; the most probable is the nominal one, the first of equals.
    ///
    /// `None` without values, or with a value or a weight that is no number.
    #[must_use]
    pub fn weighted(pairs: &[(f64, f64)]) -> Option<Self> {
        if pairs.iter().any(|(value, weight)| !value.is_finite() || !weight.is_finite() || *weight <= 0.0) {
            return None;
        }
        let likely = pairs.iter().copied().reduce(|best, next| if next.1 > best.1 { next } else { best })?;
        let mut sorted = pairs.to_vec();
        sorted.sort_by(|a, b| a.0.total_cmp(&b.0));
        let whole: f64 = sorted.iter().map(|(_, weight)| weight).sum();
        let mut sum = 0.0;
        let cumulated = sorted.iter().map(|(_, weight)| {
            sum += weight;
            sum / whole
        });
        Some(Self { cumulated: cumulated.collect(), values: sorted.into_iter().map(|(value, _)| value).collect(), nominal: likely.0 })
    }

    /// A sample, each value as probable as the others; its median is the nominal value.
    ///
    /// `None` as [`Table::weighted`].
    #[must_use]
    pub fn sample(values: &[f64]) -> Option<Self> {
        let pairs: Vec<(f64, f64)> = values.iter().map(|value| (*value, 1.0)).collect();
        let mut table = Self::weighted(&pairs)?;
        table.nominal = table.quantile(0.5);
        Some(table)
    }

    /// The nominal value.
    #[must_use]
    pub const fn nominal(&self) -> f64 {
        self.nominal
    }

    /// The smallest value that a draw does not exceed with probability `u` at least.
    #[must_use]
    pub fn quantile(&self, u: f64) -> f64 {
        // The sum of the weights may miss one by rounding.
        let rounding = 4.0 * f64::EPSILON;
        let place = self.cumulated.partition_point(|below| *below < u - rounding);
        self.values.get(place).or(self.values.last()).copied().unwrap_or(self.nominal)
    }

    /// Least and greatest value.
    #[must_use]
    pub fn support(&self) -> (f64, f64) {
        (self.values.first().copied().unwrap_or(self.nominal), self.values.last().copied().unwrap_or(self.nominal))
    }

    /// Every value times a factor above zero.
    #[must_use]
    pub fn scaled(&self, factor: f64) -> Self {
        let values = self.values.iter().map(|value| value * factor).collect();
        Self { values, cumulated: self.cumulated.clone(), nominal: self.nominal * factor }
    }
}
