//! The record as data. Field order here is the order in the JSON; absent keys are left out, never null-filled.
//!
//! Every probability is printed with both ends of its enclosure. `value` is the end that does not flatter the plan: the
//! upper end for sizes and risks, the lower end for powers.

use std::collections::BTreeMap;

use serde::Serialize;

use crate::kernel::enclosure::Enclosure;

/// A point of the parameter space: parameter name to value.
pub type Point = BTreeMap<String, f64>;

/// The whole record of a compiled plan.
#[derive(Clone, Debug, Serialize)]
pub struct Record {
    /// The program that made it.
    pub assize: Program,
    /// The plan it was made from.
    pub plan: PlanIdentity,
    /// What is tested, as the plan declares it.
    pub characteristic: Characteristic,
    /// The problem posed: sets and level.
    pub problem: ProblemStatement,
    /// How many units, in what stages.
    pub design: Design,
    /// Which results reject the null.
    pub critical_region: CriticalRegion,
    /// In what sense the region is best.
    pub optimality: Optimality,
    /// The supremum of the rejection probability over the null subset.
    pub size: Size,
    /// The power function at the points of the report.
    pub power: Vec<PowerRow>,
    /// What the plan requires of the power.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub requirements: Vec<RequirementResult>,
    /// The quality accepted 95 %, 50 % and 10 % of the time, where acceptance is monotone. Keys such as
    /// `probability_0.95_at`.
    #[serde(skip_serializing_if = "BTreeMap::is_empty")]
    pub acceptance: BTreeMap<String, Point>,
    /// How the sample size was found.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub sample_size_search: Option<SampleSizeSearch>,
    /// Sorting of lots that are not accepted.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub rectification: Option<Rectification>,
    /// Repeated tries allowed after a retained null.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub retest: Option<Retest>,
    /// What imperfect inspection does to the observed parameter.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub inspection: Option<InspectionErrors>,
    /// Which outcome releases the lot, and what is done on each.
    pub decision: Decision,
    /// What a good record should have and this plan leaves out, or does at a risk.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub cautions: Vec<Caution>,
    /// Rules waived in the plan, with their written reasons.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub waivers: Vec<Waiver>,
    /// The plan's descriptive blocks as given, in the plan's words, keyed by block name in the order of the language.
    pub declared: serde_json::Map<String, serde_json::Value>,
    /// The double entry.
    pub cross_check: CrossCheck,
    /// The seal; not part of what is hashed.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub seal: Option<Seal>,
}

/// Name and version of the program and of the plan language.
#[derive(Clone, Debug, Serialize)]
pub struct Program {
    /// Version of the program.
    pub version: String,
    /// Version of the plan language.
    pub language: u32,
}

/// Which plan.
#[derive(Clone, Debug, Serialize)]
pub struct PlanIdentity {
    /// Identifier: letters, digits, `.`, `_`, `-`.
    pub id: String,
    /// Revision, as text.
    pub revision: String,
    /// Title.
    pub title: String,
    /// SHA-256 of the plan file, hexadecimal.
    pub sha256: String,
    /// The whole text of the plan file: the record can be derived again from itself.
    pub text: String,
}

/// What is counted or measured.
#[derive(Clone, Debug, Serialize)]
pub struct Characteristic {
    /// Its name.
    pub name: String,
    /// What is counted, for attributes.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub counts: Option<String>,
    /// What is measured, for variables.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub measures: Option<String>,
    /// The unit of test.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub unit: Option<String>,
    /// The harm that depends on it.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub hazard: Option<String>,
}

/// The sets, normalised, and the level.
#[derive(Clone, Debug, Serialize)]
pub struct ProblemStatement {
    /// Family of the observations.
    pub family: String,
    /// The tested parameter.
    pub parameter: String,
    /// The parameter space Θ.
    pub parameter_space: String,
    /// The null subset Θ₀.
    pub null_subset: String,
    /// The alternative Θ∖Θ₀.
    pub alternative: String,
    /// The level α as the nearest double.
    pub alpha: f64,
    /// The shape of the null that decided the derivation, in words ("one-sided", "a point", …).
    pub shape: String,
}

/// A sample size: one number.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
#[serde(untagged)]
pub enum Amount {
    /// A number of units, or of nonconforming units at which inspection stops.
    Count(u64),
    /// An amount of opportunity (area, time), which may be fractional.
    Real(f64),
}

