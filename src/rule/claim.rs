//! Rules about what the plan claims and what it can claim.

use super::phrases::{affirmed, block_text, declared, first_block, mentions, texts};
use super::{Context, Finding};
use crate::language::plan::{AcceptWhen, Plan};

fn released_when_retained(plan: &Plan) -> bool {
    plan.decision.accept_when.value == AcceptWhen::NullRetained
}

/// L04.
pub fn power_required(context: &Context<'_>) -> Option<Finding> {
    let plan = context.plan;
    if !plan.requirements.is_empty() {
        return None;
    }
    let (risk, level) = if released_when_retained(plan) {
        (
            "the consumer's risk is unknown",
            "a quality that must be found out",
        )
    } else {
        (
            "the producer's risk is unknown",
            "a quality that you expect to pass",
        )
    };
    Some(Finding::new(
        first_block(plan, &["power", "test"]),
        format!("no power is required anywhere, so {risk}"),
        format!("add `power: [{{where: …, at_least: …}}]` at {level}"),
    ))
}

/// L05. Meeting the specification on a few units bounds nothing.
pub fn bounds_nothing(context: &Context<'_>) -> Option<Finding> {
    let plan = context.plan;
    let activity = declared(plan, "plan", "activity")?;
    let validates = mentions(activity, &["validation", "verification", "qualification"]);
    let unbounded = released_when_retained(plan) && plan.requirements.is_empty();
    (validates && unbounded).then(|| {
        let units = context.facts.map_or_else(
            || "A sample".to_owned(),
            |facts| format!("a sample of {}", facts.amount_in_words()),
        );
        Finding::new(
            plan.decision.accept_when.span,
            format!("{units} that agrees with the null bounds nothing: this {activity} excludes no quality, however bad"),
            "state the quality to be excluded as the null, and release with `accept_when: null_rejected`",
        )
    })
}

/// L06.
pub fn process_streams(context: &Context<'_>) -> Option<Finding> {
    let plan = context.plan;
    let process = declared(plan, "population", "scope") == Some("process");
    (process && declared(plan, "population", "strata").is_none()).then(|| {
        Finding::new(
            first_block(plan, &["population"]),
            "the claim is about the process, and no lots, shifts, cavities or other streams are named: what varies between them is not sampled",
            "name them under `population: {strata: …}`, or limit the claim with `scope: lot`",
        )
    })
}

/// L11. An acceptance quality limit is an index of what will mostly be accepted; alone it protects no lot.
pub fn acceptance_limit(context: &Context<'_>) -> Option<Finding> {
    let plan = context.plan;
    let names_limit = [
        "requirement",
        "risk_link",
        "rationale",
        "references",
        "population",
    ]
    .iter()
    .flat_map(|block| texts(plan, block))
    .any(|text| {
        mentions(
            text,
            &["aql", "acceptance quality limit", "acceptable quality l"],
        )
    });
    let switches = declared(plan, "population", "series")
        .is_some_and(|series| mentions(series, &["switching", "tightened"]));
    let alone = released_when_retained(plan) && plan.requirements.is_empty();
    (names_limit && alone && !switches).then(|| {
        Finding::new(
            plan.test.null_subset.span,
            "an acceptance quality limit is named, with no limiting quality and no switching rules: it does not protect a single lot",
            "require the power at a limiting quality under `power:`, or name the series and its switching rules under `population: {series: …}`",
        )
    })
}

/// L20. Absence of evidence is no evidence: a retained null proves nothing it says.
pub fn in_the_null(context: &Context<'_>) -> Option<Finding> {
    claimed_when_retained(context).or_else(|| turned_round(context))
}

fn claimed_when_retained(context: &Context<'_>) -> Option<Finding> {
    const CLAIMS: [&str; 9] = [
        "prove",
        "demonstrate",
        "shows that",
        "show that",
        "conforms",
        "conforming",
        "equivalent",
        "verified",
        "validated",
    ];
    let plan = context.plan;
    if !released_when_retained(plan) {
        return None;
    }
    let sentence = affirmed(plan.decision.if_retained.as_deref()?, &CLAIMS)?;
    let sentence: String = sentence.chars().take(80).collect();
    Some(Finding::new(
        plan.decision.accept_when.span,
        format!("a retained null proves nothing, and the plan concludes from it: \"{sentence}\""),
        "state the opposite of the claim as the null and release with `accept_when: null_rejected`; or say only that the sample does not speak against the lot",
    ))
}

