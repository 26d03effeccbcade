//! Physical dimensions: seven rational exponents of the SI base quantities.

use std::fmt;

/// An exponent: an exact rational number in lowest terms, denominator positive.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct Exponent {
    numerator: i32,
    denominator: i32,
}

impl Exponent {
    /// Zero.
    pub const ZERO: Self = Self { numerator: 0, denominator: 1 };

    /// `numerator / denominator` in lowest terms; `None` when the denominator is zero or a part does not fit.
    #[must_use]
    pub fn new(numerator: i64, denominator: i64) -> Option<Self> {
        if denominator == 0 {
            return None;
        }
        let divisor = gcd(numerator.unsigned_abs(), denominator.unsigned_abs()).max(1);
        let divisor = i64::try_from(divisor).ok()?;
        let sign = if denominator < 0 { -1 } else { 1 };
        let (numerator, denominator) =
            ((numerator / divisor).checked_mul(sign)?, (denominator / divisor).checked_mul(sign)?);
        Some(Self {
            // The lowest i32 has no opposite.
            numerator: i32::try_from(numerator).ok().filter(|numerator| *numerator != i32::MIN)?,
            denominator: i32::try_from(denominator).ok()?,
        })
    }

    /// The whole number `n`.
    #[must_use]
    pub const fn whole(n: i32) -> Self {
        Self { numerator: n, denominator: 1 }
    }

    /// The numerator, which carries the sign.
    #[must_use]
    pub const fn numerator(self) -> i32 {
        self.numerator
    }

    /// The denominator, at least 1.
    #[must_use]
    pub const fn denominator(self) -> i32 {
        self.denominator
    }

    /// The sum; `None` when it does not fit.
    #[must_use]
    pub fn plus(self, other: Self) -> Option<Self> {
        let (a, b) = (i64::from(self.numerator), i64::from(self.denominator));
        let (c, d) = (i64::from(other.numerator), i64::from(other.denominator));
        Self::new(a.checked_mul(d)?.checked_add(c.checked_mul(b)?)?, b.checked_mul(d)?)
    }

    /// The product; `None` when it does not fit.
    #[must_use]
    pub fn times(self, other: Self) -> Option<Self> {
        Self::new(
            i64::from(self.numerator) * i64::from(other.numerator),
            i64::from(self.denominator) * i64::from(other.denominator),
        )
    }

    /// The value.
    #[must_use]
    pub fn value(self) -> f64 {
        f64::from(self.numerator) / f64::from(self.denominator)
    }
}

impl fmt::Display for Exponent {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        if self.denominator == 1 {
            write!(f, "{}", self.numerator)
        } else {
            write!(f, "({}/{})", self.numerator, self.denominator)
        }
    }
}

fn or_one(product: &str) -> &str {
    if product.is_empty() { "1" } else { product }
}

fn gcd(a: u64, b: u64) -> u64 {
    if b == 0 { a } else { gcd(b, a % b) }
}

/// A physical dimension: exponents of length, mass, time, electric current, temperature, amount of substance
/// and luminous intensity, in that order.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub struct Dimension([Exponent; 7]);

impl Dimension {
    /// The dimension of a pure number.
    pub const NONE: Self = Self([Exponent::ZERO; 7]);

    /// From whole exponents in the order length, mass, time, current, temperature, amount, luminous intensity.
    #[must_use]
    pub const fn whole(exponents: [i32; 7]) -> Self {
        let [l, m, t, i, th, n, j] = exponents;
        Self([
            Exponent::whole(l),
            Exponent::whole(m),
            Exponent::whole(t),
            Exponent::whole(i),
            Exponent::whole(th),
            Exponent::whole(n),
            Exponent::whole(j),
        ])
    }

    /// The exponents.
    #[must_use]
    pub const fn exponents(self) -> [Exponent; 7] {
        self.0
    }

    /// Whether this is a pure number.
    #[must_use]
    pub fn is_none(self) -> bool {
        self == Self::NONE
    }

    /// The dimension of a product; `None` when an exponent does not fit.
    #[must_use]
    pub fn times(self, other: Self) -> Option<Self> {
        self.combine(other, Exponent::plus)
    }

    /// The dimension of a quotient; `None` when an exponent does not fit.
    #[must_use]
    pub fn over(self, other: Self) -> Option<Self> {
        self.times(other.power(Exponent::whole(-1))?)
    }

    /// The dimension of a power; `None` when an exponent does not fit.
    #[must_use]
    pub fn power(self, exponent: Exponent) -> Option<Self> {
        let mut result = self.0;
        for part in &mut result {
            *part = part.times(exponent)?;
        }
        Some(Self(result))
    }

