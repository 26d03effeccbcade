//! Powers with exact exponents: how an exponent is read from literals, and the steps by which a power is computed.

use super::tree::{Binary, Expr, ExprKind};
use crate::math::kernels;
use crate::quantity::Exponent;

/// The steps of a power with an exact exponent. The tree walk and the compiled program use the same ones.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum PowerSteps {
    /// x^0 is 1, whatever x is.
    One,
    /// Products and roots.
    Direct(Steps),
    /// 1 / (products and roots).
    Reciprocal(Steps),
    /// pow(x, exponent).
    General(f64),
}

/// Products and roots of one number.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Steps {
    /// x
    Itself,
    /// x * x
    Square,
    /// x * x * x
    Cube,
    /// (x * x) * (x * x)
    Fourth,
    /// sqrt(x)
    SquareRoot,
    /// cbrt(x)
    CubeRoot,
    /// x * sqrt(x)
    ThreeHalves,
}

/// The steps for `exponent`: whole exponents up to 4, 1/2, 1/3 and 3/2 and their negatives become products and roots,
/// which are faster and, for small whole exponents, exact where the product is; all others go through `pow`.
#[must_use]
pub fn power_steps(exponent: Exponent) -> PowerSteps {
    let steps = match (exponent.numerator().unsigned_abs(), exponent.denominator()) {
        (0, _) => return PowerSteps::One,
        (1, 1) => Steps::Itself,
        (2, 1) => Steps::Square,
        (3, 1) => Steps::Cube,
        (4, 1) => Steps::Fourth,
        (1, 2) => Steps::SquareRoot,
        (1, 3) => Steps::CubeRoot,
        (3, 2) => Steps::ThreeHalves,
        _ => return PowerSteps::General(exponent.value()),
    };
    if exponent.numerator() < 0 { PowerSteps::Reciprocal(steps) } else { PowerSteps::Direct(steps) }
}

impl PowerSteps {
    /// The power of `x`.
    #[must_use]
    pub fn value(self, x: f64) -> f64 {
        match self {
            Self::One => 1.0,
            Self::Direct(steps) => steps.value(x),
            Self::Reciprocal(steps) => 1.0 / steps.value(x),
            Self::General(exponent) => kernels::pow(x, exponent),
        }
    }
}

impl Steps {
    /// The product or root of `x`.
    #[must_use]
    pub fn value(self, x: f64) -> f64 {
        match self {
            Self::Itself => x,
            Self::Square => x * x,
            Self::Cube => x * x * x,
            Self::Fourth => (x * x) * (x * x),
            Self::SquareRoot => x.sqrt(),
            Self::CubeRoot => kernels::cbrt(x),
            Self::ThreeHalves => x * x.sqrt(),
        }
    }
}

/// Why an exponent made of literals has no exact value.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum ExponentFault {
    /// Numerator or denominator does not fit.
    TooLarge,
    /// It divides by zero.
    DivisionByZero,
}

/// The exact value of an exponent made of literals alone; `None` if it holds a name, a unit, a function or an
/// irrational power.
pub(super) fn exact_exponent(exponent: &Expr) -> Result<Option<Exponent>, ExponentFault> {
    Ok(match &exponent.kind {
        ExprKind::Number { value, unit: None, .. } => {
            Some(exact_decimal(*value).ok_or(ExponentFault::TooLarge)?)
        }
        ExprKind::Negate(inner) => match exact_exponent(inner)? {
            Some(inner) => Some(inner.times(Exponent::whole(-1)).ok_or(ExponentFault::TooLarge)?),
            None => None,
        },
        ExprKind::Power(base, power, _) => match exact_exponent(base)? {
            Some(base) if power.denominator() == 1 => Some(whole_power(base, power.numerator())?),
            _ => None,
        },
        ExprKind::Binary(operator, left, right) => {
            let (left, right) = (exact_exponent(left), exact_exponent(right));
            // With a name on one side it is not made of literals, whatever the other side holds.
            if left == Ok(None) || right == Ok(None) {
                return Ok(None);
            }
            let (Some(left), Some(right)) = (left?, right?) else { return Ok(None) };
            let minus = Exponent::whole(-1);
            let result = match operator {
                Binary::Add => left.plus(right),
                Binary::Subtract => right.times(minus).and_then(|right| left.plus(right)),
                Binary::Multiply => left.times(right),
                Binary::Divide => Some(over(left, right)?),
                _ => return Ok(None),
            };
            Some(result.ok_or(ExponentFault::TooLarge)?)
        }
        _ => None,
    })
}

fn over(left: Exponent, right: Exponent) -> Result<Exponent, ExponentFault> {
    if right == Exponent::ZERO {
        return Err(ExponentFault::DivisionByZero);
    }
    let reciprocal = Exponent::new(i64::from(right.denominator()), i64::from(right.numerator()));
    reciprocal.and_then(|reciprocal| left.times(reciprocal)).ok_or(ExponentFault::TooLarge)
}

