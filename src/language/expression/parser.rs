//! From tokens to a set expression. Recursion goes only through parentheses and `P(…)`, and is bounded.

use crate::kernel::exact::Exact;
use crate::language::diagnostic::{Located, Span};
use crate::language::expression::lexer::{Kind, Token};
use crate::language::expression::{Fault, fault};
use crate::language::locate::shown;
use crate::language::set::{Relation, SetExpression, Side};

/// The deepest nesting of parentheses.
pub const MOST_LEVELS: usize = 32;
/// The most comparisons in one expression.
const MOST_COMPARISONS: usize = 1000;

pub(super) struct Parser<'a> {
    text: &'a str,
    tokens: Vec<Token>,
    at: usize,
    level: usize,
    comparisons: usize,
    place: &'a dyn Fn(usize, usize) -> Span,
}

type Parsed<T> = Result<T, Box<Fault>>;

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
    fn nested(&mut self, opened: usize) -> Parsed<SetExpression> {
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

    fn close(&mut self, opened: usize) -> Parsed<()> {
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

    fn side(&mut self) -> Parsed<Located<Side>> {
        let start = self.start();
        let value = self.side_value()?;
        let end = self.tokens[..self.at]
            .last()
            .map_or(start, |token| token.start + token.width);
        Ok(Located::new(
            value,
            (self.place)(start, end.saturating_sub(start)),
        ))
    }

    fn side_value(&mut self) -> Parsed<Side> {
        if let Kind::Name(name) = self.peek().clone() {
            let after = self.peek_at(1);
            match (name.as_str(), after) {
                ("inf", _) => {
                    self.next();
                    return Ok(Side::Infinity { negative: false });
                }
                ("P" | "median" | "quantile", Kind::Open) => return self.function(&name),
                ("p", Kind::Open) | ("Pr" | "prob" | "Prob", Kind::Open) => {
                    return Err(self.here(
                        format!("`{name}(…)` is not a function of this language"),
                        "write the probability of an event as `P(X < 12.0)`, with a capital P",
                    ));
                }
                (_, Kind::Open) => {
                    return Err(self.here(
                        format!("`{}(…)` is not a function of this language", shown(&name)),
                        "the functions are `P(…)`, `median(X)` and `quantile(X, 0.9)`",
                    ));
                }
                (_, Kind::Divide) => return self.ratio(name),
                _ => {}
            }
        }
        if *self.peek() == Kind::Minus && *self.peek_at(1) == Kind::Name("inf".into()) {
            self.next();
            self.next();
            return Ok(Side::Infinity { negative: true });
        }
        self.linear()
    }

    fn function(&mut self, name: &str) -> Parsed<Side> {
        self.next();
        let opened = self.start();
        if name == "P" {
            return Ok(Side::Probability(Box::new(self.nested(opened)?)));
        }
        self.next();
        self.random_variable(name)?;
        let side = if name == "median" {
            Side::Median
        } else {
            if *self.peek() != Kind::Comma {
                let mut wrong = self.here(
                    "a quantile needs its order here",
                    "write e.g. `quantile(X, 0.9)`",
                );
                wrong.at_end = *self.peek() == Kind::End;
                return Err(wrong);
            }
            self.next();
            self.quantile_order()?
        };
        self.close(opened)?;
        Ok(side)
    }

    fn random_variable(&mut self, function: &str) -> Parsed<()> {
        if *self.peek() == Kind::Name("X".into()) {
            self.next();
            return Ok(());
        }
        Err(self.here(
            format!("`{function}(…)` is about the observation, which is called X"),
            format!("write `{function}(X…)`"),
        ))
    }

    fn quantile_order(&mut self) -> Parsed<Side> {
        let within = |q: &Exact| *q > Exact::zero() && *q < Exact::one();
        match self.peek().clone() {
            Kind::Number(order) if within(&order) => {
                self.next();
                Ok(Side::Quantile(order))
            }
            _ => Err(self.here(
                "the order of a quantile is a number between 0 and 1",
                "write e.g. `quantile(X, 0.9)`",
            )),
        }
    }

    fn ratio(&mut self, above: String) -> Parsed<Side> {
        self.next();
        self.next();
        match self.peek().clone() {
            Kind::Name(below) => {
                self.next();
                Ok(Side::Ratio(above, below))
            }
            _ => Err(self.here(
                "a ratio is between two parameters",
                "write e.g. `lambda1 / lambda2`, or `0.5 * p` for a part of one parameter",
            )),
        }
    }

    fn linear(&mut self) -> Parsed<Side> {
        let mut constant = Exact::zero();
        let mut terms: Vec<(Exact, String)> = Vec::new();
        let mut negative = self.sign();
        loop {
            let (mut coefficient, name) = self.term()?;
            if negative {
                coefficient = -&coefficient;
            }
            match name {
                None => constant = &constant + &coefficient,
                Some(name) => match terms.iter_mut().find(|(_, other)| *other == name) {
                    Some((sum, _)) => *sum = &*sum + &coefficient,
                    None => terms.push((coefficient, name)),
                },
            }
            match self.peek() {
                Kind::Plus => negative = false,
                Kind::Minus => negative = true,
                _ => break,
            }
            self.next();
        }
        terms.retain(|(coefficient, _)| !coefficient.is_zero());
        Ok(Side::Linear { constant, terms })
    }

    /// Takes a leading sign; true for minus.
    fn sign(&mut self) -> bool {
        let negative = *self.peek() == Kind::Minus;
        if negative || *self.peek() == Kind::Plus {
            self.next();
        }
        negative
    }

    fn term(&mut self) -> Parsed<(Exact, Option<String>)> {
        match self.peek().clone() {
            Kind::Number(mut value) => {
                self.next();
                if *self.peek() == Kind::Divide {
                    self.next();
                    value = self.fraction(&value)?;
                }
                if *self.peek() != Kind::Times {
                    return Ok((value, None));
                }
                self.next();
                Ok((value, Some(self.parameter()?)))
            }
            _ => {
                let name = self.parameter()?;
                if matches!(self.peek(), Kind::Times | Kind::Divide) {
                    return Err(self.here(
                        "a term is a number times a parameter",
                        "write the number first, e.g. `2 * p`",
                    ));
                }
                Ok((Exact::one(), Some(name)))
            }
        }
    }

    /// `11/240`: an exact fraction, as lattices print them.
    fn fraction(&mut self, above: &Exact) -> Parsed<Exact> {
        let divided = match self.peek() {
            Kind::Number(below) => above.checked_div(below),
            _ => None,
        };
        let value = divided.ok_or_else(|| {
            self.here(
                "a number is divided by a number other than zero",
                "write e.g. `1/20`",
            )
        })?;
        self.next();
        Ok(value)
    }

    fn parameter(&mut self) -> Parsed<String> {
        match self.peek().clone() {
            Kind::Name(word) if !matches!(word.as_str(), "and" | "or" | "inf" | "in" | "not") => {
                self.next();
                Ok(word)
            }
            Kind::End => {
                let mut wrong = self.here(
                    "a number or a parameter is missing here",
                    "finish the comparison, e.g. `p >= 5 %`",
                );
                wrong.at_end = true;
                Err(wrong)
            }
            Kind::Name(word) if word == "not" => Err(self.here(
                "`not` is not a word of this language",
                "write the opposite comparison",
            )),
            Kind::Name(word) if word.eq_ignore_ascii_case("inf") => Err(self.here(
                "`inf` stands alone on its side",
                "write e.g. `lambda < inf`",
            )),
            Kind::Open => Err(self.here(
                "parentheses go around comparisons, not around numbers",
                "write the side without parentheses",
            )),
            _ => Err(self.here(
                format!(
                    "a number or a parameter is due here, not `{}`",
                    self.written()
                ),
                "write e.g. `0 <= p <= 1`",
            )),
        }
    }

    fn word(&mut self, wanted: &str) -> bool {
        let found = matches!(self.peek(), Kind::Name(word) if word == wanted);
        if found {
            self.next();
        }
        found
    }

    fn peek(&self) -> &Kind {
        self.peek_at(0)
    }

    fn peek_at(&self, ahead: usize) -> &Kind {
        self.tokens
            .get(self.at + ahead)
            .map_or(&Kind::End, |token| &token.kind)
    }

    fn start(&self) -> usize {
        self.tokens.get(self.at).map_or(0, |token| token.start)
    }

    fn next(&mut self) {
        if self.at + 1 < self.tokens.len() {
            self.at += 1;
        }
    }

    /// The next token as it is written.
    fn written(&self) -> String {
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

    fn here(&self, message: impl Into<String>, help: impl Into<String>) -> Box<Fault> {
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
