//! The distributions that a configuration may give a number.

use std::sync::Arc;

use statrs::distribution::{ContinuousCDF, Normal};

use super::Table;

/// A number as the user knows it: fixed, or with a distribution. All parameters in SI.
#[derive(Debug, Clone, PartialEq)]
pub enum Spread {
    /// Known exactly.
    Fixed(f64),
    /// Normal; `sigma` is one standard deviation.
    Normal {
        /// Mean.
        mean: f64,
        /// Standard deviation, above zero.
        sigma: f64,
    },
    /// Uniform between two limits.
    Uniform {
        /// Lower limit.
        low: f64,
        /// Upper limit.
        high: f64,
    },
    /// Lognormal: the logarithm is normal with standard deviation `ln_sigma`.
    Lognormal {
        /// Median, above zero.
        median: f64,
        /// Standard deviation of the natural logarithm, above zero.
        ln_sigma: f64,
    },
    /// Triangular.
    Triangular {
        /// Lower limit.
        low: f64,
        /// Most probable value.
        mode: f64,
        /// Upper limit.
        high: f64,
    },
    /// Normal, cut off at two limits.
    TruncatedNormal {
        /// Mean of the normal before the cut.
        mean: f64,
        /// Standard deviation of the normal before the cut.
        sigma: f64,
        /// Lower limit.
        low: f64,
        /// Upper limit.
        high: f64,
    },
    /// Some values with their probabilities, or a sample.
    Table(Arc<Table>),
}

/// Parameters that make no distribution.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
#[error("{message}")]
pub struct SpreadError {
    /// What is wrong.
    pub message: String,
    /// How to mend it.
    pub help: String,
}

fn refuse<T>(message: String, help: &str) -> Result<T, SpreadError> {
    Err(SpreadError { message, help: help.to_owned() })
}

/// Probability beyond which normal and lognormal draws are held: six sigma, about 1e-9 on either side.
const TAIL: f64 = 1e-9;

fn standard() -> Normal {
    Normal::standard()
}

impl Spread {
    /// Normal with one standard deviation; none at all is a fixed number.
    ///
    /// # Errors
    /// A negative standard deviation.
    pub fn normal(mean: f64, sigma: f64) -> Result<Self, SpreadError> {
        if sigma < 0.0 || !sigma.is_finite() {
            return refuse(format!("expected a standard deviation of at least zero, got {sigma}"), "write the spread as a positive number");
        }
        Ok(if sigma > 0.0 { Self::Normal { mean, sigma } } else { Self::Fixed(mean) })
    }

    /// Uniform between two limits.
    ///
    /// # Errors
    /// Limits out of order.
    pub fn uniform(low: f64, high: f64) -> Result<Self, SpreadError> {
        if high > low {
            return Ok(Self::Uniform { low, high });
        }
        refuse(format!("expected a lower and then a higher limit, got {low} and {high}"), "write the lower limit first")
    }

    /// Lognormal by its median and the standard deviation of its logarithm.
    ///
    /// # Errors
    /// A median or a spread that is not above zero.
    pub fn lognormal(median: f64, ln_sigma: f64) -> Result<Self, SpreadError> {
        if median > 0.0 && ln_sigma > 0.0 && ln_sigma.is_finite() {
            return Ok(Self::Lognormal { median, ln_sigma });
        }
        refuse(
            format!(
                "expected a median above zero and a factor above one, got {median} and {}",
                if ln_sigma.is_nan() { "one below zero".to_owned() } else { ln_sigma.exp().to_string() }
            ),
            "`factor` is the ratio of the one-sigma value to the median, such as 1.3",
        )
    }

    /// Triangular by its limits and its most probable value.
    ///
    /// # Errors
    /// Values out of order.
    pub fn triangular(low: f64, mode: f64, high: f64) -> Result<Self, SpreadError> {
        if low <= mode && mode <= high && low < high {
            return Ok(Self::Triangular { low, mode, high });
        }
        refuse(format!("expected low ≤ mode ≤ high, got {low}, {mode}, {high}"), "put the values in order")
    }

    /// Normal cut off at two limits.
    ///
    /// # Errors
    /// Values out of order, or limits so far out that nothing of the normal lies between them.
    pub fn truncated_normal(mean: f64, sigma: f64, low: f64, high: f64) -> Result<Self, SpreadError> {
        let ordered = sigma > 0.0 && sigma.is_finite() && low < high;
        let made = Self::TruncatedNormal { mean, sigma, low, high };
        if ordered && made.cut().1 - made.cut().0 > TAIL {
            return Ok(made);
        }
        refuse(
            format!("expected a standard deviation above zero and limits around the mean, got {mean} ± {sigma} in {low} .. {high}"),
            "keep the limits within a few standard deviations of the mean",
        )
    }

