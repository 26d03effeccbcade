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
            numerator: i32::try_from(numerator).ok()?,
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
        write!(f, "{:?}", self.0.map(|e| e.to_string()))
    }
}
