//! Roots inside a bracket.
//!
//! R. P. Brent, *Algorithms for Minimization without Derivatives*, Prentice-Hall 1973, chapter 4: inverse quadratic
//! interpolation or the secant where they help, bisection where they do not; the root stays bracketed throughout.

use std::fmt;

/// Why no root was found.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum BracketError {
    /// An end of the bracket is infinite or not a number.
    UnboundedBracket,
    /// The function has the same sign at both ends.
    SameSign {
        /// Its value at the low end.
        at_low: f64,
        /// Its value at the high end.
        at_high: f64,
    },
    /// The function is not a number there.
    NotANumber {
        /// The argument.
        at: f64,
    },
}

impl fmt::Display for BracketError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::UnboundedBracket => write!(f, "the ends of the bracket are not both finite"),
            Self::SameSign { at_low, at_high } => {
                write!(f, "no change of sign between the ends: {at_low} and {at_high}")
            }
            Self::NotANumber { at } => write!(f, "not a number at {at}"),
        }
    }
}

impl std::error::Error for BracketError {}

/// A point x between `low` and `high` where `f` changes sign, to within `tolerance` (absolute, 0 or more) plus 4 epsilon |x|:
/// a root where `f` is continuous, else the place of a jump.
///
/// # Errors
/// When an end is not finite, when `f` has the same sign at both ends, or when it is not a number on the way.
pub fn root(low: f64, high: f64, tolerance: f64, mut f: impl FnMut(f64) -> f64) -> Result<f64, BracketError> {
    if !(low.is_finite() && high.is_finite()) {
        return Err(BracketError::UnboundedBracket);
    }
    let mut value = |x| {
        let y = f(x);
        if y.is_nan() { Err(BracketError::NotANumber { at: x }) } else { Ok((x, y)) }
    };
    // The root lies between `best` and `other`, of which `best` has the smaller value; `last` was `best` one step ago.
    let mut last = value(low)?;
    let mut best = value(high)?;
    if last.1 != 0.0 && best.1 != 0.0 && (last.1 > 0.0) == (best.1 > 0.0) {
        return Err(BracketError::SameSign { at_low: last.1, at_high: best.1 });
    }
    let mut other = last;
    let mut step = best.0 - last.0;
    let mut step_before = step;
    loop {
        if other.1.abs() < best.1.abs() {
            last = best;
            best = other;
            other = last;
        }
        let least_step = 2.0 * f64::EPSILON * best.0.abs() + 0.5 * tolerance.max(f64::MIN_POSITIVE);
        // Half of each, because their difference may overflow.
        let half = 0.5 * other.0 - 0.5 * best.0;
        if best.1 == 0.0 || half.abs() <= least_step {
            return Ok(best.0);
        }
        let guess = interpolated_step(last, best, other);
        // A guess counts if it stays well inside the bracket, and if steps are still halving every other time; one that
        // is not a number does not.
        if last.1.abs() > best.1.abs()
            && step_before.abs() >= least_step
            && guess * half >= 0.0
            && guess.abs() < 1.5 * half.abs() - 0.5 * least_step
            && guess.abs() < 0.5 * step_before.abs()
        {
            step_before = step;
            step = guess;
        } else {
            step = half;
            step_before = half;
        }
        last = best;
        best = value(best.0 + if step.abs() > least_step { step } else { least_step.copysign(half) })?;
        if (best.1 > 0.0) == (other.1 > 0.0) {
            other = last;
            step = best.0 - last.0;
            step_before = step;
        }
    }
}

/// The step from `best` to the root of the inverse parabola through three points, or of the secant through two.
fn interpolated_step(last: (f64, f64), best: (f64, f64), other: (f64, f64)) -> f64 {
    let to_other = other.0 - best.0;
    let s = best.1 / last.1;
    if last.0 == other.0 {
        return s * to_other / (s - 1.0);
    }
    let q = last.1 / other.1;
    let r = best.1 / other.1;
    s * ((best.0 - last.0) * (r - 1.0) - to_other * q * (q - r)) / ((q - 1.0) * (r - 1.0) * (s - 1.0))
}

#[cfg(test)]
mod tests {
    use super::{BracketError, root};

    /// Checks a root against a known one, and that few calls were needed.
    #[track_caller]
    fn check(low: f64, high: f64, known: f64, digits_of_known: i32, f: impl Fn(f64) -> f64) {
        let mut calls = 0;
        let found = root(low, high, 0.0, |x| {
            calls += 1;
            f(x)
        })
        .unwrap();
        let allowed =
            known.abs() * libm::pow(10.0, f64::from(1 - digits_of_known)) + 4.0 * f64::EPSILON * known.abs();
        assert!((found - known).abs() <= allowed, "found {found}, known {known}");
        assert!(calls <= 60, "{calls} calls");
    }

