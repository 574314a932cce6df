//! The README keeps its word: its plan compiles, and the report says what the README quotes from it.

#![allow(clippy::unwrap_used)]

use assize::{Silent, compile, report};

const README: &str = include_str!("../README.md");

/// What stands in the first fenced block of a kind.
fn block(kind: &str) -> &'static str {
    let opening = format!("```{kind}\n");
    let begin = README.find(&opening).unwrap() + opening.len();
    let length = README[begin..].find("```\n").unwrap();
    &README[begin..begin + length]
}

#[test]
fn the_quoted_lines_are_in_the_report() {
    let record = compile(block("yaml"), &Silent).unwrap().record.unwrap();
    let report = report::markdown(&record).unwrap();
    let lines: Vec<&str> = report.lines().collect();
    let quoted: Vec<&str> = block("text").lines().collect();
    assert_eq!(quoted.len(), 3);
    for line in quoted {
        assert!(lines.contains(&line), "{line}\nis not in\n{report}");
    }
}

#[test]
fn the_text_around_repeats_the_figures() {
    let prose = README.split("From its report:").nth(1).unwrap();
    for figure in ["93 pouches are", "94.61 % is rounded down", "4.998 % up"] {
        assert!(prose.replace('\n', " ").contains(figure), "{figure}");
    }
}

/// A newcomer who follows a link must arrive.
#[test]
fn every_relative_link_leads_somewhere() {
    let targets: Vec<&str> = README
        .split("](")
        .skip(1)
        .filter_map(|rest| rest.split(')').next())
        .filter(|target| !target.starts_with("https://"))
        .collect();
    assert!(targets.len() >= 6, "{targets:?}");
    for target in targets {
        let path = std::path::Path::new(env!("CARGO_MANIFEST_DIR")).join(target);
        assert!(path.exists(), "{target}");
    }
}
