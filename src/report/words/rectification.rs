//! Lots that are not accepted are sorted: the quality that leaves the gate, and what it costs in inspection.

use serde::Serialize;

use crate::record::{Record, Rectification};
use crate::report::round::{self, Toward};

use super::quantity::grouped;
use super::subject::{Subject, coordinate};
use super::{Fact, fact};

/// One row of the table of outgoing quality.
#[derive(Serialize)]
pub struct OutgoingRow {
    incoming: String,
    outgoing: String,
    inspected: String,
}

/// The facts; none without rectification.
pub fn facts(record: &Record, subject: &Subject<'_>) -> Vec<Fact> {
    let Some(found) = &record.rectification else {
        return Vec::new();
    };
    vec![
        fact(
            "Sorting",
            format!(
                "Every lot of {} that is not accepted is inspected in full, and what is found nonconforming is replaced.",
                grouped(found.lot_size)
            ),
        ),
        fact(
            "Average outgoing quality limit",
            limit(record, subject, found),
        ),
    ]
}

fn limit(record: &Record, subject: &Subject<'_>, found: &Rectification) -> String {
    let at = coordinate(record, &found.aoql.at).map_or_else(String::new, |at| {
        format!(", reached near {}", subject.computed(at, Toward::Nearest))
    });
    format!(
        "At most {}: the worst average quality after sorting, whatever comes in{at}.",
        round::risk(found.aoql.value)
    )
}

/// Average outgoing quality and average total inspection, point by point.
pub fn rows(record: &Record, subject: &Subject<'_>) -> Vec<OutgoingRow> {
    let Some(found) = &record.rectification else {
        return Vec::new();
    };
    found
        .rows
        .iter()
        .map(|row| OutgoingRow {
            incoming: coordinate(record, &row.at).map_or_else(String::new, |at| subject.figure(at)),
            outgoing: round::risk(row.aoq.upper),
            inspected: round::expected_amount(row.ati.lower, row.ati.upper),
        })
        .collect()
}
