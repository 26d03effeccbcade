//! The formula language: text -> tokens -> tree -> dimensions. A checked formula cannot fail.
//!
//! The language is described in `docs/formula-language.md`.

pub mod curves;
mod evaluation;
pub mod functions;
pub mod inference;
mod naming;
mod parser;
pub mod powers;
mod printing;
mod tex;
mod tokens;
pub mod tree;

#[cfg(test)]
mod tests;

use std::collections::BTreeSet;

use crate::quantity::Dimension;
use crate::text::Fault;

pub use curves::Curve;
pub use functions::{Function, is_reserved};
pub use inference::Scope;
pub use naming::can_be_name;
pub use powers::{PowerSteps, Steps, power_steps};
pub use tree::{Binary, Expr, ExprKind};

/// How many bytes a formula may have.
pub const LONGEST: usize = 4096;
/// How many levels the tree of a formula may have.
pub const MOST_LEVELS: usize = 256;

/// A formula that was parsed and whose dimension was checked.
#[derive(Clone, Debug, PartialEq)]
pub struct Formula {
    text: String,
    root: Expr,
    dimension: Option<Dimension>,
}

impl Formula {
    /// Parses `text` and checks dimensions and names against `scope`.
    ///
    /// # Errors
    /// Every fault of the text, with its bytes, in the order of the text.
    pub fn read(text: &str, scope: &dyn Scope) -> Result<Self, Vec<Fault>> {
        if text.len() > LONGEST {
            let message = format!("the formula has {} bytes", text.len());
            let expected = format!("at most {LONGEST}; parts of it as relations of their own");
            return Err(vec![Fault::new(0..text.len(), message).expected(expected)]);
        }
        let parsed = parser::parse(text, scope);
        let mut faults = parsed.faults;
        let levels = parsed.root.levels();
        if levels > MOST_LEVELS {
            // Only a long row of operators comes here; deep nesting was refused by the parser.
            let message = format!("the formula has {levels} levels of operators");
            let expected = format!("at most {MOST_LEVELS}; parts of it as relations of their own");
            faults.push(Fault::new(parsed.root.span, message).expected(expected));
            return Err(faults);
        }
        let (dimension, clashes) = inference::infer(&parsed.root, scope, &parsed.broken);
        faults.extend(clashes);
        if faults.is_empty() {
            return Ok(Self { text: text.to_owned(), root: parsed.root, dimension });
        }
        faults.sort_by_key(|fault| (fault.span.start, fault.span.end));
        Err(faults)
    }

    /// The text as written.
    #[must_use]
    pub fn text(&self) -> &str {
        &self.text
    }

    /// The tree.
    #[must_use]
    pub const fn root(&self) -> &Expr {
        &self.root
    }

    /// The dimension of its value; `None` if it fits any, as 0, `infinity` and what is made of them alone do.
    #[must_use]
    pub const fn dimension(&self) -> Option<Dimension> {
        self.dimension
    }

    /// Whether its value can have the dimension `wanted`.
    #[must_use]
    pub fn fits(&self, wanted: Dimension) -> bool {
        self.dimension.is_none_or(|dimension| dimension == wanted)
    }

    /// The quantities, parameters and constants it names, in the order of their first use.
    #[must_use]
    pub fn names(&self) -> Vec<&str> {
        self.first_uses(|expr| if let ExprKind::Name(name) = &expr.kind { Some(name) } else { None })
    }

    /// The curves it calls, in the order of their first use.
    #[must_use]
    pub fn curves(&self) -> Vec<&str> {
        self.first_uses(|expr| if let ExprKind::Curve(name, _) = &expr.kind { Some(name) } else { None })
    }

    fn first_uses(&self, name_of: impl Fn(&Expr) -> Option<&str>) -> Vec<&str> {
        let (mut names, mut seen) = (Vec::new(), BTreeSet::new());
        self.root.visit(&mut |expr| {
            if let Some(name) = name_of(expr)
                && seen.insert(name)
            {
                names.push(name);
            }
        });
        names
    }

    /// Its SI value, by a plain walk over the tree: the meaning of the formula, for tests and for single values.
    ///
    /// # Formula
    /// `min` and `max` let NaN through, `choose` evaluates the branch taken alone, a comparison with NaN does not
    /// hold, and powers with exact exponents take the steps of [`power_steps`].
    pub fn evaluate<'c>(&self, lookup: &dyn Fn(&str) -> f64, curves: &dyn Fn(&str) -> &'c Curve) -> f64 {
        evaluation::Walk { lookup, curves }.value(&self.root)
    }

    /// The formula in TeX's mathematics, for reports. `symbol` gives the symbol of a name in TeX; a name without one
    /// is set upright.
    #[must_use]
    pub fn tex(&self, symbol: &dyn Fn(&str) -> Option<String>) -> String {
        tex::tex(&self.root, symbol)
    }
}
