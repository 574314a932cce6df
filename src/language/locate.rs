//! Runs a safe event parser over the text, refuses what the strict subset forbids, and gives every key and value its
//! line and column. Nothing here recurses: nesting is bounded by [`MOST_LEVELS`] before anything is built.

use std::collections::BTreeMap;

use saphyr_parser::{Event, Parser, ScalarStyle, Span as ParserSpan};

use crate::language::characters::{directive, forbidden_characters};
use crate::language::diagnostic::{Diagnostic, Located, Span};
use crate::language::source::Source;
use crate::language::suggestion::shown;
use crate::language::syntax;
use crate::language::tree::{Entry, Kind, Node, Style};

/// The longest plan text, in bytes.
pub const MOST_BYTES: usize = 1 << 20;
/// The deepest nesting.
pub const MOST_LEVELS: usize = 64;
/// After so many findings nothing more is looked for: a text that wrong is not a plan.
pub const MOST_FINDINGS: usize = 200;

/// Reads a text into a located tree. There is no tree when the text could not be read to its end.
pub fn locate(text: &str, source: &Source) -> (Option<Node>, Vec<Diagnostic>) {
    if text.len() > MOST_BYTES {
        let message = format!(
            "the plan is {} bytes long; a plan has at most {MOST_BYTES}",
            text.len()
        );
        let diagnostic = Diagnostic::error("plan-too-large", FIRST, message).with_help(
            "keep data and attachments in files of their own and name them in `references`",
        );
        return (None, vec![diagnostic]);
    }
    let mut diagnostics = forbidden_characters(source);
    if diagnostics.iter().any(Diagnostic::is_error) {
        return (None, diagnostics);
    }
    diagnostics.extend(directive(source));
    let mut builder = Builder::new(source, diagnostics);
    let tree = builder.build(text);
    (tree, builder.diagnostics)
}

/// The first character of the text.
const FIRST: Span = Span {
    line: 1,
    column: 1,
    width: 1,
};

/// A collection that is being built.
struct Open {
    place: ParserSpan,
    span: Span,
    flow: bool,
    /// Whether it stands where a key should.
    is_key: bool,
    content: Content,
}

enum Content {
    Mapping {
        entries: Vec<Entry>,
        seen: BTreeMap<String, usize>,
        key: Option<Key>,
    },
    Sequence(Vec<Node>),
}

/// A key that waits for its value; none if the key itself was refused.
struct Key(Option<Located<String>>);

struct Builder<'a> {
    source: &'a Source,
    diagnostics: Vec<Diagnostic>,
    errors: usize,
    open: Vec<Open>,
    root: Option<Node>,
}

impl<'a> Builder<'a> {
    fn new(source: &'a Source, diagnostics: Vec<Diagnostic>) -> Self {
        Self {
            source,
            diagnostics,
            errors: 0,
            open: Vec::new(),
            root: None,
        }
    }

    fn build(&mut self, text: &str) -> Option<Node> {
        let mut documents = 0;
        let mut parser = Parser::new_from_str(text);
        while let Some(next) = parser.next_event() {
            let (event, place) = match next {
                Ok(found) => found,
                Err(error) => {
                    self.report(syntax::explain(&error, self.source));
                    return None;
                }
            };
            if matches!(event, Event::DocumentStart(_)) {
                documents += 1;
                if documents > 1 {
                    self.report(
                        Diagnostic::error(
                            "second-document",
                            self.span(place),
                            "a file holds one plan, and here a second document begins",
                        )
                        .with_help("put the second plan into a file of its own"),
                    );
                    return None;
                }
            }
            if !self.take(event, place) || self.errors >= MOST_FINDINGS {
                return None;
            }
        }
        if self.root.is_none() {
            self.report(
                Diagnostic::error("empty-plan", FIRST, "there is no plan in this file")
                    .with_help("`assize draft` writes a starter plan"),
            );
        }
        self.root.take()
    }

    /// Takes one event; false when reading must stop.
    fn take(&mut self, event: Event<'_>, place: ParserSpan) -> bool {
        match event {
            Event::Scalar(text, style, anchor, tag) => {
                let refused = self.refuse_properties(anchor, tag.is_some(), place);
                let node = self.scalar(text.into_owned(), style, place, refused);
                self.finish(node);
            }
            Event::Alias(_) => {
                let span = self.span(place);
                self.report(
                    Diagnostic::error(
                        "alias",
                        span,
                        "aliases (`*name`) are not part of the plan language",
                    )
                    .with_help("write the value out where it is used"),
                );
                self.finish(node(place, span, false, Kind::Refused));
            }
            Event::MappingStart(anchor, tag) => {
                self.refuse_properties(anchor, tag.is_some(), place);
                return self.begin(
                    place,
                    '{',
                    Content::Mapping {
                        entries: Vec::new(),
                        seen: BTreeMap::new(),
                        key: None,
                    },
                );
            }
            Event::SequenceStart(anchor, tag) => {
                self.refuse_properties(anchor, tag.is_some(), place);
                return self.begin(place, '[', Content::Sequence(Vec::new()));
            }
            Event::MappingEnd | Event::SequenceEnd => self.end(),
            _ => {}
        }
        true
    }

    fn begin(&mut self, place: ParserSpan, bracket: char, content: Content) -> bool {
        let span = self.span(place);
        if self.open.len() >= MOST_LEVELS {
            self.report(syntax::too_deep(span));
            return false;
        }
        self.open.push(Open {
            place,
            span,
            flow: self.source.at(span.line, span.column) == Some(bracket),
            is_key: self.at_key(),
            content,
        });
        true
    }

