//! The blocks that describe a plan for its readers. None of them enters a figure; all are optional, and what a good
//! record should have but lacks is cautioned about, never refused.

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};

use crate::language::scalar::{Prose, Scalar};

/// The revision that this one replaces.
#[derive(Clone, Debug, Deserialize, Serialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Supersedes {
    /// The earlier revision.
    pub revision: Scalar,
    /// Hash of the earlier record: `sha256:` and 64 hexadecimal digits.
    pub record: Option<Scalar>,
}

/// The requirement that the plan verifies.
#[derive(Clone, Debug, Deserialize, Serialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Requirement {
    /// Number of the requirement.
    pub id: Option<Prose>,
    /// Its text.
    pub text: Option<Prose>,
    /// Specification limits with their units.
    pub limits: Option<Prose>,
    /// The document and revision that states it.
    pub source: Option<Prose>,
    /// What makes one unit nonconforming, measurably.
    pub nonconformity: Option<Prose>,
}

/// The risk that sets the levels.
#[derive(Clone, Debug, Deserialize, Serialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct RiskLink {
    /// Hazard or failure mode, by number or name.
    pub hazard: Option<Prose>,
    /// Class of severity.
    pub severity: Option<Prose>,
    /// Probability of occurrence before this control.
    pub occurrence: Option<Prose>,
    /// The rule or table that turns the risk into alpha, the null subset and the power.
    pub policy: Option<Prose>,
    /// Other controls of the same risk.
    pub controls: Option<Prose>,
}

/// What the results speak for.
#[derive(Clone, Debug, Deserialize, Serialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Population {
    /// Whether the claim is about one `lot` or about the `process`.
    #[schemars(extend("enum" = ["lot", "process"]))]
    pub scope: Option<Scalar>,
    /// The lot, and how it is formed.
    pub lot: Option<Prose>,
    /// The process.
    pub process: Option<Prose>,
    /// Strata: cavities, shifts, heads, lots of material.
    pub strata: Option<Prose>,
    /// The list or layout that units are drawn from.
    pub frame: Option<Prose>,
    /// What is left out, and why.
    pub exclusions: Option<Prose>,
    /// Whether lots form a continuing series or stand alone.
    pub series: Option<Prose>,
    /// Nominal or worst-case build.
    pub build: Option<Prose>,
}

/// How units are drawn.
#[derive(Clone, Debug, Deserialize, Serialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Sampling {
    /// How units are drawn: at random, stratified, systematic.
    pub how: Option<Prose>,
    /// Who draws them.
    pub by: Option<Prose>,
    /// What makes a unit void, and what is done with it.
    pub void_units: Option<Prose>,
    /// Whether lost or void units are replaced.
    pub replacement: Option<Prose>,
    /// Whether the test destroys the unit.
    pub destructive: Option<Prose>,
    /// How units are handled before the test.
    pub handling: Option<Prose>,
    /// Units of each stratum.
    pub allocation: Option<Prose>,
}

/// How a unit is judged.
#[derive(Clone, Debug, Deserialize, Serialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Measurement {
    /// Test method, by number and revision.
    pub method: Option<Prose>,
    /// How the method was validated.
    pub validation: Option<Prose>,
    /// Resolution of the gauge.
    pub resolution: Option<Prose>,
    /// Rounding rule, and what a value equal to a limit means.
    pub rounding: Option<Prose>,
    /// Who or what judges: people, a machine.
    pub judged_by: Option<Prose>,
}

/// An assumption.
#[derive(Clone, Debug, Deserialize, Serialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Assumption {
    /// What is assumed.
    pub assumption: Prose,
    /// What supports it.
    pub evidence: Option<Prose>,
    /// What is done if it fails.
    pub if_it_fails: Option<Prose>,
}

/// A signature that the plan needs.
#[derive(Clone, Debug, Deserialize, Serialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Approval {
    /// Printed name; may be left to be filled in.
    pub name: Option<Prose>,
    /// Role.
    pub role: Prose,
    /// What the signature means.
    pub meaning: Option<Prose>,
}

/// What changed since the revision before.
#[derive(Clone, Debug, Deserialize, Serialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Change {
    /// What changed.
    pub what: Option<Prose>,
    /// Why.
    pub why: Option<Prose>,
    /// What it does to the risks.
    pub effect: Option<Prose>,
    /// Whether it was made `before` or `after` data were seen.
    #[schemars(extend("enum" = ["before", "after"]))]
    pub data: Option<Scalar>,
}
