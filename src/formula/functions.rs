//! The built-in functions: names, number of arguments, dimension rules, how they are computed.

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
