//! What is kept of the draws: margins of every draw, other values of the first ones.

use crate::math::quantiles;

/// One block of draws of one case.
#[derive(Debug)]
pub(super) struct Part {
    /// Draws in it.
    pub(super) draws: usize,
    /// `[constraint][draw]`, margins in dex.
    pub(super) margins: Vec<f32>,
    /// `[constraint][word]`, one bit a draw.
    pub(super) holds: Vec<u64>,
    /// `[kept node][draw]`; empty beyond the first draws. At double precision: a rate may span hundreds of decades.
    pub(super) kept: Vec<f64>,
}

impl Part {
    /// A part with room for so many constraints and kept nodes.
    pub(super) fn new(draws: usize, constraints: usize, kept: usize) -> Self {
        Self {
            draws,
            margins: vec![0.0; constraints * draws],
            holds: vec![0; constraints * draws.div_ceil(64)],
            kept: vec![0.0; kept * draws],
        }
    }
}

/// The draws of one case. Only its last block may be short, so that words of bits line up.
#[derive(Debug, Default)]
pub struct Record {
    /// Draws made.
    pub draws: usize,
    parts: Vec<Part>,
}

impl Record {
    pub(super) fn push(&mut self, part: Part) {
        self.draws += part.draws;
        self.parts.push(part);
    }

    /// The bits of a constraint: whether it holds, draw by draw.
    #[must_use]
    pub fn holds(&self, constraint: usize) -> Vec<u64> {
        self.bits(constraint).collect::<Vec<_>>().concat()
    }

    /// How many draws of a constraint hold.
    #[must_use]
    pub fn holding(&self, constraint: usize) -> u64 {
        self.bits(constraint).flatten().map(|word| u64::from(word.count_ones())).sum()
    }

    /// The bits of a constraint, block by block.
    fn bits(&self, constraint: usize) -> impl Iterator<Item = &[u64]> {
        self.parts.iter().map(move |part| {
            let words = part.draws.div_ceil(64);
            &part.holds[constraint * words..][..words]
        })
    }

    /// The margins of a constraint in the order of draws, dex.
    #[must_use]
    pub fn margins(&self, constraint: usize) -> Vec<f32> {
        let parts = self.parts.iter().map(|part| &part.margins[constraint * part.draws..][..part.draws]);
        parts.collect::<Vec<_>>().concat()
    }

    /// The values of a kept node in the first draws.
    #[must_use]
    pub(super) fn kept(&self, position: usize) -> Vec<f64> {
        let keeping = self.parts.iter().filter(|part| !part.kept.is_empty());
        keeping.map(|part| &part.kept[position * part.draws..][..part.draws]).collect::<Vec<_>>().concat()
    }
}

/// How many of these are not a number.
pub(super) fn not_a_number(margins: &[f32]) -> u64 {
    margins.iter().filter(|margin| margin.is_nan()).count() as u64
}

/// Order statistics at these ranks (0 is the lowest); not a number ranks lowest.
pub(super) fn ranks<const N: usize>(values: &[f32], ranks: [usize; N]) -> [f64; N] {
    quantiles::order_statistics_f32(values, ranks).map(f64::from)
}
