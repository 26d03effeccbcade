//! Units: symbols, prefixes, products and powers; factors, offsets and dimensions come from `uom`.

mod parser;
mod symbols;
#[cfg(test)]
mod tests;

use super::dimension::{Dimension, Exponent};
use crate::math::kernels;
use crate::text::Fault;

pub(in crate::quantity) use parser::ANY_UNIT;

/// The longest text that is looked at, in bytes.
const LONGEST: usize = 300;

/// A unit as written.
#[derive(Clone, Debug, PartialEq)]
pub struct Unit {
    text: String,
    dimension: Dimension,
    /// SI value = value × multiplier / divisor + offset: two whole numbers for most units, so that `210 nm` is exactly
    /// the number nearest to 2.1e-7 m.
    multiplier: f64,
    divisor: f64,
    offset: f64,
}

impl Unit {
    /// Reads a unit such as `kJ/(mol h)`, `µm^3`, `m⁻²`, `aa/s`. A text of blanks, and `1`, are the unit of pure numbers.
    ///
    /// # Errors
    /// A fault that points at the first symbol or sign that cannot be read.
    pub fn read(text: &str) -> Result<Self, Fault> {
        if text.len() > LONGEST {
            let message = format!("a text of {} bytes stands where a unit was expected", text.len());
            return Err(Fault::new(0..text.len(), message).expected("a unit such as `kJ/mol`"));
        }
        let factors = parser::parse(text)?;
        let does_not_fit =
            || Fault::new(0..text.len(), format!("`{}` is more than a number can hold", text.trim()));
        let mut dimension = Dimension::NONE;
        let (mut multiplier, mut divisor, mut ten) = (1.0, 1.0, Exponent::ZERO);
        for factor in &factors {
            let symbol = factor.found.symbol;
            let sign = Exponent::whole(if factor.below { -1 } else { 1 });
            let power = factor.power.times(sign).ok_or_else(does_not_fit)?;
            dimension = symbol
                .dimension
                .power(power)
                .and_then(|part| dimension.times(part))
                .ok_or_else(does_not_fit)?;
            let tens = symbol.ten + factor.found.prefix.map_or(0, |(_, ten)| ten);
            ten = Exponent::whole(tens)
                .times(power)
                .and_then(|tens| ten.plus(tens))
                .ok_or_else(does_not_fit)?;
            let size = raised(symbol.mantissa, power.numerator().abs(), power.denominator());
            if power.numerator() > 0 {
                multiplier *= size;
            } else {
                divisor *= size;
            }
        }
        let scale = raised(10.0, ten.numerator().abs(), ten.denominator());
        if ten.numerator() > 0 {
            multiplier *= scale;
        } else {
            divisor *= scale;
        }
        let factor: f64 = multiplier / divisor;
        if !(multiplier.is_normal() && divisor.is_normal() && factor.is_normal()) {
            return Err(does_not_fit());
        }
        if !dimension.exponents().into_iter().all(parser::can_be_power) {
            return Err(does_not_fit());
        }
        let offset = factors.first().map_or(0.0, |factor| factor.found.symbol.offset);
        Ok(Self { text: parser::canonical(&factors), dimension, multiplier, divisor, offset })
    }

    /// The unit of pure numbers.
    #[must_use]
    pub fn none() -> Self {
        Self::coherent(Dimension::NONE)
    }

    /// The SI unit of a dimension, in base units: its factor is 1.
    #[must_use]
    pub fn coherent(dimension: Dimension) -> Self {
        Self { text: dimension.base_units(" "), dimension, multiplier: 1.0, divisor: 1.0, offset: 0.0 }
    }

    /// The canonical text; reading it gives this unit again.
    #[must_use]
    pub fn text(&self) -> &str {
        &self.text
    }
    /// Its dimension.
    #[must_use]
    pub const fn dimension(&self) -> Dimension {
        self.dimension
    }
    /// SI value = value × factor + offset.
    #[must_use]
    pub const fn factor(&self) -> f64 {
        self.multiplier / self.divisor
    }
    /// Non-zero for `°C` alone.
    #[must_use]
    pub const fn offset(&self) -> f64 {
        self.offset
    }
    /// The SI value of `value` in this unit.
    #[must_use]
    pub fn to_si(&self, value: f64) -> f64 {
        self.difference_to_si(value) + self.offset
    }
    /// The value in this unit of an SI value.
    #[must_use]
    pub fn from_si(&self, si: f64) -> f64 {
        self.difference_from_si(si - self.offset)
    }
    /// The SI value of a difference: `10 °C` is 10 K.
    #[must_use]
    pub fn difference_to_si(&self, difference: f64) -> f64 {
        difference * self.multiplier / self.divisor
    }
    /// The difference in this unit of a difference in SI units.
    #[must_use]
    pub fn difference_from_si(&self, si: f64) -> f64 {
        si * self.divisor / self.multiplier
    }
    /// A number with this unit after it: `210 nm`, `20 %`, `0.5`.
    #[must_use]
    pub fn after(&self, number: &str) -> String {
        if self.text.is_empty() { number.to_owned() } else { format!("{number} {}", self.text) }
    }
}

/// base^(numerator/denominator), numerator >= 0: exact for whole powers that fit.
fn raised(base: f64, numerator: i32, denominator: i32) -> f64 {
    if denominator != 1 {
        return kernels::pow(base, f64::from(numerator) / f64::from(denominator));
    }
    if base == 10.0 {
        return symbols::ten_to(numerator);
    }
    (0..numerator).fold(1.0, |product, _| product * base)
}
