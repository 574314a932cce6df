//! Words, numbers and signs of a set expression.

use crate::kernel::exact::{Exact, NotANumber};
use crate::language::expression::{Fault, fault};
use crate::language::set::Relation;
use crate::language::suggestion::shown;

/// A word, number or sign.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) enum Kind {
    Number(Exact),
    Name(String),
    Relation(Relation),
    Plus,
    Minus,
    Times,
    Divide,
    Open,
    Close,
    Comma,
    End,
}

/// A token and its characters.
#[derive(Clone, Debug)]
pub(super) struct Token {
    pub kind: Kind,
    pub start: usize,
    pub width: usize,
}

/// Splits a text; the last token is always [`Kind::End`].
pub(super) fn tokens(text: &str) -> Result<Vec<Token>, Box<Fault>> {
    let mut lexer = Lexer {
        characters: text.chars().collect(),
        at: 0,
        found: Vec::new(),
    };
    while lexer.skip_space() {
        lexer.next()?;
    }
    let end = text.trim_end().chars().count();
    lexer.found.push(Token {
        kind: Kind::End,
        start: end,
        width: 1,
    });
    Ok(lexer.found)
}

struct Lexer {
    characters: Vec<char>,
    at: usize,
    found: Vec<Token>,
}

impl Lexer {
    fn peek(&self, ahead: usize) -> Option<char> {
        self.characters.get(self.at + ahead).copied()
    }

    /// False at the end.
    fn skip_space(&mut self) -> bool {
        while self.peek(0).is_some_and(char::is_whitespace) {
            self.at += 1;
        }
        self.at < self.characters.len()
    }

    fn push(&mut self, kind: Kind, width: usize) {
        self.found.push(Token {
            kind,
            start: self.at,
            width,
        });
        self.at += width;
    }

    fn next(&mut self) -> Result<(), Box<Fault>> {
        let Some(first) = self.peek(0) else {
            return Ok(());
        };
        if first.is_ascii_digit()
            || (first == '.' && self.peek(1).is_some_and(|c| c.is_ascii_digit()))
        {
            return self.number();
        }
        if first.is_ascii_alphabetic() || first == '_' {
            self.name();
            return Ok(());
        }
        if let Some(wrong) = self.mistaken_sign(first) {
            return Err(wrong);
        }
        let (kind, width) = match (first, self.peek(1)) {
            ('<', Some('=')) => (Kind::Relation(Relation::LessOrEqual), 2),
            ('>', Some('=')) => (Kind::Relation(Relation::GreaterOrEqual), 2),
            ('<', _) => (Kind::Relation(Relation::Less), 1),
            ('>', _) => (Kind::Relation(Relation::Greater), 1),
            ('≤', _) => (Kind::Relation(Relation::LessOrEqual), 1),
            ('≥', _) => (Kind::Relation(Relation::GreaterOrEqual), 1),
            ('=', _) => (Kind::Relation(Relation::Equal), 1),
            ('+', _) => (Kind::Plus, 1),
            ('-' | '−', _) => (Kind::Minus, 1),
            ('*' | '·' | '×', _) => (Kind::Times, 1),
            ('/', _) => (Kind::Divide, 1),
            ('(', _) => (Kind::Open, 1),
            (')', _) => (Kind::Close, 1),
            (',', _) => (Kind::Comma, 1),
            _ => {
                return Err(fault(
                    self.at,
                    1,
                    format!(
                        "`{}` has no meaning in a set expression",
                        first.escape_debug()
                    ),
                    "write comparisons such as `0 <= p <= 1`, joined with `and` and `or`",
                ));
            }
        };
        self.push(kind, width);
        Ok(())
    }

