//! Everything a report says, in the order in which it says it: the record turned into facts. The template only lays it
//! out.

use serde::Serialize;

use crate::kernel::exact::Exact;
use crate::record::{Amount, Record};

use super::escape::{fenced, inline, quotation};
use super::power_table::{self, PowerTable};
use super::round;
use super::words::rule::{self, Outcome, capitalised};
use super::words::subject::{Subject, amount_text, coordinate};
use super::words::{
    Fact, claim, declared, fact, family, glossary, limits, risks, sample, sentence,
};

/// An assumption of the family, or of the plan, with what supports it.
#[derive(Serialize)]
pub struct AssumptionLine {
    what: String,
    support: String,
}

/// A caution as it is printed.
#[derive(Serialize)]
pub struct CautionLine {
    rule: Option<String>,
    grade: &'static str,
    message: String,
}

/// A signature to be given.
#[derive(Serialize)]
pub struct ApprovalLine {
    role: String,
    name: String,
    meaning: String,
}

/// The report before layout.
#[derive(Serialize)]
pub struct Page {
    id: String,
    revision: String,
    title: String,
    cautions_first: Option<Vec<String>>,
    hazard: Option<String>,
    summary: Vec<Fact>,
    identity: Vec<Fact>,
    purpose: Option<String>,
    requirement: Vec<Fact>,
    population: Vec<Fact>,
    measurement: Vec<Fact>,
    sets: Vec<Fact>,
    law: String,
    family_assumptions: Vec<AssumptionLine>,
    declared_assumptions: Vec<AssumptionLine>,
    rule: Vec<Fact>,
    size: Vec<Fact>,
    requirements: Vec<Fact>,
    power: PowerTable,
    risks: Vec<Fact>,
    sample: Vec<Fact>,
    rationale: Option<String>,
    references: Vec<String>,
    limits: Vec<String>,
    cautions: Vec<CautionLine>,
    waivers: Vec<Fact>,
    decision: Vec<Fact>,
    approvals: Vec<ApprovalLine>,
    glossary: Vec<Fact>,
    reproduce: Vec<Fact>,
    cross_check: Vec<Fact>,
    plan_text: String,
}

impl Page {
    /// Turns a record into a page.
    pub fn new(record: &Record) -> Self {
        let subject = Subject::new(record);
        let family = family::text_of(&record.problem.family);
        Self {
            id: inline(&record.plan.id),
            revision: inline(&record.plan.revision),
            title: inline(&record.plan.title),
            cautions_first: limits::first(record, &subject),
            hazard: record.characteristic.hazard.as_deref().map(inline),
            summary: summary(record, &subject),
            identity: identity(record),
            purpose: declared::scalar(record, "plan", "purpose").map(quotation),
            requirement: requirement(record),
            population: [
                declared::facts(record, "population"),
                declared::facts(record, "sampling"),
            ]
            .concat(),
            measurement: declared::facts(record, "measurement"),
            sets: sets(record, &subject),
            law: family.map_or_else(
                || inline(&record.problem.family),
                |text| text.law.to_owned(),
            ),
            family_assumptions: family
                .map_or(&[][..], |text| text.assumed)
                .iter()
                .map(family_line)
                .collect(),
            declared_assumptions: declared::entries(record, "assumptions")
                .iter()
                .map(assumption_line)
                .collect(),
            rule: rule_facts(record, &subject),
            size: size(record, &subject),
            requirements: requirements(record, &subject),
            power: power_table::table(record, &subject),
            risks: risks::facts(record, &subject),
            sample: sample::facts(record, &subject),
            rationale: record
                .declared
                .get("rationale")
                .and_then(serde_json::Value::as_str)
                .map(quotation),
            references: declared::entries(record, "references")
                .iter()
                .map(declared::text)
                .collect(),
            limits: limits::cautions(record, &subject),
            cautions: record.cautions.iter().map(caution_line).collect(),
            waivers: waivers(record),
            decision: decision(record, &subject),
            approvals: declared::entries(record, "approvals")
                .iter()
                .map(approval_line)
                .collect(),
            glossary: glossary::terms(record),
            reproduce: reproduce(record),
            cross_check: cross_check(record),
            plan_text: fenced(&record.plan.text, "yaml"),
        }
    }
}

fn field(entry: &serde_json::Value, key: &str) -> Option<String> {
    entry
        .get(key)
        .map(declared::text)
        .filter(|text| !text.is_empty())
}

