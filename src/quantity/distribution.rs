//! Distributions of uncertain numbers, in SI units, each with its quantile function over blocks.

use std::sync::Arc;

/// The closed range a quantity may lie in, in SI units; an end that is not bounded is infinite.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Bounds {
    /// Lowest value.
    pub low: f64,
    /// Highest value.
    pub high: f64,
}

/// How a number is known. All values in SI units.
#[derive(Clone, Debug, PartialEq)]
pub enum Distribution {
    /// One value.
    Exact(f64),
    /// Normal with mean and standard deviation.
    Normal {
        /// Mean.
        mean: f64,
        /// Standard deviation.
        sd: f64,
    },
    /// Lognormal with median and geometric standard deviation.
    Lognormal {
        /// Median.
        median: f64,
        /// Geometric standard deviation, above 1.
        factor: f64,
    },
    /// Uniform.
    Uniform {
        /// Lowest.
        min: f64,
        /// Highest.
        max: f64,
    },
    /// Uniform in the logarithm.
    LogUniform {
        /// Lowest, above 0.
        min: f64,
        /// Highest.
        max: f64,
    },
    /// Triangular.
    Triangular {
        /// Lowest.
        min: f64,
        /// Most frequent.
        mode: f64,
        /// Highest.
        max: f64,
    },
    /// A few values with weights that sum to 1.
    Discrete {
        /// The values.
        values: Arc<[f64]>,
        /// Cumulated weights; the last is 1.
        cumulated: Arc<[f64]>,
    },
    /// Resampled from data; quantities from one file take the same row.
    Sample {
        /// The file as the candidate names it.
        file: Arc<str>,
        /// The column.
        column: Arc<str>,
        /// The rows.
        values: Arc<[f64]>,
    },
    /// Another distribution conditioned on bounds: probabilities between `from` and `to` are rescaled to 0..1.
    Within {
        /// The distribution before.
        base: Arc<Distribution>,
        /// The bounds.
        bounds: Bounds,
        /// Probability below the lower bound.
        from: f64,
        /// Probability below the upper bound.
        to: f64,
    },
}

/// A range in which an organism may set a number.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct FreeRange {
    /// Lowest.
    pub low: f64,
    /// Highest.
    pub high: f64,
    /// The value typical of known life, inside the range.
    pub typical: f64,
    /// Whether points are spread evenly in the logarithm.
    pub logarithmic: bool,
}

impl Distribution {
    /// Turns numbers strictly inside (0, 1) into values, in place. Nothing is allocated.
    pub fn quantile_column(&self, values: &mut [f64]) {
        if let Self::Exact(value) = self {
            values.fill(*value);
        }
    }
    /// The quantile of probability `p` in (0, 1).
    #[must_use]
    pub fn quantile(&self, p: f64) -> f64 {
        let mut one = [p];
        self.quantile_column(&mut one);
        one[0]
    }
    /// The median.
    #[must_use]
    pub fn median(&self) -> f64 {
        self.quantile(0.5)
    }
}