/// A whole power; a magnitude other than 0 and 1 leaves the range after 31 products at most.
fn whole_power(base: Exponent, power: i32) -> Result<Exponent, ExponentFault> {
    let one = Exponent::whole(1);
    if power < 0 {
        return over(one, whole_power(base, power.checked_neg().ok_or(ExponentFault::TooLarge)?)?);
    }
    let squared = base.times(base).ok_or(ExponentFault::TooLarge);
    if base == Exponent::ZERO || squared == Ok(one) {
        return Ok(if power == 0 || (squared == Ok(one) && power % 2 == 0) { one } else { base });
    }
    let mut result = one;
    for _ in 0..power {
        result = result.times(base).ok_or(ExponentFault::TooLarge)?;
    }
    Ok(result)
}

/// The decimal that `value` is written as, exactly: 0.75 is 3/4, 0.1 is 1/10. `None` when a part does not fit.
fn exact_decimal(value: f64) -> Option<Exponent> {
    // The shortest decimal that reads as `value` is what was written, up to the 17 digits a double holds; with
    // more than nineteen digits no part could fit.
    let text = format!("{value}");
    let (whole, decimals) = text.split_once('.').unwrap_or((&text, ""));
    let numerator: i64 = format!("{whole}{decimals}").parse().ok()?;
    let denominator = 10i64.checked_pow(u32::try_from(decimals.len()).ok()?)?;
    Exponent::new(numerator, denominator)
}

#[cfg(test)]
mod tests {
    use super::{ExponentFault, PowerSteps, Steps, exact_decimal, power_steps, whole_power};
    use crate::quantity::Exponent;

    fn ratio(numerator: i64, denominator: i64) -> Exponent {
        Exponent::new(numerator, denominator).unwrap()
    }

    #[test]
    fn small_powers_are_products_and_roots() {
        for (numerator, denominator, steps) in [
            (0, 1, PowerSteps::One),
            (1, 1, PowerSteps::Direct(Steps::Itself)),
            (2, 1, PowerSteps::Direct(Steps::Square)),
            (3, 1, PowerSteps::Direct(Steps::Cube)),
            (4, 1, PowerSteps::Direct(Steps::Fourth)),
            (1, 2, PowerSteps::Direct(Steps::SquareRoot)),
            (1, 3, PowerSteps::Direct(Steps::CubeRoot)),
            (3, 2, PowerSteps::Direct(Steps::ThreeHalves)),
            (-1, 1, PowerSteps::Reciprocal(Steps::Itself)),
            (-3, 2, PowerSteps::Reciprocal(Steps::ThreeHalves)),
            (3, 4, PowerSteps::General(0.75)),
            (5, 1, PowerSteps::General(5.0)),
            (-2, 3, PowerSteps::General(-2.0 / 3.0)),
        ] {
            assert_eq!(power_steps(ratio(numerator, denominator)), steps, "{numerator}/{denominator}");
        }
    }

    #[test]
    fn powers_have_their_values() {
        // By hand: 4 = 2², 64 = 4³ = 2⁶.
        for (numerator, denominator, base, expected) in [
            (2, 1, 3.0, 9.0),
            (3, 1, -2.0, -8.0),
            (4, 1, 3.0, 81.0),
            (-2, 1, 4.0, 0.0625),
            (-4, 1, 2.0, 0.0625),
            (1, 2, 64.0, 8.0),
            (-1, 2, 64.0, 0.125),
            (1, 3, -64.0, -4.0),
            (3, 2, 4.0, 8.0),
            (0, 1, f64::NAN, 1.0),
            (5, 1, 2.0, 32.0),
        ] {
            assert_eq!(power_steps(ratio(numerator, denominator)).value(base), expected);
        }
        let found = power_steps(ratio(3, 4)).value(16.0);
        assert!((found - 8.0).abs() < 1e-14, "{found}");
    }

    #[test]
    fn decimals_are_read_exactly_or_not_at_all() {
        assert_eq!(exact_decimal(0.75), Some(ratio(3, 4)));
        assert_eq!(exact_decimal(0.1), Some(ratio(1, 10)));
        assert_eq!(exact_decimal(1e-3), Some(ratio(1, 1000)));
        assert_eq!(exact_decimal(2_147_483_647.0), Some(ratio(2_147_483_647, 1)));
        assert_eq!(exact_decimal(2_147_483_648.0), None);
        assert_eq!(exact_decimal(1e300), None);
        assert_eq!(exact_decimal(1e-300), None);
        assert_eq!(exact_decimal(0.123_456_789_012), None);
    }

    #[test]
    fn whole_powers_of_exponents_stay_in_range() {
        assert_eq!(whole_power(ratio(2, 1), 3), Ok(ratio(8, 1)));
        assert_eq!(whole_power(ratio(2, 3), -2), Ok(ratio(9, 4)));
        assert_eq!(whole_power(ratio(-1, 1), i32::MAX), Ok(ratio(-1, 1)));
        assert_eq!(whole_power(ratio(1, 1), i32::MAX), Ok(ratio(1, 1)));
        assert_eq!(whole_power(ratio(0, 1), 0), Ok(ratio(1, 1)));
        assert_eq!(whole_power(ratio(0, 1), -1), Err(ExponentFault::DivisionByZero));
        assert_eq!(whole_power(ratio(2, 1), i32::MAX), Err(ExponentFault::TooLarge));
    }
}
