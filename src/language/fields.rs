//! Single values: from the text of a located scalar to a number, a set, a word. Each function reports what is wrong and
//! then gives nothing; absent and empty values are the shape check's business and are passed over in silence.

use crate::kernel::exact::{Exact, NotANumber};
use crate::language::diagnostic::{Diagnostic, Located, Span};
use crate::language::expression;
use crate::language::plan::SampleSize;
use crate::language::set::SetExpression;
use crate::language::source::Source;
use crate::language::suggestion::{nearest, shown};
use crate::language::tree::Node;

/// The most units, lot sizes and amounts: far beyond any inspection, and small enough to compute with.
pub const MOST_UNITS: u64 = 1_000_000_000;
/// The longest plan number or revision: they name files.
const MOST_IDENTIFIER: usize = 64;

/// Reads values and collects what is wrong with them.
pub struct Fields<'a> {
    /// The text.
    pub source: &'a Source,
    /// What was found so far.
    pub diagnostics: Vec<Diagnostic>,
}

impl Fields<'_> {
    /// Reports an error.
    pub fn error(
        &mut self,
        code: &'static str,
        span: Span,
        message: impl Into<String>,
        help: impl Into<String>,
    ) {
        self.diagnostics
            .push(Diagnostic::error(code, span, message).with_help(help));
    }

    /// A text for people.
    pub fn text(&self, node: Option<&Node>) -> Option<Located<String>> {
        let node = node?;
        node.given()
            .map(|text| Located::new(text.trim_end().to_owned(), node.span))
    }

    /// A set expression.
    pub fn set(&mut self, node: Option<&Node>) -> Option<Located<SetExpression>> {
        let node = node?;
        let text = node.given()?;
        let place = |start, width| node.place(self.source, start, width);
        match expression::parse(text, &place) {
            Ok(set) => Some(Located::new(set, node.span)),
            Err(fault) => {
                let span = node.place(self.source, fault.start, fault.width);
                if let Some(cut) = self.cut_by_yaml(node, &fault) {
                    self.diagnostics.push(cut);
                } else {
                    self.error(fault.code, span, fault.message, fault.help);
                }
                None
            }
        }
    }

    /// In a flow collection `, { } [ ]` end a plain scalar, and an expression that holds one is cut there.
    fn cut_by_yaml(&self, node: &Node, fault: &expression::Fault) -> Option<Diagnostic> {
        if !fault.at_end || !node.flow {
            return None;
        }
        let line = self.source.line(node.end_line);
        let at = (node.end_column - 1..line.len()).find(|at| !line[*at].is_whitespace())?;
        if !matches!(line[at], ',' | '{' | '}' | '[' | ']') {
            return None;
        }
        let span = Span {
            line: node.end_line,
            column: at + 1,
            width: 1,
        };
        Some(
            Diagnostic::error(
                "needs-quotes",
                span,
                format!("YAML ends the expression at this `{}`", line[at]),
            )
            .with_help(
                "within `{ }` put an expression that holds a comma or bracket in double quotes",
            ),
        )
    }

    /// An exact number.
    pub fn number(&mut self, node: Option<&Node>) -> Option<Located<Exact>> {
        let node = node?;
        let text = node.given()?;
        match text.parse::<Exact>() {
            Ok(value) => Some(Located::new(value, node.span)),
            Err(NotANumber::TooLong) => {
                self.error(
                    "number-too-long",
                    node.span,
                    "this number is longer than any plan needs",
                    "a number has at most 400 digits and, unless it is 0, lies between 1e-60 and 1e60",
                );
                None
            }
            Err(NotANumber::Malformed) => {
                let help = number_help(text);
                self.error(
                    "not-a-number",
                    node.span,
                    format!("`{}` is not a number", shown(text)),
                    help,
                );
                None
            }
        }
    }

    /// A number within bounds that the message names.
    fn number_where(
        &mut self,
        node: Option<&Node>,
        name: &str,
        range: &str,
        within: impl Fn(&Exact) -> bool,
    ) -> Option<Located<Exact>> {
        let number = self.number(node)?;
        if within(&number.value) {
            return Some(number);
        }
        let written = node.and_then(Node::text).unwrap_or_default();
        self.error(
            "out-of-range",
            number.span,
            format!("{name} cannot be {}", shown(written)),
            format!("{name} is {range}"),
        );
        None
    }

    /// A probability strictly between 0 and 1: a level or a power.
    pub fn level(&mut self, node: Option<&Node>, name: &str) -> Option<Located<Exact>> {
        self.number_where(node, name, "more than 0 and less than 1", |value| {
            *value > Exact::zero() && *value < Exact::one()
        })
    }

    /// A probability that may be 0 but not 1: an error rate.
    pub fn rate(&mut self, node: Option<&Node>, name: &str) -> Option<Located<Exact>> {
        self.number_where(node, name, "at least 0 and less than 1", |value| {
            !value.is_negative() && *value < Exact::one()
        })
    }

    /// An amount above zero that need not be whole.
    pub fn amount(&mut self, node: Option<&Node>, name: &str) -> Option<Located<Exact>> {
        self.number_where(node, name, "more than 0 and at most 1000000000", |value| {
            *value > Exact::zero() && *value <= Exact::from(MOST_UNITS)
        })
    }

    /// A whole number from 1 to `most`.
    pub fn count(&mut self, node: Option<&Node>, name: &str, most: u64) -> Option<Located<Exact>> {
        let range = format!("a whole number from 1 to {most}");
        let number = self.number_where(node, name, &range, |value| {
            *value >= Exact::one() && *value <= Exact::from(most)
        })?;
        if number.value.is_whole() {
            return Some(number);
        }
        let written = node.and_then(Node::text).unwrap_or_default();
        self.error(
            "not-whole",
            number.span,
            format!("{name} counts units and cannot be {}", shown(written)),
            format!("{name} is {range}; round up, never down"),
        );
        None
    }

    /// A count or, for real-valued opportunity, an amount; or `smallest`.
    pub fn sample_size(
        &mut self,
        node: Option<&Node>,
        name: &str,
        fractional: bool,
    ) -> Option<Located<SampleSize>> {
        let text = node?.given()?;
        if text == "smallest" {
            return Some(Located::new(SampleSize::Smallest, node?.span));
        }
        if text.starts_with(|c: char| c.is_ascii_alphabetic())
            && nearest(text, ["smallest", "least", "minimum"]).is_some()
        {
            self.error(
                "unknown-word",
                node?.span,
                format!("{name} cannot be `{}`", shown(text)),
                "write `smallest`, or a number",
            );
            return None;
        }
        let number = if fractional {
            self.amount(node, name)
        } else {
            self.count(node, name, MOST_UNITS)
        }?;
        Some(Located::new(SampleSize::Given(number.value), number.span))
    }

    /// One of a few words, each with its meaning. Other words are reported by the shape check.
    pub fn word<T: Copy>(&self, node: Option<&Node>, words: &[(&str, T)]) -> Option<Located<T>> {
        let node = node?;
        let text = node.given()?;
        words
            .iter()
            .find(|(word, _)| *word == text)
            .map(|(_, meaning)| Located::new(*meaning, node.span))
    }

    /// A plan number or revision: part of a file name on every system.
    pub fn identifier(&mut self, node: Option<&Node>, name: &str) -> Option<Located<String>> {
        let node = node?;
        let text = node.given()?;
        let allowed = |c: char| c.is_ascii_alphanumeric() || matches!(c, '.' | '_' | '-');
        let wrong =
            if let Some((at, character)) = text.chars().enumerate().find(|(_, c)| !allowed(*c)) {
                Some((
                    node.place(self.source, at, 1),
                    format!("`{}` cannot stand in {name}", character.escape_debug()),
                ))
            } else if text.starts_with(['.', '-']) || text.ends_with('.') {
                Some((
                    node.span,
                    format!("{name} cannot begin with `.` or `-`, nor end with `.`"),
                ))
            } else if text.len() > MOST_IDENTIFIER {
                Some((
                    node.span,
                    format!("{name} is longer than {MOST_IDENTIFIER} characters"),
                ))
            } else if is_device_name(text) {
                Some((
                    node.span,
                    format!("{name} `{text}` is the name of a device on some systems"),
                ))
            } else {
                None
            };
        if let Some((span, message)) = wrong {
            self.error(
                "bad-identifier",
                span,
                message,
                format!("it names the report's files: use letters, digits, `.`, `_` and `-`, at most {MOST_IDENTIFIER}"),
            );
            return None;
        }
        Some(Located::new(text.to_owned(), node.span))
    }

    /// A calendar date, year-month-day.
    pub fn date(&mut self, node: Option<&Node>, name: &str) {
        let Some((node, text)) = node.and_then(|node| Some((node, node.given()?))) else {
            return;
        };
        if !is_date(text) {
            self.error(
                "bad-date",
                node.span,
                format!("{name} `{}` is not a calendar date", shown(text)),
                "write year-month-day, e.g. 2026-11-30",
            );
        }
    }
}

