//! What is kept of the draws: margins of every draw, other values of the first ones.

use crate::math::quantiles;

/// One round of draws of one or more cases, block by block.
#[derive(Debug)]
pub(super) struct Segment {
    /// Draws in it.
    pub(super) draws: usize,
    /// `[block][case][constraint][draw]`, margins in dex.
    pub(super) margins: Vec<f32>,
    /// `[block][case][constraint][word]`, one bit a draw.
    pub(super) holds: Vec<u64>,
}

/// The draws of one case.
#[derive(Debug, Default)]
pub struct Record {
    /// Draws made.
    pub draws: usize,
    /// Of each constraint, its margins in the order of draws.
    margins: Vec<Vec<f32>>,
    /// Of each constraint, one bit a draw, 64 to a word.
    holds: Vec<Vec<u64>>,
    /// Of each kept node, its values in the first draws.
    pub(super) kept: Vec<Vec<f64>>,
}

impl Record {
    /// An empty record for so many constraints and kept nodes.
    #[must_use]
    pub(super) fn new(constraints: usize, kept: usize) -> Self {
        Self {
            draws: 0,
            margins: vec![Vec::new(); constraints],
            holds: vec![Vec::new(); constraints],
            kept: vec![Vec::new(); kept],
        }
    }

    pub(super) fn extend(&mut self, segment: &Segment, case: usize, cases: usize, block: usize) {
        let constraints = self.margins.len();
        let words = block / 64;
        for (constraint, (margins, holds)) in self.margins.iter_mut().zip(&mut self.holds).enumerate() {
            margins.reserve_exact(segment.draws);
            for (number, start) in (0..segment.draws).step_by(block).enumerate() {
                let len = block.min(segment.draws - start);
                let slot = (number * cases + case) * constraints + constraint;
                margins.extend_from_slice(&segment.margins[slot * block..slot * block + len]);
                holds.extend_from_slice(&segment.holds[slot * words..slot * words + len.div_ceil(64)]);
            }
        }
        self.draws += segment.draws;
    }

    /// The bits of a constraint: whether it holds, draw by draw.
    #[must_use]
    pub fn holds(&self, constraint: usize) -> &[u64] {
        &self.holds[constraint]
    }

    /// How many draws of a constraint hold.
    #[must_use]
    pub fn holding(&self, constraint: usize) -> u64 {
        self.holds[constraint].iter().map(|word| u64::from(word.count_ones())).sum()
    }

    /// How many margins of a constraint are not a number.
    #[must_use]
    pub fn not_a_number(&self, constraint: usize) -> usize {
        self.margins[constraint].iter().filter(|margin| margin.is_nan()).count()
    }

    /// Order statistics of a constraint's margins at these ranks (0 is the lowest); not a number ranks lowest.
    #[must_use]
    pub fn ranks<const N: usize>(&self, constraint: usize, ranks: [usize; N]) -> [f64; N] {
        quantiles::order_statistics_f32(&self.margins[constraint], ranks).map(f64::from)
    }
}
