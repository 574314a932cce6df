//! Rules about how the test is carried out.

use super::phrases::{affirmed, declared, first_block, mentions};
use super::{Context, Finding};
use crate::kernel::exact::Exact;
use crate::kernel::rounding::{Toward, complement, fixed, risk, risk_from_power};
use crate::language::diagnostic::{CautionGrade, Span};
use crate::language::plan::{AcceptWhen, Plan};

/// What both outcomes lead to, with the place of the block.
fn consequences(plan: &Plan) -> impl Iterator<Item = (Span, &str)> {
    let place = first_block(plan, &["decision"]);
    [&plan.decision.if_rejected, &plan.decision.if_retained]
        .into_iter()
        .flatten()
        .map(move |text| (place, text.as_str()))
}

/// L08. A free repeat nearly doubles the risk: 1 − (1 − s)².
pub fn retest(context: &Context<'_>) -> Option<Finding> {
    const AGAIN: [&str; 12] = [
        "retest",
        "re-test",
        "resampl",
        "re-sampl",
        "tested again",
        "test again",
        "sampled again",
        "sample again",
        "repeat the test",
        "second sample",
        "new sample",
        "until it passes",
    ];
    let plan = context.plan;
    if plan.test.retest_times.is_some() {
        return None;
    }
    let (span, sentence) = consequences(plan)
        .find_map(|(span, text)| affirmed(text, &AGAIN).map(|sentence| (span, sentence)))?;
    let sentence: String = sentence.chars().take(80).collect();
    let price = price_of_a_repeat(context).unwrap_or_default();
    Some(Finding::new(
        span,
        format!("another try is allowed and not counted in any risk: \"{sentence}\"{price}"),
        "state `retest: {times: 1}` under `test:` so that the size counts it, plan a second stage, or forbid it",
    ))
}

/// What one repeat costs, from the figures of one try.
fn price_of_a_repeat(context: &Context<'_>) -> Option<String> {
    let (plan, facts) = (context.plan, context.facts?);
    let twice = |single: Exact| {
        let both = &(&single + &single) - &(&single * &single);
        format!("{} %", fixed(&(&both * &Exact::from(100)), 2, Toward::Up))
    };
    if plan.decision.accept_when.value == AcceptWhen::NullRejected {
        let (one, two) = (risk(facts.size), twice(Exact::from_f64(facts.size)?));
        return Some(format!(
            "; with one repeat the risk of releasing a lot of the null is up to {two}, not {one}"
        ));
    }
    let weakest = facts
        .requirements
        .iter()
        .min_by(|a, b| a.attained.total_cmp(&b.attained))?;
    let (one, two) = (
        risk_from_power(weakest.attained),
        twice(complement(weakest.attained)?),
    );
    Some(format!(
        "; with one repeat a lot where {} is released with probability up to {two}, not {one}",
        weakest.where_words
    ))
}

/// L12. A rule chosen after the data has no level.
pub fn after_data(context: &Context<'_>) -> Option<Finding> {
    let plan = context.plan;
    (declared(plan, "change", "data") == Some("after")).then(|| {
        Finding::new(
            first_block(plan, &["change"]),
            format!(
                "the rule was changed after data were seen: for those data the level of {} means nothing",
                plan.test.alpha.value
            ),
            "report those data as exploratory, and use this revision for data drawn after its approval",
        )
    })
}

/// L19.
pub fn inspection_errors(context: &Context<'_>) -> Option<Finding> {
    let plan = context.plan;
    if plan.test.inspection.is_some() || !judged_by_people(plan) {
        return None;
    }
    let judge = declared(plan, "measurement", "judged_by").unwrap_or("people");
    let judge: String = judge.chars().take(60).collect();
    let price = context
        .facts
        .and_then(|facts| facts.size_with_misses)
        .map(|size| {
            format!(
                ": if they missed one in five, the size would be {}",
                risk(size)
            )
        })
        .unwrap_or_default();
    Some(Finding::new(
        first_block(plan, &["measurement"]),
        format!("units are judged by {judge}, and the plan takes them for perfect{price}"),
        "state what is known of their errors as `inspection: {misses: …, false_alarms: …}` under `test:`, each a rate or a range",
    ))
}

/// Whether people, not gauges, judge the units.
pub(super) fn judged_by_people(plan: &Plan) -> bool {
    const PEOPLE: [&str; 14] = [
        "people",
        "person",
        "operator",
        "inspector",
        "by eye",
        "visual",
        "by hand",
        "human",
        "worker",
        "crew",
        "staff",
        "technician",
        "nurse",
        "panel",
    ];
    declared(plan, "measurement", "judged_by").is_some_and(|text| affirmed(text, &PEOPLE).is_some())
}

/// L23.
pub fn early_stop(context: &Context<'_>) -> Option<Finding> {
    const EARLY: [&str; 8] = [
        "stop early",
        "stopped early",
        "early stop",
        "end early",
        "interim",
        "curtail",
        "as soon as",
        "inspection may end",
    ];
    let plan = context.plan;
    if !plan.test.stages.is_empty() || plan.test.sequential.is_some() {
        return None;
    }
    let (span, sentence) = consequences(plan)
        .find_map(|(span, text)| stop_in(text, &EARLY).map(|sentence| (span, sentence)))?;
    let harmless = mentions(
        sentence,
        &[
            "can change the outcome",
            "cannot change",
            "is certain",
            "already decided",
        ],
    );
    let sentence: String = sentence.chars().take(80).collect();
    if harmless {
        return Some(
            Finding::new(
                span,
                format!("inspection may end once the outcome is certain (\"{sentence}\"): risks stay, but an estimate from such a sample is biased"),
                "say in the record whether inspection was completed",
            )
            .graded(CautionGrade::Information),
        );
    }
    Some(Finding::new(
        span,
        format!("inspection may end early, and the size does not count it: \"{sentence}\""),
        "state the looks as `stages:` or `sequential:` under `test:`, or forbid early ends",
    ))
}

/// A sentence about an early end; that no later unit can change the outcome is no denial of it.
fn stop_in<'a>(text: &'a str, phrases: &[&str]) -> Option<&'a str> {
    affirmed(text, phrases).or_else(|| {
        text.split_inclusive('.').map(str::trim).find(|sentence| {
            mentions(sentence, phrases)
                && mentions(sentence, &["can change the outcome", "cannot change"])
        })
    })
}

/// L27.
pub fn power_from_data(context: &Context<'_>) -> Option<Finding> {
    const FROM_DATA: [&str; 8] = [
        "post-hoc",
        "post hoc",
        "observed power",
        "observed effect",
        "same data",
        "these data",
        "after the test",
        "result of this test",
    ];
    context.plan.requirements.iter().find_map(|requirement| {
        let because = requirement.because.as_deref()?;
        let sentence: String = affirmed(because, &FROM_DATA)?.chars().take(80).collect();
        Some(Finding::new(
            requirement.where_set.span,
            format!("this power is set by the data it is to judge: \"{sentence}\""),
            "take the quality from the requirement or from earlier lots; power at an observed effect adds nothing to the data",
        ))
    })
}
