//! The assessment of one candidate: all that a report sees. Values are SI unless a unit stands beside them.

use std::collections::BTreeMap;
use std::fmt;

pub use crate::catalog::Basis;
use crate::quantity::Unit;

/// The answer for one constraint.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Verdict {
    /// Holds in at least the pass share of draws.
    Pass,
    /// Between.
    Marginal(Marginal),
    /// Holds in at most the fail share of draws.
    Fail,
    /// An input is missing, or it rests on defaults alone, or too many draws are not a number.
    NotAssessed,
    /// Would apply but for the candidate's solvent or heredity.
    NotApplicable,
}

/// Why a constraint is marginal.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Marginal {
    /// The 5-95 % interval spans less than 0.5 dex.
    Near,
    /// It spans more.
    Undecided,
}

/// The answer for the whole.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Overall {
    /// Everything holds together in at least the pass share of draws.
    Pass,
    /// Between.
    Marginal,
    /// Something stronger than empirical fails, or all of it together does.
    Fail,
    /// Nothing could be assessed.
    NotAssessed,
}

/// Median and 5 % and 95 % quantiles of a margin in dex; an infinite or undefined quantile is not finite here.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Interval {
    /// Median.
    pub median: f64,
    /// 5 % quantile.
    pub low: f64,
    /// 95 % quantile.
    pub high: f64,
}

/// One constraint that was assessed.
#[derive(Clone, Debug)]
pub struct Assessed {
    /// Share of draws that hold.
    pub chance: f64,
    /// Its standard error.
    pub chance_se: f64,
    /// Median of what is available, SI.
    pub available: f64,
    /// Median of what is required, SI.
    pub required: f64,
    /// The margin in dex.
    pub margin: Interval,
    /// Share of draws whose margin is not a number.
    pub not_a_number_share: f64,
}

/// One constraint in the assessment.
#[derive(Clone, Debug)]
pub struct ConstraintResult {
    /// Its id.
    pub id: String,
    /// Its title.
    pub title: String,
    /// Its family.
    pub family: String,
    /// Weakest basis in what it was computed from (its own basis when it was not assessed).
    pub basis: Basis,
    /// The verdict.
    pub verdict: Verdict,
    /// The numbers; present for pass, marginal and fail.
    pub assessed: Option<Assessed>,
    /// The unit of available and required.
    pub unit: Unit,
    /// What is available, in words.
    pub available_says: String,
    /// What is required, in words.
    pub required_says: String,
    /// The formula of what is available, as evaluated.
    pub available_formula: String,
    /// The formula of what is required, as evaluated.
    pub required_formula: String,
    /// The same in TeX, in the symbols of the dictionary.
    pub available_tex: String,
    /// The same in TeX, in the symbols of the dictionary.
    pub required_tex: String,
    /// The parameters that this entry alone brings along, in alphabetical order of name.
    pub parameters: Vec<ParameterResult>,
    /// What a failure means.
    pub meaning: String,
    /// Which real organisms or circumstances escape it.
    pub exceptions: Option<String>,
    /// The quantity it speaks of: name, median value (SI), unit.
    pub speaks_of: Option<SpeaksOf>,
    /// Relations evaluated beyond their range.
    pub extrapolated: Vec<Extrapolation>,
    /// One of each group must be stated for it to be assessed.
    pub missing: Vec<Vec<String>>,
    /// Why it was not assessed or does not apply, in words.
    pub reason: Option<String>,
    /// Keys of the sources behind it: of the constraint and of every relation, parameter and default used.
    pub sources: Vec<String>,
    /// Numbers behind it that are from memory or disputed.
    pub doubts: Vec<DoubtfulGround>,
}

/// A number from memory or disputed that a verdict rests on.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct DoubtfulGround {
    /// `entry`, `entry.parameter`, or the quantity whose default it is.
    pub what: String,
    /// `from-memory` or `disputed`.
    pub standing: String,
}

/// A number that one entry brings along, as it was used.
#[derive(Clone, Debug)]
pub struct ParameterResult {
    /// Its name within the entry.
    pub name: String,
    /// Median, SI.
    pub median: f64,
    /// 5 % quantile, SI.
    pub low: f64,
    /// 95 % quantile, SI.
    pub high: f64,
    /// The unit it was written in.
    pub unit: Unit,
}

/// How a quantity or figure was worked out.
#[derive(Clone, Debug)]
pub struct Working {
    /// The formula, as evaluated.
    pub formula: String,
    /// The parameters of the entry, in alphabetical order of name.
    pub parameters: Vec<ParameterResult>,
}

/// The quantity that a constraint speaks of.
#[derive(Clone, Debug)]
pub struct SpeaksOf {
    /// Its name.
    pub quantity: String,
    /// Its median, SI.
    pub value: f64,
    /// Its preferred unit.
    pub unit: Unit,
}

/// A relation (or constraint) evaluated beyond the range it was drawn from.
#[derive(Clone, Debug)]
pub struct Extrapolation {
    /// Id of the relation or constraint.
    pub relation: String,
    /// The quantity that lies outside.
    pub quantity: String,
    /// Share of draws outside.
    pub share: f64,
    /// Median distance outside among those draws, in `unit` (a difference: no offset).
    pub by: f64,
    /// The quantity's unit.
    pub unit: Unit,
}

