//! The plan document as it is written: the one source of truth of the language. The JSON Schema is derived from these
//! types, the shape check walks that schema, and serde_yaml fills them. No value has a type yet but text.

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};

use crate::language::description::{
    Approval, Assumption, Change, Measurement, Population, Requirement, RiskLink, Sampling,
    Supersedes,
};
use crate::language::scalar::{ListOrRange, Number, Prose, Rate, Scalar};

/// A test plan: sets and risks, from which the test is derived.
#[derive(Clone, Debug, Deserialize, Serialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Document {
    /// The version of the plan language: 1.
    #[schemars(extend("enum" = [1, "1"]))]
    pub assize: Scalar,
    /// What identifies the plan.
    pub plan: Identity,
    /// What is inspected, and what is counted or measured.
    pub characteristic: CharacteristicBlock,
    /// The observations, the sets and the risks.
    pub test: TestBlock,
    /// Requirements on the power, each an infimum over its set.
    pub power: Option<Vec<PowerRequirement>>,
    /// What follows from the outcome.
    pub decision: DecisionBlock,
    /// What the report shows.
    pub report: Option<ReportBlock>,
    /// The requirement that the plan verifies.
    pub requirement: Option<Requirement>,
    /// The risk that sets the levels.
    pub risk_link: Option<RiskLink>,
    /// What the results speak for.
    pub population: Option<Population>,
    /// How units are drawn.
    pub sampling: Option<Sampling>,
    /// How a unit is judged.
    pub measurement: Option<Measurement>,
    /// What is assumed, each with its evidence.
    pub assumptions: Option<Vec<Assumption>>,
    /// Why this plan, and why this many units. CommonMark.
    pub rationale: Option<Prose>,
    /// Documents, standards and clauses the plan rests on.
    pub references: Option<Vec<Prose>>,
    /// Who signs, in which role, and what the signature means.
    pub approvals: Option<Vec<Approval>>,
    /// What changed since the revision before.
    pub change: Option<Change>,
    /// Rules that are waived, each with a written reason.
    pub waive: Option<Vec<Waiver>>,
}

/// What identifies the plan.
#[derive(Clone, Debug, Deserialize, Serialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Identity {
    /// Plan number: letters, digits, `.`, `_`, `-`; at most 64 characters. It names the files of the report.
    #[schemars(extend("pattern" = "^[A-Za-z0-9_][A-Za-z0-9._-]{0,63}$"))]
    pub id: Scalar,
    /// Revision: the same characters as the plan number.
    #[schemars(extend("pattern" = "^[A-Za-z0-9_][A-Za-z0-9._-]{0,63}$"))]
    pub revision: Scalar,
    /// Title in a few words.
    pub title: Prose,
    /// Why this test exists and what depends on it. CommonMark; raw HTML is shown as text.
    pub purpose: Option<Prose>,
    /// Date of the plan, year-month-day.
    #[schemars(extend("pattern" = "^[0-9]{4}-[0-9]{2}-[0-9]{2}$"))]
    pub date: Option<Scalar>,
    /// Date from which the plan is in force, year-month-day.
    #[schemars(extend("pattern" = "^[0-9]{4}-[0-9]{2}-[0-9]{2}$"))]
    pub effective_date: Option<Scalar>,
    /// Who wrote the plan.
    pub prepared_by: Option<Prose>,
    /// The revision that this one replaces.
    pub supersedes: Option<Supersedes>,
    /// The activity it serves: design verification, process validation, incoming inspection, …
    pub activity: Option<Prose>,
    /// Draft, approved, superseded: as the document system has it.
    pub status: Option<Prose>,
}

/// What is inspected.
#[derive(Clone, Debug, Deserialize, Serialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct CharacteristicBlock {
    /// Name of the characteristic.
    pub name: Prose,
    /// What is counted, in the plural: `pouches with an open seal`.
    pub counts: Option<Prose>,
    /// What is measured, for a continuous characteristic.
    pub measures: Option<Prose>,
    /// The unit of inspection, in the singular: `pouch`.
    pub unit: Option<Prose>,
    /// The harm that a nonconforming unit can do. A hazard puts the cautions first in the report.
    pub hazard: Option<Prose>,
}

