//! The sides of comparisons: numbers, parameters, sums, ratios, probabilities, quantiles.

use crate::kernel::exact::Exact;
use crate::language::diagnostic::Located;
use crate::language::expression::lexer::Kind;
use crate::language::expression::parser::{Parsed, Parser};
use crate::language::set::Side;
use crate::language::suggestion::shown;

impl Parser<'_> {
    pub(super) fn side(&mut self) -> Parsed<Located<Side>> {
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
}
