//! Every way of writing a quantity, read into a distribution or a free range.

use std::path::Path;

use super::dimension::Dimension;
use super::distribution::{Bounds, Distribution, FreeRange};
use super::unit::Unit;
use crate::text::{Fault, Node, Place, Problems};

/// What a value must be.
#[derive(Clone, Debug)]
pub struct Wanted<'a> {
    /// The name of the quantity or parameter, for messages.
    pub name: &'a str,
    /// Its dimension.
    pub dimension: Dimension,
    /// Where it may lie.
    pub bounds: Bounds,
    /// A unit to show in messages (`expected a length such as 210 nm`).
    pub unit: &'a Unit,
    /// Whether `{ anywhere_in: [a, b] }` is allowed.
    pub may_be_free: bool,
    /// The folder that sample files are named from; `None` where samples are not allowed.
    pub folder: Option<&'a Path>,
}

/// What was written, understood.
#[derive(Clone, Debug)]
pub struct Reading {
    /// How the number is known.
    pub value: Value,
    /// The unit it was written in, for echoing.
    pub unit: Unit,
    /// The remark that stood with it.
    pub about: Option<String>,
    /// Share of the stated distribution that the bounds cut off (0 when none).
    pub cut: f64,
    /// Where it stands.
    pub place: Place,
}

/// How a number is known.
#[derive(Clone, Debug, PartialEq)]
pub enum Value {
    /// Fixed by nature: sampled (or exact).
    Unknown(Distribution),
    /// Chosen by the organism within a range.
    Free(FreeRange),
}

/// Reads a value of any form of the candidate format. Problems are added, each with its place.
pub fn read(node: &Node, wanted: &Wanted<'_>, problems: &mut Problems) -> Option<Reading> {
    let _ = (node, wanted, problems);
    None
}

/// Reads one text such as `210 ± 30 nm`, without wanting any dimension: distribution (SI), unit.
///
/// # Errors
/// A fault that points into `text`.
pub fn read_text(text: &str) -> Result<(Distribution, Unit), Fault> {
    let _ = text;
    Ok((Distribution::Exact(0.0), Unit::read("")?))
}
