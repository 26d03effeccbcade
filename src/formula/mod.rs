//! The formula language: text -> tokens -> tree -> dimensions. A checked formula cannot fail.

pub mod curves;
pub mod functions;
pub mod inference;
pub mod parser;
pub mod tokens;
pub mod tree;

use crate::quantity::Dimension;
use crate::text::Fault;

pub use functions::Function;
pub use inference::Scope;
pub use tree::{Binary, Expr, ExprKind};

/// A formula that was parsed and whose dimension was checked.
#[derive(Clone, Debug, PartialEq)]
pub struct Formula {
    text: String,
    root: Expr,
    dimension: Dimension,
}

impl Formula {
    /// Parses `text` and checks dimensions and names against `scope`.
    ///
    /// # Errors
    /// Every fault of the text, with its bytes.
    pub fn read(text: &str, scope: &dyn Scope) -> Result<Self, Vec<Fault>> {
        let _ = (text, scope);
        Err(Vec::new())
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
    /// The dimension of its value. A formula that is 0 or infinity alone has the dimension `scope` wants elsewhere:
    /// see `fits`.
    #[must_use]
    pub const fn dimension(&self) -> Dimension {
        self.dimension
    }
}
