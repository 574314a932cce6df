//! The descriptive blocks of a plan, printed where given, one fact a line, in the plan's own words.

use serde_json::Value;

use crate::record::Record;
use crate::report::escape::inline;

use super::{Fact, fact};

/// The facts of one block, in the plan's order.
pub fn facts(record: &Record, block: &str) -> Vec<Fact> {
    match record.declared.get(block) {
        Some(Value::Object(fields)) => fields
            .iter()
            .filter(|(key, _)| !is_elsewhere(block, key))
            .map(|(key, value)| fact(label(block, key), text(value)))
            .collect(),
        _ => Vec::new(),
    }
}

/// Fields that have a place of their own.
fn is_elsewhere(block: &str, key: &str) -> bool {
    block == "plan" && matches!(key, "purpose" | "supersedes")
}

/// A scalar of a block, not escaped.
pub fn scalar<'a>(record: &'a Record, block: &str, key: &str) -> Option<&'a str> {
    record.declared.get(block)?.get(key)?.as_str()
}

/// The entries of a list block.
pub fn entries<'a>(record: &'a Record, block: &str) -> &'a [Value] {
    record
        .declared
        .get(block)
        .and_then(Value::as_array)
        .map_or(&[], Vec::as_slice)
}

/// A value as escaped text.
pub fn text(value: &Value) -> String {
    match value {
        Value::String(text) => inline(text),
        Value::Array(items) => items.iter().map(text).collect::<Vec<_>>().join("; "),
        Value::Object(fields) => fields
            .iter()
            .map(|(key, value)| format!("{}: {}", inline(&key.replace('_', " ")), text(value)))
            .collect::<Vec<_>>()
            .join("; "),
        Value::Null => String::new(),
        other => inline(&other.to_string()),
    }
}

/// The name of a field in a report.
fn label(block: &str, key: &str) -> &'static str {
    LABELS
        .iter()
        .find(|(of, name, _)| *of == block && *name == key)
        .map_or("Also stated", |(_, _, label)| label)
}

static LABELS: [(&str, &str, &str); 43] = [
    ("plan", "date", "Date"),
    ("plan", "effective_date", "In force from"),
    ("plan", "prepared_by", "Prepared by"),
    ("plan", "activity", "Activity"),
    ("plan", "status", "Document status"),
    ("requirement", "id", "Requirement"),
    ("requirement", "text", "Text"),
    ("requirement", "limits", "Limits"),
    ("requirement", "source", "Source"),
    ("requirement", "nonconformity", "One nonconformity is"),
    ("risk_link", "hazard", "Hazard or failure mode"),
    ("risk_link", "severity", "Severity"),
    ("risk_link", "occurrence", "Occurrence before this control"),
    ("risk_link", "policy", "Risk policy"),
    ("risk_link", "controls", "Other controls"),
    ("population", "scope", "Claim about"),
    ("population", "lot", "Lot"),
    ("population", "process", "Process"),
    ("population", "strata", "Strata"),
    ("population", "frame", "Drawn from"),
    ("population", "exclusions", "Excluded"),
    ("population", "series", "Series"),
    ("population", "build", "Build"),
    ("sampling", "how", "How units are drawn"),
    ("sampling", "by", "Drawn by"),
    ("sampling", "void_units", "Void units"),
    ("sampling", "replacement", "Replacement"),
    ("sampling", "destructive", "Destructive"),
    ("sampling", "handling", "Handling"),
    ("sampling", "allocation", "Allocation"),
    ("measurement", "method", "Method"),
    ("measurement", "validation", "Validation"),
    ("measurement", "resolution", "Resolution"),
    ("measurement", "rounding", "Rounding"),
    ("measurement", "judged_by", "Judged by"),
    ("change", "what", "What changed"),
    ("change", "why", "Why"),
    ("change", "effect", "Effect on the risks"),
    ("change", "data", "Made, relative to data"),
    ("approvals", "name", "Name"),
    ("approvals", "role", "Role"),
    ("approvals", "meaning", "Meaning"),
    ("assumptions", "evidence", "Evidence"),
];
