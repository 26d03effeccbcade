//! Order statistics of large columns, without sorting them.
//!
//! Ranks count from 0 at the lowest value. NaN ranks lowest, below -infinity: a margin that is not a number never passes
//! for room. -0 and 0 are the same value, returned as 0.

use std::array;

use multiversion::multiversion;

/// Columns up to this length are not worth counting.
const SHORT: usize = 1 << 14;

/// Rank of the quantile that leaves `share` of `n` values below it: floor(share n), so that it is the
/// (floor(share n) + 1)-th value from the low end; never beyond the last.
///
/// It is at least x exactly when no more than floor(share n) values are below x. `share n` is a product of doubles.
#[must_use]
pub fn rank_low(n: usize, share: f64) -> usize {
    // A share that is negative or not a number becomes 0.
    ((share * n as f64).floor() as usize).min(n.saturating_sub(1))
}

/// Rank of the quantile that leaves `share` of `n` values above it: the (floor(share n) + 1)-th from the high end.
#[must_use]
pub fn rank_high(n: usize, share: f64) -> usize {
    n.saturating_sub(1) - rank_low(n, share)
}

/// Rank of the median: the middle of an odd number of values, the lower of the two middle ones of an even number, so that
/// a median at or above x is backed by more than half of the values.
#[must_use]
pub fn rank_median(n: usize) -> usize {
    n.saturating_sub(1) / 2
}

/// The values of `values` at `ranks`, in the order of `ranks`.
///
/// Long columns are counted by the upper 16 bits of an order-preserving key, and only the values that share those bits
/// with a wanted rank are gathered and selected among.
///
/// # Panics
/// When a rank is not below the number of values.
#[must_use]
pub fn order_statistics_f32<const N: usize>(values: &[f32], ranks: [usize; N]) -> [f32; N] {
    let (mut keys, ranks) = if values.len() <= SHORT {
        (values.iter().map(|&value| key_f32(value)).collect(), ranks)
    } else {
        gather(values, ranks)
    };
    select(&mut keys, ranks, |&key| key).map(value_f32)
}

/// The values of `values` at `ranks`, in the order of `ranks`; `values` is left in another order.
///
/// # Panics
/// When a rank is not below the number of values.
#[must_use]
pub fn order_statistics_f64<const N: usize>(values: &mut [f64], ranks: [usize; N]) -> [f64; N] {
    // Adding 0 turns -0 into 0.
    select(values, ranks, |&value| key_f64(value)).map(|value| value + 0.0)
}

/// The keys in the buckets that the ranks fall into, and the ranks among those keys alone.
fn gather<const N: usize>(values: &[f32], ranks: [usize; N]) -> (Vec<u32>, [usize; N]) {
    let counts = count(values);
    let wanted = ranks.map(|rank| {
        let mut up_to = 0;
        let found = counts.iter().position(|count| {
            up_to += *count as usize;
            rank < up_to
        });
        found.expect("a rank is below the number of values")
    });
    let ranks = array::from_fn(|i| {
        let below = 0..wanted[i];
        let left_out = below
            .filter(|bucket| !wanted.contains(bucket))
            .map(|bucket| counts[bucket] as usize)
            .sum::<usize>();
        ranks[i] - left_out
    });
    (keys_in(values, &wanted), ranks)
}

/// How many values each bucket holds.
fn count(values: &[f32]) -> Vec<u32> {
    let mut counts = vec![0; 1 << 16];
    for &value in values {
        counts[bucket(key_f32(value))] += 1;
    }
    counts
}

/// The keys in the wanted buckets.
#[multiversion(targets = "simd")]
fn keys_in<const N: usize>(values: &[f32], wanted: &[usize; N]) -> Vec<u32> {
    let is_wanted = |value: &f32| {
        let key = key_f32(*value);
        wanted.iter().fold(false, |found, &wanted| found | (bucket(key) == wanted))
    };
    let mut keys = Vec::new();
    // Few of them hold any, and that is found without branches.
    for some in values.chunks(16) {
        if some.iter().fold(false, |found, value| found | is_wanted(value)) {
            keys.extend(some.iter().filter(|value| is_wanted(value)).map(|&value| key_f32(value)));
        }
    }
    keys
}

