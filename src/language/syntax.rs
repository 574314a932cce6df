//! What the YAML parser stumbled over, in words of the plan language.

use saphyr_parser::ScanError;

use crate::language::diagnostic::{Diagnostic, Span};
use crate::language::locate::MOST_LEVELS;
use crate::language::source::Source;

/// A plan that is nested too deep.
pub fn too_deep(span: Span) -> Diagnostic {
    Diagnostic::error(
        "too-deep",
        span,
        format!("the plan is nested more than {MOST_LEVELS} levels deep"),
    )
    .with_help("no plan needs this; look for brackets that are not closed")
}

/// The parser's error with its place and the most likely cause.
pub fn explain(error: &ScanError, source: &Source) -> Diagnostic {
    let marker = error.marker();
    let span = source.clip(Span {
        line: marker.line().max(1),
        column: marker.col() + 1,
        width: 1,
    });
    let info = error.info();
    if info.contains("recursion limit") {
        return too_deep(span);
    }
    if info.contains("unknown anchor") {
        return Diagnostic::error(
            "alias",
            span,
            "aliases (`*name`) are not part of the plan language",
        )
        .with_help("quote the text if `*` belongs to it");
    }
    if indented_with_tab(source, span.line) {
        return Diagnostic::error("tab-indent", span, format!("this is not YAML: {info}"))
            .with_help("indent with spaces: YAML does not allow tabs there");
    }
    Diagnostic::error("yaml-syntax", span, format!("this is not YAML: {info}"))
        .with_help(likely_cause(source, span))
}

fn indented_with_tab(source: &Source, line: usize) -> bool {
    source
        .line(line)
        .iter()
        .take_while(|c| c.is_whitespace())
        .any(|c| *c == '\t')
}

/// What most likely went wrong where the parser stumbled.
fn likely_cause(source: &Source, span: Span) -> String {
    match source.at(span.line, span.column) {
        Some(sign @ ('>' | '|' | '@' | '`' | '%' | '&' | '*' | '!')) => {
            format!("unquoted text cannot begin with `{sign}`: put it in double quotes")
        }
        Some(':') => "put text that holds a colon in double quotes".to_owned(),
        Some(quote @ ('"' | '\'')) => format!("look for a `{quote}` that is not closed"),
        _ => "look for a missing quote, colon or bracket here or on the line above".to_owned(),
    }
}
