//! Why this many units, and not one less.

use crate::record::{Amount, Record, SampleSizeSearch};

use super::quantity::amount_text;
use super::rule::capitalised;
use super::subject::Subject;
use super::{Fact, fact, sentence};
use crate::report::escape::inline;

/// The facts of the search, or that there was none.
pub fn facts(record: &Record, subject: &Subject<'_>) -> Vec<Fact> {
    let Some(search) = &record.sample_size_search else {
        return vec![fact("Sample size", stated(record))];
    };
    let chosen = record
        .design
        .sample_size
        .or(record.design.stop_at_nonconforming.map(Amount::Count));
    let mut facts = vec![fact(
        "Smallest that works",
        format!(
            "{}: the first that keeps the level and meets every requirement.",
            capitalised(&amount(record, subject, search.smallest))
        ),
    )];
    if let Some(chosen) = chosen.filter(|chosen| *chosen != search.smallest) {
        facts.push(fact(
            "Chosen",
            format!(
                "{}, as the plan states.",
                capitalised(&amount(record, subject, chosen))
            ),
        ));
    }
    facts.push(fact(
        "Why not one less",
        sentence(&search.one_less_fails_because),
    ));
    facts.extend(larger(record, subject, search));
    facts
}

fn larger(record: &Record, subject: &Subject<'_>, search: &SampleSizeSearch) -> Option<Fact> {
    let from = search.every_n_from?;
    let how = search
        .every_n_how
        .as_deref()
        .map(|how| format!(" ({})", inline(how)))
        .unwrap_or_default();
    let reach = match search.proved_to {
        Some(to) => format!(
            "up to {}, beyond which nothing was checked",
            amount_text(to)
        ),
        None => "without end".to_owned(),
    };
    let saw = if from == search.smallest {
        "Every larger one works too".to_owned()
    } else {
        format!(
            "Not every larger one works: between the two some fail, because the region moves in whole steps. Every one from {} on works",
            amount(record, subject, from)
        )
    };
    Some(fact("Larger samples", format!("{saw}, {reach}{how}.")))
}

fn amount(record: &Record, subject: &Subject<'_>, amount: Amount) -> String {
    match (record.design.stop_at_nonconforming, amount) {
        (Some(_), Amount::Count(count)) => format!("stopping at {}", subject.some_counted(count)),
        _ => subject.units(amount),
    }
}

fn stated(record: &Record) -> &'static str {
    if !record.design.stages.is_empty() {
        "The plan states its stages; no smaller design was sought. Size and power are those of the stages together."
    } else if record.design.stop_at_nonconforming.is_some() {
        "The plan states when inspection stops; no earlier stop was sought. Size and power are those of the stated rule."
    } else {
        "The plan states it; no smaller one was sought. Size and power are those of the stated sample."
    }
}
