//! Lines of tables and lists: assumptions, cautions, signatures.

use serde::Serialize;

use crate::report::escape::{inline, with_code};
use crate::report::words::{declared, family, sentence};

/// An assumption of the family, or of the plan, with what supports it.
#[derive(Serialize)]
pub struct AssumptionLine {
    what: String,
    support: String,
}

/// A caution as it is printed.
#[derive(Serialize)]
pub struct CautionLine {
    rule: Option<String>,
    grade: &'static str,
    message: String,
}

/// A signature to be given.
#[derive(Serialize)]
pub struct ApprovalLine {
    role: String,
    name: String,
    meaning: String,
}

pub fn field(entry: &serde_json::Value, key: &str) -> Option<String> {
    entry
        .get(key)
        .map(declared::text)
        .filter(|text| !text.is_empty())
}

pub fn family_line(assumed: &family::Assumed) -> AssumptionLine {
    AssumptionLine {
        what: assumed.what.to_owned(),
        support: assumed.justify.to_owned(),
    }
}

pub fn assumption_line(entry: &serde_json::Value) -> AssumptionLine {
    let evidence = said(entry, "evidence").unwrap_or_else(|| "**No evidence stated.**".to_owned());
    let support = match said(entry, "if_it_fails") {
        Some(then) => format!("{evidence} If it fails: {then}"),
        None => evidence,
    };
    AssumptionLine {
        what: said(entry, "assumption").unwrap_or_default(),
        support,
    }
}

pub fn approval_line(entry: &serde_json::Value) -> ApprovalLine {
    ApprovalLine {
        role: field(entry, "role").unwrap_or_default(),
        name: field(entry, "name").unwrap_or_default(),
        meaning: field(entry, "meaning").unwrap_or_default(),
    }
}

pub fn caution_line(caution: &crate::record::Caution) -> CautionLine {
    CautionLine {
        rule: caution.rule.as_deref().map(inline),
        grade: match caution.grade.as_str() {
            "E" => "serious",
            "W" => "warning",
            _ => "note",
        },
        message: with_code(&caution.message),
    }
}

/// A field as a sentence.
fn said(entry: &serde_json::Value, key: &str) -> Option<String> {
    let text = entry.get(key)?.as_str()?;
    Some(sentence(text)).filter(|text| !text.is_empty())
}