/// The observations, the sets and the risks.
#[derive(Clone, Debug, Deserialize, Serialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct TestBlock {
    /// Family of the observations.
    #[schemars(extend("enum" = ["binomial", "hypergeometric", "poisson", "negative_binomial"]))]
    pub family: Scalar,
    /// The set of all parameter values, e.g. `0 <= p <= 1`.
    pub parameter_space: Scalar,
    /// The null subset, e.g. `p >= 5 %`.
    pub null_subset: Scalar,
    /// Level: the largest risk of rejecting the null anywhere in the null subset. Between 0 and 1.
    pub alpha: Number,
    /// Units to inspect, or `smallest`. For `poisson` an amount of opportunity, which may be fractional.
    pub sample_size: Option<Scalar>,
    /// The step to which a fractional amount is rounded up when the smallest is sought; 1 when left out.
    pub step: Option<Number>,
    /// Units in the lot (`hypergeometric`).
    pub lot_size: Option<Number>,
    /// When inspection stops (`negative_binomial`).
    pub stop_at: Option<StopAt>,
    /// A region to audit, e.g. `x <= 1`, instead of solving for the best one.
    pub critical_region: Option<Scalar>,
    /// How the level is shared between two tails.
    #[schemars(extend("enum" = ["equal", "joint", "unbiased"]))]
    pub tails: Option<Scalar>,
    /// Error rates of the inspection.
    pub inspection: Option<InspectionBlock>,
    /// Stages of a staged plan, in order.
    pub stages: Option<Vec<Stage>>,
    /// Truncated ratio test, one unit at a time.
    pub sequential: Option<Sequential>,
    /// Whether a retained null may be tried again on new units.
    pub retest: Option<Retest>,
    /// Sorting of lots that are not accepted.
    pub rectification: Option<Rectification>,
}

/// When inspection stops.
#[derive(Clone, Debug, Deserialize, Serialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct StopAt {
    /// At so many nonconforming units, or `smallest`.
    pub nonconforming: Scalar,
}

/// Error rates of the inspection: each a probability, or a range whose worst end counts.
#[derive(Clone, Debug, Deserialize, Serialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct InspectionBlock {
    /// Probability that a nonconforming unit passes.
    pub misses: Option<Rate>,
    /// Probability that a conforming unit is called nonconforming.
    pub false_alarms: Option<Rate>,
}

/// One stage.
#[derive(Clone, Debug, Deserialize, Serialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Stage {
    /// Units drawn in this stage.
    pub size: Number,
    /// Where the null is retained and inspection ends; `x` counts over all stages so far. Solved for when left out.
    pub retain_null: Option<Scalar>,
    /// Where the null is rejected and inspection ends. Solved for when left out.
    pub reject_null: Option<Scalar>,
}

/// Truncated ratio test.
#[derive(Clone, Debug, Deserialize, Serialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Sequential {
    /// The point of the alternative, e.g. `p = 1 %`.
    pub against: Scalar,
    /// Nominal risk of retaining the null there. Between 0 and 1.
    pub beta: Number,
    /// Units after which inspection ends in any case.
    pub stop_by: Number,
}

/// Retest.
#[derive(Clone, Debug, Deserialize, Serialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Retest {
    /// How often a retained null may be tried again on new units.
    pub times: Number,
}

/// Sorting of lots that are not accepted.
#[derive(Clone, Debug, Deserialize, Serialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Rectification {
    /// Units in a lot.
    pub lot_size: Number,
}

/// A requirement on the power.
#[derive(Clone, Debug, Deserialize, Serialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct PowerRequirement {
    /// The set over which the power must be high enough, e.g. `p <= 0.4 %`.
    #[serde(rename = "where")]
    pub where_set: Scalar,
    /// The least power over that set. Between 0 and 1.
    pub at_least: Number,
    /// Why.
    pub because: Option<Prose>,
}

/// What follows from the outcome.
#[derive(Clone, Debug, Deserialize, Serialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct DecisionBlock {
    /// The outcome that releases the lot.
    #[schemars(extend("enum" = ["null_rejected", "null_retained"]))]
    pub accept_when: Scalar,
    /// What is done when the null is rejected.
    pub if_rejected: Option<Prose>,
    /// What is done when the null is retained.
    pub if_retained: Option<Prose>,
}

/// What the report shows.
#[derive(Clone, Debug, Deserialize, Serialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct ReportBlock {
    /// Parameter values of the power table: a list, or from, to and step.
    pub power_at: Option<ListOrRange>,
}

/// A waived rule.
#[derive(Clone, Debug, Deserialize, Serialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Waiver {
    /// Number of the rule, e.g. `L13`.
    pub rule: Scalar,
    /// Why it does not apply here. Printed in the report.
    pub because: Prose,
}