    /// Whether the next node stands where a mapping's key should.
    fn at_key(&self) -> bool {
        matches!(
            self.open.last(),
            Some(Open {
                content: Content::Mapping { key: None, .. },
                ..
            })
        )
    }

    fn end(&mut self) {
        let Some(done) = self.open.pop() else { return };
        let kind = match done.content {
            Content::Mapping { entries, .. } => Kind::Mapping(entries),
            Content::Sequence(items) => Kind::Sequence(items),
        };
        let node = node(done.place, done.span, done.flow, kind);
        if done.is_key {
            self.report(
                Diagnostic::error(
                    "key-not-a-word",
                    done.span,
                    "a key is a word, not a list or a mapping",
                )
                .with_help("quote the text if it is meant as text"),
            );
            self.set_key(Key(None));
        } else {
            self.attach(node);
        }
    }

    fn scalar(&self, text: String, style: ScalarStyle, place: ParserSpan, refused: bool) -> Node {
        let flow = self.open.last().is_some_and(|open| open.flow);
        let style = match style {
            ScalarStyle::Plain => Style::Plain,
            ScalarStyle::SingleQuoted | ScalarStyle::DoubleQuoted => Style::Quoted,
            ScalarStyle::Literal | ScalarStyle::Folded => Style::Block,
        };
        let kind = if refused {
            Kind::Refused
        } else {
            Kind::Scalar { text, style }
        };
        node(place, self.span(place), flow, kind)
    }

    /// A finished scalar or alias is a key or a value.
    fn finish(&mut self, node: Node) {
        if !self.at_key() {
            self.attach(node);
            return;
        }
        let key = match node.kind {
            Kind::Scalar { text, style } => self.check_key(text, style, node.span),
            _ => Key(None),
        };
        self.set_key(key);
    }

    fn check_key(&mut self, text: String, style: Style, span: Span) -> Key {
        if text == "<<" && style == Style::Plain {
            self.report(
                Diagnostic::error(
                    "merge-key",
                    span,
                    "merge keys (`<<`) are not part of the plan language",
                )
                .with_help("write the keys out where they are used"),
            );
            return Key(None);
        }
        if text.is_empty() {
            self.report(
                Diagnostic::error("key-not-a-word", span, "a key is missing before the colon")
                    .with_help("quote the text if the colon belongs to it"),
            );
            return Key(None);
        }
        let first = match self.open.last_mut() {
            Some(Open {
                content: Content::Mapping { seen, .. },
                ..
            }) => match seen.get(&text) {
                Some(line) => Some(*line),
                None => {
                    seen.insert(text.clone(), span.line);
                    None
                }
            },
            _ => None,
        };
        if let Some(line) = first {
            self.report(
                Diagnostic::error(
                    "duplicate-key",
                    span,
                    format!("the key `{}` stands here a second time", shown(&text)),
                )
                .with_help(format!("the first stands in line {line}; keep one of them")),
            );
            return Key(None);
        }
        Key(Some(Located::new(text, span)))
    }

    fn set_key(&mut self, found: Key) {
        if let Some(Open {
            content: Content::Mapping { key, .. },
            ..
        }) = self.open.last_mut()
        {
            *key = Some(found);
        }
    }

    fn attach(&mut self, node: Node) {
        match self.open.last_mut() {
            None => self.root = Some(node),
            Some(open) => match &mut open.content {
                Content::Sequence(items) => items.push(node),
                Content::Mapping { entries, key, .. } => {
                    if let Some(Key(Some(key))) = key.take() {
                        entries.push(Entry { key, value: node });
                    }
                }
            },
        }
    }

    /// Refuses anchors and tags; true if there were any.
    fn refuse_properties(&mut self, anchor: usize, tagged: bool, place: ParserSpan) -> bool {
        let span = self.span(place);
        if anchor != 0 {
            let at = self
                .source
                .search_back(span.line, span.column, '&')
                .unwrap_or(span);
            self.report(
                Diagnostic::error(
                    "anchor",
                    at,
                    "anchors (`&name`) are not part of the plan language",
                )
                .with_help("remove it, or quote the text if `&` belongs to it"),
            );
        }
        if tagged {
            let at = self
                .source
                .search_back(span.line, span.column, '!')
                .unwrap_or(span);
            self.report(
                Diagnostic::error(
                    "tag",
                    at,
                    "tags (`!name`) are not part of the plan language",
                )
                .with_help("remove it, or quote the text if `!` belongs to it"),
            );
        }
        anchor != 0 || tagged
    }

    fn report(&mut self, diagnostic: Diagnostic) {
        self.errors += 1;
        self.diagnostics.push(diagnostic);
    }

    /// The part of a place that lies on its first line.
    fn span(&self, place: ParserSpan) -> Span {
        let start = place.start;
        let width = if place.end.line() == start.line() {
            place.end.col().saturating_sub(start.col())
        } else {
            self.source
                .line(start.line())
                .len()
                .saturating_sub(start.col())
        };
        self.source.clip(Span {
            line: start.line().max(1),
            column: start.col() + 1,
            width: width.max(1),
        })
    }
}

fn node(place: ParserSpan, span: Span, flow: bool, kind: Kind) -> Node {
    Node {
        span,
        end_line: place.end.line().max(1),
        end_column: place.end.col() + 1,
        flow,
        kind,
    }
}
