//! Staged and sequential designs: the limits stage by stage, neighbouring stages with the same limits taken together.

use serde::Serialize;

use crate::record::{Amount, CountRange, Record};

use super::quantity::{amount_text, grouped};
use super::rule::{accept_clause, accepts_by_rejecting, refuse_clause};
use super::subject::Subject;

/// Stages in a row that share their limits.
#[derive(Clone, Debug, PartialEq)]
struct Run {
    first: Amount,
    last: Amount,
    accept: Option<CountRange>,
    refuse: Option<CountRange>,
}

/// One row of the table of limits.
#[derive(Serialize)]
pub struct StageRow {
    /// Units inspected so far.
    pub inspected: String,
    /// Counts at which the lot is accepted.
    pub accept: String,
    /// Counts at which it is not.
    pub refuse: String,
    go_on: String,
}

/// The rows of the table of limits; none for a single sample.
pub fn rows(record: &Record) -> Vec<StageRow> {
    let runs = runs(record);
    let last = runs.len().saturating_sub(1);
    runs.iter()
        .enumerate()
        .map(|(at, run)| StageRow {
            inspected: if run.first == run.last {
                amount_text(run.first)
            } else {
                format!("{} to {}", amount_text(run.first), amount_text(run.last))
            },
            accept: limit(run.accept),
            refuse: limit(run.refuse),
            go_on: if at == last {
                "–"
            } else {
                "at any other count"
            }
            .to_owned(),
        })
        .collect()
}

/// The rule in one sentence: spelt out for a few stages, by reference to the table for many.
pub fn sentence(record: &Record, subject: &Subject<'_>) -> String {
    let runs = runs(record);
    let Some(most) = runs.last().map(|run| run.last) else {
        return String::new();
    };
    if runs.len() > 3 || runs.iter().any(|run| run.first != run.last) {
        return format!(
            "inspect {} one after another, at most {}, and count the {}; after each compare the count with the table of limits, and {}, {} or go on as it says",
            subject.unit_plural(),
            amount_text(most),
            subject.counted(),
            accept_clause(record, subject),
            refuse_clause(record, subject)
        );
    }
    let parts: Vec<String> = runs
        .iter()
        .enumerate()
        .map(|(at, run)| stage_sentence(record, subject, run, at, at + 1 == runs.len()))
        .collect();
    parts.join("; otherwise ")
}

fn stage_sentence(
    record: &Record,
    subject: &Subject<'_>,
    run: &Run,
    at: usize,
    last: bool,
) -> String {
    let begin = if at == 0 {
        format!(
            "inspect {} and count the {}",
            subject.units(run.last),
            subject.counted()
        )
    } else {
        format!("go on to {} in all", subject.units(run.last))
    };
    let clauses: Vec<String> = [
        (run.accept, accept_clause(record, subject)),
        (run.refuse, refuse_clause(record, subject)),
    ]
    .into_iter()
    .filter_map(|(range, then)| {
        range.map(|range| format!("if {}, {then}", subject.found(&[range])))
    })
    .collect();
    let joint = if last { "; " } else { ": " };
    format!("{begin}{joint}{}", clauses.join("; "))
}

fn runs(record: &Record) -> Vec<Run> {
    let mut runs: Vec<Run> = Vec::new();
    for stage in &record.design.stages {
        let open =
            |range: Option<CountRange>| range.map(|range| opened(range, stage.cumulative_size));
        let (accept, refuse) = if accepts_by_rejecting(record) {
            (open(stage.reject_null), open(stage.retain_null))
        } else {
            (open(stage.retain_null), open(stage.reject_null))
        };
        match runs.last_mut() {
            Some(run) if run.accept == accept && run.refuse == refuse => {
                run.last = stage.cumulative_size;
            }
            _ => runs.push(Run {
                first: stage.cumulative_size,
                last: stage.cumulative_size,
                accept,
                refuse,
            }),
        }
    }
    runs
}

/// A range without the ends that cannot be passed anyway.
fn opened(range: CountRange, inspected: Amount) -> CountRange {
    let passed = |to: u64| match inspected {
        Amount::Count(inspected) => to < inspected,
        Amount::Real(_) => true,
    };
    CountRange {
        from: range.from.filter(|from| *from > 0),
        to: range.to.filter(|to| passed(*to)),
    }
}

fn limit(range: Option<CountRange>) -> String {
    match range {
        None => "not yet".to_owned(),
        Some(CountRange {
            from: None,
            to: None,
        }) => "any count".to_owned(),
        Some(CountRange {
            from: None,
            to: Some(0),
        }) => "0".to_owned(),
        Some(CountRange {
            from: None,
            to: Some(to),
        }) => format!("{} or fewer", grouped(to)),
        Some(CountRange {
            from: Some(from),
            to: None,
        }) => format!("{} or more", grouped(from)),
        Some(CountRange {
            from: Some(from),
            to: Some(to),
        }) if from == to => grouped(from),
        Some(CountRange {
            from: Some(from),
            to: Some(to),
        }) => {
            format!("{} to {}", grouped(from), grouped(to))
        }
    }
}
