//! The plan text with quick access by line and column, both counted in characters from one.

use crate::language::diagnostic::{Diagnostic, Span};

/// The text of a file; an error at the first byte that is not UTF-8.
pub fn decode(bytes: &[u8]) -> Result<&str, Diagnostic> {
    std::str::from_utf8(bytes).map_err(|error| {
        let before = String::from_utf8_lossy(&bytes[..error.valid_up_to()]);
        let line = before.matches('\n').count() + 1;
        let column = before.chars().rev().take_while(|c| *c != '\n').count() + 1;
        let span = Span {
            line,
            column,
            width: 1,
        };
        Diagnostic::error(
            "not-utf-8",
            span,
            "this file is not UTF-8 text from here on",
        )
        .with_help("save it as UTF-8 in your editor")
    })
}

/// The characters of a text and where its lines begin.
pub struct Source {
    characters: Vec<char>,
    line_starts: Vec<usize>,
}

impl Source {
    /// Indexes a text. A line ends at a line feed.
    pub fn new(text: &str) -> Self {
        let characters: Vec<char> = text.chars().collect();
        let mut line_starts = vec![0];
        for (at, character) in characters.iter().enumerate() {
            if *character == '\n' {
                line_starts.push(at + 1);
            }
        }
        Self {
            characters,
            line_starts,
        }
    }

    /// How many lines there are; a final line feed does not begin another one.
    pub fn line_count(&self) -> usize {
        match self.line_starts.last() {
            Some(start) if *start == self.characters.len() && self.line_starts.len() > 1 => {
                self.line_starts.len() - 1
            }
            _ => self.line_starts.len(),
        }
    }

    /// The characters of a line without its line break; empty beyond the end.
    pub fn line(&self, line: usize) -> &[char] {
        let Some(start) = line.checked_sub(1).and_then(|l| self.line_starts.get(l)) else {
            return &[];
        };
        let end = self
            .line_starts
            .get(line)
            .map_or(self.characters.len(), |next| next - 1);
        let mut found = &self.characters[*start..end];
        if let Some((&'\r', before)) = found.split_last() {
            found = before;
        }
        found
    }

    /// The character at a place, if there is one on that line.
    pub fn at(&self, line: usize, column: usize) -> Option<char> {
        column
            .checked_sub(1)
            .and_then(|c| self.line(line).get(c))
            .copied()
    }

    /// A span that lies within the text: lines, columns and width cut to what is there. A caret may stand one past the
    /// end of a line.
    pub fn clip(&self, span: Span) -> Span {
        let line = span.line.clamp(1, self.line_count());
        let length = self.line(line).len();
        let column = if span.line > line {
            length + 1
        } else {
            span.column.clamp(1, length + 1)
        };
        Span {
            line,
            column,
            width: span.width.clamp(1, (length + 1 - column).max(1)),
        }
    }

    /// The nearest `wanted` at or before a place, at most 300 characters back.
    pub fn search_back(&self, line: usize, column: usize, wanted: char) -> Option<Span> {
        let start = self.line_starts.get(line.checked_sub(1)?)?;
        let from = (start + column).min(self.characters.len());
        let found = self.characters[..from]
            .iter()
            .rev()
            .take(300)
            .position(|c| *c == wanted)?;
        let at = from - 1 - found;
        let line = self.line_starts.partition_point(|s| *s <= at);
        Some(Span {
            line,
            column: at - self.line_starts[line - 1] + 1,
            width: 1,
        })
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn lines_and_columns_count_characters() {
        let source = Source::new("a: é滅x\r\nb\n");
        assert_eq!(source.line_count(), 2);
        assert_eq!(source.at(1, 6), Some('x'));
        assert_eq!(source.at(1, 7), None);
        assert_eq!(source.line(2), ['b']);
        assert_eq!(source.line(3), []);
        assert_eq!(Source::new("").line_count(), 1);
    }

    #[test]
    fn spans_are_cut_to_the_text() {
        let source = Source::new("abc\nde\n");
        let clip = |line, column, width| {
            let span = source.clip(Span {
                line,
                column,
                width,
            });
            (span.line, span.column, span.width)
        };
        assert_eq!(clip(1, 2, 9), (1, 2, 2));
        assert_eq!(clip(1, 9, 1), (1, 4, 1));
        assert_eq!(clip(7, 1, 1), (2, 3, 1));
        assert_eq!(clip(0, 0, 0), (1, 1, 1));
    }

    #[test]
    fn bytes_that_are_no_text_are_located() {
        let fault = decode(b"plan: 1\nid: \xff").unwrap_err();
        assert_eq!(
            (fault.code, fault.span.line, fault.span.column),
            ("not-utf-8", 2, 5)
        );
        assert!(decode("é".as_bytes()).is_ok());
    }
}
