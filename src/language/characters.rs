//! What can be refused before any YAML is read: characters that no plan may hold, and directives.

use crate::language::diagnostic::{CautionGrade, Diagnostic, Span};
use crate::language::locate::MOST_FINDINGS;
use crate::language::source::Source;

/// Control characters and the line breaks on which YAML 1.1 and 1.2 readers differ. Characters that reorder the text on
/// paper draw a caution: what is approved must be what is read.
pub fn forbidden_characters(source: &Source) -> Vec<Diagnostic> {
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
pub fn directive(source: &Source) -> Option<Diagnostic> {
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