    #[test]
    fn known_roots_are_found() {
        // Wallis's cubic, 1685: OEIS A007493.
        check(2.0, 3.0, 2.094_551_481_542_326_6, 16, |x| x * x * x - 2.0 * x - 5.0);
        // cos x = x: OEIS A003957.
        check(0.0, 1.0, 0.739_085_133_215_160_6, 16, |x| libm::cos(x) - x);
        // x e^x = 1: OEIS A030178.
        check(0.0, 1.0, 0.567_143_290_409_784, 16, |x| x * libm::exp(x) - 1.0);
        // First zero of J0: Abramowitz and Stegun, *Handbook of Mathematical Functions* (1964), table 9.5.
        check(2.0, 3.0, 2.404_825_557_7, 11, libm::j0);
        // tan x = x, as sin x = x cos x, first root above 0: the same handbook, table 4.19.
        check(4.0, 5.0, 4.493_41, 6, |x| libm::sin(x) - x * libm::cos(x));
    }

    #[test]
    fn exact_poisson_limits_are_found() {
        // Values of scipy 1.17.1, confirmed with mpmath to 40 digits. Upper 95 % limit for no events: e^-m = 0.05.
        check(0.0, 100.0, 2.995_732_273_55, 12, |m| libm::exp(-m) - 0.05);
        // F. Garwood, Biometrika 28 (1936) 437, for three events: P(X <= 3) = 0.025 and P(X >= 3) = 0.025.
        let at_most_two = |m: f64| libm::exp(-m) * (1.0 + m + m * m / 2.0);
        check(0.0, 100.0, 8.767_273_069_74, 12, |m| at_most_two(m) + libm::exp(-m) * m * m * m / 6.0 - 0.025);
        check(0.0, 2.0, 0.618_672_122_896, 12, |m| 1.0 - at_most_two(m) - 0.025);
    }

    #[test]
    fn a_root_at_an_end_is_returned() {
        assert_eq!(root(2.0, 5.0, 0.0, |x| x - 2.0), Ok(2.0));
        assert_eq!(root(-1.0, 2.0, 0.0, |x| x - 2.0), Ok(2.0));
        assert_eq!(root(3.0, 3.0, 0.0, |x| x - 3.0), Ok(3.0));
    }

    #[test]
    fn the_ends_may_come_in_either_order() {
        let ascending = root(1.0, 4.0, 0.0, |x| x * x - 2.0).unwrap();
        let descending = root(4.0, 1.0, 0.0, |x| x * x - 2.0).unwrap();
        assert!((ascending - std::f64::consts::SQRT_2).abs() < 1e-15);
        assert!((descending - std::f64::consts::SQRT_2).abs() < 1e-15);
    }

    #[test]
    fn a_tolerance_saves_calls_and_is_kept() {
        let mut calls = [0, 0];
        let mut count = |number: usize, tolerance| {
            root(0.0, 10.0, tolerance, |x| {
                calls[number] += 1;
                libm::exp(x) - 100.0
            })
            .unwrap()
        };
        let coarse = count(0, 0.01);
        let fine = count(1, 0.0);
        assert!((coarse - fine).abs() <= 0.01);
        assert!(calls[0] < calls[1]);
    }

    #[test]
    fn hard_functions_end() {
        // Flat to the ninth order, a jump, infinite ends, and ends whose difference overflows.
        let flat = root(-1.0, 4.0, 0.0, |x| libm::pow(x - 0.3, 9.0)).unwrap();
        assert!((flat - 0.3).abs() < 1e-15, "{flat}");
        let jump = root(-1.0, 4.0, 0.0, |x| if x < 1.7 { -1.0 } else { 3.0 }).unwrap();
        assert!((jump - 1.7).abs() < 1e-14, "{jump}");
        let infinite = root(0.0, 1.0, 0.0, |x| libm::log(x / (1.0 - x)) - 1.0).unwrap();
        assert!((infinite - 0.731_058_578_630_004_9).abs() < 1e-15, "logistic function of 1: {infinite}");
        let wide = root(-1.5e308, 1.7e308, 0.0, |x| libm::atan(x - 3.0)).unwrap();
        assert!((wide - 3.0).abs() < 1e-14, "{wide}");
    }

    #[test]
    fn what_cannot_be_solved_is_said() {
        assert_eq!(root(1.0, 2.0, 0.0, |x| x), Err(BracketError::SameSign { at_low: 1.0, at_high: 2.0 }));
        assert_eq!(root(0.0, f64::INFINITY, 0.0, |x| x - 1.0), Err(BracketError::UnboundedBracket));
        assert_eq!(root(f64::NAN, 1.0, 0.0, |x| x), Err(BracketError::UnboundedBracket));
        assert_eq!(root(-1.0, 1.0, 0.0, libm::log), Err(BracketError::NotANumber { at: -1.0 }));
        let error = root(1.0, 2.0, 0.0, |x| x).unwrap_err();
        assert_eq!(error.to_string(), "no change of sign between the ends: 1 and 2");
    }
}