    /// Values with their probabilities, which must add up to one.
    ///
    /// # Errors
    /// No values, a probability that is not above zero, or a sum other than one.
    pub fn discrete(pairs: &[(f64, f64)]) -> Result<Self, SpreadError> {
        let sum: f64 = pairs.iter().map(|(_, probability)| probability).sum();
        let help = "give each value a `probability`, together 100 %";
        // Users round probabilities to some digits: thirds must pass.
        if (sum - 1.0).abs() > 1e-3 {
            return refuse(format!("expected probabilities that add up to 100 %, got {:.4} %", sum * 100.0), help);
        }
        match Table::weighted(pairs) {
            Some(table) => Ok(Self::Table(Arc::new(table))),
            None => refuse("expected probabilities above zero".to_owned(), help),
        }
    }

    /// The values of a sample, each as probable as the others.
    ///
    /// # Errors
    /// No values.
    pub fn empirical(values: &[f64]) -> Result<Self, SpreadError> {
        match Table::sample(values) {
            Some(table) => Ok(Self::Table(Arc::new(table))),
            None => refuse("expected a sample of at least one number".to_owned(), "give numbers"),
        }
    }

    /// Probabilities of the normal at the limits of a truncated one.
    fn cut(&self) -> (f64, f64) {
        match *self {
            Self::TruncatedNormal { mean, sigma, low, high } => {
                (standard().cdf((low - mean) / sigma), standard().cdf((high - mean) / sigma))
            }
            _ => (0.0, 1.0),
        }
    }

    /// Value of the nominal case: the mean of a normal, the middle of a uniform, the median of a
    /// lognormal, the mode of a triangular, the mean within the limits of a truncated normal, the most probable of some
    /// values, the median of a sample.
    #[must_use]
    pub fn nominal(&self) -> f64 {
        match *self {
            Self::Fixed(value) => value,
            Self::Normal { mean, .. } => mean,
            Self::Uniform { low, high } => f64::midpoint(low, high),
            Self::Lognormal { median, .. } => median,
            Self::Triangular { mode, .. } => mode,
            Self::TruncatedNormal { mean, low, high, .. } => mean.clamp(low, high),
            Self::Table(ref table) => table.nominal(),
        }
    }

    /// Whether it is known exactly.
    #[must_use]
    pub fn is_fixed(&self) -> bool {
        match self {
            Self::Fixed(_) => true,
            // One value alone, however often it stands there.
            Self::Table(table) => table.support().0.total_cmp(&table.support().1).is_eq(),
            _ => false,
        }
    }

    /// Value below which a draw falls with probability `u`, in (0, 1).
    ///
    /// Normal and lognormal ones are held at six sigma.
    #[must_use]
    pub fn quantile(&self, u: f64) -> f64 {
        let z = |u: f64| standard().inverse_cdf(u.clamp(TAIL, 1.0 - TAIL));
        match *self {
            Self::Fixed(value) => value,
            Self::Normal { mean, sigma } => mean + sigma * z(u),
            Self::Uniform { low, high } => low + (high - low) * u,
            Self::Lognormal { median, ln_sigma } => median * (ln_sigma * z(u)).exp(),
            Self::Triangular { low, mode, high } => {
                let (rise, width) = (mode - low, high - low);
                if u * width <= rise { low + (u * width * rise).sqrt() } else { high - ((1.0 - u) * width * (high - mode)).sqrt() }
            }
            Self::TruncatedNormal { mean, sigma, low, high } => {
                let (below, above) = self.cut();
                (mean + sigma * standard().inverse_cdf(below + (above - below) * u)).clamp(low, high)
            }
            Self::Table(ref table) => table.quantile(u),
        }
    }

    /// Least and greatest value that [`Spread::quantile`] gives.
    #[must_use]
    pub fn support(&self) -> (f64, f64) {
        match *self {
            Self::Fixed(value) => (value, value),
            Self::Normal { .. } | Self::Lognormal { .. } => (self.quantile(TAIL), self.quantile(1.0 - TAIL)),
            Self::Uniform { low, high } | Self::Triangular { low, high, .. } | Self::TruncatedNormal { low, high, .. } => (low, high),
            Self::Table(ref table) => table.support(),
        }
    }

    /// The same spread in other units: every value times `factor`, above zero.
    #[must_use]
    pub fn scaled(&self, factor: f64) -> Self {
        let by = |x: f64| x * factor;
        match *self {
            Self::Fixed(value) => Self::Fixed(by(value)),
            Self::Normal { mean, sigma } => Self::Normal { mean: by(mean), sigma: by(sigma) },
            Self::Uniform { low, high } => Self::Uniform { low: by(low), high: by(high) },
            Self::Lognormal { median, ln_sigma } => Self::Lognormal { median: by(median), ln_sigma },
            Self::Triangular { low, mode, high } => Self::Triangular { low: by(low), mode: by(mode), high: by(high) },
            Self::TruncatedNormal { mean, sigma, low, high } => {
                Self::TruncatedNormal { mean: by(mean), sigma: by(sigma), low: by(low), high: by(high) }
            }
            Self::Table(ref table) => Self::Table(Arc::new(table.scaled(factor))),
        }
    }
}
