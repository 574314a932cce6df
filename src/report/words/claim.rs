//! The claim: what a decision by this plan shows, and what it does not.

use crate::record::{Bounds, Record, RequirementResult};
use crate::report::round;

use super::rule::{accepts_by_rejecting, capitalised};
use super::subject::Subject;

/// The proved size in per cent; one that is within its level never prints as the level unless it is the level.
pub fn size(record: &Record) -> String {
    if record.size.within_level {
        round::risk_within(record.size.value, record.problem.alpha)
    } else {
        round::risk(record.size.value)
    }
}

/// The claim in one sentence, in the direction in which the plan releases lots.
pub fn sentence(record: &Record, subject: &Subject<'_>) -> String {
    let null = subject.clause(&record.problem.null_subset);
    let alternative = subject.clause(&record.problem.alternative);
    let judged = subject.judged();
    let size = size(record);
    if !record.size.within_level {
        let wrongly = if accepts_by_rejecting(record) {
            "passes"
        } else {
            "fails"
        };
        return format!(
            "None at this level: while {null}, a {judged} {wrongly} with a probability of up to {size}, and the plan allows {}.",
            percent(record.problem.alpha)
        );
    }
    if !accepts_by_rejecting(record) {
        return format!(
            "A {judged} fails only on evidence that {alternative}: while {null}, it fails with a probability of at most {size}. Passing means that nothing spoke against it, and bounds nothing by itself."
        );
    }
    let shown = match subject.boundary(&record.problem.null_subset) {
        Some(boundary) => format!("be better than {boundary}"),
        None => format!("lie in the alternative, where {alternative}"),
    };
    format!(
        "A {judged} that passes is shown to {shown}: while {null}, it passes with a probability of at most {size}. That bounds nonconforming units, never excludes them."
    )
}

/// The null in words and symbols.
pub fn null(record: &Record, subject: &Subject<'_>) -> String {
    format!(
        "{} (`{}`)",
        capitalised(&subject.clause(&record.problem.null_subset)),
        record.problem.null_subset
    )
}

/// A requirement and what the plan attains, as risks are counted: rounded down, and a shortfall is said.
pub fn requirement(record: &Record, subject: &Subject<'_>, result: &RequirementResult) -> String {
    let attained = power(result.attained, result.at_least, result.met);
    let outcome = if accepts_by_rejecting(record) {
        "passes"
    } else {
        "fails"
    };
    let judged = subject.judged();
    format!(
        "if {}, the {judged} {outcome} with a probability of at least {attained}; {} is required",
        subject.clause(&result.where_set),
        percent(result.at_least)
    )
}

/// A power as it stands against what is required: rounded down.
pub fn power(attained: Bounds, at_least: f64, met: bool) -> String {
    if met {
        round::power_required(attained.value, at_least)
    } else {
        round::power(attained.value)
    }
}

/// A stated level or power, exactly as written, in per cent.
pub fn percent(stated: f64) -> String {
    round::as_written(stated).map_or_else(
        || "not finite".to_owned(),
        |exact| format!("{} %", &exact * &crate::kernel::exact::Exact::from(100u64)),
    )
}

/// The power at the good level for the page-one box.
pub fn power_at_good_level(record: &Record, subject: &Subject<'_>) -> String {
    match record.requirements.as_slice() {
        [] => "No level is named at which the plan must decide rightly; the power table shows what it does.".to_owned(),
        [first, rest @ ..] => {
            let mut text = capitalised(&requirement(record, subject, first));
            text.push_str(if first.met { " (met)" } else { " (**not met**)" });
            match rest.len() {
                0 => text.push('.'),
                more => {
                    let failing = rest.iter().filter(|each| !each.met).count();
                    let verdict = if failing == 0 { "all met".to_owned() } else { format!("**{failing} not met**") };
                    text.push_str(&format!("; {more} more below, {verdict}."));
                }
            }
            text
        }
    }
}

/// What the size means as a confidence, for rules that release on rejection.
pub fn confidence(record: &Record, subject: &Subject<'_>) -> Option<String> {
    accepts_by_rejecting(record).then(|| {
        format!(
            "A {} that passes shows with a confidence of at least {} that {}.",
            subject.judged(),
            round::confidence_from_size(record.size.value),
            subject.clause(&record.problem.alternative)
        )
    })
}
