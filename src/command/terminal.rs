//! Standard output and standard error: width, colour, and readers that go away.

use std::io::{self, ErrorKind, Write};

use anstream::AutoStream;
use anstyle::{AnsiColor, Style};

use crate::language::diagnostic::{Diagnostic, Grade};
use crate::language::render;
use crate::language::source::Source;

use super::status::Status;

/// The width that is assumed where there is no terminal, so that what is written to a file is always the same.
const WIDTH_OF_A_FILE: usize = 100;
/// Lines longer than this are hard to read on any terminal.
const WIDEST: usize = 120;

/// Errors.
pub const RED: Style = AnsiColor::Red.on_default().bold();
/// Cautions.
pub const YELLOW: Style = AnsiColor::Yellow.on_default().bold();
/// What is proved.
pub const GREEN: Style = AnsiColor::Green.on_default().bold();
/// Headings.
pub const BOLD: Style = Style::new().bold();
/// Asides.
pub const DIM: Style = Style::new().dimmed();

/// Text in a style. The streams take the style out again where it is not wanted.
pub fn styled(text: &str, style: Style) -> String {
    format!("{style}{text}{style:#}")
}

/// How many columns standard output has.
pub fn width() -> usize {
    terminal_size::terminal_size().map_or(WIDTH_OF_A_FILE, |(width, _)| {
        usize::from(width.0).clamp(20, WIDEST)
    })
}

/// Writes a result to standard output. A reader that has seen enough (`assize solve … | head`) changes nothing about the
/// result; any other failure is told.
pub fn result(text: &str, status: Status) -> Status {
    let mut out = AutoStream::auto(io::stdout());
    match out.write_all(text.as_bytes()).and_then(|()| out.flush()) {
        Ok(()) => status,
        Err(fault) if fault.kind() == ErrorKind::BrokenPipe => status,
        Err(fault) => {
            complain(&format!("standard output cannot be written: {fault}"));
            status.max(Status::BadInput)
        }
    }
}

/// Says something on standard error. If even that is closed there is nobody left to tell.
pub fn say(text: &str) {
    let mut out = AutoStream::auto(io::stderr());
    let _ = writeln!(out, "{text}");
}

/// An error that belongs to no file.
pub fn complain(message: &str) {
    say(&format!("{}: {message}", styled("error", RED)));
}

/// An error that belongs to a file but to no place in it.
pub fn complain_about(name: &str, message: &str) {
    say(&format!("{name}: {}: {message}", styled("error", RED)));
}

/// A finding about a plan as it stands on a terminal.
pub fn finding(diagnostic: &Diagnostic, file: &str, source: &Source) -> String {
    let plain = render::render(diagnostic, file, source);
    let style = match diagnostic.grade {
        Grade::Error => RED,
        Grade::Caution(_) => YELLOW,
    };
    let mark = format!(
        "{}[{}]",
        render::grade_word(diagnostic.grade),
        diagnostic.code
    );
    let mut out = String::with_capacity(plain.len() + 32);
    for (at, line) in plain.lines().enumerate() {
        let carets = at == 2 && line.trim_matches([' ', '^']).is_empty();
        out.push_str(&match (at, carets) {
            (0, _) => line.replacen(&mark, &styled(&mark, style), 1),
            (_, true) => styled(line, style),
            (_, false) => line.to_owned(),
        });
        out.push('\n');
    }
    out
}

/// Breaks a text into lines of at most `width` columns; a longer word keeps a line of its own.
pub fn wrapped(text: &str, width: usize) -> Vec<String> {
    let mut lines: Vec<String> = vec![String::new()];
    for word in text.split_whitespace() {
        let columns = |text: &str| text.chars().count();
        let line = lines.last_mut();
        match line {
            Some(line) if line.is_empty() => line.push_str(word),
            Some(line) if columns(line) + 1 + columns(word) <= width => {
                line.push(' ');
                line.push_str(word);
            }
            _ => lines.push(word.to_owned()),
        }
    }
    lines
}

/// Text cut to a number of columns, with a mark where something was left out.
pub fn cut(text: &str, columns: usize) -> String {
    if text.chars().count() <= columns {
        return text.to_owned();
    }
    let kept: String = text.chars().take(columns.saturating_sub(1)).collect();
    format!("{kept}…")
}

/// The same for a path, whose end says more than its beginning.
pub fn cut_front(text: &str, columns: usize) -> String {
    let length = text.chars().count();
    if length <= columns {
        return text.to_owned();
    }
    let left_out = length + 1 - columns;
    format!("…{}", text.chars().skip(left_out).collect::<String>())
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::language::diagnostic::Span;

    #[test]
    fn lines_are_broken_between_words() {
        assert_eq!(wrapped("one two three", 7), ["one two", "three"]);
        assert_eq!(wrapped("incomprehensible x", 4), ["incomprehensible", "x"]);
        assert_eq!(wrapped("", 4), [""]);
    }

    #[test]
    fn cut_text_says_that_it_is_cut() {
        assert_eq!(cut("abcdef", 4), "abc…");
        assert_eq!(cut("abcd", 4), "abcd");
        assert_eq!(cut_front("abcdef", 4), "…def");
        assert_eq!(cut_front("abcd", 4), "abcd");
    }

    #[test]
    fn colours_add_nothing_but_colour() {
        let span = Span {
            line: 1,
            column: 1,
            width: 5,
        };
        let error = Diagnostic::error("unknown-key", span, "no such key").with_help("leave it");
        let source = Source::new("alhpa: 1");
        let coloured = finding(&error, "a.yaml", &source);
        assert!(coloured.contains("\u{1b}["), "{coloured:?}");
        let plain = anstream::adapter::strip_str(&coloured).to_string();
        assert_eq!(plain, render::render(&error, "a.yaml", &source));
    }
}
