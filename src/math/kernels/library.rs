//! Functions too rare in formulas for kernels of their own: those of the library `libm`, value by value.

macro_rules! from_library {
    ($($(#[$about:meta])* $name:ident, $column:ident, $function:path;)*) => {$(
        $(#[$about])*
        #[must_use]
        pub fn $name(x: f64) -> f64 {
            $function(x)
        }

        #[doc = concat!("[`", stringify!($name), "`], value by value.")]
        ///
        /// # Panics
        /// When the lengths differ.
        pub fn $column(out: &mut [f64], x: &[f64]) {
            assert_eq!(out.len(), x.len(), "columns have equal length");
            for (out, &x) in out.iter_mut().zip(x) {
                *out = $function(x);
            }
        }
    )*};
}

from_library! {
    /// Sine of an angle in radians.
    sin, sin_column, libm::sin;
    /// Cosine of an angle in radians.
    cos, cos_column, libm::cos;
    /// Tangent of an angle in radians.
    tan, tan_column, libm::tan;
    /// Inverse tangent in radians, between -pi/2 and pi/2.
    atan, atan_column, libm::atan;
    /// Hyperbolic tangent.
    tanh, tanh_column, libm::tanh;
    /// Error function: 2/sqrt(pi) times the integral of e^(-t^2) from 0 to x.
    erf, erf_column, libm::erf;
    /// Complementary error function, 1 - erf(x), without loss for large x.
    erfc, erfc_column, libm::erfc;
    /// Cube root, of negative numbers too.
    cbrt, cbrt_column, libm::cbrt;
}
