//! The power function as a table: one row a point, each figure rounded against the plan.

use serde::Serialize;

use crate::record::{PowerRow, Record};

use super::round;
use super::words::rule::accepts_by_rejecting;
use super::words::subject::{Subject, coordinate};

/// The table and its headings.
#[derive(Serialize)]
pub struct PowerTable {
    /// Heading of the first column.
    pub parameter: String,
    /// Whether any row has an envelope.
    pub has_envelope: bool,
    /// Whether any row has an expected sample size.
    pub has_expected_size: bool,
    /// The rows.
    pub rows: Vec<Row>,
}

/// One row.
#[derive(Serialize)]
pub struct Row {
    /// Parameter value.
    pub at: String,
    /// `null` or `alternative`.
    pub subset: String,
    /// Probability of rejecting the null.
    pub rejects: String,
    /// Probability of accepting the lot.
    pub accepted: String,
    /// Envelope.
    pub envelope: String,
    /// Expected number inspected.
    pub expected_size: String,
}

/// The table of a record.
pub fn table(record: &Record, subject: &Subject<'_>) -> PowerTable {
    PowerTable {
        parameter: format!("`{}`", record.problem.parameter),
        has_envelope: record.power.iter().any(|row| row.envelope.is_some()),
        has_expected_size: record
            .power
            .iter()
            .any(|row| row.expected_sample_size.is_some()),
        rows: record
            .power
            .iter()
            .map(|each| row(record, subject, each))
            .collect(),
    }
}

/// In the null subset the size bounds every row; a size within its level is never printed as more than the level.
fn rejection_in_null(record: &Record, upper: f64) -> String {
    if record.size.within_level {
        round::risk_within(upper, record.problem.alpha)
    } else {
        round::risk(upper)
    }
}

fn row(record: &Record, subject: &Subject<'_>, row: &PowerRow) -> Row {
    let in_null = row.subset != "alternative";
    let rejects = if in_null {
        rejection_in_null(record, row.upper)
    } else {
        round::power(row.lower)
    };
    // Acceptance is a risk where the lot ought to be refused, and a merit where it ought to be accepted.
    let accepted_wrongly = in_null == accepts_by_rejecting(record);
    let accepted = if accepted_wrongly && in_null {
        rejection_in_null(record, row.lot_accepted.upper)
    } else if accepted_wrongly {
        round::risk(row.lot_accepted.upper)
    } else {
        round::power(row.lot_accepted.lower)
    };
    Row {
        at: coordinate(record, &row.at).map_or_else(String::new, |at| subject.figure(at)),
        subset: if in_null { "null" } else { "alternative" }.to_owned(),
        rejects,
        accepted,
        envelope: envelope(record, row, in_null),
        expected_size: row.expected_sample_size.map_or_else(
            || "–".to_owned(),
            |bounds| round::expected_amount(bounds.lower, bounds.upper),
        ),
    }
}

/// In the null no test of this level rejects with more than the level.
fn envelope(record: &Record, row: &PowerRow, in_null: bool) -> String {
    match row.envelope {
        Some(envelope) if in_null => round::risk_within(envelope, record.problem.alpha),
        Some(envelope) => round::risk(envelope),
        None => "–".to_owned(),
    }
}
