//! The built-in functions: names, number of arguments, dimension rules, how they are computed.

use crate::math::kernels;

/// A built-in function.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Function {
    /// Square root; halves the dimension.
    Sqrt,
    /// Cube root; a third of the dimension.
    Cbrt,
    /// e^x.
    Exp,
    /// e^x - 1.
    Expm1,
    /// Natural logarithm.
    Ln,
    /// ln(1 + x).
    Ln1p,
    /// Logarithm to base ten.
    Log10,
    /// Sine.
    Sin,
    /// Cosine.
    Cos,
    /// Tangent.
    Tan,
    /// Inverse tangent.
    Atan,
    /// Hyperbolic tangent.
    Tanh,
    /// Error function.
    Erf,
    /// Complementary error function.
    Erfc,
    /// Absolute value; keeps the dimension.
    Abs,
    /// The smaller of two or more; NaN passes through.
    Min,
    /// The larger of two or more; NaN passes through.
    Max,
}

/// How many arguments a function takes.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Arity {
    /// Exactly one.
    One,
    /// Two or more.
    TwoOrMore,
}

/// What a function does to dimensions.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum DimensionRule {
    /// A pure number gives a pure number.
    Pure,
    /// The dimension's exponents are divided by this number.
    Root(i32),
    /// All arguments and the value have one dimension.
    Keeps,
}

impl Function {
    /// All of them, in the order in which they are documented.
    pub const ALL: [Self; 17] = [
        Self::Sqrt,
        Self::Cbrt,
        Self::Exp,
        Self::Expm1,
        Self::Ln,
        Self::Ln1p,
        Self::Log10,
        Self::Sin,
        Self::Cos,
        Self::Tan,
        Self::Atan,
        Self::Tanh,
        Self::Erf,
        Self::Erfc,
        Self::Abs,
        Self::Min,
        Self::Max,
    ];

    /// The function of this name.
    #[must_use]
    pub fn from_name(name: &str) -> Option<Self> {
        Self::ALL.into_iter().find(|function| function.name() == name)
    }

    /// Its name in formulas.
    #[must_use]
    pub const fn name(self) -> &'static str {
        match self {
            Self::Sqrt => "sqrt",
            Self::Cbrt => "cbrt",
            Self::Exp => "exp",
            Self::Expm1 => "expm1",
            Self::Ln => "ln",
            Self::Ln1p => "ln1p",
            Self::Log10 => "log10",
            Self::Sin => "sin",
            Self::Cos => "cos",
            Self::Tan => "tan",
            Self::Atan => "atan",
            Self::Tanh => "tanh",
            Self::Erf => "erf",
            Self::Erfc => "erfc",
            Self::Abs => "abs",
            Self::Min => "min",
            Self::Max => "max",
        }
    }

    /// How many arguments it takes.
    #[must_use]
    pub const fn arity(self) -> Arity {
        match self {
            Self::Min | Self::Max => Arity::TwoOrMore,
            _ => Arity::One,
        }
    }

    /// What it does to dimensions.
    #[must_use]
    pub const fn dimension_rule(self) -> DimensionRule {
        match self {
            Self::Sqrt => DimensionRule::Root(2),
            Self::Cbrt => DimensionRule::Root(3),
            Self::Abs | Self::Min | Self::Max => DimensionRule::Keeps,
            _ => DimensionRule::Pure,
        }
    }

    /// Its value. Outside its domain NaN; the value of no arguments is NaN.
    #[must_use]
    pub fn value(self, arguments: &[f64]) -> f64 {
        let Some((&x, rest)) = arguments.split_first() else { return f64::NAN };
        match self {
            Self::Sqrt => x.sqrt(),
            Self::Cbrt => kernels::cbrt(x),
            Self::Exp => kernels::exp(x),
            Self::Expm1 => kernels::expm1(x),
            Self::Ln => kernels::ln(x),
            Self::Ln1p => kernels::ln1p(x),
            Self::Log10 => kernels::log10(x),
            Self::Sin => kernels::sin(x),
            Self::Cos => kernels::cos(x),
            Self::Tan => kernels::tan(x),
            Self::Atan => kernels::atan(x),
            Self::Tanh => kernels::tanh(x),
            Self::Erf => kernels::erf(x),
            Self::Erfc => kernels::erfc(x),
            Self::Abs => x.abs(),
            Self::Min => rest.iter().fold(x, |least, &x| kernels::Arithmetic::Min.of(least, x)),
            Self::Max => rest.iter().fold(x, |greatest, &x| kernels::Arithmetic::Max.of(greatest, x)),
        }
    }
}

