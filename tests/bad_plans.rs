//! Plans with faults: each carries `# expect LINE:COLUMN error[code]` in the line above the fault.
//!
//! All errors must be expected and all that is expected must be found. Cautions are compared only where a plan expects
//! them, since every short plan leaves something out that a good record should have.

#![allow(clippy::unwrap_used)]

use std::fs;
use std::path::PathBuf;

use assize::language::render::{grade_word, render};
use assize::language::source::Source;
use assize::{Silent, compile};

fn plans() -> Vec<PathBuf> {
    let folder = concat!(env!("CARGO_MANIFEST_DIR"), "/tests/plans");
    let mut found: Vec<PathBuf> = fs::read_dir(folder)
        .unwrap()
        .map(|entry| entry.unwrap().path())
        .filter(|path| {
            path.extension()
                .is_some_and(|extension| extension == "yaml")
        })
        .collect();
    found.sort();
    found
}

/// What the comments of a plan expect, each checked to stand above the line it speaks of.
fn expected(text: &str) -> Vec<String> {
    let lines: Vec<&str> = text.lines().collect();
    let mut found = Vec::new();
    for (at, line) in lines.iter().enumerate() {
        let Some(rest) = line.trim_start().strip_prefix("# expect ") else {
            continue;
        };
        let below = (at + 1..lines.len())
            .find(|below| !lines[*below].trim_start().starts_with("# expect "))
            .unwrap();
        assert!(
            rest.starts_with(&format!("{}:", below + 1)),
            "{rest} stands above line {}",
            below + 1
        );
        found.push(rest.to_owned());
    }
    found
}

#[test]
fn every_fault_is_found_where_it_stands() {
    let mut wrong = String::new();
    let plans = plans();
    assert!(plans.len() >= 28, "the plans are there");
    for path in plans {
        let name = path.file_name().unwrap().to_string_lossy().into_owned();
        let text = fs::read_to_string(&path).unwrap();
        let mut expected = expected(&text);
        assert!(
            name.starts_with("good-") || !expected.is_empty(),
            "{name} expects nothing"
        );
        let compilation = compile(&text, &Silent).unwrap();
        let source = Source::new(&text);
        for found in &compilation.diagnostics {
            let place = format!(
                "{}:{} {}[{}]",
                found.span.line,
                found.span.column,
                grade_word(found.grade),
                found.code
            );
            match expected.iter().position(|each| *each == place) {
                Some(at) => {
                    expected.remove(at);
                }
                None if found.is_error() => {
                    wrong.push_str(&format!("not expected: {}", render(found, &name, &source)))
                }
                None => {}
            }
        }
        for missed in &expected {
            wrong.push_str(&format!("not found: {name}: {missed}\n"));
        }
        let has_errors = compilation.diagnostics.iter().any(|found| found.is_error());
        assert_eq!(compilation.record.is_none(), has_errors, "{name}");
    }
    assert!(wrong.is_empty(), "\n{wrong}");
}