fn number_help(text: &str) -> &'static str {
    let lower = text.to_ascii_lowercase();
    if matches!(
        lower.trim_start_matches(['+', '-']).trim_start_matches('.'),
        "nan" | "inf" | "infinity"
    ) {
        "write a finite decimal number"
    } else if text.contains(',') {
        "write the decimal mark as a point, and no thousands separator"
    } else if text.contains(['(', '*', '/']) {
        "write the value itself, not a formula"
    } else {
        "write a decimal number, e.g. `0.05`, `5 %` or `120 ppm`"
    }
}

/// Names that some file systems give to devices, whatever follows after a point.
fn is_device_name(text: &str) -> bool {
    let stem = text
        .split('.')
        .next()
        .unwrap_or_default()
        .to_ascii_uppercase();
    let numbered = stem.len() == 4
        && (stem.starts_with("COM") || stem.starts_with("LPT"))
        && stem.ends_with(|c: char| c.is_ascii_digit());
    numbered || matches!(stem.as_str(), "CON" | "PRN" | "AUX" | "NUL")
}

fn is_date(text: &str) -> bool {
    let parts: Vec<&str> = text.split('-').collect();
    let [year, month, day] = parts.as_slice() else {
        return false;
    };
    let digits =
        |part: &str, length| part.len() == length && part.bytes().all(|b| b.is_ascii_digit());
    if !digits(year, 4) || !digits(month, 2) || !digits(day, 2) {
        return false;
    }
    let (Ok(year), Ok(month), Ok(day)) = (
        year.parse::<u32>(),
        month.parse::<u32>(),
        day.parse::<u32>(),
    ) else {
        return false;
    };
    let leap = year % 4 == 0 && (year % 100 != 0 || year % 400 == 0);
    let length = match month {
        2 if leap => 29,
        2 => 28,
        4 | 6 | 9 | 11 => 30,
        1..=12 => 31,
        _ => return false,
    };
    (1..=length).contains(&day) && year > 0
}
