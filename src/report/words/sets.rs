//! Normalised sets and regions in words. The record holds them as expressions (`0.05 <= p <= 1`, `x <= 3 or x >= 17`);
//! here they are taken apart again so that they can be said aloud.

use crate::kernel::exact::Exact;

/// One end of a piece: the number as it stands in the expression, its value, and whether it belongs to the piece.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct End {
    /// The exact value.
    pub value: Exact,
    /// Whether the end belongs to the piece.
    pub closed: bool,
}

/// A point or an interval of a normalised set.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Piece {
    /// One value.
    Point(Exact),
    /// All values between two ends; a missing end is unbounded.
    Between(Option<End>, Option<End>),
}

/// Takes a normalised set apart. What is not of that form has no pieces, and is then printed as it stands.
pub fn pieces(set: &str) -> Vec<Piece> {
    let parts: Option<Vec<Piece>> = set.split(" or ").map(piece).collect();
    parts.unwrap_or_default()
}

fn piece(text: &str) -> Option<Piece> {
    let words: Vec<&str> = text.split_whitespace().collect();
    match words.as_slice() {
        [_, "=", value] => Some(Piece::Point(number(value)?)),
        [_, relation @ ("<" | "<="), high] => Some(Piece::Between(None, end(high, relation)?)),
        [_, relation @ (">" | ">="), low] => Some(Piece::Between(end(low, relation)?, None)),
        [low, left @ ("<" | "<="), _, right @ ("<" | "<="), high] => {
            Some(Piece::Between(end(low, left)?, end(high, right)?))
        }
        _ => None,
    }
}

/// An end; the outer `None` is for text that is no number, the inner for an infinity.
#[allow(
    clippy::option_option,
    reason = "unreadable and unbounded are different answers"
)]
fn end(text: &str, relation: &str) -> Option<Option<End>> {
    if matches!(text, "inf" | "-inf") {
        return Some(None);
    }
    Some(Some(End {
        value: number(text)?,
        closed: relation.ends_with('='),
    }))
}

fn number(text: &str) -> Option<Exact> {
    match text.split_once('/') {
        Some((numerator, denominator)) => numerator
            .parse::<Exact>()
            .ok()?
            .checked_div(&denominator.parse().ok()?),
        None => text.parse().ok(),
    }
}

/// How the values of a set are said: how a number is printed, and the ends of what is possible at all, which need not be
/// said.
pub struct Speech<'a> {
    /// A value with its unit.
    pub value: &'a dyn Fn(&Exact) -> String,
    /// The least possible value.
    pub least: Option<Exact>,
    /// The greatest possible value.
    pub greatest: Option<Exact>,
    /// Whether only whole numbers are meant, so that `fewer` is said instead of `less`.
    pub counted: bool,
}

impl Speech<'_> {
    /// A set as the end of a sentence that began `… is`: `5 % or more`, `from 1 % to 2 %`.
    pub fn set(&self, set: &str) -> Option<String> {
        let pieces = pieces(set);
        if let Some(hole) = self.hole(&pieces) {
            return Some(format!("not {}", (self.value)(hole)));
        }
        let said: Vec<String> = pieces.iter().map(|piece| self.piece(piece)).collect();
        (!said.is_empty()).then(|| said.join(", or "))
    }

    /// The one value that a set leaves out.
    fn hole<'p>(&self, pieces: &'p [Piece]) -> Option<&'p Exact> {
        let [
            Piece::Between(low, Some(left)),
            Piece::Between(Some(right), high),
        ] = pieces
        else {
            return None;
        };
        let outermost = |end: &Option<End>, most: Option<&Exact>| {
            end.as_ref().is_none_or(|end| self.is_outermost(end, most))
        };
        let whole = outermost(low, self.least.as_ref()) && outermost(high, self.greatest.as_ref());
        (whole && left.value == right.value && !left.closed && !right.closed).then_some(&left.value)
    }

    fn piece(&self, piece: &Piece) -> String {
        let value = self.value;
        match piece {
            Piece::Point(at) => format!("exactly {}", value(at)),
            Piece::Between(low, high) => {
                let low = low
                    .as_ref()
                    .filter(|end| !self.is_outermost(end, self.least.as_ref()));
                let high = high
                    .as_ref()
                    .filter(|end| !self.is_outermost(end, self.greatest.as_ref()));
                let less = if self.counted { "fewer" } else { "less" };
                match (low, high) {
                    (None, None) => "any value possible".to_owned(),
                    (Some(low), None) if low.closed => format!("{} or more", value(&low.value)),
                    (Some(low), None) => format!("more than {}", value(&low.value)),
                    (None, Some(high)) if high.closed && high.value.is_zero() => value(&high.value),
                    (None, Some(high)) if high.closed => {
                        format!("{} or {less}", value(&high.value))
                    }
                    (None, Some(high)) => format!("{less} than {}", value(&high.value)),
                    (Some(low), Some(high)) => between(low, high, value),
                }
            }
        }
    }

    fn is_outermost(&self, end: &End, outermost: Option<&Exact>) -> bool {
        end.closed && outermost == Some(&end.value)
    }
}

fn between(low: &End, high: &End, value: &dyn Fn(&Exact) -> String) -> String {
    let (from, to) = (value(&low.value), value(&high.value));
    match (low.closed, high.closed) {
        (true, true) => format!("from {from} to {to}"),
        (false, false) => format!("more than {from} and less than {to}"),
        (true, false) => format!("{from} or more and less than {to}"),
        (false, true) => format!("more than {from} and at most {to}"),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn said(set: &str) -> String {
        let percent = |value: &Exact| format!("{} %", value * &Exact::from(100u64));
        let speech = Speech {
            value: &percent,
            least: Some(Exact::zero()),
            greatest: Some(Exact::one()),
            counted: false,
        };
        speech.set(set).unwrap()
    }

    #[test]
    fn every_shape_can_be_said() {
        assert_eq!(said("0.05 <= p <= 1"), "5 % or more");
        assert_eq!(said("0 <= p < 0.05"), "less than 5 %");
        assert_eq!(said("p = 0.5"), "exactly 50 %");
        assert_eq!(said("0.01 <= p <= 0.02"), "from 1 % to 2 %");
        assert_eq!(
            said("0 <= p <= 0.01 or 0.02 <= p <= 1"),
            "1 % or less, or 2 % or more"
        );
        assert_eq!(said("0.01 < p < 0.02"), "more than 1 % and less than 2 %");
        assert_eq!(said("0 <= p <= 1"), "any value possible");
        assert_eq!(said("0 <= p < 0.1 or 0.1 < p <= 1"), "not 10 %");
        assert_eq!(said("p > 0.25"), "more than 25 %");
    }

    #[test]
    fn fractions_and_unknown_forms() {
        assert_eq!(
            pieces("11/240 <= p < inf"),
            vec![Piece::Between(
                Some(End {
                    value: Exact::fraction(11, 240).unwrap(),
                    closed: true
                }),
                None
            )]
        );
        assert!(pieces("none").is_empty());
        assert!(pieces("p ~ 3").is_empty());
    }
}
