//! The same figures in the words of the trade: whose risk is which, and which quality is accepted how often.

use crate::record::Record;
use crate::report::round::{self, Toward};

use super::claim::size;
use super::rule::accepts_by_rejecting;
use super::subject::{Subject, coordinate};
use super::{Fact, fact};

/// Producer's risk, consumer's risk, and the quality accepted 95 %, 50 % and 10 % of the time.
pub fn facts(record: &Record, subject: &Subject<'_>) -> Vec<Fact> {
    let mut facts = reading(record);
    facts.push(from_size(record, subject));
    facts.extend(from_requirements(record, subject));
    if let Some(confidence) = super::claim::confidence(record, subject) {
        facts.push(fact("As a confidence", confidence));
    }
    facts.extend(acceptance(record, subject));
    facts
}

/// Both readings of one region: which error is α depends on which outcome releases the lot.
fn reading(record: &Record) -> Vec<Fact> {
    let (released, alpha, beta) = if accepts_by_rejecting(record) {
        ("Rejecting", "consumer's", "producer's")
    } else {
        ("Retaining", "producer's", "consumer's")
    };
    vec![fact(
        "Reading",
        format!(
            "{released} the null releases the lot; so the size is the {alpha} risk, and one minus the power is the {beta} risk."
        ),
    )]
}

fn from_size(record: &Record, subject: &Subject<'_>) -> Fact {
    let null = subject.clause(&record.problem.null_subset);
    let size = size(record);
    let judged = subject.judged();
    if accepts_by_rejecting(record) {
        fact(
            "Consumer's risk",
            format!(
                "At most {size}: the largest probability that a {judged} is accepted although {null}."
            ),
        )
    } else {
        fact(
            "Producer's risk",
            format!(
                "At most {size}: the largest probability that a {judged} is not accepted although {null}."
            ),
        )
    }
}

fn from_requirements(record: &Record, subject: &Subject<'_>) -> Vec<Fact> {
    let accepts = accepts_by_rejecting(record);
    let (label, wrongly) = if accepts {
        ("Producer's risk", "is not accepted although")
    } else {
        ("Consumer's risk", "is accepted although")
    };
    if record.requirements.is_empty() {
        return vec![fact(
            label,
            "Not bounded: the plan names no level at which it must decide rightly. The power table shows the risk point by point.",
        )];
    }
    let judged = subject.judged();
    record
        .requirements
        .iter()
        .map(|requirement| {
            let risk = risk(
                requirement.attained.value,
                requirement.at_least,
                requirement.met,
            );
            fact(
                label,
                format!(
                    "At most {risk}: the largest probability that a {judged} {wrongly} {}.",
                    subject.clause(&requirement.where_set)
                ),
            )
        })
        .collect()
}

fn risk(power: f64, at_least: f64, met: bool) -> String {
    if met {
        round::risk_from_power_within(power, at_least)
    } else {
        round::risk_from_power(power)
    }
}

/// The points of equal acceptance, each cut to the side on which its sentence stays true.
fn acceptance(record: &Record, subject: &Subject<'_>) -> Vec<Fact> {
    let falls = !accepts_more_where_larger(record);
    let better = if falls { "smaller" } else { "larger" };
    let worse = if falls { "larger" } else { "smaller" };
    [
        ("probability_0.95_at", "95 %", true),
        ("probability_0.50_at", "50 %", true),
        ("probability_0.10_at", "10 %", false),
    ]
    .into_iter()
    .filter_map(|(key, share, at_least)| {
        let at = coordinate(record, record.acceptance.get(key)?)?;
        let toward = if falls == at_least {
            Toward::Down
        } else {
            Toward::Up
        };
        let quality = format!(
            "`{}` = {}",
            record.problem.parameter,
            subject.computed(at, toward)
        );
        let text = if subject.is_lattice() {
            format!("The last value accepted at least as often is {quality}.")
        } else if at_least {
            format!("{quality}, and more often where it is {better}.")
        } else {
            format!("{quality}, and less often where it is {worse}.")
        };
        Some(fact(&format!("Accepted {share} of the time"), text))
    })
    .collect()
}

/// Whether acceptance grows with the parameter, as read off the ends of the power table.
fn accepts_more_where_larger(record: &Record) -> bool {
    match (record.power.first(), record.power.last()) {
        (Some(first), Some(last)) => last.lot_accepted.value > first.lot_accepted.value,
        _ => false,
    }
}