    /// Signs that other notations use, each with what is meant here.
    fn mistaken_sign(&self, first: char) -> Option<Box<Fault>> {
        let spaced = (1..)
            .find(|ahead| !self.peek(*ahead).is_some_and(char::is_whitespace))
            .unwrap_or(1);
        let (width, instead) = match (first, self.peek(1)) {
            ('=', Some('>')) => (2, "write `>=`"),
            ('=', Some('<')) => (2, "write `<=`"),
            ('=', Some('=')) => (2, "write `=`"),
            ('!', Some('=')) | ('<', Some('>')) => {
                (2, "write two comparisons, e.g. `p < 0.1 or p > 0.1`")
            }
            ('≠', _) => (1, "write two comparisons, e.g. `p < 0.1 or p > 0.1`"),
            ('&', Some('&')) => (2, "write `and`"),
            ('|', Some('|')) => (2, "write `or`"),
            ('&' | '∧' | '∩', _) => (1, "write `and`"),
            ('|' | '∨' | '∪', _) => (1, "write `or`"),
            ('∞', _) => (1, "write `inf`"),
            ('<' | '>', _) if spaced > 1 && self.peek(spaced) == Some('=') => {
                (spaced + 1, "write the sign without a space: `<=` or `>=`")
            }
            ('λ', _) => (1, "write `lambda`"),
            ('μ' | 'µ', _) => (1, "write `mu`"),
            ('σ', _) => (1, "write `sigma`"),
            ('θ', _) => (1, "write `theta`"),
            ('η', _) => (1, "write `eta`"),
            ('β', _) => (1, "write `beta`"),
            ('[' | ']', _) => (1, "write an interval as a chain, e.g. `0.01 <= p <= 0.05`"),
            ('{' | '}', _) => (1, "write single values as `p = 0.01 or p = 0.05`"),
            ('∈', _) => (1, "write an interval as a chain, e.g. `0.01 <= p <= 0.05`"),
            _ => return None,
        };
        let written: String = self.characters.iter().skip(self.at).take(width).collect();
        Some(fault(
            self.at,
            width,
            format!("`{written}` is not a sign of this language"),
            instead,
        ))
    }

    fn name(&mut self) {
        let word: String = self.characters[self.at..]
            .iter()
            .take_while(|c| c.is_ascii_alphanumeric() || **c == '_')
            .collect();
        let width = word.len();
        self.push(Kind::Name(word), width);
    }

    fn number(&mut self) -> Result<(), Box<Fault>> {
        let digits = self.number_width();
        let mut width = digits;
        let mut text: String = self.characters[self.at..self.at + digits].iter().collect();
        let gap = (digits..)
            .find(|ahead| !matches!(self.peek(*ahead), Some(' ' | '\u{a0}' | '\u{202f}')))
            .unwrap_or(digits);
        if self.peek(gap) == Some('%') {
            text.push('%');
            width = gap + 1;
        } else if self.word_at(gap) == "ppm" {
            text.push_str("ppm");
            width = gap + 3;
        }
        self.refuse_after_number(digits, width)?;
        let value: Exact = text.parse().map_err(|problem| match problem {
            NotANumber::TooLong => fault(
                self.at,
                width,
                format!("the number `{}` is too long", shown(&text)),
                "a number has at most 400 digits and, unless it is 0, lies between 1e-60 and 1e60",
            ),
            NotANumber::Malformed => fault(
                self.at,
                width,
                format!("`{}` is not a number", shown(&text)),
                "write a decimal number, e.g. `0.05`, `5 %` or `120 ppm`",
            ),
        })?;
        self.push(Kind::Number(value), width);
        Ok(())
    }

    /// Characters of the number itself: digits, points, an exponent.
    fn number_width(&self) -> usize {
        let plain = |from: usize| {
            (from..)
                .find(|at| {
                    !self
                        .peek(*at)
                        .is_some_and(|c| c.is_ascii_digit() || c == '.')
                })
                .unwrap_or(from)
        };
        let width = plain(0);
        if !matches!(self.peek(width), Some('e' | 'E')) {
            return width;
        }
        let sign = usize::from(matches!(self.peek(width + 1), Some('+' | '-')));
        let exponent = plain(width + 1 + sign);
        if exponent > width + 1 + sign {
            exponent
        } else {
            width
        }
    }

    fn word_at(&self, ahead: usize) -> String {
        self.characters
            .get(self.at + ahead..)
            .unwrap_or(&[])
            .iter()
            .take_while(|c| c.is_alphanumeric() || **c == '_')
            .take(8)
            .collect()
    }

    fn refuse_after_number(&self, digits: usize, width: usize) -> Result<(), Box<Fault>> {
        if self.peek(digits) == Some(',')
            && self.peek(digits + 1).is_some_and(|c| c.is_ascii_digit())
        {
            let written: String = self.characters[self.at..self.at + digits].iter().collect();
            return Err(fault(
                self.at + digits,
                1,
                "a comma cannot stand within a number",
                format!(
                    "write the decimal mark as a point (`{}.…`) and no thousands separator",
                    shown(&written)
                ),
            ));
        }
        let word = self.word_at(width);
        if !word.is_empty() {
            return Err(fault(
                self.at + width,
                word.chars().count(),
                format!("`{word}` stands right behind a number"),
                "write a product with `*`, e.g. `2 * p`; the only units are `%` and `ppm`",
            ));
        }
        Ok(())
    }
}