/// The elements at `ranks` if `values` were sorted by `key`.
fn select<T: Copy, K: Ord, const N: usize>(
    values: &mut [T],
    ranks: [usize; N],
    key: impl Fn(&T) -> K,
) -> [T; N] {
    let mut ascending: [usize; N] = array::from_fn(|i| i);
    ascending.sort_unstable_by_key(|&i| ranks[i]);
    // Everything before `settled` is in its place.
    let mut settled = 0;
    for &i in &ascending {
        if ranks[i] >= settled {
            values[settled..].select_nth_unstable_by_key(ranks[i] - settled, &key);
            settled = ranks[i] + 1;
        }
    }
    ranks.map(|rank| values[rank])
}

fn bucket(key: u32) -> usize {
    (key >> 16) as usize
}

/// An integer that orders like the number: negative numbers with all bits inverted, others with the sign's bit set.
/// 0 for NaN, which no number has.
#[inline(always)]
fn key_f32(value: f32) -> u32 {
    // Adding 0 turns -0 into 0.
    let bits = (value + 0.0).to_bits();
    let key = if bits >> 31 == 1 { !bits } else { bits | 1 << 31 };
    if value.is_nan() { 0 } else { key }
}

fn value_f32(key: u32) -> f32 {
    match key {
        0 => f32::NAN,
        _ if key >> 31 == 1 => f32::from_bits(key & !(1 << 31)),
        _ => f32::from_bits(!key),
    }
}

/// As [`key_f32`].
#[inline(always)]
fn key_f64(value: f64) -> u64 {
    let bits = (value + 0.0).to_bits();
    let key = if bits >> 63 == 1 { !bits } else { bits | 1 << 63 };
    if value.is_nan() { 0 } else { key }
}

#[cfg(test)]
mod tests {
    use std::cmp::Ordering;

    use super::{
        SHORT, key_f32, key_f64, order_statistics_f32, order_statistics_f64, rank_high, rank_low,
        rank_median, value_f32,
    };
    use crate::math::kernels::normal_quantile_column;
    use crate::math::streams::Stream;

    /// Standard normal numbers.
    fn normals(count: usize) -> Vec<f64> {
        let mut values = vec![0.0; count];
        Stream::new(1, "quantiles").fill_open_unit(0, &mut values);
        normal_quantile_column(&mut values);
        values
    }

    /// The order that is promised, spelled out.
    fn ordering(a: f64, b: f64) -> Ordering {
        match (a.is_nan(), b.is_nan()) {
            (true, true) => Ordering::Equal,
            (true, false) => Ordering::Less,
            (false, true) => Ordering::Greater,
            (false, false) => a.partial_cmp(&b).unwrap(),
        }
    }

    #[track_caller]
    fn check_against_sorting(values: &[f64], ranks: [usize; 5]) {
        let narrow: Vec<f32> = values.iter().map(|&value| value as f32).collect();
        let mut sorted: Vec<f64> = narrow.iter().map(|&value| f64::from(value)).collect();
        sorted.sort_by(|&a, &b| ordering(a, b));
        let expected = ranks.map(|rank| sorted[rank] + 0.0);
        let same = |found: f64, expected: f64| {
            found.to_bits() == expected.to_bits() || found.is_nan() && expected.is_nan()
        };
        let found = order_statistics_f32(&narrow, ranks);
        assert!(
            found.iter().zip(expected).all(|(&found, expected)| same(found.into(), expected)),
            "{found:?}"
        );

        let mut values = values.to_vec();
        let found = order_statistics_f64(&mut values, ranks);
        values.sort_by(|&a, &b| ordering(a, b));
        let expected = ranks.map(|rank| values[rank] + 0.0);
        assert!(found.iter().zip(expected).all(|(&found, expected)| same(found, expected)), "{found:?}");
    }

    #[test]
    fn selection_gives_what_sorting_gives() {
        for n in [1, 2, 3, 10, 1000, SHORT, SHORT + 1, 100_000] {
            let values = normals(n);
            check_against_sorting(&values, [rank_high(n, 0.05), rank_median(n), rank_low(n, 0.05), 0, n - 1]);
        }
    }

