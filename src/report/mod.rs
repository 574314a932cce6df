//! The report: a pure function of the record. It computes nothing; it rounds against the plan and puts figures into words.

mod curve;
mod escape;
mod glance;
mod html;
mod page;
mod power_table;
mod words;

use words::claim;

use minijinja::value::Serde;
use minijinja::{Environment, UndefinedBehavior, Value};

use crate::record::{Record, Unwritable, sha256_hex};

pub use crate::kernel::rounding as round;
pub use curve::{Layout, svg};
pub use glance::{Brief, Glance, GlanceRow, brief, glance};
pub use html::html;

const REPORT: &str = include_str!("../../templates/report.md.j2");
const PAGE: &str = include_str!("../../templates/report.html.j2");
const STYLE: &str = include_str!("../../templates/report.css");
const COLOURS: &str = include_str!("../../templates/colours.css");

/// The heading above which the report's hash is taken.
pub const SEAL_HEADING: &str = "## Seal\n";

/// Why a report cannot be written.
#[derive(Debug)]
pub enum ReportError {
    /// A template is at fault.
    Template(minijinja::Error),
    /// The record cannot be hashed.
    Record(Unwritable),
}

impl std::fmt::Display for ReportError {
    fn fmt(&self, out: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        match self {
            Self::Template(fault) => write!(out, "the report's template fails: {fault}"),
            Self::Record(fault) => fault.fmt(out),
        }
    }
}

impl std::error::Error for ReportError {}

impl From<minijinja::Error> for ReportError {
    fn from(fault: minijinja::Error) -> Self {
        Self::Template(fault)
    }
}

impl From<Unwritable> for ReportError {
    fn from(fault: Unwritable) -> Self {
        Self::Record(fault)
    }
}

fn environment() -> Result<Environment<'static>, minijinja::Error> {
    let mut environment = Environment::new();
    environment.set_undefined_behavior(UndefinedBehavior::Strict);
    // The words escape for Markdown, and the HTML parts arrive as finished HTML.
    environment.set_auto_escape_callback(|_| minijinja::AutoEscape::None);
    environment.add_template("report.md", REPORT)?;
    environment.add_template("report.html", PAGE)?;
    Ok(environment)
}

/// The report in Markdown, sealed: the last section holds the hash of all above it and the hash of the record.
///
/// # Errors
/// A record with a figure that is not finite cannot be hashed.
pub fn markdown(record: &Record) -> Result<String, ReportError> {
    let page = page::Page::new(record);
    let environment = environment()?;
    let body = environment
        .get_template("report.md")?
        .render(Value::from(Serde(&page)))?;
    let mut text = body.trim_end().to_owned();
    text.push_str("\n\n");
    let report_hash = sha256_hex(text.as_bytes());
    let record_hash = record.hash()?;
    text.push_str(SEAL_HEADING);
    text.push_str(&format!(
        "\n- **Report:** SHA-256 of the bytes above this heading is `{report_hash}`\n- **Record:** SHA-256 of the canonical form (RFC 8785) of the record without its seal is `{record_hash}`\n- **Plan:** SHA-256 of the plan file is `{}`\n",
        record.plan.sha256
    ));
    Ok(text)
}

#[cfg(test)]
mod tests;
