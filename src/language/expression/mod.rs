//! Set expressions: `0 <= p <= 1`, `p < 1 % or p > 5 %`, `P(X < 12.0) >= 0.01`.
//!
//! ```text
//! any        := all ("or" all)*
//! all        := one ("and" one)*
//! one        := "(" any ")" | side (relation side)+
//! side       := "inf" | "-inf" | name "/" name | "P(" any ")" | "median(X)" | "quantile(X," number ")" | linear
//! linear     := term (("+" | "-") term)*
//! term       := number | name | number "*" name
//! ```

mod lexer;
mod parser;
mod side;

use crate::language::diagnostic::Span;
use crate::language::set::SetExpression;

pub use parser::MOST_LEVELS;

/// The longest set expression.
const MOST_CHARACTERS: usize = 10_000;

/// What is wrong with an expression, and where in its text: counted in characters from zero.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Fault {
    /// First character.
    pub start: usize,
    /// How many characters.
    pub width: usize,
    /// Code of the diagnostic.
    pub code: &'static str,
    /// What is wrong.
    pub message: String,
    /// What to do.
    pub help: String,
    /// Whether the text ended too early.
    pub at_end: bool,
}

/// Parses a set expression. `place` turns a stretch of its text into a place in the file.
pub fn parse(
    text: &str,
    place: &dyn Fn(usize, usize) -> Span,
) -> Result<SetExpression, Box<Fault>> {
    let length = text.chars().count();
    if length > MOST_CHARACTERS {
        return Err(fault(
            MOST_CHARACTERS,
            1,
            format!(
                "a set expression has at most {MOST_CHARACTERS} characters, and this one has {length}"
            ),
            "write the set with fewer intervals",
        ));
    }
    let tokens = lexer::tokens(text)?;
    parser::Parser::new(text, tokens, place).whole()
}

/// Parses a text whose places do not matter, e.g. in tests and in other programs.
pub fn parse_text(text: &str) -> Result<SetExpression, Box<Fault>> {
    parse(text, &|start, width| Span {
        line: 1,
        column: start + 1,
        width: width.max(1),
    })
}

fn fault(
    start: usize,
    width: usize,
    message: impl Into<String>,
    help: impl Into<String>,
) -> Box<Fault> {
    Box::new(Fault {
        start,
        width: width.max(1),
        code: "set-syntax",
        message: message.into(),
        help: help.into(),
        at_end: false,
    })
}

#[cfg(test)]
mod tests;
