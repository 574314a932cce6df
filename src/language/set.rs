//! Set expressions as the author wrote them: no mathematics, only structure and places.

use crate::kernel::exact::Exact;
use crate::language::diagnostic::Located;

/// A set expression.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum SetExpression {
    /// `a <= b < c …`: one or more comparisons that share their middle sides.
    Chain {
        /// The first side.
        first: Located<Side>,
        /// Each relation with the side at its right.
        rest: Vec<(Relation, Located<Side>)>,
    },
    /// All of them.
    And(Vec<SetExpression>),
    /// Any of them.
    Or(Vec<SetExpression>),
}

/// A relation between two sides.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Relation {
    /// `<`
    Less,
    /// `<=` or `≤`
    LessOrEqual,
    /// `>`
    Greater,
    /// `>=` or `≥`
    GreaterOrEqual,
    /// `=`
    Equal,
}

/// One side of a comparison.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Side {
    /// A linear form: a constant plus coefficients times names. A lone number has no terms.
    Linear {
        /// The constant.
        constant: Exact,
        /// Coefficient and name, in order of appearance, names distinct.
        terms: Vec<(Exact, String)>,
    },
    /// `inf` (or `-inf`).
    Infinity {
        /// Whether it is `-inf`.
        negative: bool,
    },
    /// `a / b` with two names.
    Ratio(String, String),
    /// `P(event in X)`.
    Probability(Box<SetExpression>),
    /// `median(X)`.
    Median,
    /// `quantile(X, q)`.
    Quantile(Exact),
}
