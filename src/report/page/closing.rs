//! What follows from the outcome, and how the report can be made again and checked.

use crate::record::{Amount, Record};
use crate::report::escape::inline;
use crate::report::round;
use crate::report::words::quantity::amount_text;
use crate::report::words::subject::Subject;
use crate::report::words::{Fact, fact, rule, sentence};

pub fn waivers(record: &Record) -> Vec<Fact> {
    record
        .waivers
        .iter()
        .map(|waiver| {
            let applies = if waiver.applies {
                ""
            } else {
                " (The rule would not have spoken.)"
            };
            fact(
                &format!("Waived {}", inline(&waiver.rule)),
                format!("{}{applies}", inline(&waiver.because)),
            )
        })
        .collect()
}

pub fn decision(record: &Record, subject: &Subject<'_>) -> Vec<Fact> {
    let released = if rule::accepts_by_rejecting(record) {
        "rejected"
    } else {
        "retained"
    };
    let mut facts = vec![fact("Released when", format!("The null is {released}."))];
    for (label, outcome) in [
        ("If it passes", rule::accepting(record, subject)),
        ("If it fails", rule::refusing(record, subject)),
    ] {
        let action = outcome
            .action
            .unwrap_or_else(|| "The plan does not say what is done.".to_owned());
        let seen = if record.design.stages.is_empty() {
            format!("If {}", outcome.seen)
        } else {
            "At the counts of the table of limits".to_owned()
        };
        facts.push(fact(label, format!("{seen}: {action}")));
    }
    facts.push(fact("Trying again", match &record.retest {
        Some(retest) => format!(
            "A retained null may be tried again on new units {}; the size above counts it. One try alone has a size of {}.",
            times(retest.times),
            round::risk(retest.size_of_one_try.value)
        ),
        None => "Not provided for. To test again until a lot passes multiplies the risk of every try; the size above holds for one.".to_owned(),
    }));
    facts.push(fact("Results that fit no rule", "A missing unit, a void result or a count that does not match the sample is a deviation: record it, and let the responsible quality unit decide.".to_owned()));
    facts
}

fn times(times: u64) -> String {
    match times {
        1 => "once".to_owned(),
        2 => "twice".to_owned(),
        more => format!("{more} times"),
    }
}

pub fn reproduce(record: &Record) -> Vec<Fact> {
    let name = format!("{}-{}", record.plan.id, record.plan.revision);
    vec![
        fact(
            "Program",
            format!(
                "assize {}, plan language {}.",
                inline(&record.assize.version),
                record.assize.language
            ),
        ),
        fact("Plan", save(record)),
        fact("Command", format!("`assize compile {name}.yaml`")),
        fact(
            "Expect",
            format!(
                "`{name}.md`, `{name}.html`, `{name}.json`, byte for byte as filed; `sha256sum --check SHA256SUMS` says so."
            ),
        ),
        fact("Plan hash", format!("`{}`", record.plan.sha256)),
    ]
}

pub fn cross_check(record: &Record) -> Vec<Fact> {
    let check = &record.cross_check;
    vec![
        fact("Second route", sentence(&check.second_route)),
        fact(
            "Figures computed twice",
            amount_text(Amount::Count(check.figures)),
        ),
        fact(
            "Largest relative difference",
            format!(
                "{}; compilation stops beyond {}.",
                round::relative(check.largest_relative_difference),
                round::relative(check.tolerance)
            ),
        ),
        fact(
            "Widest enclosure",
            format!(
                "{}, relative to its figure.",
                round::relative(check.widest_relative_enclosure)
            ),
        ),
        fact("The bounds rest on", sentence(&check.rests_on)),
    ]
}

fn save(record: &Record) -> String {
    let end = if record.plan.text.ends_with('\n') {
        ""
    } else {
        " without a line feed at its end"
    };
    format!("Save the plan's text below as a file{end}; its SHA-256 is the plan hash.")
}
