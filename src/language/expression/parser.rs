//! From tokens to a set expression. Recursion goes only through parentheses and `P(…)`, and is bounded.

use crate::language::diagnostic::{Located, Span};
use crate::language::expression::lexer::{Kind, Token};
use crate::language::expression::{Fault, fault};
use crate::language::set::{Relation, SetExpression, Side};
use crate::language::suggestion::shown;

/// The deepest nesting of parentheses.
pub const MOST_LEVELS: usize = 32;
/// The most comparisons in one expression.
const MOST_COMPARISONS: usize = 1000;

pub(super) struct Parser<'a> {
    text: &'a str,
    pub(super) tokens: Vec<Token>,
    pub(super) at: usize,
    level: usize,
    comparisons: usize,
    pub(super) place: &'a dyn Fn(usize, usize) -> Span,
}

pub(super) type Parsed<T> = Result<T, Box<Fault>>;

impl<'a> Parser<'a> {
    pub fn new(text: &'a str, tokens: Vec<Token>, place: &'a dyn Fn(usize, usize) -> Span) -> Self {
        Self {
            text,
            tokens,
            at: 0,
            level: 0,
            comparisons: 0,
            place,
        }
    }

    /// The whole text is one expression.
    pub fn whole(mut self) -> Parsed<SetExpression> {
        let found = self.any()?;
        match self.peek() {
            Kind::End => Ok(found),
            Kind::Close => Err(self.here(
                "this parenthesis closes nothing",
                "remove it, or open one before it",
            )),
            Kind::Name(word)
                if word.eq_ignore_ascii_case("and") || word.eq_ignore_ascii_case("or") =>
            {
                let lower = word.to_ascii_lowercase();
                Err(self.here(
                    format!("`{word}` is not a word of this language"),
                    format!("write `{lower}` in small letters"),
                ))
            }
            Kind::Comma => Err(self.here("a comma cannot join comparisons", "write `and` or `or`")),
            Kind::Name(_) if self.after_number() => Err(self.here(
                format!("`{}` stands right behind a number", self.written()),
                "the only units are `%` and `ppm`; write a product with `*`, and join comparisons with `and` or `or`",
            )),
            _ => Err(self.here(
                format!("`{}` was not expected here", self.written()),
                "join comparisons with `and` or `or`",
            )),
        }
    }

    fn after_number(&self) -> bool {
        let before = self.at.checked_sub(1).and_then(|at| self.tokens.get(at));
        matches!(before.map(|token| &token.kind), Some(Kind::Number(_)))
    }

    fn any(&mut self) -> Parsed<SetExpression> {
        let mut parts = vec![self.all()?];
        while self.word("or") {
            parts.push(self.all()?);
        }
        Ok(single_or(parts, SetExpression::Or))
    }

    fn all(&mut self) -> Parsed<SetExpression> {
        let mut parts = vec![self.one()?];
        while self.word("and") {
            parts.push(self.one()?);
        }
        Ok(single_or(parts, SetExpression::And))
    }

    fn one(&mut self) -> Parsed<SetExpression> {
        if *self.peek() != Kind::Open {
            return self.chain();
        }
        let opened = self.start();
        let inner = self.nested(opened)?;
        if matches!(
            self.peek(),
            Kind::Relation(_) | Kind::Times | Kind::Divide | Kind::Plus | Kind::Minus
        ) {
            return Err(self.here(
                "parentheses go around comparisons, not around numbers",
                "write the side without parentheses, e.g. `p1 - p2 <= 0.1`",
            ));
        }
        Ok(inner)
    }

    /// `( any )`, the parenthesis being the next token; `opened` is where the reader sees it open.
    pub(super) fn nested(&mut self, opened: usize) -> Parsed<SetExpression> {
        self.level += 1;
        if self.level > MOST_LEVELS {
            return Err(self.here(
                format!("parentheses are nested more than {MOST_LEVELS} deep"),
                "write the set as a plain union of comparisons",
            ));
        }
        self.next();
        let inner = self.any()?;
        self.close(opened)?;
        self.level -= 1;
        Ok(inner)
    }