/// The design.
#[derive(Clone, Debug, Serialize)]
pub struct Design {
    /// `single` or `staged`.
    pub kind: String,
    /// Sample size (for `negative_binomial` left out: see `stop_at`).
    #[serde(skip_serializing_if = "Option::is_none")]
    pub sample_size: Option<Amount>,
    /// `negative_binomial`: inspection stops at this many nonconforming units.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub stop_at_nonconforming: Option<u64>,
    /// Units in the lot, for finite lots.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub lot_size: Option<u64>,
    /// Stages, for staged designs.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub stages: Vec<Stage>,
}

/// One stage of a staged design: limits for the count over all stages so far.
#[derive(Clone, Debug, Serialize)]
pub struct Stage {
    /// Units inspected when the stage is complete.
    pub cumulative_size: Amount,
    /// Counts at which the null is retained and inspection ends.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub retain_null: Option<CountRange>,
    /// Counts at which the null is rejected and inspection ends.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub reject_null: Option<CountRange>,
}

/// A closed range of counts; a missing end is `null`.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize)]
pub struct CountRange {
    /// Smallest count, `null` when unbounded below.
    pub from: Option<u64>,
    /// Largest count, `null` when unbounded above.
    pub to: Option<u64>,
}

/// The critical region.
#[derive(Clone, Debug, Serialize)]
pub struct CriticalRegion {
    /// Name of the statistic: `x`, or `n` for units inspected.
    pub statistic: String,
    /// The region as an expression, e.g. `x <= 1` or `x <= 3 or x >= 17`.
    pub reject_when: String,
    /// Its complement in the possible outcomes, e.g. `x >= 2`.
    pub retain_when: String,
    /// The region as closed ranges.
    pub intervals: Vec<CountRange>,
    /// `derived` by the program or `given` in the plan and audited.
    pub source: String,
}

/// In what sense the region is best.
#[derive(Clone, Debug, Serialize)]
pub struct Optimality {
    /// The claim.
    pub claim: String,
    /// The theorem it rests on, with reference.
    pub theorem: String,
    /// Among which tests it is best, and under which conditions.
    pub scope: String,
}

/// The proved size.
#[derive(Clone, Debug, Serialize)]
pub struct Size {
    /// Upper end of the enclosure.
    pub value: f64,
    /// Lower bound.
    pub lower: f64,
    /// Upper bound.
    pub upper: f64,
    /// Where the supremum is attained or approached.
    pub at: Point,
    /// Whether the point belongs to the null subset; otherwise the supremum is approached there.
    pub attained: bool,
    /// Which argument shows that the supremum is there.
    pub how: String,
    /// Whether the upper bound is at most the level.
    pub within_level: bool,
}

/// The power function at one point.
#[derive(Clone, Debug, Serialize)]
pub struct PowerRow {
    /// Where.
    pub at: Point,
    /// `null` subset, or `alternative`.
    pub subset: String,
    /// Lower end in the alternative, upper end in the null subset (there it is a risk).
    pub value: f64,
    /// Lower bound of the rejection probability.
    pub lower: f64,
    /// Upper bound of the rejection probability.
    pub upper: f64,
    /// Highest rejection probability any test of this level could have here, rounded up.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub envelope: Option<f64>,
    /// Probability that the lot is released here.
    pub lot_accepted: Bounds,
    /// Expected number of units inspected, for staged designs.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub expected_sample_size: Option<Bounds>,
}

/// Both ends of an enclosure with the end that does not flatter.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
pub struct Bounds {
    /// The end to print.
    pub value: f64,
    /// Lower bound.
    pub lower: f64,
    /// Upper bound.
    pub upper: f64,
}

impl Bounds {
    /// For risks and sizes: `value` is the upper end.
    pub fn of_risk(enclosure: Enclosure) -> Self {
        Self {
            value: enclosure.upper(),
            lower: enclosure.lower(),
            upper: enclosure.upper(),
        }
    }

    /// For powers: `value` is the lower end.
    pub fn of_power(enclosure: Enclosure) -> Self {
        Self {
            value: enclosure.lower(),
            lower: enclosure.lower(),
            upper: enclosure.upper(),
        }
    }
}

