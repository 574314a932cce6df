//! The located tree: what the text says, and where.

use crate::language::diagnostic::{Located, Span};
use crate::language::source::Source;

/// A value with its place.
#[derive(Clone, Debug)]
pub struct Node {
    /// Where it begins, and how much of it lies on that line.
    pub span: Span,
    /// The line on which it ends.
    pub end_line: usize,
    /// The column right behind it.
    pub end_column: usize,
    /// Whether it is written within, or as, a flow collection (`{…}`, `[…]`).
    pub flow: bool,
    /// What it is.
    pub kind: Kind,
}

/// What a value is.
#[derive(Clone, Debug)]
pub enum Kind {
    /// Keys and values, in the order of the text; keys are distinct.
    Mapping(Vec<Entry>),
    /// A list.
    Sequence(Vec<Node>),
    /// A text, as YAML reads it, before anyone gives it a type.
    Scalar {
        /// The text.
        text: String,
        /// How it is written.
        style: Style,
    },
    /// Something that was refused and reported; nothing more is said about it.
    Refused,
}

/// How a scalar is written.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Style {
    /// Without quotes.
    Plain,
    /// In single or double quotes.
    Quoted,
    /// After `|` or `>`.
    Block,
}

/// A key with its value.
#[derive(Clone, Debug)]
pub struct Entry {
    /// The key.
    pub key: Located<String>,
    /// The value.
    pub value: Node,
}

impl Node {
    /// The value under a key, if this is a mapping that has it.
    pub fn get(&self, key: &str) -> Option<&Node> {
        self.entry(key).map(|entry| &entry.value)
    }

    /// The key and value under a key, if this is a mapping that has it.
    pub fn entry(&self, key: &str) -> Option<&Entry> {
        self.entries().iter().find(|entry| entry.key.value == key)
    }

    /// Keys and values; none if this is not a mapping.
    pub fn entries(&self) -> &[Entry] {
        match &self.kind {
            Kind::Mapping(entries) => entries,
            _ => &[],
        }
    }

    /// The items; none if this is not a list.
    pub fn items(&self) -> &[Node] {
        match &self.kind {
            Kind::Sequence(items) => items,
            _ => &[],
        }
    }

    /// The text, if this is a scalar.
    pub fn text(&self) -> Option<&str> {
        match &self.kind {
            Kind::Scalar { text, .. } => Some(text),
            _ => None,
        }
    }

    /// Where a stretch of a scalar's text stands in the file: exact where the text stands there as it is written, else
    /// (escapes, folded lines) the place where the scalar begins.
    pub fn place(&self, source: &Source, start: usize, width: usize) -> Span {
        let Kind::Scalar { text, style } = &self.kind else {
            return self.span;
        };
        let characters: Vec<char> = text.chars().collect();
        let start = start.min(characters.len());
        let end = (start + width).min(characters.len());
        let before = &characters[..start];
        let (row, row_start) = match style {
            Style::Block => (
                before.iter().filter(|c| **c == '\n').count(),
                before
                    .iter()
                    .rposition(|c| *c == '\n')
                    .map_or(0, |at| at + 1),
            ),
            Style::Plain | Style::Quoted => (0, 0),
        };
        let margin = self.span.column - 1 + usize::from(*style == Style::Quoted);
        let line = self.span.line + row;
        let written = source.line(line).get(margin..).unwrap_or(&[]);
        if !written.starts_with(&characters[row_start..end]) {
            return self.span;
        }
        source.clip(Span {
            line,
            column: margin + start - row_start + 1,
            width: width.max(1),
        })
    }
}

impl Node {
    /// The text of a scalar that says something: not empty, not a plain null word.
    pub fn given(&self) -> Option<&str> {
        let Kind::Scalar { text, style } = &self.kind else {
            return None;
        };
        let null =
            *style == Style::Plain && matches!(text.as_str(), "~" | "null" | "Null" | "NULL");
        (!null && !text.trim().is_empty()).then_some(text)
    }

    /// The tree as JSON with every scalar as text without a final line break, in the order of the document.
    pub fn to_json(&self) -> serde_json::Value {
        match &self.kind {
            Kind::Mapping(entries) => entries
                .iter()
                .map(|entry| (entry.key.value.clone(), entry.value.to_json()))
                .collect::<serde_json::Map<_, _>>()
                .into(),
            Kind::Sequence(items) => items.iter().map(Node::to_json).collect(),
            Kind::Scalar { text, .. } => text.trim_end().into(),
            Kind::Refused => serde_json::Value::Null,
        }
    }
}
