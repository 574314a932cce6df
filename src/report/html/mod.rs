//! The HTML edition, made from the Markdown edition: the same words in the same order, with the curve drawn.
//!
//! The page stands alone: one style, no script, nothing loaded. Raw HTML in the Markdown becomes text, pictures become
//! their description, and links lead to pages and letters only.

mod sections;

use minijinja::context;

use crate::record::Record;

use super::{COLOURS, ReportError, STYLE, curve, environment};

use sections::body_of;

/// The report in HTML.
///
/// # Errors
/// Only a faulty template gives one.
pub fn html(markdown: &str, record: &Record) -> Result<String, ReportError> {
    let body = body_of(markdown, record);
    let environment = environment()?;
    Ok(environment.get_template("report.html")?.render(context! {
        title => text(&format!("{} {} {}", record.plan.id, record.plan.revision, record.plan.title)),
        style => format!("{COLOURS}{STYLE}{}", curve::style()),
        running => running_title(record),
        contents => body.contents,
        body => body.html,
    })?)
}

/// What stands at the foot of every printed page. Only characters that mean nothing to a style sheet pass.
fn running_title(record: &Record) -> String {
    let safe = |text: &str| -> String {
        text.chars()
            .filter(|c| c.is_ascii_alphanumeric() || matches!(c, '.' | '_' | '-'))
            .collect()
    };
    format!(
        "{}, revision {}, plan {}",
        safe(&record.plan.id),
        safe(&record.plan.revision),
        safe(&record.plan.sha256)
    )
}

/// Text with the characters that HTML reads as markup replaced.
pub fn text(plain: &str) -> String {
    let mut out = String::with_capacity(plain.len());
    for character in plain.chars() {
        match character {
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            '&' => out.push_str("&amp;"),
            '"' => out.push_str("&quot;"),
            '\'' => out.push_str("&#39;"),
            _ => out.push(character),
        }
    }
    out
}
