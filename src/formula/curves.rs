//! Interpolating functions of an entry.

use std::fmt;

use crate::math::kernels;
use crate::quantity::Dimension;

/// How an axis is divided.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Scale {
    /// Equal differences are equal distances.
    Linear,
    /// Equal ratios are equal distances.
    Log,
    /// Equal differences of the reciprocal are equal distances: against temperature, an Arrhenius plot.
    Reciprocal,
}

/// The scales of both axes; `linear-log` means a linear argument and a logarithmic value.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub struct Axes {
    /// Of the argument.
    pub argument: Scale,
    /// Of the value.
    pub value: Scale,
}

/// How neighbouring points are joined, on the axes of the curve.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Between {
    /// By straight lines.
    Straight,
    /// By cubics that are monotone wherever the points are (Fritsch and Carlson 1980).
    Monotone,
}

/// What a curve does with an argument outside its points.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Outside {
    /// The value is not a number.
    Refuse,
    /// The value is that of the nearest end.
    Edge,
}

/// What a curve joins and how; all that it needs besides its points.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Form {
    /// The dimension of the argument.
    pub argument: Dimension,
    /// The dimension of the value.
    pub value: Dimension,
    /// The scales of the axes.
    pub axes: Axes,
    /// How points are joined.
    pub between: Between,
    /// What happens outside.
    pub outside: Outside,
}

/// A function through points, of one argument. All numbers are SI values.
#[derive(Clone, Debug, PartialEq)]
pub struct Curve {
    form: Form,
    /// Arguments and values as given, arguments increasing.
    points: Vec<(f64, f64)>,
    /// One piece between each pair of neighbours.
    pieces: Vec<Piece>,
}

/// A cubic of the distance from its left end, both on the axes: value + d (slope + d (square + d cube)).
#[derive(Clone, Copy, Debug, PartialEq)]
struct Piece {
    start: f64,
    value: f64,
    slope: f64,
    square: f64,
    cube: f64,
}

/// Why points make no curve. The position counts from zero.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum CurveFault {
    /// Fewer than two points.
    TooFew,
    /// An argument or value is infinite or not a number.
    NotFinite {
        /// Which point.
        position: usize,
    },
    /// An argument is not greater than the one before it.
    NotIncreasing {
        /// Which point.
        position: usize,
    },
    /// Zero or less on a logarithmic or reciprocal axis.
    NotPositive {
        /// Which point.
        position: usize,
    },
    /// Two neighbours are so far apart, or so near, that the slope between them is no finite number.
    TooSteep {
        /// The second of the two.
        position: usize,
    },
}

impl fmt::Display for CurveFault {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::TooFew => f.write_str("a curve needs two points or more"),
            Self::NotFinite { position } => write!(f, "point {} of the curve is not finite", position + 1),
            Self::NotIncreasing { position } => {
                write!(
                    f,
                    "the argument of point {} of the curve is not greater than the one before it",
                    position + 1
                )
            }
            Self::NotPositive { position } => {
                write!(
                    f,
                    "point {} of the curve is zero or negative on a logarithmic or reciprocal axis",
                    position + 1
                )
            }
            Self::TooSteep { position } => {
                write!(f, "the slope of the curve before point {} is not a finite number", position + 1)
            }
        }
    }
}

impl std::error::Error for CurveFault {}

impl Curve {
    /// A curve of this form through points of (argument, value) in SI, arguments increasing.
    ///
    /// # Errors
    /// The first point that is at fault.
    pub fn new(form: Form, points: &[(f64, f64)]) -> Result<Self, CurveFault> {
        if points.len() < 2 {
            return Err(CurveFault::TooFew);
        }
        for (position, &(x, y)) in points.iter().enumerate() {
            if !(x.is_finite() && y.is_finite()) {
                return Err(CurveFault::NotFinite { position });
            }
            if position > 0 && x <= points[position - 1].0 {
                return Err(CurveFault::NotIncreasing { position });
            }
            let Axes { argument, value } = form.axes;
            if (argument != Scale::Linear && x <= 0.0) || (value != Scale::Linear && y <= 0.0) {
                return Err(CurveFault::NotPositive { position });
            }
        }
        let placed: Vec<(f64, f64)> =
            points.iter().map(|&(x, y)| (place(form.axes.argument, x), place(form.axes.value, y))).collect();
        Ok(Self { form, points: points.to_vec(), pieces: pieces(&placed, form.between)? })
    }

    /// What it joins and how.
    #[must_use]
    pub const fn form(&self) -> Form {
        self.form
    }

    /// The points as given.
    #[must_use]
    pub fn points(&self) -> &[(f64, f64)] {
        &self.points
    }

