//! A finding as text for people: place, code, message; the source line with carets; help. Colour is the command's affair.

use std::fmt::Write;

use crate::language::diagnostic::{Diagnostic, Grade};
use crate::language::source::Source;

/// The widest piece of a source line that is shown.
const WIDEST: usize = 96;
/// How much of a long line is shown before the caret.
const BEFORE: usize = 32;
/// What a tab is shown as.
const TAB: &str = "    ";

/// A finding, four lines or fewer, each ended with a line feed. `file` is shown as the caller knows the file.
pub fn render(diagnostic: &Diagnostic, file: &str, source: &Source) -> String {
    let span = source.clip(diagnostic.span);
    let mut out = format!(
        "{}:{}:{}: {}[{}]: {}{}\n",
        harmless(file),
        span.line,
        span.column,
        grade_word(diagnostic.grade),
        diagnostic.code,
        harmless(&diagnostic.message),
        rule(diagnostic),
    );
    let line = source.line(span.line);
    if !line.is_empty() {
        let (shown, carets) = marked(line, span.column - 1, span.width);
        let _ = writeln!(out, "    {shown}\n    {carets}");
    }
    if let Some(help) = &diagnostic.help {
        let _ = writeln!(out, "    help: {}", harmless(help));
    }
    out
}

/// `error` or `caution`.
pub fn grade_word(grade: Grade) -> &'static str {
    match grade {
        Grade::Error => "error",
        Grade::Caution(_) => "caution",
    }
}

fn rule(diagnostic: &Diagnostic) -> String {
    match (diagnostic.rule, diagnostic.grade) {
        (Some(rule), Grade::Caution(grade)) => format!(" ({rule}, grade {})", grade.letter()),
        (None, Grade::Caution(grade)) => format!(" (grade {})", grade.letter()),
        (Some(rule), Grade::Error) => format!(" ({rule})"),
        (None, Grade::Error) => String::new(),
    }
}

/// The part of a line around a mark, and the carets under it.
fn marked(line: &[char], start: usize, width: usize) -> (String, String) {
    let (from, to) = window(line.len(), start);
    let mut shown = String::new();
    let mut carets = String::new();
    if from > 0 {
        shown.push('…');
        carets.push(' ');
    }
    for (at, character) in line[from..to].iter().enumerate() {
        let picture = picture(*character);
        let columns = picture.chars().map(columns).sum();
        let marked = (start..start + width).contains(&(from + at));
        shown.push_str(&picture);
        carets.push_str(&(if marked { "^" } else { " " }).repeat(columns));
    }
    if to < line.len() {
        shown.push('…');
    }
    if start >= to {
        carets.push('^');
    }
    (shown.trim_end().to_owned(), carets.trim_end().to_owned())
}

/// Which characters of a line are shown.
fn window(length: usize, start: usize) -> (usize, usize) {
    if length <= WIDEST {
        return (0, length);
    }
    let from = start.saturating_sub(BEFORE).min(length - WIDEST);
    (from, from + WIDEST)
}

/// A character as it can safely be shown on a terminal.
fn picture(character: char) -> String {
    match character {
        '\t' => TAB.to_owned(),
        c if is_hidden(c) => format!("<U+{:04X}>", u32::from(c)),
        c => c.to_string(),
    }
}

/// Text without anything that could move a terminal's cursor or reorder what is read.
pub fn harmless(text: &str) -> String {
    text.chars()
        .map(|c| {
            if c == '\t' {
                ' '.to_string()
            } else {
                picture(c)
            }
        })
        .collect()
}

/// Control characters, and characters of no width that hide or reorder text.
fn is_hidden(character: char) -> bool {
    character.is_control()
        || matches!(character,
            '\u{200B}'..='\u{200F}' | '\u{2028}'..='\u{202E}' | '\u{2060}'..='\u{2069}' | '\u{FEFF}')
}

/// How many terminal columns a character takes: the blocks that Unicode Annex 11 calls wide take two, combining accents
/// none. Coarse, and only the carets depend on it.
fn columns(character: char) -> usize {
    match u32::from(character) {
        0x0300..=0x036F => 0,
        0x1100..=0x115F
        | 0x2E80..=0xA4CF
        | 0xAC00..=0xD7A3
        | 0xF900..=0xFAFF
        | 0xFE30..=0xFE6F
        | 0xFF00..=0xFF60
        | 0xFFE0..=0xFFE6
        | 0x1F300..=0x1FAFF
        | 0x20000..=0x3FFFD => 2,
        _ => 1,
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::language::diagnostic::{CautionGrade, Span};

    fn rendered(text: &str, line: usize, column: usize, width: usize) -> String {
        let span = Span {
            line,
            column,
            width,
        };
        let diagnostic =
            Diagnostic::error("unknown-key", span, "no such key").with_help("leave it");
        render(&diagnostic, "a.yaml", &Source::new(text))
    }

    #[test]
    fn carets_stand_under_the_fault() {
        assert_eq!(
            rendered("test:\n  alhpa: 0.05\n", 2, 3, 5),
            "a.yaml:2:3: error[unknown-key]: no such key\n      alhpa: 0.05\n      ^^^^^\n    help: leave it\n"
        );
    }

    #[test]
    fn tabs_and_wide_characters_keep_the_carets_in_place() {
        assert_eq!(
            rendered("\ta: 滅菌 x", 1, 8, 1).lines().nth(2),
            Some("                ^")
        );
    }

    #[test]
    fn long_lines_are_cut_around_the_fault() {
        let line = format!("{}!{}", "a".repeat(5000), "b".repeat(5000));
        let text = rendered(&line, 1, 5001, 1);
        let lines: Vec<&str> = text.lines().collect();
        assert!(
            lines.iter().all(|line| line.chars().count() < 110),
            "{text}"
        );
        let at = lines[1].chars().position(|c| c == '!');
        assert_eq!(at, lines[2].chars().position(|c| c == '^'));
    }

    #[test]
    fn nothing_hidden_reaches_the_terminal() {
        let text = rendered("a: \u{1b}[31m\u{202e}x", 1, 4, 1);
        assert!(!text.contains(['\u{1b}', '\u{202e}']), "{text:?}");
        assert!(text.contains("<U+001B>[31m<U+202E>x"), "{text}");
    }

    #[test]
    fn cautions_name_their_rule_and_grade() {
        let span = Span {
            line: 1,
            column: 1,
            width: 1,
        };
        let caution =
            Diagnostic::caution(CautionGrade::Grave, "missing-rationale", span, "no reason")
                .with_rule("L01");
        let text = render(&caution, "a.yaml", &Source::new(""));
        assert_eq!(
            text,
            "a.yaml:1:1: caution[missing-rationale]: no reason (L01, grade E)\n"
        );
    }
}