fn family_line(assumed: &family::Assumed) -> AssumptionLine {
    AssumptionLine {
        what: assumed.what.to_owned(),
        support: assumed.justify.to_owned(),
    }
}

fn assumption_line(entry: &serde_json::Value) -> AssumptionLine {
    let evidence = field(entry, "evidence").unwrap_or_else(|| "**no evidence stated**".to_owned());
    let support = match field(entry, "if_it_fails") {
        Some(then) => format!("{evidence} If it fails: {then}"),
        None => evidence,
    };
    AssumptionLine {
        what: field(entry, "assumption").unwrap_or_default(),
        support,
    }
}

fn approval_line(entry: &serde_json::Value) -> ApprovalLine {
    ApprovalLine {
        role: field(entry, "role").unwrap_or_default(),
        name: field(entry, "name").unwrap_or_default(),
        meaning: field(entry, "meaning").unwrap_or_default(),
    }
}

fn caution_line(caution: &crate::record::Caution) -> CautionLine {
    CautionLine {
        rule: caution.rule.as_deref().map(inline),
        grade: match caution.grade.as_str() {
            "E" => "serious",
            "W" => "warning",
            _ => "note",
        },
        message: inline(&caution.message),
    }
}

/// The page-one box: at most twelve lines.
fn summary(record: &Record, subject: &Subject<'_>) -> Vec<Fact> {
    let size_at = at_text(record, subject);
    let population = declared::facts(record, "population");
    let population = population
        .iter()
        .find(|each| matches!(each.label.as_str(), "Lot" | "Process"))
        .map_or_else(|| "**not stated**".to_owned(), |each| each.text.clone());
    vec![
        fact("Claim", claim::sentence(record, subject)),
        fact(
            "Null in words",
            format!("{}.", claim::null(record, subject)),
        ),
        fact("Sample", sample_line(record, subject)),
        fact("Rule", rule::sentence(record, subject)),
        fact(
            "Size",
            format!(
                "{} {size_at}; the level is {}.",
                claim::size(record),
                claim::percent(record.problem.alpha)
            ),
        ),
        fact(
            "Power at the good level",
            claim::power_at_good_level(record, subject),
        ),
        fact("Population", population),
        fact("Assumptions", assumptions_line(record)),
        fact("Status", status(record)),
        fact("Plan hash", format!("`{}`", record.plan.sha256)),
    ]
}

fn sample_line(record: &Record, subject: &Subject<'_>) -> String {
    let design = &record.design;
    match (
        design.stop_at_nonconforming,
        design.sample_size,
        design.lot_size,
    ) {
        (Some(stop), ..) => format!(
            "As many {} as it takes to find {}.",
            subject.unit_plural(),
            subject.some_counted(stop)
        ),
        (None, Some(size), Some(lot)) => format!(
            "n = {} of the {} {} of the lot.",
            amount_text(size),
            amount_text(Amount::Count(lot)),
            subject.unit_plural()
        ),
        (None, Some(size), None) => format!("n = {}.", subject.units(size)),
        (None, None, _) => "In stages, as listed below.".to_owned(),
    }
}

fn at_text(record: &Record, subject: &Subject<'_>) -> String {
    let reached = if record.size.attained {
        "at"
    } else {
        "approached at"
    };
    match coordinate(record, &record.size.at) {
        Some(at) => format!("{reached} {}", subject.figure(at)),
        None => String::new(),
    }
}

fn assumptions_line(record: &Record) -> String {
    let entries = declared::entries(record, "assumptions");
    let supported = entries
        .iter()
        .filter(|entry| field(entry, "evidence").is_some())
        .count();
    let family = inline(&record.problem.family.replace('_', " "));
    match entries.len() {
        0 => format!("Of the {family} family; **the plan states no evidence for them**."),
        all if all == supported => {
            format!("Of the {family} family; evidence is stated for each of the {all} declared.")
        }
        all => format!(
            "Of the {family} family; **evidence is stated for {supported} of the {all} declared**."
        ),
    }
}

/// The status word and what it rests on.
pub fn status_word(record: &Record) -> &'static str {
    if !record.size.within_level {
        "Level exceeded"
    } else if record.requirements.iter().any(|each| !each.met) {
        "Requirement not met"
    } else {
        "Proved"
    }
}

