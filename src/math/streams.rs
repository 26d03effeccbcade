//! Random streams: one for each unknown number, keyed by (seed, its name), positioned by the draw's number.
//!
//! Draw n takes the n-th 64-bit word of a ChaCha8 key stream, and no draw is ever rejected, so any block of draws can be
//! made by any thread.

use multiversion::multiversion;
use rand::rngs::ChaCha8Rng;
use rand::{Rng, SeedableRng};
use sha2::{Digest, Sha256};

/// Goes into every key; a change of method changes the number in it.
const LABEL: &[u8] = b"hypobiont stream 1";
const WORD: usize = size_of::<u64>();
/// Draws that are made at a time, on the stack.
const BLOCK: usize = 512;

/// The stream of one unknown number.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Stream {
    key: [u8; 32],
}

impl Stream {
    /// The stream of `name` under `seed`. Key: SHA-256 of a fixed label, the seed (little-endian) and the name.
    #[must_use]
    pub fn new(seed: u64, name: &str) -> Self {
        let key =
            Sha256::new().chain_update(LABEL).chain_update(seed.to_le_bytes()).chain_update(name).finalize();
        Self { key: key.into() }
    }

    /// Fills `out` with the numbers of the draws `first..first + out.len()`, each strictly inside (0, 1): the upper 52
    /// bits of a word, plus one half, divided by 2^52.
    pub fn fill_open_unit(&self, first: u64, out: &mut [f64]) {
        let mut generator = ChaCha8Rng::from_seed(self.key);
        // Positions count words of 32 bits.
        generator.set_word_pos(2 * u128::from(first));
        let mut bytes = [0; BLOCK * WORD];
        for block in out.chunks_mut(BLOCK) {
            let bytes = &mut bytes[..block.len() * WORD];
            generator.fill_bytes(bytes);
            open_unit_numbers(block, bytes.as_chunks().0);
        }
    }
}

#[multiversion(targets = "simd")]
fn open_unit_numbers(out: &mut [f64], words: &[[u8; WORD]]) {
    for (number, &word) in out.iter_mut().zip(words) {
        *number = open_unit(u64::from_le_bytes(word));
    }
}

#[inline(always)]
fn open_unit(word: u64) -> f64 {
    // As the mantissa of a number from 1 to 2; taking 1 - 2^-53 away is exact.
    f64::from_bits((word >> 12) | 1_f64.to_bits()) - (1.0 - f64::EPSILON / 2.0)
}

#[cfg(test)]
mod tests {
    use rand::rngs::ChaCha8Rng;
    use rand::{Rng, SeedableRng};

    use super::{Stream, open_unit};

    fn numbers(stream: &Stream, first: u64, count: usize) -> Vec<f64> {
        let mut out = vec![f64::NAN; count];
        stream.fill_open_unit(first, &mut out);
        out
    }

    #[test]
    fn the_generator_gives_the_published_key_stream() {
        // ChaCha with 8 rounds, key and nonce zero, first block: test case TC1 of the Internet draft
        // draft-strombergson-chacha-test-vectors (2013), from memory.
        let mut bytes = [0; 64];
        ChaCha8Rng::from_seed([0; 32]).fill_bytes(&mut bytes);
        let published = "3e00ef2f895f40d67f5bb8e81f09a5a12c840ec3ce9a7f3b181be188ef711a1e\
                         984ce172b9216f419f445367456d5619314a42a3da86b001387bfdb80e0cfe42";
        let found: String = bytes.iter().map(|byte| format!("{byte:02x}")).collect();
        assert_eq!(found, published);
    }

    #[test]
    fn any_split_into_blocks_gives_the_same_numbers() {
        let stream = Stream::new(7, "diameter");
        let whole = numbers(&stream, 0, 3000);
        for first in [0, 1, 2, 7, 8, 31, 32, 33, 511, 512, 513, 1024, 2047] {
            for count in [0, 1, 2, 3, 8, 33, 512, 513, 900] {
                assert_eq!(
                    numbers(&stream, first as u64, count),
                    whole[first..first + count],
                    "{first}, {count}"
                );
            }
        }
    }

    #[test]
    fn draws_beyond_any_32_bit_count_have_their_own_numbers() {
        let stream = Stream::new(7, "diameter");
        let far = numbers(&stream, (1 << 40) + 3, 8);
        assert_eq!(numbers(&stream, 1 << 40, 11)[3..], far);
        assert_ne!(numbers(&stream, 3, 8), far);
    }

    #[test]
    fn a_stream_stays_what_it_was() {
        // The same numbers came from another implementation of SHA-256 and ChaCha, written apart in another language. A
        // change here changes every result that anyone has reported.
        assert_eq!(
            numbers(&Stream::new(1, "diameter"), 0, 4),
            [
                0.610_619_116_011_628_9,
                0.756_996_002_634_236,
                0.608_357_745_611_049_9,
                0.484_068_022_732_360_05
            ]
        );
    }

    #[test]
    fn seed_and_name_both_make_another_stream() {
        let reference = numbers(&Stream::new(1, "diameter"), 0, 4);
        assert_eq!(numbers(&Stream::new(1, "diameter"), 0, 4), reference);
        assert_ne!(numbers(&Stream::new(2, "diameter"), 0, 4), reference);
        assert_ne!(numbers(&Stream::new(1, "diameters"), 0, 4), reference);
    }

    #[test]
    fn the_ends_of_the_unit_interval_are_never_reached() {
        let step = libm::exp2(-52.0);
        assert_eq!(open_unit(0), 0.5 * step);
        assert_eq!(open_unit(1 << 12), 1.5 * step);
        assert_eq!(open_unit(u64::MAX), 1.0 - 0.5 * step);
        assert!(open_unit(u64::MAX) < 1.0);
        // As the definition says, for any word.
        for word in numbers(&Stream::new(3, "words"), 0, 1000).into_iter().map(f64::to_bits) {
            let word = word.wrapping_mul(0x9e37_79b9_7f4a_7c15);
            assert_eq!(open_unit(word), ((word >> 12) as f64 + 0.5) * step);
        }
    }

    #[test]
    fn numbers_are_uniform_and_streams_unrelated() {
        let n = 200_000;
        let a = numbers(&Stream::new(1, "a"), 0, n);
        let b = numbers(&Stream::new(1, "b"), 0, n);
        // Pearson's chi squared over 100 equal cells: 99 +- 14.07; and correlations within 5 standard errors.
        for stream in [&a, &b] {
            let mut counts = [0.0; 100];
            for &number in stream {
                counts[(number * 100.0) as usize] += 1.0;
            }
            let expected = n as f64 / 100.0;
            let chi2: f64 =
                counts.iter().map(|count| (count - expected) * (count - expected) / expected).sum();
            assert!((chi2 - 99.0).abs() < 5.0 * 14.07, "{chi2}");
        }
        let correlation = |a: &[f64], b: &[f64]| {
            a.iter().zip(b).map(|(a, b)| 12.0 * (a - 0.5) * (b - 0.5)).sum::<f64>() / a.len() as f64
        };
        let standard_error = 1.0 / (n as f64).sqrt();
        assert!(correlation(&a, &b).abs() < 5.0 * standard_error);
        assert!(correlation(&a[1..], &a[..n - 1]).abs() < 5.0 * standard_error);
    }
}
