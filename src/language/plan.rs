//! The typed plan: every value parsed by its field's type, each with its place in the text.

use crate::kernel::exact::Exact;
use crate::language::diagnostic::{Located, Span};
use crate::language::set::SetExpression;

/// A plan that is well formed; whether its problem makes sense is for `problem` to say.
#[derive(Clone, Debug)]
pub struct Plan {
    /// The whole text.
    pub text: String,
    /// `plan.id`.
    pub id: Located<String>,
    /// `plan.revision`.
    pub revision: Located<String>,
    /// `plan.title`.
    pub title: Located<String>,
    /// `characteristic` name, counts, unit, hazard.
    pub characteristic: Characteristic,
    /// `test`.
    pub test: Test,
    /// `power`.
    pub requirements: Vec<Requirement>,
    /// `decision`.
    pub decision: Decision,
    /// `report.power_at`: points asked for, in the tested parameter; empty when left out.
    pub power_at: Vec<Exact>,
    /// `waive`.
    pub waivers: Vec<WaivedRule>,
    /// The descriptive blocks as given (`plan` options, `requirement`, `risk_link`, `population`, `sampling`,
    /// `measurement`, `assumptions`, `rationale`, `references`, `approvals`, `change`), every scalar as text.
    pub declared: serde_json::Map<String, serde_json::Value>,
    /// Where the top-level blocks stand, for cautions about what is missing in them: name and place.
    pub blocks: Vec<(String, Span)>,
    /// Place of the first line, for what is missing altogether.
    pub start: Span,
}

/// What is counted.
#[derive(Clone, Debug)]
pub struct Characteristic {
    /// Name.
    pub name: Located<String>,
    /// `counts`.
    pub counts: Option<Located<String>>,
    /// `measures`.
    pub measures: Option<Located<String>>,
    /// `unit`.
    pub unit: Option<Located<String>>,
    /// `hazard`.
    pub hazard: Option<Located<String>>,
}

/// The `test` block.
#[derive(Clone, Debug)]
pub struct Test {
    /// Place of the block's key.
    pub span: Span,
    /// `family`, a name; `family` module knows which exist.
    pub family: Located<String>,
    /// `parameter_space`.
    pub parameter_space: Located<SetExpression>,
    /// `null_subset`.
    pub null_subset: Located<SetExpression>,
    /// `alpha`, within (0, 1) checked.
    pub alpha: Located<Exact>,
    /// `sample_size`.
    pub sample_size: Option<Located<SampleSize>>,
    /// `step` of a real-valued sample size searched for.
    pub step: Option<Located<Exact>>,
    /// `lot_size`.
    pub lot_size: Option<Located<Exact>>,
    /// `stop_at.nonconforming`.
    pub stop_at_nonconforming: Option<Located<SampleSize>>,
    /// `critical_region` to audit.
    pub critical_region: Option<Located<SetExpression>>,
    /// `tails`.
    pub tails: Option<Located<Tails>>,
    /// `inspection`.
    pub inspection: Option<Located<Inspection>>,
    /// `stages`.
    pub stages: Vec<StageRequest>,
    /// `sequential`.
    pub sequential: Option<Located<SequentialRequest>>,
    /// `retest.times`.
    pub retest_times: Option<Located<Exact>>,
    /// `rectification.lot_size`.
    pub rectification_lot_size: Option<Located<Exact>>,
}

/// A sample size given or searched for.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum SampleSize {
    /// Given.
    Given(Exact),
    /// `smallest`.
    Smallest,
}

/// How α is shared between two tails.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Tails {
    /// Half each.
    Equal,
    /// Together.
    Joint,
    /// Unbiased (continuous families).
    Unbiased,
}

/// Error rates of inspection, smallest and largest of each.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Inspection {
    /// Probability that a nonconforming unit passes.
    pub misses: (Exact, Exact),
    /// Probability that a conforming unit is called nonconforming.
    pub false_alarms: (Exact, Exact),
}

/// One entry of `stages`.
#[derive(Clone, Debug)]
pub struct StageRequest {
    /// Units of this stage.
    pub size: Located<Exact>,
    /// `retain_null`.
    pub retain_null: Option<Located<SetExpression>>,
    /// `reject_null`.
    pub reject_null: Option<Located<SetExpression>>,
}

/// `sequential`.
#[derive(Clone, Debug)]
pub struct SequentialRequest {
    /// The alternative point.
    pub against: SetExpression,
    /// Nominal type II error at it.
    pub beta: Exact,
    /// Truncation.
    pub stop_by: Exact,
}

/// A requirement on the power.
#[derive(Clone, Debug)]
pub struct Requirement {
    /// `where`.
    pub where_set: Located<SetExpression>,
    /// `at_least`, within (0, 1) checked.
    pub at_least: Located<Exact>,
    /// `because`.
    pub because: Option<String>,
}

/// The decision block.
#[derive(Clone, Debug)]
pub struct Decision {
    /// Which outcome releases the lot.
    pub accept_when: Located<AcceptWhen>,
    /// What is done when the null is rejected.
    pub if_rejected: Option<String>,
    /// What is done when it is retained.
    pub if_retained: Option<String>,
}

/// Which outcome releases the lot.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum AcceptWhen {
    /// The null says "bad": rejecting it releases.
    NullRejected,
    /// The null says "good": retaining it releases.
    NullRetained,
}

/// A waived rule.
#[derive(Clone, Debug)]
pub struct WaivedRule {
    /// Rule number.
    pub rule: Located<String>,
    /// Written reason.
    pub because: String,
}
