//! The problem and its solution: sets, rule, size, requirements on the power.

use crate::kernel::exact::Exact;
use crate::record::{Record, RequirementResult};
use crate::report::escape::inline;
use crate::report::round;
use crate::report::words::rule::{self, Outcome, capitalised};
use crate::report::words::subject::{Subject, coordinate};
use crate::report::words::{Fact, claim, fact, sentence};

pub fn sets(record: &Record, subject: &Subject<'_>) -> Vec<Fact> {
    let problem = &record.problem;
    let parameter = inline(&problem.parameter);
    vec![
        fact(
            "Parameter",
            format!("`{parameter}`, {}.", subject.parameter()),
        ),
        fact(
            "Parameter space Θ",
            format!("`{}`", problem.parameter_space),
        ),
        fact(
            "Null subset Θ₀",
            format!(
                "`{}`: {}.",
                problem.null_subset,
                subject.clause(&problem.null_subset)
            ),
        ),
        fact(
            "Alternative Θ∖Θ₀",
            format!(
                "`{}`: {}.",
                problem.alternative,
                subject.clause(&problem.alternative)
            ),
        ),
        fact(
            "Level α",
            format!(
                "{} (`{}`)",
                claim::percent(problem.alpha),
                written(problem.alpha)
            ),
        ),
        fact(
            "Shape of the null",
            format!("{}.", capitalised(&inline(&problem.shape))),
        ),
    ]
}

fn written(value: f64) -> String {
    round::as_written(value)
        .map_or_else(|| "not finite".to_owned(), |exact: Exact| exact.to_string())
}

pub fn rule_facts(record: &Record, subject: &Subject<'_>) -> Vec<Fact> {
    let region = &record.critical_region;
    let mut facts = vec![fact("Rule", rule::sentence(record, subject))];
    facts.extend(rule::early_end(record, subject).map(|text| fact("Early end", text)));
    facts.push(outcome_fact(
        record,
        "Accept",
        &rule::accepting(record, subject),
    ));
    facts.push(outcome_fact(
        record,
        "Do not accept",
        &rule::refusing(record, subject),
    ));
    facts.push(fact("Statistic", statistic(record, subject)));
    facts.push(fact("Critical region", region_line(record)));
    facts.push(fact(
        "Source",
        match region.source.as_str() {
            "given" => "Given in the plan and audited here.".to_owned(),
            _ if !record.design.stages.is_empty() => {
                "Stages and limits as the plan asks for them; limits it leaves out are solved."
                    .to_owned()
            }
            _ => "Derived from the sets and the level.".to_owned(),
        },
    ));
    facts.push(fact(
        "Optimality",
        format!(
            "{}.",
            capitalised(inline(&record.optimality.claim).trim_end_matches('.'))
        ),
    ));
    facts.push(fact("Theorem", sentence(&record.optimality.theorem)));
    facts.push(fact("Scope", sentence(&record.optimality.scope)));
    facts
}

fn statistic(record: &Record, subject: &Subject<'_>) -> String {
    match record.critical_region.statistic.as_str() {
        "n" => format!(
            "`n`, the number of {} inspected when inspection stops.",
            subject.unit_plural()
        ),
        other => format!(
            "`{}`, the number of {} found.",
            inline(other),
            subject.counted()
        ),
    }
}

fn outcome_fact(record: &Record, label: &str, outcome: &Outcome) -> Fact {
    let action = outcome
        .action
        .as_ref()
        .map_or_else(String::new, |action| format!(" {action}"));
    if !record.design.stages.is_empty() {
        return fact(
            label,
            format!(
                "At the counts of the table of limits; the null is then {}.{action}",
                outcome.null
            ),
        );
    }
    fact(
        label,
        format!(
            "If {} (`{}`; the null is {}).{action}",
            outcome.seen, outcome.symbols, outcome.null
        ),
    )
}

pub fn size(record: &Record, subject: &Subject<'_>) -> Vec<Fact> {
    let size = &record.size;
    let place = if size.attained {
        "Attained"
    } else {
        "Approached, not attained"
    };
    let verdict = if size.within_level {
        format!(
            "At most the level of {}.",
            claim::percent(record.problem.alpha)
        )
    } else {
        format!(
            "**Above the level of {}.**",
            claim::percent(record.problem.alpha)
        )
    };
    let mut facts = vec![
        fact("Size", format!("{}, rounded up.", claim::size(record))),
        fact(
            "Proved between",
            format!("{}.", round::enclosure(size.lower, size.upper)),
        ),
    ];
    if let Some(at) = coordinate(record, &size.at) {
        facts.push(fact("Where", format!("{place} at {}.", subject.point(at))));
    }
    facts.push(fact("Why there", sentence(&size.how)));
    facts.push(fact("Against the level", verdict));
    facts
}

pub fn requirements(record: &Record, subject: &Subject<'_>) -> Vec<Fact> {
    record
        .requirements
        .iter()
        .enumerate()
        .map(|(at, each)| {
            let verdict = if each.met { "met" } else { "**not met**" };
            let place = least(record, subject, each);
            let because = each.because.as_deref().map_or_else(String::new, |because| {
                format!(" Reason: {}", sentence(because))
            });
            fact(
                &format!("Requirement {}", at + 1),
                format!(
                    "{} ({verdict}).{place}{because}",
                    capitalised(&claim::requirement(record, subject, each))
                ),
            )
        })
        .collect()
}

/// Where the power is least over the set of a requirement; the argument is given unless it is that of the size.
fn least(record: &Record, subject: &Subject<'_>, each: &RequirementResult) -> String {
    let Some(at) = coordinate(record, &each.at) else {
        return String::new();
    };
    let point = subject.point(at);
    if each.how == record.size.how {
        format!(" Least at {point}, by the argument given for the size.")
    } else {
        format!(" Least at {point}: {}", sentence(&each.how))
    }
}

fn region_line(record: &Record) -> String {
    let region = &record.critical_region;
    if record.design.stages.is_empty() {
        format!(
            "`{}` rejects the null; `{}` retains it.",
            region.reject_when, region.retain_when
        )
    } else {
        "The counts of the table of limits.".to_owned()
    }
}