    /// The value at `x`; at a point exactly the value given there.
    #[must_use]
    pub fn value(&self, x: f64) -> f64 {
        if x.is_nan() {
            return f64::NAN;
        }
        // How many points lie at or below x.
        let below = self.points.partition_point(|&(point, _)| point <= x);
        if below == 0 {
            return self.outside(self.points[0]);
        }
        let (left, value) = self.points[below - 1];
        if left == x {
            return value;
        }
        let Some(piece) = self.pieces.get(below - 1) else { return self.outside((left, value)) };
        let d = place(self.form.axes.argument, x) - piece.start;
        let placed = piece.value + d * (piece.slope + d * (piece.square + d * piece.cube));
        match self.form.axes.value {
            Scale::Linear => placed,
            Scale::Log => kernels::exp(placed),
            Scale::Reciprocal => -1.0 / placed,
        }
    }

    /// The values at a column of arguments of the same length, bit for bit those of `value`.
    pub fn value_column(&self, out: &mut [f64], x: &[f64]) {
        for (out, &x) in out.iter_mut().zip(x) {
            *out = self.value(x);
        }
    }

    const fn outside(&self, end: (f64, f64)) -> f64 {
        match self.form.outside {
            Outside::Refuse => f64::NAN,
            Outside::Edge => end.1,
        }
    }
}

/// Where a number stands on an axis; a greater number always further on.
fn place(scale: Scale, x: f64) -> f64 {
    match scale {
        Scale::Linear => x,
        Scale::Log => kernels::ln(x),
        Scale::Reciprocal => -1.0 / x,
    }
}

fn pieces(points: &[(f64, f64)], between: Between) -> Result<Vec<Piece>, CurveFault> {
    let widths: Vec<f64> = points.windows(2).map(|pair| pair[1].0 - pair[0].0).collect();
    let secants: Vec<f64> =
        points.windows(2).zip(&widths).map(|(pair, width)| (pair[1].1 - pair[0].1) / width).collect();
    if let Some(position) = widths.iter().zip(&secants).position(|(w, s)| !(w.is_finite() && s.is_finite())) {
        return Err(CurveFault::TooSteep { position: position + 1 });
    }
    let slopes = match between {
        Between::Straight => None,
        Between::Monotone => Some(monotone_slopes(&widths, &secants)),
    };
    (0..widths.len())
        .map(|k| {
            let (start, value) = points[k];
            let (secant, width) = (secants[k], widths[k]);
            let piece = slopes.as_ref().map_or(
                Piece { start, value, slope: secant, square: 0.0, cube: 0.0 },
                |slopes| {
                    let (left, right) = (slopes[k], slopes[k + 1]);
                    Piece {
                        start,
                        value,
                        slope: left,
                        square: (3.0 * secant - 2.0 * left - right) / width,
                        cube: (left - 2.0 * secant + right) / (width * width),
                    }
                },
            );
            let finite = [piece.slope, piece.square, piece.cube].iter().all(|part| part.is_finite());
            if finite { Ok(piece) } else { Err(CurveFault::TooSteep { position: k + 1 }) }
        })
        .collect()
}

/// Slopes at the points that keep each piece monotone: inside, the weighted harmonic mean of the neighbouring
/// secants, zero where they differ in sign (Fritsch and Butland, SIAM J. Sci. Stat. Comput. 5 (1984) 300); at the ends,
/// three points, limited so that the shape is kept (Moler, Numerical Computing with MATLAB (2004), section 3.6).
fn monotone_slopes(widths: &[f64], secants: &[f64]) -> Vec<f64> {
    let last = widths.len() - 1;
    if last == 0 {
        return vec![secants[0]; 2];
    }
    let mut slopes = vec![end_slope(widths[0], widths[1], secants[0], secants[1])];
    for k in 1..=last {
        let (before, after) = (secants[k - 1], secants[k]);
        // Signs, not the product of the secants, which might vanish.
        slopes.push(if before == 0.0 || after == 0.0 || (before > 0.0) != (after > 0.0) {
            0.0
        } else {
            let (first, second) = (2.0 * widths[k] + widths[k - 1], widths[k] + 2.0 * widths[k - 1]);
            (first + second) / (first / before + second / after)
        });
    }
    slopes.push(end_slope(widths[last], widths[last - 1], secants[last], secants[last - 1]));
    slopes
}

fn end_slope(width: f64, next_width: f64, secant: f64, next_secant: f64) -> f64 {
    let slope = ((2.0 * width + next_width) * secant - width * next_secant) / (width + next_width);
    let sign = |x: f64| {
        if x > 0.0 {
            1
        } else if x < 0.0 {
            -1
        } else {
            0
        }
    };
    if sign(slope) != sign(secant) {
        0.0
    } else if sign(secant) != sign(next_secant) && slope.abs() > 3.0 * secant.abs() {
        3.0 * secant
    } else {
        slope
    }
}

#[cfg(test)]
#[path = "tests/curves.rs"]
mod tests;
