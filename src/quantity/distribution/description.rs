//! Distributions in words, for the "as read" part of reports.

use statrs::distribution::{ContinuousCDF, LogNormal, Normal};

use super::{Distribution, FreeRange};
use crate::math::kernels;
use crate::quantity::digits::{interval, significant};
use crate::quantity::unit::Unit;

/// Digits of a stated spread or end.
const DIGITS: usize = 4;

impl Distribution {
    /// In words, with numbers in `unit`: `normal, standard uncertainty 30 nm, 90 % within 161 to 259 nm`.
    #[must_use]
    pub fn describe(&self, unit: &Unit) -> String {
        let number = |si: f64| significant(unit.from_si(si), DIGITS);
        let ends = |low: f64, high: f64| unit.after(&format!("{} to {}", number(low), number(high)));
        match self {
            Self::Exact(_) => "exact".to_owned(),
            Self::Normal { .. } | Self::Lognormal { .. } => {
                format!("{}, {}", self.kind(unit), self.ninety_percent(unit))
            }
            Self::Uniform { min, max } => format!("uniform, {}", ends(*min, *max)),
            Self::LogUniform { min, max } => format!("log-uniform, {}", ends(*min, *max)),
            Self::Triangular { min, max, .. } => format!("{}, {}", self.kind(unit), ends(*min, *max)),
            Self::Discrete { values, .. } => {
                let ends = ends(self.support().low, self.support().high);
                format!("discrete, {} {}, {ends}", values.len(), plural(values.len(), "value"))
            }
            Self::Sample { file, column, values } => format!(
                "resampled from {} {} of `{column}` in `{file}`, {}",
                values.len(),
                plural(values.len(), "row"),
                self.ninety_percent(unit)
            ),
            Self::Within { base, bounds, below, above, .. } => {
                // Bounds that cut off next to nothing are not worth a word.
                let worth_a_word = 0.001;
                let kept = match (*below > worth_a_word, *above > worth_a_word) {
                    (true, true) => format!("kept within {}, ", ends(bounds.low, bounds.high)),
                    (true, false) => format!("kept above {}, ", unit.after(&number(bounds.low))),
                    (false, true) => format!("kept below {}, ", unit.after(&number(bounds.high))),
                    (false, false) => String::new(),
                };
                format!("{}, {kept}{}", base.kind(unit), self.ninety_percent(unit))
            }
        }
    }

    /// The name and what sets the width.
    fn kind(&self, unit: &Unit) -> String {
        match self {
            Self::Normal { sd, .. } => {
                let sd = significant(unit.difference_from_si(*sd), DIGITS);
                format!("normal, standard uncertainty {}", unit.after(&sd))
            }
            Self::Lognormal { factor, .. } => format!("lognormal, factor {}", significant(*factor, DIGITS)),
            Self::Triangular { mode, .. } => {
                format!("triangular, most often {}", unit.after(&significant(unit.from_si(*mode), DIGITS)))
            }
            other => other.describe(unit),
        }
    }

    fn ninety_percent(&self, unit: &Unit) -> String {
        let [low, high] = [0.05, 0.95].map(|p| unit.from_si(self.percentage_point(p)));
        let (low, high) = interval(low, high);
        format!("90 % within {}", unit.after(&format!("{low} to {high}")))
    }

    /// A quantile to show: of the whole distributions from the statistics library, which takes no part in any draw.
    fn percentage_point(&self, p: f64) -> f64 {
        let from_library = match self {
            Self::Normal { mean, sd } => Normal::new(*mean, *sd).ok().map(|normal| normal.inverse_cdf(p)),
            Self::Lognormal { median, factor } => LogNormal::new(kernels::ln(*median), kernels::ln(*factor))
                .ok()
                .map(|lognormal| lognormal.inverse_cdf(p)),
            _ => None,
        };
        from_library.unwrap_or_else(|| self.quantile(p))
    }
}

impl FreeRange {
    /// In words, with numbers in `unit`: `anywhere in 6 nm to 20 nm (free)`.
    #[must_use]
    pub fn describe(&self, unit: &Unit) -> String {
        let end = |si: f64| unit.after(&significant(unit.from_si(si), DIGITS));
        format!("anywhere in {} to {} (free)", end(self.low), end(self.high))
    }
}

fn plural(count: usize, noun: &str) -> String {
    if count == 1 { noun.to_owned() } else { format!("{noun}s") }
}
