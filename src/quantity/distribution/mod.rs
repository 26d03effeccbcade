//! Distributions of uncertain numbers, in SI units, each with its quantile function over blocks.

mod description;
mod probabilities;
mod quantiles;
#[cfg(test)]
mod tests;

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
        /// The values, ascending.
        values: Arc<[f64]>,
        /// Cumulated weights, multiples of 2^-52; the last is 1.
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
    /// Another distribution conditioned on bounds: its probabilities between them are rescaled to 0..1. Both tails are
    /// kept, so that neither loses digits to a difference from 1.
    Within {
        /// The distribution before: normal, lognormal or triangular.
        base: Arc<Distribution>,
        /// The bounds.
        bounds: Bounds,
        /// Probability below the lower bound.
        below: f64,
        /// Probability above the upper bound.
        above: f64,
        /// Probability between the bounds, above 0.
        kept: f64,
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

impl Bounds {
    /// No bounds.
    pub const NONE: Self = Self { low: f64::NEG_INFINITY, high: f64::INFINITY };

    /// Whether a value lies within; a value that is not a number does not.
    #[must_use]
    pub fn contains(self, value: f64) -> bool {
        self.low <= value && value <= self.high
    }

    /// What lies within both; empty (low above high) when nothing does.
    #[must_use]
    pub const fn intersection(self, other: Self) -> Self {
        Self { low: self.low.max(other.low), high: self.high.min(other.high) }
    }
}

impl FreeRange {
    /// The value in the middle on the range's scale, used where no typical one is known.
    #[must_use]
    pub fn middle(low: f64, high: f64, logarithmic: bool) -> f64 {
        let middle = if logarithmic { low.sqrt() * high.sqrt() } else { 0.5 * low + 0.5 * high };
        middle.clamp(low, high)
    }
}

/// The multiple of 2^-52 nearest to a probability. Random streams step by 2^-52, so that no draw can tell them apart, and
/// sums and differences of such probabilities are exact.
pub(in crate::quantity) fn on_grid(probability: f64) -> f64 {
    (probability / f64::EPSILON).round() * f64::EPSILON
}
