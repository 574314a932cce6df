//! Rules about what the record leaves out.

use super::phrases::{block_text, declared, first_block, list};
use super::{Context, Finding};

/// Revisions that replace none.
const FIRST_REVISIONS: [&str; 7] = ["A", "0", "00", "000", "1", "01", "001"];

/// L01. A sample size without a reason is a standing objection of inspectors.
pub fn rationale(context: &Context<'_>) -> Option<Finding> {
    let plan = context.plan;
    let said =
        block_text(plan, "rationale").is_some() || declared(plan, "risk_link", "policy").is_some();
    if said {
        return None;
    }
    let place = plan
        .test
        .sample_size
        .as_ref()
        .map_or(plan.test.span, |size| size.span);
    let units = match context.facts {
        Some(facts) => format!("{} units", facts.amount_in_words()),
        None => "this many units".to_owned(),
    };
    Some(Finding::new(
        place,
        format!("nothing says why {units}, this null and this level were chosen"),
        "add `rationale:`, or `risk_link: {policy: …}` with the rule that turns the risk into these figures",
    ))
}

/// L02.
pub fn method(context: &Context<'_>) -> Option<Finding> {
    let plan = context.plan;
    let missing: Vec<&str> = [
        ("method", "the test method"),
        ("validation", "its validation"),
    ]
    .iter()
    .filter(|(key, _)| declared(plan, "measurement", key).is_none())
    .map(|(_, words)| *words)
    .collect();
    let unit = plan
        .characteristic
        .unit
        .as_ref()
        .map_or("unit", |unit| unit.value.as_str());
    (!missing.is_empty()).then(|| {
        Finding::new(
            first_block(plan, &["measurement", "characteristic"]),
            format!(
                "how a {unit} is judged is not on record: {} missing",
                are(&missing)
            ),
            "cite the method and its validation under `measurement: {method: …, validation: …}`",
        )
    })
}

fn are(missing: &[&str]) -> String {
    let verb = if missing.len() == 1 { "is" } else { "are" };
    format!("{} {verb}", list(missing))
}

/// L09.
pub fn population(context: &Context<'_>) -> Option<Finding> {
    let plan = context.plan;
    let basis = if declared(plan, "population", "scope") == Some("process") {
        ("process", "the process")
    } else {
        ("lot", "the lot")
    };
    let missing: Vec<&str> = [
        ("scope", "whether a lot or the process is meant"),
        basis,
        ("frame", "the frame that units are drawn from"),
    ]
    .iter()
    .filter(|(key, _)| declared(plan, "population", key).is_none())
    .map(|(_, words)| *words)
    .collect();
    (!missing.is_empty()).then(|| {
        Finding::new(
            first_block(plan, &["population", "characteristic"]),
            format!("what the results speak for is not on record: {} missing", are(&missing)),
            "state `population: {scope: lot, lot: …, frame: …}`, or `scope: process` with the process",
        )
    })
}

/// L10. Plans are to be reviewed when changes occur; a revision that does not say what changed was not reviewed.
pub fn change(context: &Context<'_>) -> Option<Finding> {
    let plan = context.plan;
    let replaces = plan
        .declared
        .get("plan")
        .is_some_and(|options| options.get("supersedes").is_some());
    if !replaces && FIRST_REVISIONS.contains(&plan.revision.value.as_str()) {
        return None;
    }
    let mut missing: Vec<&str> = [
        ("what", "what changed"),
        ("why", "why"),
        ("effect", "the effect on the risks"),
        ("data", "whether data had been seen"),
    ]
    .iter()
    .filter(|(key, _)| declared(plan, "change", key).is_none())
    .map(|(_, words)| *words)
    .collect();
    if !plan.declared.contains_key("approvals") {
        missing.push("who approves it anew");
    }
    let place = super::phrases::block(plan, "change").unwrap_or(plan.revision.span);
    (!missing.is_empty()).then(|| {
        Finding::new(
            place,
            format!(
                "revision {} does not say {}",
                plan.revision.value,
                list(&missing)
            ),
            "state `change: {what: …, why: …, effect: …, data: before}` and new `approvals`",
        )
    })
}

/// L22. All-must-pass keeps the level and multiplies the producer's risk; any-may-pass does the reverse.
pub fn combination(context: &Context<'_>) -> Option<Finding> {
    let plan = context.plan;
    let strata = declared(plan, "population", "strata")?;
    if declared(plan, "sampling", "allocation").is_some() {
        return None;
    }
    let strata: String = strata.chars().take(60).collect();
    Some(Finding::new(
        first_block(plan, &["sampling", "population"]),
        format!(
            "there are strata ({strata}), and nothing says how many units each gives or whether each must pass"
        ),
        "state `sampling: {allocation: …}`: units of each stratum, and whether one count decides or each stratum must pass",
    ))
}

/// L28. Lost units may be the bad ones.
pub fn void_units(context: &Context<'_>) -> Option<Finding> {
    let plan = context.plan;
    let missing: Vec<&str> = [
        ("void_units", "what makes a unit void"),
        ("replacement", "whether it is replaced"),
    ]
    .iter()
    .filter(|(key, _)| declared(plan, "sampling", key).is_none())
    .map(|(_, words)| *words)
    .collect();
    (!missing.is_empty()).then(|| {
        Finding::new(
            first_block(plan, &["sampling", "test"]),
            format!("units can be lost or void, and the plan does not say {}", list(&missing)),
            "state `sampling: {void_units: …, replacement: …}` before the first unit is drawn; lost units may be the bad ones",
        )
    })
}

/// L31. Whether readings are rounded before they meet the limit changes which units conform.
pub fn tie(context: &Context<'_>) -> Option<Finding> {
    let plan = context.plan;
    let limits = declared(plan, "requirement", "limits")?;
    if declared(plan, "measurement", "rounding").is_some() {
        return None;
    }
    let limits: String = limits.chars().take(60).collect();
    Some(Finding::new(
        first_block(plan, &["measurement", "requirement"]),
        format!(
            "a unit is held against a limit ({limits}), and nothing says how readings are rounded or what a reading equal to it means"
        ),
        "state `measurement: {rounding: …}`: compared as read or rounded first, and whether equal passes",
    ))
}
