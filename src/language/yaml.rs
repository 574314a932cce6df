//! The only module that knows serde_yaml, which is no longer developed. It sees a text only after the locator and the
//! shape check have passed it: no anchors, aliases, tags or deep nesting ever reach it.
//!
//! It fills the [`Document`] from the text a second time. Two YAML readers that understand one sealed text differently
//! would let two people approve different plans, so they must agree on every value.

use serde_json::Value;

use crate::language::diagnostic::{Diagnostic, Span};
use crate::language::document::Document;
use crate::language::tree::{Kind, Node};

/// Fills the document from a text.
pub fn document(text: &str, start: Span) -> Result<Box<Document>, Diagnostic> {
    serde_yaml::from_str(text).map(Box::new).map_err(|error| {
        let span = error.location().map_or(start, |place| Span {
            line: place.line().max(1),
            column: place.column().max(1),
            width: 1,
        });
        disagreement(span, &error.to_string())
    })
}

/// Fills the document and holds it against the located tree.
pub fn agrees(text: &str, tree: &Node, start: Span) -> Result<(), Diagnostic> {
    let document = document(text, start)?;
    let second =
        serde_json::to_value(&document).map_err(|error| disagreement(start, &error.to_string()))?;
    match first_difference(tree, &second) {
        None => Ok(()),
        Some(span) => Err(disagreement(span, "the values differ here")),
    }
}

fn disagreement(span: Span, what: &str) -> Diagnostic {
    Diagnostic::error(
        "readers-disagree",
        span,
        format!("two YAML readers understand this text differently: {what}"),
    )
    .with_help("write it more plainly: one key a line, text in double quotes")
}

fn first_difference(node: &Node, second: &Value) -> Option<Span> {
    match (&node.kind, second) {
        (Kind::Scalar { text, .. }, Value::String(other)) => (text != other).then_some(node.span),
        (Kind::Scalar { text, .. }, Value::Number(other)) => {
            let same = text.parse().ok() == other.as_f64();
            (!same).then_some(node.span)
        }
        (Kind::Sequence(items), Value::Array(others)) if items.len() == others.len() => items
            .iter()
            .zip(others)
            .find_map(|(item, other)| first_difference(item, other)),
        (Kind::Mapping(entries), Value::Object(others)) => {
            let given = others.values().filter(|other| !other.is_null()).count();
            if given != entries.len() {
                return Some(node.span);
            }
            entries
                .iter()
                .find_map(|entry| match others.get(&entry.key.value) {
                    Some(other) => first_difference(&entry.value, other),
                    None => Some(entry.key.span),
                })
        }
        _ => Some(node.span),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::language::locate::locate;
    use crate::language::source::Source;

    const PLAN: &str = include_str!("../../tests/plans/good-every-key.yaml");

    /// The place at which a second text is found to differ from the plan.
    fn difference(old: &str, new: &str) -> Option<(usize, usize)> {
        assert!(PLAN.contains(old));
        let (tree, _) = locate(PLAN, &Source::new(PLAN));
        let second = PLAN.replacen(old, new, 1);
        let start = Span {
            line: 1,
            column: 1,
            width: 1,
        };
        let found = agrees(&second, &tree?, start).err()?;
        assert_eq!(found.code, "readers-disagree");
        Some((found.span.line, found.span.column))
    }

    #[test]
    fn every_value_is_compared() {
        assert_eq!(difference("alpha", "alpha"), None);
        assert_eq!(difference("alpha: 5 %", "alpha: 5.0 %"), Some((27, 10)));
        assert_eq!(difference("revision: 009", "revision: 9"), Some((14, 15)));
        assert_eq!(difference("to: 5e-2", "to: 0.06"), Some((32, 30)));
        assert_eq!(difference("  counts: pinholes\n", ""), Some((19, 3)));
        assert_eq!(difference("  - 4711\n", ""), Some((79, 3)));
    }
}
