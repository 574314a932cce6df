//! Looking for words in what a plan declares. A phrase counts only where its sentence does not deny it: "the lot is not
//! sampled again" allows no second sample.

use serde_json::Value;

use crate::language::diagnostic::Span;
use crate::language::plan::Plan;

/// The text of a declared field, if it says anything.
pub fn declared<'a>(plan: &'a Plan, block: &str, key: &str) -> Option<&'a str> {
    said(plan.declared.get(block)?.get(key)?)
}

/// The text of a declared block that is one text.
pub fn block_text<'a>(plan: &'a Plan, block: &str) -> Option<&'a str> {
    said(plan.declared.get(block)?)
}

fn said(value: &Value) -> Option<&str> {
    value.as_str().filter(|text| !text.trim().is_empty())
}

/// All texts of a declared block, lists and nested keys included.
pub fn texts<'a>(plan: &'a Plan, block: &str) -> Vec<&'a str> {
    let mut found = Vec::new();
    if let Some(value) = plan.declared.get(block) {
        collect(value, &mut found);
    }
    found
}

fn collect<'a>(value: &'a Value, found: &mut Vec<&'a str>) {
    match value {
        Value::String(text) => found.push(text),
        Value::Array(items) => items.iter().for_each(|item| collect(item, found)),
        Value::Object(entries) => entries.values().for_each(|entry| collect(entry, found)),
        _ => {}
    }
}

/// Where a top-level block stands.
pub fn block(plan: &Plan, name: &str) -> Option<Span> {
    plan.blocks
        .iter()
        .find(|(block, _)| block == name)
        .map(|(_, span)| *span)
}

/// Where the first of several blocks stands that is there, else the first line: the place for what is missing.
pub fn first_block(plan: &Plan, names: &[&str]) -> Span {
    names
        .iter()
        .find_map(|name| block(plan, name))
        .unwrap_or(plan.start)
}

/// The first sentence of a text that holds one of the phrases and does not deny it. A phrase begins at a word's
/// beginning and may go on: `resampl` finds `resampled`.
pub fn affirmed<'a>(text: &'a str, phrases: &[&str]) -> Option<&'a str> {
    sentences(text).find(|sentence| {
        let words = plain(sentence);
        phrases.iter().any(|phrase| holds(&words, phrase)) && !denies(&words)
    })
}

/// Whether a text holds one of the phrases, denied or not.
pub fn mentions(text: &str, phrases: &[&str]) -> bool {
    let words = plain(text);
    phrases.iter().any(|phrase| holds(&words, phrase))
}

fn sentences(text: &str) -> impl Iterator<Item = &str> {
    text.split_inclusive(['.', ';', '!', '?'])
        .map(str::trim)
        .filter(|sentence| !sentence.is_empty())
}

/// Lower case, one blank between words and around the whole.
fn plain(text: &str) -> String {
    let mut words = String::from(" ");
    for word in text.split_whitespace() {
        words.push_str(&word.to_lowercase());
        words.push(' ');
    }
    words
}

fn holds(words: &str, phrase: &str) -> bool {
    words.match_indices(phrase).any(|(at, _)| {
        words[..at]
            .chars()
            .next_back()
            .is_none_or(|before| !before.is_alphanumeric())
    })
}

fn denies(words: &str) -> bool {
    [
        " no ",
        " not ",
        " never ",
        " nor ",
        " none",
        " without ",
        " cannot ",
        "n't ",
    ]
    .iter()
    .any(|denial| words.contains(denial))
}

/// `a`, `a and b`, `a, b and c`.
pub fn list(items: &[&str]) -> String {
    match items {
        [] => String::new(),
        [only] => (*only).to_owned(),
        [before @ .., last] => format!("{} and {last}", before.join(", ")),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_denied_phrase_is_not_found() {
        let again = ["sampled again", "resampl"];
        assert_eq!(
            affirmed("Hold the lot. It is not sampled again.", &again),
            None
        );
        assert_eq!(
            affirmed(
                "Hold the lot. Remix, then\n  Resample. No lot is lost.",
                &again
            ),
            Some("Remix, then\n  Resample.")
        );
        assert_eq!(affirmed("Presampled stock", &again), None);
    }

    #[test]
    fn lists_read_like_speech() {
        assert_eq!(list(&["a", "b", "c"]), "a, b and c");
        assert_eq!(list(&["a"]), "a");
    }
}