    pub(super) fn close(&mut self, opened: usize) -> Parsed<()> {
        match self.peek() {
            Kind::Close => {
                self.next();
                Ok(())
            }
            Kind::End => {
                let mut wrong = fault(
                    opened,
                    1,
                    "this parenthesis is not closed",
                    "close it with `)`",
                );
                wrong.at_end = true;
                Err(wrong)
            }
            _ => Err(self.here(
                format!("`{}` was not expected here", self.written()),
                "close the parenthesis first",
            )),
        }
    }

    fn chain(&mut self) -> Parsed<SetExpression> {
        let first = self.side()?;
        let mut rest: Vec<(Relation, Located<Side>)> = Vec::new();
        while let Kind::Relation(relation) = *self.peek() {
            self.comparisons += 1;
            if self.comparisons > MOST_COMPARISONS {
                return Err(self.here(
                    format!("an expression has at most {MOST_COMPARISONS} comparisons"),
                    "write the set with fewer intervals",
                ));
            }
            if rest.iter().any(|(before, _)| opposed(*before, relation)) {
                return Err(self.here(
                    "this chain turns round",
                    "let a chain run one way, e.g. `0 <= p <= 1`",
                ));
            }
            self.next();
            rest.push((relation, self.side()?));
        }
        if rest.is_empty() {
            return Err(self.no_comparison());
        }
        Ok(SetExpression::Chain { first, rest })
    }

    fn no_comparison(&self) -> Box<Fault> {
        if let Kind::Name(word) = self.peek()
            && matches!(word.as_str(), "in" | "is" | "not")
        {
            return self.here(
                format!("`{word}` is not a word of this language"),
                "write comparisons, e.g. `0.01 <= p <= 0.05` or `p = 0.01 or p = 0.05`",
            );
        }
        if *self.peek() == Kind::Close {
            return self.here(
                "a comparison is missing before this parenthesis",
                "parentheses go around comparisons; write sides without them, e.g. `p1 - p2 <= 0.1`",
            );
        }
        let mut wrong = self.here(
            "a comparison is missing here",
            "compare with `<`, `<=`, `=`, `>=` or `>`, e.g. `p >= 5 %`",
        );
        wrong.at_end = *self.peek() == Kind::End;
        wrong
    }

    fn word(&mut self, wanted: &str) -> bool {
        let found = matches!(self.peek(), Kind::Name(word) if word == wanted);
        if found {
            self.next();
        }
        found
    }

    pub(super) fn peek(&self) -> &Kind {
        self.peek_at(0)
    }

    pub(super) fn peek_at(&self, ahead: usize) -> &Kind {
        self.tokens
            .get(self.at + ahead)
            .map_or(&Kind::End, |token| &token.kind)
    }

    pub(super) fn start(&self) -> usize {
        self.tokens.get(self.at).map_or(0, |token| token.start)
    }

    pub(super) fn next(&mut self) {
        if self.at + 1 < self.tokens.len() {
            self.at += 1;
        }
    }

    /// The next token as it is written.
    pub(super) fn written(&self) -> String {
        let Some(token) = self.tokens.get(self.at) else {
            return String::new();
        };
        shown(
            &self
                .text
                .chars()
                .skip(token.start)
                .take(token.width)
                .collect::<String>(),
        )
    }

    pub(super) fn here(&self, message: impl Into<String>, help: impl Into<String>) -> Box<Fault> {
        let (start, width) = self
            .tokens
            .get(self.at)
            .map_or((0, 1), |token| (token.start, token.width));
        fault(start, width, message, help)
    }
}

fn single_or(
    mut parts: Vec<SetExpression>,
    join: fn(Vec<SetExpression>) -> SetExpression,
) -> SetExpression {
    match parts.pop() {
        Some(only) if parts.is_empty() => only,
        Some(last) => {
            parts.push(last);
            join(parts)
        }
        None => join(parts),
    }
}

fn opposed(a: Relation, b: Relation) -> bool {
    let rises = |r| matches!(r, Relation::Less | Relation::LessOrEqual);
    let falls = |r| matches!(r, Relation::Greater | Relation::GreaterOrEqual);
    (rises(a) && falls(b)) || (falls(a) && rises(b))
}
