//! Walks the schema over the located tree, so that every unknown, missing or misplaced key is reported with its place
//! before the document is filled.

use serde_json::{Map, Value};

use crate::language::diagnostic::{CautionGrade, Diagnostic, Span};
use crate::language::schema;
use crate::language::source::Source;
use crate::language::suggestion::{nearest, one_of, shown};
use crate::language::tree::{Kind, Node, Style};

/// Checks a tree against the plan language. A block named in `skip` is left alone.
pub fn check(tree: &Node, source: &Source, start: Span, skip: Option<&str>) -> Vec<Diagnostic> {
    let schema = schema::shared();
    let mut walk = Walk {
        schema,
        source,
        skip,
        found: Vec::new(),
    };
    walk.value(tree, schema, "the plan", start);
    walk.found
}

struct Walk<'a> {
    schema: &'a Value,
    source: &'a Source,
    skip: Option<&'a str>,
    found: Vec<Diagnostic>,
}

impl<'a> Walk<'a> {
    /// Checks a value against a schema; `name` says what the value is, `named` where its name stands.
    fn value(&mut self, node: &Node, schema: &'a Value, name: &str, named: Span) {
        let (definition, kind) = self.resolve(schema);
        if matches!(node.kind, Kind::Refused) {
            return;
        }
        if let Some(choices) = definition.get("anyOf").and_then(Value::as_array) {
            let fitting = choices
                .iter()
                .find(|choice| fits(node, self.resolve(choice).0));
            match fitting {
                Some(choice) => self.value(node, choice, name, named),
                None if self.said_nothing(node, name, named) => {}
                None => self.wrong_kind(node, name, named, "a number, a list or keys of its own"),
            }
        } else if let Some(properties) = definition.get("properties").and_then(Value::as_object) {
            match &node.kind {
                Kind::Mapping(_) => self.mapping(node, definition, properties, name, named),
                _ if self.said_nothing(node, name, named) => {}
                _ => self.wrong_kind(node, name, named, "keys of its own, indented below it"),
            }
        } else if let Some(item) = definition.get("items") {
            match &node.kind {
                Kind::Sequence(items) if !items.is_empty() => {
                    for each in items {
                        self.value(each, item, &format!("an entry of {name}"), each.span);
                    }
                }
                _ if self.said_nothing(node, name, named) => {}
                _ => self.wrong_kind(node, name, named, "a list, each entry after a `-`"),
            }
        } else {
            self.leaf(node, schema, kind, name, named);
        }
    }

    /// Follows references; the name of the definition tells the kinds of leaves apart.
    fn resolve(&self, schema: &'a Value) -> (&'a Value, &'a str) {
        let Some(name) = schema
            .get("$ref")
            .and_then(Value::as_str)
            .and_then(|reference| reference.strip_prefix("#/$defs/"))
        else {
            return (schema, "");
        };
        match self.schema.get("$defs").and_then(|all| all.get(name)) {
            Some(definition) => (definition, name),
            None => (schema, ""),
        }
    }

    fn mapping(
        &mut self,
        node: &Node,
        definition: &'a Value,
        properties: &'a Map<String, Value>,
        name: &str,
        named: Span,
    ) {
        for entry in node.entries() {
            let key = entry.key.value.as_str();
            match properties.get(key) {
                Some(_) if self.skip == Some(key) => {}
                Some(schema) => {
                    self.value(&entry.value, schema, &format!("`{key}`"), entry.key.span);
                }
                None => self.unknown_key(key, entry.key.span, node.flow, properties, name),
            }
        }
        let required = definition.get("required").and_then(Value::as_array);
        for key in required.into_iter().flatten().filter_map(Value::as_str) {
            if node.get(key).is_none() {
                self.found.push(
                    Diagnostic::error(
                        "missing-key",
                        named,
                        format!("`{key}` is missing in {name}"),
                    )
                    .with_help(described(key, properties)),
                );
            }
        }
    }

    fn unknown_key(
        &mut self,
        key: &str,
        span: Span,
        flow: bool,
        properties: &Map<String, Value>,
        name: &str,
    ) {
        if flow && key.contains([')', '(', '<', '>', '=', '≤', '≥']) {
            self.found.push(
                Diagnostic::error(
                    "needs-quotes",
                    span,
                    "the expression before this place was cut by YAML at a comma or bracket",
                )
                .with_help("put the whole expression in double quotes"),
            );
            return;
        }
        let keys = properties.keys().map(String::as_str);
        let help = if let Some(meant) = nearest(key, keys) {
            format!("did you mean `{meant}`?")
        } else if let Some(block) = self.home_of(key) {
            format!("`{key}` belongs under `{block}`")
        } else {
            let all: Vec<&str> = properties.keys().map(String::as_str).collect();
            format!("the keys here are {}", one_of(&all))
        };
        self.found.push(
            Diagnostic::error(
                "unknown-key",
                span,
                format!("`{}` is not a key of {name}", shown(key)),
            )
            .with_help(help),
        );
    }