fn turned_round(context: &Context<'_>) -> Option<Finding> {
    let (plan, facts) = (context.plan, context.facts?);
    let counted = plan
        .characteristic
        .counts
        .as_ref()
        .map_or("what is counted", |counts| counts.value.as_str());
    let retained = released_when_retained(plan);
    let message = if retained && facts.null_holds_worst && !facts.null_holds_best {
        "the null says that the lot is bad, and the lot is released when that is not disproved"
    } else if !retained && facts.null_holds_best && !facts.null_holds_worst {
        "the null says that the lot is good, and the lot is released when that is disproved"
    } else {
        return None;
    };
    Some(Finding::new(
        plan.decision.accept_when.span,
        message,
        format!(
            "turn `accept_when` or the null round; if many of the {counted} are a merit, count their opposite or waive this rule"
        ),
    ))
}

/// L21.
pub fn margin(context: &Context<'_>) -> Option<Finding> {
    let (plan, facts) = (context.plan, context.facts?);
    if !facts.equivalence {
        return None;
    }
    let justified = block_text(plan, "rationale").is_some_and(|text| mentions(text, &["margin"]))
        || texts(plan, "risk_link")
            .iter()
            .any(|text| mentions(text, &["margin"]));
    (!justified).then(|| {
        Finding::new(
            plan.test.null_subset.span,
            "the plan shows equivalence within a margin, and nothing says where the margin comes from",
            "say in `rationale:` which requirement sets the margin; it must not come from the data to be tested",
        )
    })
}

/// L29.
pub fn only_control(context: &Context<'_>) -> Option<Finding> {
    const GRAVEST: [&str; 7] = [
        "critical",
        "catastroph",
        "death",
        "fatal",
        "deadly",
        "life-threatening",
        "life threatening",
    ];
    let plan = context.plan;
    let severity = declared(plan, "risk_link", "severity");
    let hazard = plan
        .characteristic
        .hazard
        .as_ref()
        .map(|hazard| hazard.value.as_str());
    let word = [severity, hazard]
        .into_iter()
        .flatten()
        .find(|text| mentions(text, &GRAVEST))?;
    if declared(plan, "risk_link", "controls").is_some() {
        return None;
    }
    let word: String = word.chars().take(60).collect();
    Some(Finding::new(
        first_block(plan, &["risk_link", "characteristic"]),
        format!(
            "the hazard is grave ({word}), and sampling is its only control on record: a released lot may still hold such units"
        ),
        "name the other controls under `risk_link: {controls: …}`; where no escape can be borne, inspect every unit or make the fault impossible",
    ))
}

/// L30. The families count conforming and nonconforming units; some studies are of another kind.
pub fn scope(context: &Context<'_>) -> Option<Finding> {
    const OTHER_STUDIES: [(&str, &[&str]); 3] = [
        (
            "a study of users",
            &[
                "usability",
                "use error",
                "user error",
                "human factors",
                "number of users",
            ],
        ),
        (
            "sterility",
            &[
                "sterility assurance",
                "sterility test",
                "test for sterility",
            ],
        ),
        (
            "a clinical claim",
            &[
                "clinical trial",
                "clinical study",
                "clinical claim",
                "clinical efficacy",
                "patients enrolled",
            ],
        ),
    ];
    let plan = context.plan;
    let characteristic = &plan.characteristic;
    let located = [
        Some(&plan.title),
        Some(&characteristic.name),
        characteristic.counts.as_ref(),
    ]
    .into_iter()
    .flatten()
    .map(|text| (text.span, text.value.as_str()));
    let described = ["purpose", "activity"]
        .into_iter()
        .filter_map(|key| Some((first_block(plan, &["plan"]), declared(plan, "plan", key)?)));
    located.chain(described).find_map(|(span, text)| {
        let (study, _) = OTHER_STUDIES
            .iter()
            .find(|(_, phrases)| affirmed(text, phrases).is_some())?;
        Some(Finding::new(
            span,
            format!(
                "this reads like {study}, which a test of a proportion of units does not answer"
            ),
            "use the methods of that field; waive this rule if the plan is about units after all",
        ))
    })
}