    #[test]
    fn special_values_have_their_ranks() {
        let specials =
            [f64::NAN, -f64::NAN, f64::INFINITY, f64::NEG_INFINITY, 0.0, -0.0, 1e-45, -1e-45, 1e-300];
        for n in [9, 20_000] {
            let values: Vec<f64> = specials.iter().copied().cycle().take(n).collect();
            for start in 0..9 {
                let rank = |ninths: usize| (ninths + start) % 9 * n / 9;
                check_against_sorting(&values, [rank(0), rank(1), rank(2), rank(4), rank(8)]);
            }
        }
        let [lowest, next] = order_statistics_f32(&[1.0, f32::NEG_INFINITY, f32::NAN], [0, 1]);
        assert!(lowest.is_nan());
        assert_eq!(next, f32::NEG_INFINITY);
    }

    #[test]
    fn a_column_of_one_value_is_no_trouble() {
        assert_eq!(order_statistics_f32(&vec![-2.5; 50_000], [0, 25_000, 49_999]), [-2.5; 3]);
        assert_eq!(order_statistics_f32(&vec![-0.0; 50_000], [17])[0].to_bits(), 0);
        assert!(order_statistics_f32(&vec![f32::NAN; 50_000], [17])[0].is_nan());
    }

    #[test]
    fn keys_order_like_numbers() {
        let ascending = [f64::NEG_INFINITY, -1e300, -1.0, -1e-320, 0.0, 1e-320, 1.0, 1e300, f64::INFINITY];
        assert!(ascending.windows(2).all(|pair| key_f64(pair[0]) < key_f64(pair[1])));
        assert!(key_f64(f64::NAN) < key_f64(f64::NEG_INFINITY) && key_f64(-f64::NAN) == key_f64(f64::NAN));
        assert_eq!(key_f64(-0.0), key_f64(0.0));
        let ascending = [f32::NEG_INFINITY, -1e30, -1.0, -1e-45, 0.0, 1e-45, 1.0, 1e30, f32::INFINITY];
        assert!(ascending.windows(2).all(|pair| key_f32(pair[0]) < key_f32(pair[1])));
        assert!(key_f32(f32::NAN) < key_f32(f32::NEG_INFINITY) && key_f32(-f32::NAN) == key_f32(f32::NAN));
        assert!(ascending.iter().all(|&value| value_f32(key_f32(value)) == value));
    }

    #[test]
    fn ranks_leave_the_stated_share_outside() {
        // n, floor(n / 20), and the ranks of the 5 % and 95 % quantiles and of the median.
        for (n, low, high, median) in [
            (1, 0, 0, 0),
            (2, 0, 1, 0),
            (19, 0, 18, 9),
            (20, 1, 18, 9),
            (21, 1, 19, 10),
            (65_536, 3276, 62_259, 32_767),
        ] {
            assert_eq!((rank_low(n, 0.05), rank_high(n, 0.05), rank_median(n)), (low, high, median), "{n}");
        }
        assert_eq!((rank_low(0, 0.05), rank_high(0, 0.05), rank_median(0)), (0, 0, 0));
        assert_eq!((rank_low(10, 1.0), rank_low(10, -1.0), rank_low(10, f64::NAN)), (9, 0, 0));
    }

    #[test]
    fn the_low_quantile_holds_exactly_when_enough_values_hold() {
        // Of 20 values, 19 or more at or above 0: the 5 % quantile is; 18: it is not.
        for (below, holds) in [(0, true), (1, true), (2, false)] {
            let values: Vec<f32> = (0..20).map(|i| if i < below { -1.0 } else { 1.0 }).collect();
            assert_eq!(order_statistics_f32(&values, [rank_low(20, 0.05)])[0] >= 0.0, holds, "{below}");
        }
    }

    #[test]
    fn quantiles_of_normal_numbers_are_those_of_the_distribution() {
        // 5 % and 95 % quantiles -+1.6449 (common tables); standard error sqrt(p (1 - p) / n) / density = 0.0047.
        let n = 200_000;
        let [low, median, high] =
            order_statistics_f64(&mut normals(n), [rank_low(n, 0.05), rank_median(n), rank_high(n, 0.05)]);
        assert!((low + 1.6449).abs() < 0.024 && median.abs() < 0.014 && (high - 1.6449).abs() < 0.024);
    }

    #[test]
    #[should_panic(expected = "a rank is below the number of values")]
    fn a_rank_beyond_the_last_is_a_mistake() {
        let _ = order_statistics_f32(&vec![0.0; 20_000], [20_000]);
    }
}