    /// The top-level block that has a key of this name.
    fn home_of(&self, key: &str) -> Option<&'a str> {
        let blocks = self.schema.get("properties")?.as_object()?;
        blocks.iter().find_map(|(block, schema)| {
            let (mut definition, _) = self.resolve(schema);
            if let Some(item) = definition.get("items") {
                definition = self.resolve(item).0;
            }
            definition
                .get("properties")?
                .get(key)
                .map(|_| block.as_str())
        })
    }

    fn leaf(&mut self, node: &Node, schema: &Value, kind: &str, name: &str, named: Span) {
        if self.said_nothing(node, name, named) {
            return;
        }
        let Kind::Scalar { text, style } = &node.kind else {
            let due = if kind == "Number" { "a number" } else { "text" };
            if looks_like_text(node) {
                self.found.push(
                    Diagnostic::error(
                        "wrong-kind",
                        node.span,
                        format!(
                            "{name} wants {due}, and YAML reads `{{` as the start of a mapping"
                        ),
                    )
                    .with_help("put the text in double quotes"),
                );
            } else {
                self.wrong_kind(node, name, named, due);
            }
            return;
        };
        if *style == Style::Plain {
            self.comment_cut(node, name, kind == "Prose");
        }
        let words: Vec<&str> = schema
            .get("enum")
            .and_then(Value::as_array)
            .into_iter()
            .flatten()
            .filter_map(Value::as_str)
            .collect();
        let checked_by_reader = matches!(name, "`family`" | "`assize`");
        if !words.is_empty() && !checked_by_reader && !words.contains(&text.as_str()) {
            let help = match nearest(text, words.iter().copied()) {
                Some(meant) => format!("did you mean `{meant}`?"),
                None => format!("write {}", one_of(&words)),
            };
            self.found.push(
                Diagnostic::error(
                    "unknown-word",
                    node.span,
                    format!("{name} cannot be `{}`", shown(text)),
                )
                .with_help(help),
            );
        }
    }

    /// Reports a value that is empty, or a null word; true if it is.
    fn said_nothing(&mut self, node: &Node, name: &str, named: Span) -> bool {
        let (empty, span) = match &node.kind {
            Kind::Scalar {
                text,
                style: Style::Plain,
            } if text.is_empty() => (true, named),
            Kind::Scalar { .. } => (node.given().is_none(), node.span),
            Kind::Sequence(items) => (items.is_empty(), node.span),
            _ => (false, node.span),
        };
        if empty {
            self.found.push(
                Diagnostic::error("empty-value", span, format!("{name} says nothing"))
                    .with_help("give it a value, or leave the key out if it is optional"),
            );
        }
        empty
    }

    fn wrong_kind(&mut self, node: &Node, name: &str, named: Span, due: &str) {
        let is = match node.kind {
            Kind::Mapping(_) => "keys and values",
            Kind::Sequence(_) => "a list",
            _ => "a single text",
        };
        let span = if node.span.line == named.line {
            node.span
        } else {
            named
        };
        self.found.push(
            Diagnostic::error("wrong-kind", span, format!("{name} is {is} here"))
                .with_help(format!("{name} wants {due}")),
        );
    }

    /// YAML takes ` #` in unquoted text for a comment, and the rest of the sentence is gone without a word. In prose a
    /// comment that is set off by two blanks and begins with one (`text  # why`) is meant as one; behind a number, a word
    /// or an expression only `#` with something right behind it (`TP-7 #3`) looks like a part of the value.
    fn comment_cut(&mut self, node: &Node, name: &str, prose: bool) {
        let line = self.source.line(node.end_line);
        let after = line.get(node.end_column - 1..).unwrap_or(&[]);
        let blanks = after.iter().take_while(|c| c.is_whitespace()).count();
        if blanks == 0 || after.get(blanks) != Some(&'#') {
            return;
        }
        let begins_with_blank = after.get(blanks + 1).is_none_or(|c| c.is_whitespace());
        if begins_with_blank && (blanks > 1 || !prose) {
            return;
        }
        let span = Span {
            line: node.end_line,
            column: node.end_column + blanks,
            width: after.len() - blanks,
        };
        self.found.push(
            Diagnostic::caution(
                CautionGrade::Warning,
                "comment-cut",
                span,
                format!("YAML reads this as a comment: it is not part of {name}"),
            )
            .with_help("put the text in double quotes if this belongs to it, or move the comment to a line of its own"),
        );
    }
}

/// `{good, fair}`: keys without values in braces are text that was not quoted.
fn looks_like_text(node: &Node) -> bool {
    let empty = |node: &Node| node.text().is_some_and(str::is_empty);
    node.flow
        && !node.entries().is_empty()
        && node.entries().iter().all(|entry| empty(&entry.value))
}

fn fits(node: &Node, definition: &Value) -> bool {
    match &node.kind {
        Kind::Mapping(_) => definition.get("properties").is_some(),
        Kind::Sequence(_) => definition.get("items").is_some(),
        _ => {
            definition.get("properties").is_none()
                && definition.get("items").is_none()
                && node.given().is_some()
        }
    }
}

/// What a key is for, from the schema.
fn described(key: &str, properties: &Map<String, Value>) -> String {
    let description = properties
        .get(key)
        .and_then(|schema| schema.get("description"))
        .and_then(Value::as_str)
        .unwrap_or_default();
    format!("add `{key}:` — {}", description.replace('\n', " "))
}
