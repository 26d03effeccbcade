//! Numbers as texts: the shortest that reads back the same, and rounded ones.

use crate::math::kernels;

/// The shortest text that reads back as this number: `210`, `2.1e-7`.
pub(in crate::quantity) fn shortest(value: f64) -> String {
    let text = format!("{:?}", value + 0.0);
    text.strip_suffix(".0").map(str::to_owned).unwrap_or(text)
}

/// Rounded to so many significant digits, trailing zeros left out.
pub(in crate::quantity) fn significant(value: f64, digits: usize) -> String {
    let rounded = format!("{value:.*e}", digits.saturating_sub(1));
    shortest(rounded.parse().expect("a number written by the formatter is a number"))
}

/// The two ends of an interval, with two digits of its width and at least two of each end.
pub(in crate::quantity) fn interval(low: f64, high: f64) -> (String, String) {
    let place = |size: f64| kernels::log10(size).floor();
    let width = place((high - low).abs() / 20.0);
    let end = |value: f64| {
        // Digits before and at the last place shown.
        let digits = (place(value.abs()) - width + 1.0).clamp(2.0, 17.0);
        #[allow(clippy::cast_possible_truncation, clippy::cast_sign_loss)] // clamped just above
        let digits = if digits.is_nan() { 2 } else { digits as usize };
        if value == 0.0 { "0".to_owned() } else { significant(value, digits) }
    };
    (end(low), end(high))
}

#[cfg(test)]
mod tests {
    use super::{interval, shortest, significant};

    #[test]
    fn numbers_are_written_as_people_write_them() {
        assert_eq!(shortest(210.0), "210");
        assert_eq!(shortest(2.1e-7), "2.1e-7");
        assert_eq!(shortest(-0.0), "0");
        assert_eq!(significant(1.234_56e-14, 3), "1.23e-14");
        assert_eq!(significant(999.96, 3), "1000");
    }

    #[test]
    fn an_interval_shows_the_digits_that_its_width_supports() {
        assert_eq!(interval(160.654, 259.346), ("161".to_owned(), "259".to_owned()));
        assert_eq!(interval(0.001_234, 1234.0), ("0.0012".to_owned(), "1230".to_owned()));
        assert_eq!(interval(0.0, 0.5), ("0".to_owned(), "0.5".to_owned()));
        assert_eq!(interval(-4.937, 4.937), ("-4.9".to_owned(), "4.9".to_owned()));
    }
}