fn status(record: &Record) -> String {
    let met = record.requirements.iter().filter(|each| each.met).count();
    let level = if record.size.within_level {
        "the level is kept"
    } else {
        "**the level is exceeded**"
    };
    let power = match record.requirements.len() {
        0 => "no power is required".to_owned(),
        all => format!("{met} of {all} power requirements met"),
    };
    let cautions = match record.cautions.len() {
        0 => "no cautions".to_owned(),
        1 => "1 caution".to_owned(),
        more => format!("{more} cautions"),
    };
    let document =
        declared::scalar(record, "plan", "status").map_or_else(|| "not stated".to_owned(), inline);
    format!(
        "**{}**: {level}, {power}, {cautions}. Document: {document}.",
        status_word(record)
    )
}

fn identity(record: &Record) -> Vec<Fact> {
    let mut facts = vec![
        fact("Plan", inline(&record.plan.id)),
        fact("Revision", inline(&record.plan.revision)),
        fact("Title", inline(&record.plan.title)),
    ];
    facts.extend(declared::facts(record, "plan"));
    facts.push(
        match record
            .declared
            .get("plan")
            .and_then(|plan| plan.get("supersedes"))
        {
            Some(earlier) => fact("Supersedes", declared::text(earlier)),
            None => fact("Supersedes", "No earlier revision is named."),
        },
    );
    facts.extend(declared::facts(record, "change"));
    facts
}

fn requirement(record: &Record) -> Vec<Fact> {
    let characteristic = &record.characteristic;
    let mut facts = declared::facts(record, "requirement");
    facts.push(fact("Characteristic", inline(&characteristic.name)));
    for (label, text) in [
        ("Counted", &characteristic.counts),
        ("Measured", &characteristic.measures),
        ("Unit", &characteristic.unit),
        ("Hazard", &characteristic.hazard),
    ] {
        facts.extend(text.as_deref().map(|text| fact(label, inline(text))));
    }
    facts.extend(declared::facts(record, "risk_link"));
    facts
}

fn sets(record: &Record, subject: &Subject<'_>) -> Vec<Fact> {
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

fn rule_facts(record: &Record, subject: &Subject<'_>) -> Vec<Fact> {
    let region = &record.critical_region;
    let mut facts = vec![fact("Rule", rule::sentence(record, subject))];
    facts.extend(rule::early_end(record, subject).map(|text| fact("Early end", text)));
    facts.push(outcome_fact("Accept", &rule::accepting(record, subject)));
    facts.push(outcome_fact(
        "Do not accept",
        &rule::refusing(record, subject),
    ));
    facts.push(fact("Statistic", statistic(record, subject)));
    facts.push(fact(
        "Critical region",
        format!(
            "`{}` rejects the null; `{}` retains it.",
            region.reject_when, region.retain_when
        ),
    ));
    facts.push(fact(
        "Source",
        match region.source.as_str() {
            "given" => "Given in the plan and audited here.".to_owned(),
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

fn outcome_fact(label: &str, outcome: &Outcome) -> Fact {
    let action = outcome
        .action
        .as_ref()
        .map_or_else(String::new, |action| format!(" {action}"));
    fact(
        label,
        format!(
            "If {} (`{}`; the null is {}).{action}",
            outcome.seen, outcome.symbols, outcome.null
        ),
    )
}

fn size(record: &Record, subject: &Subject<'_>) -> Vec<Fact> {
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
        facts.push(fact("Where", format!("{place} at {}.", subject.figure(at))));
    }
    facts.push(fact("Why there", sentence(&size.how)));
    facts.push(fact("Against the level", verdict));
    facts
}

fn requirements(record: &Record, subject: &Subject<'_>) -> Vec<Fact> {
    record
        .requirements
        .iter()
        .enumerate()
        .map(|(at, each)| {
            let verdict = if each.met { "met" } else { "**not met**" };
            let place = coordinate(record, &each.at).map_or_else(String::new, |at| {
                format!(" Least at {}: {}", subject.figure(at), sentence(&each.how))
            });
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

fn waivers(record: &Record) -> Vec<Fact> {
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

fn decision(record: &Record, subject: &Subject<'_>) -> Vec<Fact> {
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
        facts.push(fact(label, format!("If {}: {action}", outcome.seen)));
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

fn reproduce(record: &Record) -> Vec<Fact> {
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
        fact(
            "Plan",
            "Save the plan's text below as a file; its hash is the plan hash.".to_owned(),
        ),
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

fn cross_check(record: &Record) -> Vec<Fact> {
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