/// Words that the language keeps for itself, now or for forms to come: no quantity, parameter or curve may bear one.
#[must_use]
pub fn is_reserved(name: &str) -> bool {
    const WORDS: [&str; 11] = [
        "and", "or", "not", "infinity", "choose", "solve", "integral", "sum", "product", "least", "greatest",
    ];
    WORDS.contains(&name) || Function::from_name(name).is_some()
}

#[cfg(test)]
mod tests {
    use super::{Arity, Function, is_reserved};

    #[test]
    fn every_name_finds_its_function() {
        for function in Function::ALL {
            assert_eq!(Function::from_name(function.name()), Some(function));
            assert!(is_reserved(function.name()));
        }
        assert_eq!(Function::from_name("log"), None);
        assert!(!is_reserved("diameter"));
    }

    #[test]
    fn values_agree_with_tables() {
        // Abramowitz and Stegun, Handbook of Mathematical Functions (1964): tables 1.1 (roots, logarithms),
        // 4.1-4.16 (elementary functions), 7.1 (error function); digits from memory where printed ones are fewer.
        let table = [
            (Function::Sqrt, 3.0, 1.732_050_807_568_877_2),
            (Function::Cbrt, 2.0, 1.259_921_049_894_873_2),
            (Function::Exp, 2.0, 7.389_056_098_930_65),
            (Function::Expm1, 1.0, 1.718_281_828_459_045),
            (Function::Ln, 3.0, 1.098_612_288_668_109_8),
            (Function::Ln1p, 2.0, 1.098_612_288_668_109_8),
            (Function::Log10, 3.0, 0.477_121_254_719_662_4),
            (Function::Sin, 1.0, 0.841_470_984_807_896_5),
            (Function::Cos, 1.0, 0.540_302_305_868_139_8),
            (Function::Tan, 1.0, 1.557_407_724_654_902_3),
            (Function::Atan, 2.0, 1.107_148_717_794_090_4),
            (Function::Tanh, 1.0, 0.761_594_155_955_764_9),
            (Function::Erf, 1.0, 0.842_700_792_949_714_9),
            (Function::Erfc, 1.0, 0.157_299_207_050_285_13),
            (Function::Abs, -3.0, 3.0),
        ];
        for (function, x, expected) in table {
            let found = function.value(&[x]);
            assert!(((found - expected) / expected).abs() < 1e-15, "{}({x}) = {found}", function.name());
            assert_eq!(function.arity(), Arity::One);
        }
    }

    #[test]
    fn small_arguments_keep_their_digits() {
        // Series: expm1(x) = x + x²/2, ln1p(x) = x - x²/2; at 1e-10 the second term is 5e-21.
        for (function, expected) in
            [(Function::Expm1, 1.000_000_000_05e-10), (Function::Ln1p, 9.999_999_999_5e-11)]
        {
            let found = function.value(&[1e-10]);
            assert!((found / expected - 1.0).abs() < 1e-15, "{}: {found}", function.name());
        }
    }

    #[test]
    fn not_a_number_passes_through_the_least_and_the_greatest() {
        for function in [Function::Min, Function::Max] {
            for arguments in [[f64::NAN, 1.0, 2.0], [1.0, f64::NAN, 2.0], [1.0, 2.0, f64::NAN]] {
                assert!(function.value(&arguments).is_nan(), "{arguments:?}");
            }
        }
        assert_eq!(Function::Min.value(&[3.0, 1.0, 2.0]), 1.0);
        assert_eq!(Function::Max.value(&[3.0, f64::INFINITY, 2.0]), f64::INFINITY);
    }

    #[test]
    fn outside_its_domain_a_function_is_not_a_number() {
        assert!(Function::Sqrt.value(&[-1.0]).is_nan());
        assert!(Function::Ln.value(&[-1.0]).is_nan());
        assert!(Function::Exp.value(&[]).is_nan());
        assert_eq!(Function::Ln.value(&[0.0]), f64::NEG_INFINITY);
    }
}