    /// The coherent unit written in base units, `times` between factors: `kg·m^2/s^3`, `1/(m^2·s)`; empty for a pure
    /// number.
    #[must_use]
    pub fn base_units(self, times: &str) -> String {
        let (mut above, mut below) = (Vec::new(), Vec::new());
        for (place, unit) in BASE_UNITS {
            let exponent = self.0[place];
            let size = Exponent { numerator: exponent.numerator.abs(), ..exponent };
            if exponent == Exponent::ZERO {
                continue;
            }
            let factor = if size == Exponent::whole(1) { unit.to_owned() } else { format!("{unit}^{size}") };
            if exponent.numerator > 0 { above.push(factor) } else { below.push(factor) }
        }
        match (above.join(times), below.len()) {
            (above, 0) => above,
            (above, 1) => format!("{}/{}", or_one(&above), below[0]),
            (above, _) => format!("{}/({})", or_one(&above), below.join(times)),
        }
    }

    fn combine(self, other: Self, f: impl Fn(Exponent, Exponent) -> Option<Exponent>) -> Option<Self> {
        let mut result = self.0;
        for (part, other) in result.iter_mut().zip(other.0) {
            *part = f(*part, other)?;
        }
        Some(Self(result))
    }
}

/// A common name where there is one (`a length`, `a power`), else base units (`kg·m^2/s^3`).
impl fmt::Display for Dimension {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match NAMES.iter().find(|(exponents, _)| Self::whole(*exponents) == *self) {
            Some((_, name)) => f.write_str(name),
            None => f.write_str(&self.base_units("·")),
        }
    }
}

/// Base units in the order in which derived units are usually written out, each with its place in [`Dimension`].
const BASE_UNITS: [(usize, &str); 7] =
    [(1, "kg"), (0, "m"), (2, "s"), (3, "A"), (4, "K"), (5, "mol"), (6, "cd")];

/// Common names, by the exponents of length, mass, time, current, temperature, amount, luminous intensity.
const NAMES: [([i32; 7], &str); 62] = [
    ([0, 0, 0, 0, 0, 0, 0], "a pure number"),
    ([1, 0, 0, 0, 0, 0, 0], "a length"),
    ([2, 0, 0, 0, 0, 0, 0], "an area"),
    ([3, 0, 0, 0, 0, 0, 0], "a volume"),
    ([-1, 0, 0, 0, 0, 0, 0], "an inverse length"),
    ([-2, 0, 0, 0, 0, 0, 0], "a number per area"),
    ([-3, 0, 0, 0, 0, 0, 0], "a number per volume"),
    ([0, 0, 1, 0, 0, 0, 0], "a time"),
    ([0, 0, -1, 0, 0, 0, 0], "a rate"),
    ([1, 0, -1, 0, 0, 0, 0], "a speed"),
    ([1, 0, -2, 0, 0, 0, 0], "an acceleration"),
    ([2, 0, -1, 0, 0, 0, 0], "a diffusivity"),
    ([3, 0, -1, 0, 0, 0, 0], "a volume per time"),
    ([-2, 0, -1, 0, 0, 0, 0], "a number per area and time"),
    ([-3, 0, -1, 0, 0, 0, 0], "a number per volume and time"),
    ([0, 1, 0, 0, 0, 0, 0], "a mass"),
    ([-1, 1, 0, 0, 0, 0, 0], "a mass per length"),
    ([-2, 1, 0, 0, 0, 0, 0], "a mass per area"),
    ([-3, 1, 0, 0, 0, 0, 0], "a density"),
    ([3, -1, 0, 0, 0, 0, 0], "a volume per mass"),
    ([0, -1, 0, 0, 0, 0, 0], "a number per mass"),
    ([0, 1, -1, 0, 0, 0, 0], "a mass per time"),
    ([-2, 1, -1, 0, 0, 0, 0], "a mass per area and time"),
    ([1, 1, -1, 0, 0, 0, 0], "a momentum"),
    ([1, 1, -2, 0, 0, 0, 0], "a force"),
    ([0, 1, -2, 0, 0, 0, 0], "a surface tension"),
    ([-1, 1, -2, 0, 0, 0, 0], "a pressure"),
    ([-2, 1, -2, 0, 0, 0, 0], "a pressure per length"),
    ([1, -1, 2, 0, 0, 0, 0], "a compressibility"),
    ([-1, 1, -1, 0, 0, 0, 0], "a viscosity"),
    ([2, 1, -1, 0, 0, 0, 0], "an action"),
    ([2, 1, -2, 0, 0, 0, 0], "an energy"),
    ([2, 0, -2, 0, 0, 0, 0], "an energy per mass"),
    ([2, 1, -2, 0, 0, -1, 0], "an energy per amount of substance"),
    ([2, 1, -3, 0, 0, 0, 0], "a power"),
    ([0, 1, -3, 0, 0, 0, 0], "a power per area"),
    ([-1, 1, -3, 0, 0, 0, 0], "a power per volume"),
    ([2, 0, -3, 0, 0, 0, 0], "a power per mass"),
    ([2, 1, -3, 0, 0, -1, 0], "a power per amount of substance"),
    ([0, 0, 0, 0, 1, 0, 0], "a temperature"),
    ([0, 0, 0, 0, -1, 0, 0], "an inverse temperature"),
    ([-1, 0, 0, 0, 1, 0, 0], "a temperature gradient"),
    ([0, 0, -1, 0, 1, 0, 0], "a temperature per time"),
    ([2, 1, -2, 0, -1, 0, 0], "a heat capacity"),
    ([2, 0, -2, 0, -1, 0, 0], "a heat capacity per mass"),
    ([2, 1, -2, 0, -1, -1, 0], "a heat capacity per amount of substance"),
    ([1, 1, -3, 0, -1, 0, 0], "a thermal conductivity"),
    ([2, 1, -3, 0, -1, 0, 0], "a thermal conductance"),
    ([0, 1, -3, 0, -1, 0, 0], "a heat transfer coefficient"),
    ([0, 0, 0, 0, 0, 1, 0], "an amount of substance"),
    ([0, 0, 0, 0, 0, -1, 0], "a number per amount of substance"),
    ([-3, 0, 0, 0, 0, 1, 0], "a concentration"),
    ([0, -1, 0, 0, 0, 1, 0], "an amount of substance per mass"),
    ([0, 1, 0, 0, 0, -1, 0], "a molar mass"),
    ([3, 0, 0, 0, 0, -1, 0], "a molar volume"),
    ([0, 0, -1, 0, 0, 1, 0], "an amount of substance per time"),
    ([-2, 0, -1, 0, 0, 1, 0], "an amount of substance per area and time"),
    ([-3, 0, -1, 0, 0, 1, 0], "an amount of substance per volume and time"),
    ([0, 0, 0, 1, 0, 0, 0], "an electric current"),
    ([0, 0, 1, 1, 0, 0, 0], "an electric charge"),
    ([2, 1, -3, -1, 0, 0, 0], "an electric potential"),
    ([0, 0, 0, 0, 0, 0, 1], "a luminous intensity"),
];

