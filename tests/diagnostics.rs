//! The codes in the source, the list of codes and the page about them say the same; and the examples on that page do
//! what the page says.

#![allow(clippy::unwrap_used)]

use std::collections::{BTreeMap, BTreeSet};
use std::fs;
use std::path::Path;

use assize::language::codes::CODES;
use assize::{Silent, check};

const PAGE: &str = include_str!("../docs/diagnostics.md");

/// A sound plan whose blocks the examples replace.
const SOUND: &str = "\
assize: 1
plan:
  id: TP-0007
  revision: B
  title: \"Door seals\"
characteristic:
  name: \"open seal\"
test:
  family: binomial
  parameter_space: 0 <= p <= 1
  null_subset: p >= 5 %
  alpha: 0.05
  sample_size: 93
power:
  - where: p <= 0.4 %
    at_least: 0.9
decision:
  accept_when: null_rejected
";

/// The codes that reading a text reports.
fn findings(text: &str) -> Vec<&'static str> {
    check(text, &Silent)
        .unwrap()
        .iter()
        .filter(|found| found.rule.is_none())
        .map(|found| found.code)
        .collect()
}

fn listed() -> BTreeSet<String> {
    CODES.iter().map(|(code, _)| (*code).to_owned()).collect()
}

/// The sections of the page, by code.
fn sections() -> BTreeMap<String, String> {
    PAGE.split("\n## ")
        .skip(1)
        .map(|section| section.split_once('\n').unwrap())
        .map(|(code, body)| (code.trim().to_owned(), body.to_owned()))
        .collect()
}

/// The source files, without the list of codes itself.
fn sources(folder: &Path, found: &mut Vec<String>) {
    for entry in fs::read_dir(folder).unwrap() {
        let path = entry.unwrap().path();
        if path.is_dir() {
            sources(&path, found);
        } else if !path.ends_with("language/codes.rs") && !path.ends_with("tests.rs") {
            let text = fs::read_to_string(&path).unwrap();
            let before_tests = text.split("#[cfg(test)]").next().unwrap().to_owned();
            found.push(before_tests);
        }
    }
}

/// The literal that stands as the code argument right behind a call.
fn code_after(text: &str, skip_argument: bool) -> Option<String> {
    let text = if skip_argument {
        text.split_once(',')?.1
    } else {
        text
    };
    let literal = text.trim_start().strip_prefix('"')?;
    Some(literal.split('"').next()?.to_owned())
}

fn used() -> BTreeSet<String> {
    let mut files = Vec::new();
    sources(
        Path::new(concat!(env!("CARGO_MANIFEST_DIR"), "/src")),
        &mut files,
    );
    let mut found = BTreeSet::new();
    for text in &files {
        for (call, skip_argument) in [
            ("Diagnostic::error(", false),
            ("fields.error(", false),
            ("self.error(", false),
            ("Diagnostic::caution(", true),
        ] {
            found.extend(
                text.split(call)
                    .skip(1)
                    .filter_map(|rest| code_after(rest, skip_argument)),
            );
        }
    }
    found
}

#[test]
fn every_code_in_the_source_is_listed_and_none_is_listed_in_vain() {
    let used = used();
    assert!(used.len() > 20, "the search finds codes");
    let unlisted: Vec<_> = used.difference(&listed()).cloned().collect();
    assert!(
        unlisted.is_empty(),
        "not in language/codes.rs: {unlisted:?}"
    );
    let mut files = Vec::new();
    sources(
        Path::new(concat!(env!("CARGO_MANIFEST_DIR"), "/src")),
        &mut files,
    );
    let source = files.concat();
    for (code, meaning) in CODES {
        assert!(
            source.contains(&format!("\"{code}\"")),
            "{code} is never used"
        );
        assert!(!meaning.is_empty(), "{code}");
    }
}

#[test]
fn codes_are_in_order_and_stand_once() {
    let codes: Vec<&str> = CODES.iter().map(|(code, _)| *code).collect();
    assert!(codes.is_sorted_by(|a, b| a < b), "{codes:?}");
}

#[test]
fn every_code_has_its_section() {
    let sections = sections();
    let documented: BTreeSet<String> = sections.keys().cloned().collect();
    assert_eq!(documented, listed());
    for (code, body) in sections {
        for part in ["**Cause.**", "```", "**Mend.**"] {
            assert!(body.contains(part), "{code} lacks {part}");
        }
    }
}

/// The blocks of a text, each from its key at the margin to the next.
fn blocks(text: &str) -> Vec<(String, String)> {
    let mut found: Vec<(String, String)> = Vec::new();
    for line in text.lines() {
        if line.starts_with(|c: char| c.is_ascii_lowercase()) || line.starts_with("---") {
            let key = line.split(':').next().unwrap_or_default();
            found.push((key.to_owned(), String::new()));
        }
        if let Some((_, body)) = found.last_mut() {
            body.push_str(line);
            body.push('\n');
        }
    }
    found
}

/// The sound plan with the example's blocks in the place of its own.
fn merged(example: &str) -> String {
    let example = blocks(example);
    let (ahead, behind): (Vec<_>, Vec<_>) = {
        let cut = example.iter().position(|(key, _)| key == "---");
        let (ahead, behind) = example.split_at(cut.unwrap_or(example.len()));
        (ahead.to_vec(), behind.to_vec())
    };
    let kept = blocks(SOUND)
        .into_iter()
        .filter(|(key, _)| !ahead.iter().any(|(other, _)| other == key));
    kept.chain(ahead.clone())
        .chain(behind)
        .map(|(_, body)| body)
        .collect()
}

#[test]
fn the_examples_do_what_the_page_says() {
    assert!(findings(SOUND).is_empty(), "{:?}", findings(SOUND));
    let mut tried = 0;
    for (code, body) in sections() {
        let Some((_, rest)) = body.split_once("```yaml") else {
            continue;
        };
        let (kind, rest) = rest.split_once('\n').unwrap();
        let example = rest.split("```").next().unwrap();
        let text = match kind.trim() {
            "whole" => example.to_owned(),
            _ => merged(example),
        };
        let found = findings(&text);
        assert!(found.contains(&code.as_str()), "{code}: {found:?}\n{text}");
        tried += 1;
    }
    assert!(tried > 30, "only {tried} examples");
}
