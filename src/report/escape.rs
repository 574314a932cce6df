//! User text is shown as text. Inline text is escaped for Markdown; CommonMark of the author keeps its form but loses
//! raw HTML, pictures and links that could act; a whole file goes into a fence that it cannot close.

use std::fmt::Write;
use std::ops::Range;

use pulldown_cmark::{Event, LinkType, Parser, Tag};

/// Text of one line, with every character that Markdown or HTML could read as markup escaped.
pub fn inline(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for (at, word) in text.split_whitespace().enumerate() {
        if at > 0 {
            out.push(' ');
        }
        let mut rest = word.chars();
        while let Some(character) = rest.next() {
            push_escaped(&mut out, character, rest.clone().next());
        }
    }
    out
}

/// The program's own messages: what stands between backticks is code, all else is text of one line. Text of the plan
/// that a message quotes may hold backticks; it becomes code or text then, and cannot become anything else.
pub fn with_code(message: &str) -> String {
    let parts: Vec<&str> = message.split('`').collect();
    if parts.len().is_multiple_of(2) {
        return inline(message);
    }
    let mut out = String::new();
    for (at, part) in parts.into_iter().enumerate() {
        let words = part.split_whitespace().collect::<Vec<_>>().join(" ");
        if at % 2 == 1 && !words.is_empty() {
            let shown: String = words.chars().map(visible).collect();
            let _ = write!(out, "`{shown}`");
        } else {
            let spaced = |edge: bool| if edge { " " } else { "" };
            out.push_str(spaced(part.starts_with(char::is_whitespace)));
            out.push_str(&inline(part));
            out.push_str(spaced(
                part.ends_with(char::is_whitespace) && !words.is_empty(),
            ));
        }
    }
    out.trim().to_owned()
}

fn push_escaped(out: &mut String, character: char, next: Option<char>) {
    if is_hidden(character) {
        // A character that reverses or hides its neighbours would make the paper say something else than the file.
        let _ = write!(out, "(U+{:04X})", u32::from(character));
        return;
    }
    let opens = match character {
        // Before a space, a digit or a sign these open neither a tag nor an entity.
        '<' => {
            next.is_some_and(|next| next.is_ascii_alphabetic() || matches!(next, '/' | '!' | '?'))
        }
        '&' => next.is_some_and(|next| next.is_ascii_alphanumeric() || next == '#'),
        '\\' | '`' | '*' | '_' | '[' | ']' | '|' | '~' | '#' | '$' => true,
        _ => false,
    };
    if opens {
        out.push('\\');
    }
    out.push(character);
}

/// Control characters, direction overrides and isolates, and characters without width.
fn is_hidden(character: char) -> bool {
    character.is_control()
        || matches!(character,
            '\u{200B}' | '\u{200E}' | '\u{200F}' | '\u{202A}'..='\u{202E}' | '\u{2060}'..='\u{2069}' | '\u{FEFF}')
}

/// CommonMark of the author as a block quotation: nothing in it can end the quotation or reach beyond it. Raw HTML
/// becomes text; pictures and acting links become their source text.
pub fn quotation(text: &str) -> String {
    let quoted = quoted(text);
    let once = disarm(&quoted, &active_ranges(&quoted));
    // What was markup may now be read in another way; if anything still acts, no markup of the text is kept.
    if active_ranges(&once).is_empty() {
        once
    } else {
        let plain: Vec<String> = text.lines().map(inline).collect();
        self::quoted(&plain.join("\n"))
    }
}

fn quoted(text: &str) -> String {
    let mut out = String::with_capacity(text.len() + 64);
    for line in text.trim_end().lines() {
        let line = line.trim_end();
        out.push('>');
        if !line.is_empty() {
            out.push(' ');
            out.extend(line.chars().map(visible));
        }
        out.push('\n');
    }
    out
}

fn visible(character: char) -> char {
    if is_hidden(character) && character != '\t' {
        '\u{FFFD}'
    } else {
        character
    }
}

fn active_ranges(text: &str) -> Vec<Range<usize>> {
    Parser::new(text)
        .into_offset_iter()
        .filter(|(event, _)| is_active(event))
        .map(|(_, range)| range)
        .collect()
}

fn is_active(event: &Event<'_>) -> bool {
    match event {
        Event::Html(_) | Event::InlineHtml(_) | Event::Start(Tag::Image { .. }) => true,
        Event::Start(Tag::Link {
            link_type,
            dest_url,
            ..
        }) => !(is_harmless(dest_url) || *link_type == LinkType::Email),
        _ => false,
    }
}