#[cfg(test)]
mod tests {
    use super::{Dimension, Exponent, NAMES};

    #[test]
    fn common_dimensions_have_common_names() {
        // The base units of W, Pa s and m^2/s: SI brochure, 9th edition, tables 4 and 5.
        assert_eq!(Dimension::whole([1, 0, 0, 0, 0, 0, 0]).to_string(), "a length");
        assert_eq!(Dimension::whole([2, 1, -3, 0, 0, 0, 0]).to_string(), "a power");
        assert_eq!(Dimension::whole([-1, 1, -1, 0, 0, 0, 0]).to_string(), "a viscosity");
        assert_eq!(Dimension::whole([2, 0, -1, 0, 0, 0, 0]).to_string(), "a diffusivity");
        assert_eq!(Dimension::NONE.to_string(), "a pure number");
    }

    #[test]
    fn no_dimension_has_two_names_and_no_name_two_dimensions() {
        for (i, (exponents, name)) in NAMES.iter().enumerate() {
            for (other_exponents, other_name) in &NAMES[i + 1..] {
                assert_ne!(exponents, other_exponents, "{name} and {other_name}");
                assert_ne!(name, other_name);
            }
        }
    }

    #[test]
    fn other_dimensions_are_shown_in_base_units() {
        assert_eq!(Dimension::whole([3, -1, -2, 0, 0, 0, 0]).to_string(), "m^3/(kg·s^2)");
        assert_eq!(Dimension::whole([0, 0, -3, 0, 0, 0, 0]).to_string(), "1/s^3");
        let half = Exponent::new(1, 2).expect("a half is an exponent");
        let root = Dimension::whole([1, 1, -2, 0, 0, 0, 0]).power(half).expect("it fits");
        assert_eq!(root.to_string(), "kg^(1/2)·m^(1/2)/s");
    }

    #[test]
    fn exponents_are_kept_in_lowest_terms() {
        let exponent = Exponent::new(-4, -6).expect("it fits");
        assert_eq!((exponent.numerator(), exponent.denominator()), (2, 3));
        assert_eq!(Exponent::new(1, 0), None);
        assert_eq!(Exponent::new(i64::MIN, 1), None);
    }
}
