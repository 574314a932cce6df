//! Sentences from figures. Nothing is computed here: a figure is rounded against the plan and put into words.
//!
//! Every function gives Markdown; text of the plan has been escaped on the way.

pub mod claim;
pub mod declared;
pub mod family;
pub mod glossary;
pub mod inspection;
pub mod limits;
pub mod quantity;
pub mod rectification;
pub mod risks;
pub mod rule;
pub mod sample;
pub mod sets;
pub mod stages;
pub mod subject;

use serde::Serialize;

/// One fact, one line of the report.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct Fact {
    /// What it is.
    pub label: String,
    /// What is so.
    pub text: String,
}

/// A fact.
pub fn fact(label: &str, text: impl Into<String>) -> Fact {
    Fact {
        label: label.to_owned(),
        text: text.into(),
    }
}

/// A text of the record as a sentence: escaped, beginning with a capital and ending with a stop.
pub fn sentence(text: &str) -> String {
    let text = rule::capitalised(&crate::report::escape::inline(text));
    if text.is_empty() || text.ends_with(['.', '!', '?', '…']) {
        text
    } else {
        format!("{text}.")
    }
}
