//! Everything a report says, in the order in which it says it: the record turned into facts. The template only lays it
//! out.

mod closing;
mod lines;
mod opening;
mod problem;
mod summary;

use serde::Serialize;

use crate::record::Record;

use super::escape::{fenced, inline, quotation};
use super::power_table::{self, PowerTable};
use super::words::rectification::{self, OutgoingRow};
use super::words::stages::{self, StageRow};
use super::words::subject::Subject;
use super::words::{Fact, declared, family, glossary, inspection, limits, risks, sample};

use lines::{ApprovalLine, AssumptionLine, CautionLine};
use lines::{approval_line, assumption_line, caution_line, family_line};

pub use summary::status_word;

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
    stages: Vec<StageRow>,
    size: Vec<Fact>,
    requirements: Vec<Fact>,
    power: PowerTable,
    risks: Vec<Fact>,
    rectification: Vec<Fact>,
    outgoing: Vec<OutgoingRow>,
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
            summary: summary::summary(record, &subject),
            identity: opening::identity(record),
            purpose: declared::scalar(record, "plan", "purpose").map(quotation),
            requirement: opening::requirement(record),
            population: [
                declared::facts(record, "population"),
                declared::facts(record, "sampling"),
            ]
            .concat(),
            measurement: [
                declared::facts(record, "measurement"),
                inspection::facts(record),
            ]
            .concat(),
            sets: problem::sets(record, &subject),
            law: family.map_or_else(
                || inline(&record.problem.family),
                |text| text.law.to_owned(),
            ),
            family_assumptions: family::assumptions(
                &record.problem.family,
                record.inspection.is_some(),
            )
            .into_iter()
            .map(family_line)
            .collect(),
            declared_assumptions: declared::entries(record, "assumptions")
                .iter()
                .map(assumption_line)
                .collect(),
            rule: problem::rule_facts(record, &subject),
            stages: stages::rows(record),
            size: problem::size(record, &subject),
            requirements: problem::requirements(record, &subject),
            power: power_table::table(record, &subject),
            risks: risks::facts(record, &subject),
            rectification: rectification::facts(record, &subject),
            outgoing: rectification::rows(record, &subject),
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
            waivers: closing::waivers(record),
            decision: closing::decision(record, &subject),
            approvals: declared::entries(record, "approvals")
                .iter()
                .map(approval_line)
                .collect(),
            glossary: glossary::terms(record),
            reproduce: closing::reproduce(record),
            cross_check: closing::cross_check(record),
            plan_text: fenced(&record.plan.text, "yaml"),
        }
    }
}
