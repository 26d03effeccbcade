//! Distribution functions, and conditioning on bounds by rescaling probabilities.

use std::sync::Arc;

use super::quantiles::share;
use super::{Bounds, Distribution, on_grid};
use crate::math::kernels;

impl Distribution {
    /// The file that a resampled quantity comes from.
    #[must_use]
    pub fn file(&self) -> Option<&str> {
        match self {
            Self::Sample { file, .. } => Some(file),
            Self::Within { base, .. } => base.file(),
            _ => None,
        }
    }

    /// The probability of a value up to `x`.
    #[must_use]
    pub fn cdf(&self, x: f64) -> f64 {
        self.tails(x).0
    }

    /// The probability of a value above `x`, accurate where it is small.
    #[must_use]
    pub fn survival(&self, x: f64) -> f64 {
        self.tails(x).1
    }

    /// The least range that holds every value; ends that are not bounded are infinite.
    #[must_use]
    pub fn support(&self) -> Bounds {
        match self {
            Self::Exact(value) => Bounds { low: *value, high: *value },
            Self::Normal { .. } => Bounds::NONE,
            Self::Lognormal { .. } => Bounds { low: 0.0, high: f64::INFINITY },
            Self::Uniform { min, max }
            | Self::LogUniform { min, max }
            | Self::Triangular { min, max, .. } => Bounds { low: *min, high: *max },
            Self::Discrete { values, .. } | Self::Sample { values, .. } => Bounds {
                low: values.iter().copied().fold(f64::INFINITY, f64::min),
                high: values.iter().copied().fold(f64::NEG_INFINITY, f64::max),
            },
            Self::Within { base, bounds, .. } => base.support().intersection(*bounds),
        }
    }

    /// This distribution given that the value lies within `bounds`, and the share that is cut off. When nothing is left
    /// the share is 1 and the distribution unchanged.
    ///
    /// A sample loses the rows outside, so that it no longer takes the same row as other columns of its file.
    #[must_use]
    pub fn conditioned(self, bounds: Bounds) -> (Self, f64) {
        match &self {
            Self::Exact(value) => {
                let cut = if bounds.contains(*value) { 0.0 } else { 1.0 };
                (self, cut)
            }
            Self::Uniform { min, max } | Self::LogUniform { min, max } => {
                let kept = Bounds { low: *min, high: *max }.intersection(bounds);
                let cut = self.cdf(kept.low) + self.survival(kept.high);
                if kept.low >= kept.high {
                    return (self, 1.0);
                }
                let (min, max) = (kept.low, kept.high);
                let narrowed = match self {
                    Self::Uniform { .. } => Self::Uniform { min, max },
                    _ => Self::LogUniform { min, max },
                };
                (narrowed, cut)
            }
            Self::Discrete { values, cumulated } => {
                let mut before = 0.0;
                let (mut kept_values, mut kept_sums, mut sum) = (Vec::new(), Vec::new(), 0.0);
                for (value, &through) in values.iter().zip(cumulated.iter()) {
                    if bounds.contains(*value) {
                        sum += through - before;
                        kept_values.push(*value);
                        kept_sums.push(sum);
                    }
                    before = through;
                }
                if kept_values.len() == values.len() {
                    return (self, 0.0);
                }
                if sum <= 0.0 {
                    return (self, 1.0);
                }
                for part in &mut kept_sums {
                    *part = on_grid(*part / sum);
                }
                (Self::Discrete { values: kept_values.into(), cumulated: kept_sums.into() }, 1.0 - sum)
            }
            Self::Sample { file, column, values } => {
                let kept: Vec<f64> = values.iter().copied().filter(|value| bounds.contains(*value)).collect();
                let cut = 1.0 - share(kept.len(), values.len());
                if kept.is_empty() || kept.len() == values.len() {
                    return (self, cut);
                }
                let (file, column) = (Arc::clone(file), Arc::clone(column));
                (Self::Sample { file, column, values: kept.into() }, cut)
            }
            Self::Within { base, bounds: before, kept: kept_before, .. } => {
                let both = before.intersection(bounds);
                if both == *before {
                    return (self, 0.0);
                }
                let cut = 1.0 - base.between(both) / kept_before;
                match Self::clone(base).conditioned(both) {
                    (_, 1.0) => (self, 1.0),
                    (conditioned, _) => (conditioned, cut),
                }
            }
            Self::Normal { .. } | Self::Lognormal { .. } | Self::Triangular { .. } => {
                let (below, above) = (self.cdf(bounds.low), self.survival(bounds.high));
                let kept = self.between(bounds);
                if kept <= 0.0 || kept.is_nan() {
                    (self, 1.0)
                } else if below == 0.0 && above == 0.0 {
                    (self, 0.0)
                } else {
                    // Near 1 the small parts tell the share, near 0 what is left.
                    let cut = if kept < 0.5 { 1.0 - kept } else { below + above };
                    (Self::Within { base: Arc::new(self), bounds, below, above, kept }, cut)
                }
            }
        }
    }

