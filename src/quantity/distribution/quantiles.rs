//! Quantile functions over blocks: probabilities in, values out, in place, nothing allocated.

use super::Distribution;
use crate::math::kernels;

/// Values worked on at a time where a second column is needed; it lies on the stack.
const CHUNK: usize = 256;

impl Distribution {
    /// Turns numbers strictly inside (0, 1) into values, in place. Nothing is allocated.
    ///
    /// These are quantiles, ascending with the probability, but for a sample, where the number picks a row (the first
    /// for the smallest numbers), so that columns of one file stay together.
    pub fn quantile_column(&self, values: &mut [f64]) {
        match self {
            Self::Exact(value) => values.fill(*value),
            Self::Normal { .. } | Self::Lognormal { .. } => {
                kernels::normal_quantile_column(values);
                self.normal_scores_column(values);
            }
            Self::Uniform { min, max } => {
                for value in values {
                    *value = between(*min, *max, *value);
                }
            }
            Self::LogUniform { min, max } => {
                let width = kernels::ln(*max) - kernels::ln(*min);
                for value in values.iter_mut() {
                    *value *= width;
                }
                exp_in_place(values);
                for value in values {
                    *value = (*min * *value).min(*max);
                }
            }
            Self::Triangular { min, mode, max } => {
                for value in values {
                    *value = triangular(*min, *mode, *max, *value, 1.0 - *value);
                }
            }
            Self::Discrete { values: list, cumulated } => {
                for value in values {
                    let place = cumulated.partition_point(|sum| sum < value);
                    *value = list[place.min(list.len() - 1)];
                }
            }
            Self::Sample { values: rows, .. } => {
                for value in values {
                    *value = rows[row(*value, rows.len())];
                }
            }
            Self::Within { base, bounds, below, above, kept } => {
                for chunk in values.chunks_mut(CHUNK) {
                    base.conditioned_chunk(chunk, *below, *above, *kept);
                    for value in chunk {
                        *value = value.max(bounds.low).min(bounds.high);
                    }
                }
            }
        }
    }

    /// The quantile of probability `p` in (0, 1): the least value up to which the distribution function reaches `p`.
    #[must_use]
    pub fn quantile(&self, p: f64) -> f64 {
        if let Self::Sample { values, .. } = self {
            let mut sorted = values.to_vec();
            sorted.sort_by(f64::total_cmp);
            // The least row k of n with (k + 1) / n >= p.
            let rank = (1..sorted.len()).find(|rank| share(*rank, sorted.len()) >= p);
            return sorted[rank.unwrap_or(sorted.len()) - 1];
        }
        let mut one = [p];
        self.quantile_column(&mut one);
        one[0]
    }

    /// The median.
    #[must_use]
    pub fn median(&self) -> f64 {
        self.quantile(0.5)
    }

    /// Values of a normal or lognormal distribution from their normal scores.
    fn normal_scores_column(&self, scores: &mut [f64]) {
        match self {
            Self::Normal { mean, sd } => {
                for score in scores {
                    *score = *mean + *sd * *score;
                }
            }
            Self::Lognormal { median, factor } => {
                let spread = kernels::ln(*factor);
                for score in scores.iter_mut() {
                    *score *= spread;
                }
                exp_in_place(scores);
                for score in scores {
                    *score *= *median;
                }
            }
            other => unreachable!("{other:?} has no normal scores"),
        }
    }

    /// Quantiles of this distribution conditioned on bounds with these probabilities below, above and between.
    ///
    /// # Formula
    /// The quantile at `below + p kept`, reckoned from whichever end is nearer: `above + (1 - p) kept` from the upper.
    fn conditioned_chunk(&self, values: &mut [f64], below: f64, above: f64, kept: f64) {
        let tails = |p: f64| (below + p * kept, above + (1.0 - p) * kept);
        match self {
            Self::Normal { .. } | Self::Lognormal { .. } => {
                let mut signs = [1.0; CHUNK];
                for (value, sign) in values.iter_mut().zip(&mut signs) {
                    let (lower, upper) = tails(*value);
                    (*value, *sign) = if lower <= upper { (lower, 1.0) } else { (upper, -1.0) };
                }
                kernels::normal_quantile_column(values);
                for (value, sign) in values.iter_mut().zip(&signs) {
                    *value *= sign;
                }
                self.normal_scores_column(values);
            }
            Self::Triangular { min, mode, max } => {
                for value in values {
                    let (lower, upper) = tails(*value);
                    *value = triangular(*min, *mode, *max, lower, upper);
                }
            }
            _ => {
                for value in values.iter_mut() {
                    *value = tails(*value).0;
                }
                self.quantile_column(values);
            }
        }
    }
}

/// The value `p` of the way from `min` to `max`; the width itself may not fit a number.
fn between(min: f64, max: f64, p: f64) -> f64 {
    ((1.0 - p) * min + p * max).max(min).min(max)
}

/// The triangular quantile with probability `lower` below and `upper` above.
fn triangular(min: f64, mode: f64, max: f64, lower: f64, upper: f64) -> f64 {
    let width = max - min;
    let value = if lower * width <= mode - min {
        min + (lower * width * (mode - min)).sqrt()
    } else {
        max - (upper * width * (max - mode)).sqrt()
    };
    value.max(min).min(max)
}

/// The row that a number in (0, 1) picks.
fn row(p: f64, rows: usize) -> usize {
    #[allow(clippy::cast_possible_truncation, clippy::cast_sign_loss, clippy::cast_precision_loss)]
    // Rows come from a file of at most 16 MiB; the product is not negative and is cut to the last row.
    let row = (p * rows as f64) as usize;
    row.min(rows - 1)
}

/// `count` of `all`, as a share.
#[allow(clippy::cast_precision_loss)] // Both are far below 2^53.
pub(super) fn share(count: usize, all: usize) -> f64 {
    count as f64 / all as f64
}

fn exp_in_place(values: &mut [f64]) {
    let mut copy = [0.0; CHUNK];
    for chunk in values.chunks_mut(CHUNK) {
        let copy = &mut copy[..chunk.len()];
        copy.copy_from_slice(chunk);
        kernels::exp_column(chunk, copy);
    }
}
