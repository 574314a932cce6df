//! Runs a safe event parser over the text, refuses what the strict subset forbids, and gives every key and value its
//! line and column. Nothing here recurses: nesting is bounded by [`MOST_LEVELS`] before anything is built.

use std::collections::BTreeMap;

use saphyr_parser::{Event, Parser, ScalarStyle, ScanError, Span as ParserSpan};

use crate::language::diagnostic::{CautionGrade, Diagnostic, Located, Span};
use crate::language::source::Source;
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

/// Control characters and the line breaks on which YAML 1.1 and 1.2 readers differ. Characters that reorder the text on
/// paper draw a caution: what is approved must be what is read.
fn forbidden_characters(source: &Source) -> Vec<Diagnostic> {
    let mut found = Vec::new();
    for line in 1..=source.line_count() {
        for (at, character) in source.line(line).iter().enumerate() {
            let span = Span {
                line,
                column: at + 1,
                width: 1,
            };
            let code_point = format!("U+{:04X}", u32::from(*character));
            match character {
                '\t' => {}
                '\u{202A}'..='\u{202E}' | '\u{2066}'..='\u{2069}' => found.push(
                    Diagnostic::caution(
                        CautionGrade::Warning,
                        "reordering-character",
                        span,
                        format!("{code_point} reorders the text around it when shown"),
                    )
                    .with_help("leave it out, so that everyone reads the same text"),
                ),
                '\u{FEFF}' => found.push(
                    Diagnostic::error(
                        "forbidden-character",
                        span,
                        format!("a byte order mark ({code_point}) is not allowed"),
                    )
                    .with_help("save the file as UTF-8 without a byte order mark"),
                ),
                c if c.is_control() || matches!(c, '\u{2028}' | '\u{2029}') => found.push(
                    Diagnostic::error(
                        "forbidden-character",
                        span,
                        format!("the character {code_point} is not allowed in a plan"),
                    )
                    .with_help("remove it; it may have come with pasted text"),
                ),
                _ => {}
            }
            if found.len() >= MOST_FINDINGS {
                return found;
            }
        }
    }
    found
}

/// A `%` directive can only stand before the document's first line of content.
fn directive(source: &Source) -> Option<Diagnostic> {
    for line in 1..=source.line_count() {
        let content = source.line(line);
        let first = content.iter().find(|c| !c.is_whitespace());
        match first {
            None | Some('#') => {}
            Some('%') if content.first() == Some(&'%') => {
                let span = Span {
                    line,
                    column: 1,
                    width: content.len(),
                };
                return Some(
                    Diagnostic::error(
                        "directive",
                        span,
                        "YAML directives are not part of the plan language",
                    )
                    .with_help("remove this line; a plan is always YAML 1.2"),
                );
            }
            Some(_) => return None,
        }
    }
    None
}

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
                    self.syntax(&error);
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
            self.too_deep(span);
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

    fn too_deep(&mut self, span: Span) {
        self.report(
            Diagnostic::error(
                "too-deep",
                span,
                format!("the plan is nested more than {MOST_LEVELS} levels deep"),
            )
            .with_help("no plan needs this; look for brackets that are not closed"),
        );
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

    fn syntax(&mut self, error: &ScanError) {
        let marker = error.marker();
        let span = self.source.clip(Span {
            line: marker.line().max(1),
            column: marker.col() + 1,
            width: 1,
        });
        let info = error.info();
        if info.contains("recursion limit") {
            self.too_deep(span);
            return;
        }
        if info.contains("unknown anchor") {
            self.report(
                Diagnostic::error(
                    "alias",
                    span,
                    "aliases (`*name`) are not part of the plan language",
                )
                .with_help("quote the text if `*` belongs to it"),
            );
            return;
        }
        let tab = self
            .source
            .line(span.line)
            .iter()
            .take_while(|c| c.is_whitespace())
            .any(|c| *c == '\t');
        let code = if tab { "tab-indent" } else { "yaml-syntax" };
        let help = if tab {
            "indent with spaces: YAML does not allow tabs there".to_owned()
        } else {
            self.syntax_help(span)
        };
        self.report(
            Diagnostic::error(code, span, format!("this is not YAML: {info}")).with_help(help),
        );
    }

    /// What most likely went wrong where the parser stumbled.
    fn syntax_help(&self, span: Span) -> String {
        match self.source.at(span.line, span.column) {
            Some(sign @ ('>' | '|' | '@' | '`' | '%' | '&' | '*' | '!')) => {
                format!("unquoted text cannot begin with `{sign}`: put it in double quotes")
            }
            Some(':') => "put text that holds a colon in double quotes".to_owned(),
            Some(quote @ ('"' | '\'')) => format!("look for a `{quote}` that is not closed"),
            _ => "look for a missing quote, colon or bracket here or on the line above".to_owned(),
        }
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

/// A piece of the plan quoted in a message, cut to a length a terminal can bear.
pub fn shown(text: &str) -> String {
    const MOST: usize = 60;
    if text.chars().count() <= MOST {
        text.to_owned()
    } else {
        let head: String = text.chars().take(MOST).collect();
        format!("{head}…")
    }
}