    /// The probability within bounds, from the tails on the side where they are small.
    fn between(&self, bounds: Bounds) -> f64 {
        let (low, high) = (self.tails(bounds.low), self.tails(bounds.high));
        if low.0 <= 0.5 { high.0 - low.0 } else { low.1 - high.1 }
    }

    /// The probabilities up to `x` and above it.
    fn tails(&self, x: f64) -> (f64, f64) {
        let step = |up_to: f64| (up_to, 1.0 - up_to);
        match self {
            Self::Exact(value) => step(if x >= *value { 1.0 } else { 0.0 }),
            Self::Normal { mean, sd } => normal_tails((x - mean) / sd),
            Self::Lognormal { .. } if x <= 0.0 => (0.0, 1.0),
            Self::Lognormal { median, factor } => {
                normal_tails(kernels::ln(x / median) / kernels::ln(*factor))
            }
            Self::Uniform { min, max }
            | Self::LogUniform { min, max }
            | Self::Triangular { min, max, .. }
                if !(*min < x && x < *max) =>
            {
                step(if x >= *max { 1.0 } else { 0.0 })
            }
            Self::Uniform { min, max } => {
                // Halved, because the width itself may not fit a number.
                let width = 0.5 * max - 0.5 * min;
                ((0.5 * x - 0.5 * min) / width, (0.5 * max - 0.5 * x) / width)
            }
            Self::LogUniform { min, max } => {
                let (low, at, high) = (kernels::ln(*min), kernels::ln(x), kernels::ln(*max));
                ((at - low) / (high - low), (high - at) / (high - low))
            }
            Self::Triangular { min, mode, max } => {
                let width = max - min;
                if x <= *mode {
                    step((x - min) / width * ((x - min) / (mode - min)))
                } else {
                    let above = (max - x) / width * ((max - x) / (max - mode));
                    (1.0 - above, above)
                }
            }
            Self::Discrete { values, cumulated } => {
                let count = values.partition_point(|value| *value <= x);
                step(count.checked_sub(1).map_or(0.0, |last| cumulated[last]))
            }
            Self::Sample { values, .. } => {
                let count = values.iter().filter(|value| **value <= x).count();
                (share(count, values.len()), share(values.len() - count, values.len()))
            }
            Self::Within { base, bounds, kept, .. } => {
                if x < bounds.low {
                    return (0.0, 1.0);
                }
                if x >= bounds.high {
                    return (1.0, 0.0);
                }
                let below = base.between(Bounds { low: bounds.low, high: x }) / kept;
                (below, base.between(Bounds { low: x, high: bounds.high }) / kept)
            }
        }
    }
}

fn normal_tails(z: f64) -> (f64, f64) {
    (kernels::normal_distribution(z), kernels::normal_distribution(-z))
}
