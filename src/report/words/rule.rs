//! The rule as one sentence an inspector can follow, and its outcomes one by one.

use crate::record::{Amount, CountRange, Record};
use crate::report::escape::inline;

use super::quantity::{amount_text, grouped};
use super::sets::{Piece, pieces};
use super::stages;
use super::subject::Subject;

/// What follows from an outcome.
pub struct Outcome {
    /// `at most 1 pouch with an open seal is found`.
    pub seen: String,
    /// The outcome in symbols: `x <= 1`.
    pub symbols: String,
    /// `rejected` or `retained`.
    pub null: &'static str,
    /// What the plan says is done, escaped, if it says so.
    pub action: Option<String>,
    /// The action as an imperative within a sentence.
    pub imperative: String,
}

/// Whether rejecting the null releases the lot.
pub fn accepts_by_rejecting(record: &Record) -> bool {
    record.decision.accept_when == "null_rejected"
}

/// The outcome that releases the lot.
pub fn accepting(record: &Record, subject: &Subject<'_>) -> Outcome {
    outcome(record, subject, accepts_by_rejecting(record), true)
}

/// The outcome that does not.
pub fn refusing(record: &Record, subject: &Subject<'_>) -> Outcome {
    outcome(record, subject, !accepts_by_rejecting(record), false)
}

fn outcome(record: &Record, subject: &Subject<'_>, rejects: bool, accepts: bool) -> Outcome {
    let region = &record.critical_region;
    let (symbols, action) = if rejects {
        (&region.reject_when, &record.decision.if_rejected)
    } else {
        (&region.retain_when, &record.decision.if_retained)
    };
    let ranges = ranges_of(symbols, most(record));
    let seen = if ranges.is_empty() {
        format!("`{symbols}` holds")
    } else {
        subject.found(&ranges)
    };
    Outcome {
        seen,
        symbols: symbols.clone(),
        null: if rejects { "rejected" } else { "retained" },
        action: action.as_deref().map(inline),
        imperative: action
            .as_deref()
            .and_then(imperative)
            .unwrap_or_else(|| default_action(subject, accepts)),
    }
}

fn default_action(subject: &Subject<'_>, accepts: bool) -> String {
    let judged = subject.judged();
    if accepts {
        format!("accept the {judged}")
    } else {
        format!("do not accept the {judged}")
    }
}

/// What is done on acceptance, within a sentence: `release the lot`.
pub fn accept_clause(record: &Record, subject: &Subject<'_>) -> String {
    accepting(record, subject).imperative
}

/// What is done otherwise, within a sentence.
pub fn refuse_clause(record: &Record, subject: &Subject<'_>) -> String {
    refusing(record, subject).imperative
}

/// The largest possible value of the statistic, where it has one.
fn most(record: &Record) -> Option<u64> {
    match (record.problem.family.as_str(), record.design.sample_size) {
        ("binomial" | "hypergeometric", Some(Amount::Count(size))) => Some(size),
        _ => None,
    }
}

/// The closed ranges of counts that an expression of a region names.
fn ranges_of(expression: &str, most: Option<u64>) -> Vec<CountRange> {
    pieces(expression)
        .iter()
        .filter_map(|piece| match piece {
            Piece::Point(at) => at.to_u64().map(|at| CountRange {
                from: Some(at),
                to: Some(at),
            }),
            Piece::Between(low, high) => {
                let from = match low {
                    None => None,
                    Some(end) => Some(end.value.to_u64()?.checked_add(u64::from(!end.closed))?),
                };
                let to = match high {
                    None => None,
                    Some(end) => Some(end.value.to_u64()?.checked_sub(u64::from(!end.closed))?),
                };
                Some(CountRange {
                    from: from.filter(|from| *from > 0),
                    to: to.filter(|to| most.is_none_or(|most| *to < most)),
                })
            }
        })
        .collect()
}

/// A single sentence of the plan as a clause: `Release the lot.` becomes `release the lot`. Longer texts stay out of the
/// sentence and are printed in full in the section on the decision.
fn imperative(text: &str) -> Option<String> {
    let line = inline(text.trim().trim_end_matches('.'));
    let short = line.chars().count() <= 90;
    if line.is_empty() || !short || line.contains(['.', ';', '!', '?', '(']) {
        return None;
    }
    let mut characters = line.chars();
    let first = characters.next()?;
    let rest = characters.as_str();
    let is_name = rest.starts_with(|c: char| c.is_uppercase() || c.is_ascii_digit());
    Some(if is_name {
        line
    } else {
        format!("{}{rest}", first.to_lowercase())
    })
}

/// What is inspected, as an imperative: `inspect 93 pouches`.
pub fn inspection(record: &Record, subject: &Subject<'_>) -> String {
    let design = &record.design;
    if let Some(stop) = design.stop_at_nonconforming {
        return format!(
            "inspect {} one after another until {} {} found, and note how many were inspected",
            subject.unit_plural(),
            subject.some_counted(stop),
            if stop == 1 { "is" } else { "are" },
        );
    }
    let Some(size) = design.sample_size else {
        return format!("inspect {}", subject.unit_plural());
    };
    match design.lot_size {
        Some(lot) => format!(
            "draw and inspect {} of the {} {} of the lot and count the {}",
            amount_text(size),
            grouped(lot),
            subject.unit_plural(),
            subject.counted()
        ),
        None => format!(
            "inspect {} and count the {}",
            subject.units(size),
            subject.counted()
        ),
    }
}

/// The whole rule in one sentence.
pub fn sentence(record: &Record, subject: &Subject<'_>) -> String {
    if !record.design.stages.is_empty() {
        return format!("{}.", capitalised(&stages::sentence(record, subject)));
    }
    let (accept, refuse) = (accepting(record, subject), refusing(record, subject));
    let text = format!(
        "{}; if {}, {}; if {}, {}.",
        inspection(record, subject),
        accept.seen,
        accept.imperative,
        refuse.seen,
        refuse.imperative
    );
    capitalised(&text)
}

/// When the result is certain before the inspection is complete. Stopping then changes no probability of the decision,
/// because the decision can no longer change.
pub fn early_end(record: &Record, subject: &Subject<'_>) -> Option<String> {
    let stop = record.design.stop_at_nonconforming?;
    let longest = record
        .critical_region
        .intervals
        .iter()
        .filter_map(|range| range.to.is_none().then_some(range.from).flatten())
        .max()
        .or_else(|| {
            ranges_of(&record.critical_region.retain_when, None)
                .iter()
                .filter_map(|range| range.to.is_none().then_some(range.from).flatten())
                .max()
        })?;
    let last = longest.checked_sub(1).filter(|last| *last >= stop)?;
    Some(format!(
        "Once {} were inspected and fewer than {} found, the number will be {} or more whatever follows: inspection may end there.",
        subject.units(Amount::Count(last)),
        subject.some_counted(stop),
        grouped(longest)
    ))
}

/// A sentence begins with a capital.
pub fn capitalised(text: &str) -> String {
    let mut characters = text.chars();
    match characters.next() {
        Some(first) => first.to_uppercase().chain(characters).collect(),
        None => String::new(),
    }
}