/// A requirement on the power and what the plan attains.
#[derive(Clone, Debug, Serialize)]
pub struct RequirementResult {
    /// The set, normalised.
    #[serde(rename = "where")]
    pub where_set: String,
    /// The required infimum.
    pub at_least: f64,
    /// The infimum of the power over the set.
    pub attained: Bounds,
    /// Where the infimum is attained or approached.
    pub at: Point,
    /// Why the infimum is there.
    pub how: String,
    /// `lower >= at_least`, decided exactly.
    pub met: bool,
    /// The plan's reason.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub because: Option<String>,
}

/// How the sample size was found.
#[derive(Clone, Debug, Serialize)]
pub struct SampleSizeSearch {
    /// The first sample size that meets the level and every requirement.
    pub smallest: Amount,
    /// From this size on every larger one works too.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub every_n_from: Option<Amount>,
    /// `every_n_from` was checked up to this size only; left out when proved for all.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub proved_to: Option<Amount>,
    /// How `every_n_from` was shown.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub every_n_how: Option<String>,
    /// Why one less fails.
    pub one_less_fails_because: String,
}

/// Rectifying inspection: lots that are not accepted are sorted.
#[derive(Clone, Debug, Serialize)]
pub struct Rectification {
    /// Units in the lot.
    pub lot_size: u64,
    /// Average outgoing quality limit: the supremum of the average outgoing quality.
    pub aoql: Located,
    /// Average outgoing quality and average total inspection at the points of the power table.
    pub rows: Vec<RectificationRow>,
}

/// A bound and where it is attained.
#[derive(Clone, Debug, Serialize)]
pub struct Located {
    /// The end to print.
    pub value: f64,
    /// Lower bound.
    pub lower: f64,
    /// Upper bound.
    pub upper: f64,
    /// Where.
    pub at: Point,
}

/// Average outgoing quality and average total inspection at one point.
#[derive(Clone, Debug, Serialize)]
pub struct RectificationRow {
    /// Incoming quality.
    pub at: Point,
    /// Average outgoing quality.
    pub aoq: Bounds,
    /// Average total inspection, units per lot.
    pub ati: Bounds,
}

/// Repeated tries.
#[derive(Clone, Debug, Serialize)]
pub struct Retest {
    /// How often a retained null may be tried again.
    pub times: u64,
    /// Size of one try alone.
    pub size_of_one_try: Bounds,
}

/// Inspection that sometimes errs.
#[derive(Clone, Debug, Serialize)]
pub struct InspectionErrors {
    /// Probability that a nonconforming unit is passed: smallest and largest declared.
    pub misses: [f64; 2],
    /// Probability that a conforming unit is called nonconforming: smallest and largest declared.
    pub false_alarms: [f64; 2],
    /// The observed parameter as a function of the true one, in words.
    pub observed: String,
}

/// The decision rule.
#[derive(Clone, Debug, Serialize)]
pub struct Decision {
    /// `null_rejected` or `null_retained`: which outcome releases the lot.
    pub accept_when: String,
    /// What is done when the null is rejected.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub if_rejected: Option<String>,
    /// What is done when the null is retained.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub if_retained: Option<String>,
}

/// A caution.
#[derive(Clone, Debug, Serialize)]
pub struct Caution {
    /// Rule number, e.g. `L01`, or left out for cautions of the language.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub rule: Option<String>,
    /// `E`, `W` or `I`.
    pub grade: String,
    /// Code in words.
    pub code: String,
    /// What is wrong and what to do.
    pub message: String,
}

/// A waived rule.
#[derive(Clone, Debug, Serialize)]
pub struct Waiver {
    /// Rule number.
    pub rule: String,
    /// The written reason.
    pub because: String,
    /// Whether the rule would have spoken.
    pub applies: bool,
}

/// The double entry: every printed probability computed by a second route.
#[derive(Clone, Debug, Serialize)]
pub struct CrossCheck {
    /// Which second routes were used.
    pub second_route: String,
    /// Largest relative difference seen between the routes.
    pub largest_relative_difference: f64,
    /// How many figures were computed twice.
    pub figures: u64,
    /// Largest relative width of the enclosures printed.
    pub widest_relative_enclosure: f64,
    /// The tolerance beyond which compilation stops.
    pub tolerance: f64,
    /// What the bounds rest on.
    pub rests_on: String,
}

/// The seal.
#[derive(Clone, Debug, Serialize)]
pub struct Seal {
    /// SHA-256 over the RFC 8785 canonical form of the record without `seal`, hexadecimal.
    pub record_sha256: String,
}