/// Whether a link leads to a page or a letter, and not to a script or a file.
pub fn is_harmless(destination: &str) -> bool {
    let lower = destination.to_ascii_lowercase();
    ["https://", "http://", "mailto:"]
        .iter()
        .any(|scheme| lower.starts_with(scheme))
}

/// Within the ranges, `<` becomes its entity and brackets are escaped.
fn disarm(text: &str, ranges: &[Range<usize>]) -> String {
    let mut out = String::with_capacity(text.len() + 16);
    let mut inside_until = 0;
    let mut ranges = ranges.iter().peekable();
    let mut escaped = false;
    for (at, character) in text.char_indices() {
        while let Some(range) = ranges.next_if(|range| range.start <= at) {
            inside_until = inside_until.max(range.end);
        }
        if at < inside_until && !escaped {
            match character {
                '<' => {
                    out.push_str("&lt;");
                    continue;
                }
                '[' | ']' | '!' => out.push('\\'),
                _ => {}
            }
        }
        escaped = character == '\\' && !escaped;
        out.push(character);
    }
    out
}

/// A file as a fenced block whose fence is longer than any run of backticks in it.
pub fn fenced(text: &str, language: &str) -> String {
    let fence = "`".repeat(longest_run(text, '`').max(2) + 1);
    let end = if text.ends_with('\n') { "" } else { "\n" };
    format!("{fence}{language}\n{text}{end}{fence}\n")
}

fn longest_run(text: &str, wanted: char) -> usize {
    let mut longest = 0;
    let mut run = 0;
    for character in text.chars() {
        run = if character == wanted { run + 1 } else { 0 };
        longest = longest.max(run);
    }
    longest
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;
    use pulldown_cmark::TagEnd;

    fn text_of(markdown: &str) -> String {
        Parser::new(markdown)
            .filter_map(|event| match event {
                Event::Text(text) => Some(text.to_string()),
                Event::End(TagEnd::Paragraph) => Some("\n".to_owned()),
                _ => None,
            })
            .collect()
    }

    proptest! {
        /// Whatever is typed is read back as the same words, and as nothing but words.
        #[test]
        fn inline_text_survives(text in "[ -~]{0,40}") {
            let escaped = format!("**Name:** {}", inline(&text));
            let words = text.split_whitespace().collect::<Vec<_>>().join(" ");
            let shown = text_of(&escaped);
            let expected = format!("Name: {words}");
            prop_assert_eq!(shown.trim_end(), expected.trim_end());
        }

        #[test]
        fn nothing_acts_in_a_quotation(text in "[\\[\\]()<>!`*_a-c:/\\\\ \n>-]{0,60}") {
            prop_assert!(active_ranges(&quotation(&text)).is_empty());
            prop_assert!(quotation(&text).lines().all(|line| line.starts_with('>')));
        }

        #[test]
        fn fences_hold(text in "[`~a\n ]{0,60}") {
            let fenced = fenced(&text, "yaml");
            let ends = Parser::new(&format!("{fenced}\nafter\n"))
                .filter(|event| matches!(event, Event::Start(Tag::Paragraph)))
                .count();
            prop_assert_eq!(ends, 1);
        }
    }

    #[test]
    fn scripts_and_pictures_become_text() {
        for text in [
            "<script>alert(1)</script>",
            "a <b onclick=x>b</b>",
            "[go](javascript:alert(1))",
            "![pixel](https://example.org/p.png)",
            "[go][x]\n\n[x]: javascript:alert(1)",
            "<javascript:alert(1)>",
            "<!-- hidden",
            // Closed by the mark of the quotation on its next line.
            ":<!a\n<",
        ] {
            assert!(active_ranges(&quotation(text)).is_empty(), "{text}");
        }
        assert!(quotation("[page](https://example.org)").contains("[page](https://example.org)"));
    }

    #[test]
    fn messages_keep_their_code() {
        assert_eq!(
            with_code("Add `power: [{a}]` to *it*."),
            "Add `power: [{a}]` to \\*it\\*."
        );
        assert_eq!(with_code("one ` alone <b>"), "one \\` alone \\<b>");
    }

    #[test]
    fn hidden_characters_are_named() {
        assert_eq!(inline("a\u{202E}b"), "a(U+202E)b");
    }
}
