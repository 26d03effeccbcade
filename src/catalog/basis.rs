//! Why something holds, and how far a source can be trusted.

use std::fmt;

/// Why something holds, from strongest to weakest; the derived order has the strongest first.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Basis {
    /// Any chemistry, anywhere.
    Physical,
    /// Any life in water bounded by membranes.
    Aqueous,
    /// Known bone, muscle, wood, walls.
    Material,
    /// Nucleic acids, ribosomes, proteins as known.
    Biochemical,
    /// A regularity or record of known life.
    Empirical,
}

impl Basis {
    /// All, strongest first.
    pub const ALL: [Self; 5] =
        [Self::Physical, Self::Aqueous, Self::Material, Self::Biochemical, Self::Empirical];

    /// The word for it.
    #[must_use]
    pub const fn word(self) -> &'static str {
        match self {
            Self::Physical => "physical",
            Self::Aqueous => "aqueous",
            Self::Material => "material",
            Self::Biochemical => "biochemical",
            Self::Empirical => "empirical",
        }
    }
}

impl fmt::Display for Basis {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.word())
    }
}

/// How a value stands: where it was read, or that it was not.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Standing {
    /// Read in the source or in a page that quotes it.
    Published,
    /// A fact of the trade.
    CommonPractice,
    /// Recalled, not confirmed: must not alone decide a verdict.
    FromMemory,
    /// Contested in the literature.
    Disputed,
}

impl Standing {
    /// All.
    pub const ALL: [Self; 4] = [Self::Published, Self::CommonPractice, Self::FromMemory, Self::Disputed];

    /// The word for it.
    #[must_use]
    pub const fn word(self) -> &'static str {
        match self {
            Self::Published => "published",
            Self::CommonPractice => "common-practice",
            Self::FromMemory => "from-memory",
            Self::Disputed => "disputed",
        }
    }
}

impl fmt::Display for Standing {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.word())
    }
}