/// Whether a number is sampled or chosen.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Role {
    /// Fixed by nature.
    Unknown,
    /// Set by the organism.
    Free,
}

/// Where a number came from.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Origin {
    /// The candidate states it.
    Given,
    /// The habitat has it.
    Habitat,
    /// A relation of this id gives it.
    Relation(String),
    /// A figure of this id.
    Figure(String),
    /// The dictionary's default.
    Default,
    /// A parameter that the candidate replaced.
    Adopted,
}

/// One quantity, figure or adopted parameter of the plan.
#[derive(Clone, Debug)]
pub struct QuantityResult {
    /// Its name (`figure` id, or `entry.parameter`).
    pub name: String,
    /// Title or meaning from the dictionary.
    pub about: String,
    /// Sampled or chosen.
    pub role: Role,
    /// Where it came from.
    pub origin: Origin,
    /// The formula behind it, when a relation or a figure gives it.
    pub working: Option<Working>,
    /// How it reads: "normal, standard uncertainty 30 nm, 90 % within 161 to 259 nm".
    pub distribution: String,
    /// Median, SI.
    pub median: f64,
    /// 5 % quantile, SI.
    pub low: f64,
    /// 95 % quantile, SI.
    pub high: f64,
    /// For free numbers: what was chosen, SI.
    pub chosen: Option<f64>,
    /// Its preferred unit, or the unit it was written in.
    pub unit: Unit,
    /// The remark that stood with it.
    pub remark: Option<String>,
}

/// The whole.
#[derive(Clone, Debug)]
pub struct OverallResult {
    /// The verdict.
    pub verdict: Overall,
    /// Share of draws in which everything assessed holds.
    pub chance: Option<f64>,
    /// Its standard error.
    pub chance_se: Option<f64>,
    /// How many constraints were assessed.
    pub assessed: usize,
    /// Of how many that apply.
    pub of: usize,
    /// Basis of the overall verdict.
    pub basis: Option<Basis>,
    /// Whether an empirical constraint fails.
    pub outside_known_life: bool,
    /// Id of the constraint that binds, or of the tightest when the whole passes.
    pub binding: Option<String>,
    /// Share, among the draws in which something does not hold, of those in which the binding one does not;
    /// absent when the whole passes.
    pub binding_share: Option<f64>,
}

/// How the draws were made.
#[derive(Clone, Debug)]
pub struct RunRecord {
    /// The seed.
    pub seed: u64,
    /// Number of draws.
    pub draws: u64,
    /// Whether the answers had settled; absent under a fixed number of draws.
    pub settled: Option<bool>,
    /// The largest number of draws.
    pub cap: u64,
    /// `preferred` or `blend`.
    pub laws: String,
    /// The constraints that were asked for; empty means all.
    pub only: Vec<String>,
    /// Entries that came from overlays.
    pub overlays: Vec<String>,
    /// Share of draws from which a constraint passes.
    pub pass_at: f64,
    /// Share of draws up to which a constraint fails.
    pub fail_at: f64,
    /// SHA-256 of the catalogue, hexadecimal.
    pub catalog_digest: String,
}

/// A source as cited.
#[derive(Clone, Debug)]
pub struct Citation {
    /// Authors, year, title, journal as one line.
    pub text: String,
    /// DOI.
    pub doi: Option<String>,
    /// `published`, `common-practice`, `from-memory` or `disputed`.
    pub standing: String,
}

/// A warning beside the results.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Warning {
    /// A stable word.
    pub code: &'static str,
    /// A sentence.
    pub message: String,
}

/// All that a report sees of one candidate.
#[derive(Clone, Debug)]
pub struct Assessment {
    /// The candidate's name.
    pub name: String,
    /// The file it came from.
    pub file: String,
    /// Number of the document in the file, from 1.
    pub document: usize,
    /// The candidate's attributes, defaults included.
    pub attributes: BTreeMap<String, String>,
    /// The candidate's notes.
    pub notes: Option<String>,
    /// The habitat it refers to.
    pub habitat: Option<String>,
    /// How the draws were made.
    pub run: RunRecord,
    /// The whole.
    pub overall: OverallResult,
    /// In alphabetical order of id.
    pub constraints: Vec<ConstraintResult>,
    /// In alphabetical order of name.
    pub quantities: Vec<QuantityResult>,
    /// Warnings.
    pub warnings: Vec<Warning>,
    /// Sources behind the results, by key.
    pub citations: BTreeMap<String, Citation>,
}

impl fmt::Display for Overall {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Self::Pass => "pass",
            Self::Marginal => "marginal",
            Self::Fail => "fail",
            Self::NotAssessed => "not-assessed",
        })
    }
}

impl fmt::Display for Verdict {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Self::Pass => "pass",
            Self::Marginal(_) => "marginal",
            Self::Fail => "fail",
            Self::NotAssessed => "not-assessed",
            Self::NotApplicable => "not-applicable",
        })
    }
}

impl fmt::Display for Marginal {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Self::Near => "near",
            Self::Undecided => "undecided",
        })
    }
}
