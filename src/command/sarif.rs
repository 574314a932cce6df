//! Findings in the Static Analysis Results Interchange Format (OASIS, SARIF 2.1.0), which code-review tools read.

use std::collections::BTreeSet;
use std::path::{Component, Path};

use serde_json::{Value, json};

use crate::language::codes::CODES;
use crate::language::diagnostic::{CautionGrade, Diagnostic, Grade};
use crate::language::source::Source;
use crate::rule::RULES;

use super::check::Checked;
use super::status::Status;

const SCHEMA: &str =
    "https://docs.oasis-open.org/sarif/sarif/v2.1.0/errata01/os/schemas/sarif-schema-2.1.0.json";

/// The log of one run over some files.
pub fn log(files: &[Checked], status: Status) -> String {
    let results: Vec<Value> = files.iter().flat_map(results).collect();
    let notices: Vec<Value> = files.iter().filter_map(notice).collect();
    let log = json!({
        "$schema": SCHEMA,
        "version": "2.1.0",
        "runs": [{
            "tool": {"driver": {
                "name": "assize",
                "version": env!("CARGO_PKG_VERSION"),
                "semanticVersion": env!("CARGO_PKG_VERSION"),
                "rules": rules(),
            }},
            // Columns count characters, as an editor shows them.
            "columnKind": "unicodeCodePoints",
            "invocations": [{
                "executionSuccessful": status != Status::Internal,
                "exitCode": status.code(),
                "toolExecutionNotifications": notices,
            }],
            "results": results,
        }],
    });
    format!("{log:#}\n")
}

/// Codes and their meanings, each once: those of the language, then those of the rules on plans.
fn codes() -> Vec<(&'static str, &'static str)> {
    let of_rules = RULES.iter().map(|rule| (rule.code, rule.title));
    let mut listed = BTreeSet::new();
    CODES
        .iter()
        .copied()
        .chain(of_rules)
        .filter(|(code, _)| listed.insert(*code))
        .collect()
}

fn rules() -> Vec<Value> {
    codes()
        .iter()
        .map(|(code, meaning)| json!({"id": code, "shortDescription": {"text": meaning}}))
        .collect()
}

fn results(file: &Checked) -> Vec<Value> {
    let source = Source::new(&file.text);
    file.findings
        .iter()
        .map(|found| result(found, &file.path, &source))
        .collect()
}

fn result(found: &Diagnostic, path: &Path, source: &Source) -> Value {
    let message = match &found.help {
        Some(help) => format!("{}. Help: {help}.", found.message),
        None => format!("{}.", found.message),
    };
    let mut result = json!({
        "ruleId": found.code,
        "level": level(found.grade),
        "message": {"text": message},
        "locations": [{"physicalLocation": {
            "artifactLocation": {"uri": uri(path)},
            "region": region(found, source),
        }}],
    });
    if let (Some(index), Some(fields)) = (
        codes().iter().position(|(code, _)| *code == found.code),
        result.as_object_mut(),
    ) {
        fields.insert("ruleIndex".to_owned(), json!(index));
    }
    if let (Some(rule), Some(fields)) = (found.rule, result.as_object_mut()) {
        fields.insert("properties".to_owned(), json!({"planRule": rule}));
    }
    result
}

fn region(found: &Diagnostic, source: &Source) -> Value {
    let span = source.clip(found.span);
    json!({
        "startLine": span.line,
        "startColumn": span.column,
        "endLine": span.line,
        "endColumn": span.column + span.width,
    })
}

fn level(grade: Grade) -> &'static str {
    match grade {
        Grade::Error => "error",
        Grade::Caution(CautionGrade::Grave | CautionGrade::Warning) => "warning",
        Grade::Caution(CautionGrade::Information) => "note",
    }
}

/// What belongs to no place in a plan.
fn notice(file: &Checked) -> Option<Value> {
    let trouble = file.trouble.as_ref()?;
    let level = if file.status == Status::Finding {
        "warning"
    } else {
        "error"
    };
    Some(json!({
        "level": level,
        "message": {"text": trouble},
        "locations": [{"physicalLocation": {"artifactLocation": {"uri": uri(&file.path)}}}],
    }))
}

/// A path as a URI reference (RFC 3986): separators are slashes, all but unreserved characters are percent-encoded.
fn uri(path: &Path) -> String {
    let mut out = String::new();
    for component in path.components() {
        match component {
            Component::RootDir => out.push_str("file:///"),
            Component::CurDir => {}
            Component::Prefix(_) | Component::ParentDir | Component::Normal(_) => {
                if !out.is_empty() && !out.ends_with('/') {
                    out.push('/');
                }
                out.push_str(&encoded(component.as_os_str().as_encoded_bytes()));
            }
        }
    }
    out
}

fn encoded(bytes: &[u8]) -> String {
    bytes
        .iter()
        .map(|byte| match byte {
            b'A'..=b'Z' | b'a'..=b'z' | b'0'..=b'9' | b'-' | b'.' | b'_' | b'~' => {
                char::from(*byte).to_string()
            }
            other => format!("%{other:02X}"),
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::language::diagnostic::Span;

    fn checked() -> Checked {
        let span = Span {
            line: 2,
            column: 4,
            width: 3,
        };
        Checked {
            name: "a b.yaml".to_owned(),
            path: "plans/a b.yaml".into(),
            text: "x: 1\né: abc\n".to_owned(),
            findings: vec![Diagnostic::error("unknown-key", span, "no such key").with_help("mend")],
            trouble: None,
            status: Status::BadInput,
        }
    }

    /// Property names and their places: OASIS SARIF 2.1.0, sections 3.14 (run), 3.27 (result), 3.30 (region).
    #[test]
    fn a_finding_becomes_a_result_with_a_region() {
        let log: Value = serde_json::from_str(&log(&[checked()], Status::BadInput)).unwrap();
        let run = &log["runs"][0];
        let result = &run["results"][0];
        let place = &result["locations"][0]["physicalLocation"];
        assert_eq!(log["version"], "2.1.0");
        assert_eq!(result["level"], "error");
        assert_eq!(place["artifactLocation"]["uri"], "plans/a%20b.yaml");
        assert_eq!(place["region"]["startColumn"], 4);
        assert_eq!(place["region"]["endColumn"], 7);
        let index = usize::try_from(result["ruleIndex"].as_u64().unwrap()).unwrap();
        assert_eq!(run["tool"]["driver"]["rules"][index]["id"], "unknown-key");
        assert_eq!(run["invocations"][0]["exitCode"], 2);
    }

    #[test]
    fn every_code_is_described_once() {
        let codes = codes();
        let distinct: BTreeSet<_> = codes.iter().map(|(code, _)| code).collect();
        assert_eq!(distinct.len(), codes.len());
        assert!(RULES.iter().all(|rule| distinct.contains(&rule.code)));
    }

    #[test]
    fn paths_become_uri_references() {
        assert_eq!(uri(Path::new("./a/b#c.yaml")), "a/b%23c.yaml");
        assert_eq!(uri(Path::new("/x/y.yaml")), "file:///x/y.yaml");
        assert_eq!(uri(Path::new("../y.yaml")), "../y.yaml");
    }
}
