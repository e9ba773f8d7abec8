//! The distributions that a configuration may give a number.

/// A number as the user knows it: fixed, or with a distribution. All parameters in SI.
#[derive(Debug, Clone, Copy, PartialEq)]
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
}
