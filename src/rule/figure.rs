//! Rules about the figures of the solution. All are silent where the plan has none.

use super::phrases::{affirmed, declared, texts};
use super::{Context, Facts, Finding};
use crate::kernel::exact::Exact;
use crate::kernel::rounding::{power, risk, risk_from_power};
use crate::language::diagnostic::{CautionGrade, Span};
use crate::language::plan::{AcceptWhen, Plan};

/// Where the amount of inspection stands.
fn amount_span(plan: &Plan) -> Span {
    let test = &plan.test;
    [&test.sample_size, &test.stop_at_nonconforming]
        .into_iter()
        .flatten()
        .map(|size| size.span)
        .next()
        .unwrap_or(test.span)
}

/// L03. What is quoted from a table or an old plan is computed again.
pub fn given_region(context: &Context<'_>) -> Option<Finding> {
    let (plan, facts) = (context.plan, context.facts?);
    let region = plan.test.critical_region.as_ref()?;
    if facts.within_level {
        return None;
    }
    Some(Finding::new(
        region.span,
        format!(
            "the region given, {}, has size {} and not the stated {}",
            facts.reject_when,
            risk(facts.size),
            percent(&plan.test.alpha.value)
        ),
        "leave `critical_region` out to derive the best region of this level, or state the level that the region has",
    ))
}

/// L13. Part of a level stays unused because counts are whole; more than three tenths of it is worth another look.
pub fn unused_level(context: &Context<'_>) -> Option<Finding> {
    let (plan, facts) = (context.plan, context.facts?);
    let alpha = &plan.test.alpha.value;
    let seven_tenths = alpha * &Exact::fraction(7, 10)?;
    (Exact::from_f64(facts.size)? < seven_tenths).then(|| {
        Finding::new(
            amount_span(plan),
            format!("the size is {} of the {} allowed", risk(facts.size), percent(alpha)),
            "look for another number of units that uses more of the level and so gains power, or state the smaller level",
        )
    })
}

/// L14.
pub fn rounded_down(context: &Context<'_>) -> Option<Finding> {
    let (plan, facts) = (context.plan, context.facts?);
    let enough = facts.region_keeps_level_from.as_ref()?;
    let one_more = &facts.amount + &Exact::one();
    (*enough <= one_more).then(|| {
        Finding::new(
            amount_span(plan),
            format!(
                "{} units give a size of {}, above {}: a number of units was rounded down",
                facts.amount_in_words(),
                risk(facts.size),
                percent(&plan.test.alpha.value)
            ),
            format!("round up: {enough} units keep the level"),
        )
    })
}

/// L15. Power is a saw: a unit more lowers it until the next count is allowed.
pub fn sawtooth(context: &Context<'_>) -> Option<Finding> {
    let (plan, facts) = (context.plan, context.facts?);
    in_a_dip(plan, facts)
        .or_else(|| next_fails(plan, facts))
        .or_else(|| some_larger_fail(plan, facts))
}

fn in_a_dip(plan: &Plan, facts: &Facts) -> Option<Finding> {
    let smaller = facts.smaller_that_does.as_ref()?;
    let unmet = facts.requirements.iter().find(|each| !each.met)?;
    Some(Finding::new(
        amount_span(plan),
        format!(
            "{} lies in a dip of the power: {} where {}, and {} is required; {smaller} already does",
            facts.amount_in_words(),
            power(unmet.attained),
            unmet.where_words,
            power(unmet.at_least)
        ),
        "state `sample_size: smallest`, and read in the report from which number on every larger one does",
    ))
}

fn next_fails(plan: &Plan, facts: &Facts) -> Option<Finding> {
    let next = facts.next_fails.as_ref()?;
    let amount = facts.amount_in_words();
    let help = match &facts.every_from {
        Some(from) => format!(
            "inspect exactly {amount}, or at least {from}: from there on every larger number does"
        ),
        None => format!("inspect exactly {amount}"),
    };
    Some(Finding::new(
        amount_span(plan),
        format!(
            "the plan does with {amount} and no longer with {next}: more inspection can lose the guarantee"
        ),
        help,
    ))
}

fn some_larger_fail(plan: &Plan, facts: &Facts) -> Option<Finding> {
    let from = facts.every_from.as_ref()?;
    Some(
        Finding::new(
            amount_span(plan),
            format!(
                "the plan does with {}, but some larger numbers below {from} lose the guarantee",
                facts.amount_in_words()
            ),
            "inspect exactly the number of the plan; extra units change the rule",
        )
        .graded(CautionGrade::Information),
    )
}

/// L25. A rule that tolerates nothing holds good lots too.
pub fn good_lots_fail(context: &Context<'_>) -> Option<Finding> {
    const SELDOM: f64 = 0.8;
    let (plan, facts) = (context.plan, context.facts?);
    if !facts.releases_only_at_zero {
        return None;
    }
    let message = if plan.decision.accept_when.value == AcceptWhen::NullRejected {
        let weakest = facts
            .requirements
            .iter()
            .min_by(|a, b| a.attained.total_cmp(&b.attained))?;
        if weakest.attained >= SELDOM {
            return None;
        }
        format!(
            "nothing may be found, so a lot where {} is held with probability up to {}",
            weakest.where_words,
            risk_from_power(weakest.attained)
        )
    } else if facts.size > 1.0 - SELDOM {
        format!(
            "nothing may be found, so a lot of the null is held with probability up to {}",
            risk(facts.size)
        )
    } else {
        return None;
    };
    Some(Finding::new(
        amount_span(plan),
        message,
        "allow a few and inspect more: with `sample_size: smallest` and a higher `at_least` the plan finds how many",
    ))
}

/// L32. A tenth of the lot is where the finite lot begins to matter (common practice, no source).
pub fn lot_or_process(context: &Context<'_>) -> Option<Finding> {
    let (plan, facts) = (context.plan, context.facts?);
    let process = declared(plan, "population", "scope") == Some("process");
    if facts.finite_lot {
        return process.then(|| {
            Finding::new(
                plan.test.family.span,
                "the claim is about the process, and the law is that of one finite lot: the figures speak for that lot only",
                "use `family: binomial` for a process, or limit the claim with `scope: lot`",
            )
        });
    }
    let lot = facts.lot_size?;
    let tenfold = &facts.amount * &Exact::from(10);
    let of_the_lot = facts.counted_in_units && tenfold > Exact::from(lot);
    of_the_lot.then(|| {
        Finding::new(
            plan.test.family.span,
            format!(
                "{} units of a lot of {lot} are more than a tenth of it, and the law takes the lot as endless",
                facts.amount_in_words()
            ),
            "use `family: hypergeometric` with `lot_size` for a claim about the lot",
        )
    })
}

/// L33.
pub fn approximation(context: &Context<'_>) -> Option<Finding> {
    let (plan, facts) = (context.plan, context.facts?);
    let region = plan.test.critical_region.as_ref()?;
    let approximates = ["rationale", "references", "measurement", "assumptions"]
        .iter()
        .flat_map(|block| texts(plan, block))
        .any(|text| affirmed(text, &["approximat"]).is_some());
    approximates.then(|| {
        Finding::new(
            region.span,
            format!(
                "the region rests on an approximation; its exact size is {} at a stated level of {}",
                risk(facts.size),
                percent(&plan.test.alpha.value)
            ),
            "leave `critical_region` out: the exact region costs nothing here",
        )
    })
}

fn percent(level: &Exact) -> String {
    format!("{} %", level * &Exact::from(100))
}
