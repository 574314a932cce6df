//! The problem a plan poses: exact sets, level and requirements, free of the plan's wording.

mod critical_region;
mod declared;
mod grid;
mod observation;
mod pose;
mod sets;
mod shape;
mod stages;

use std::sync::Arc;

use crate::family::Family;
use crate::kernel::exact::Exact;
use crate::kernel::region::Region;
use crate::language::diagnostic::Span;
use crate::language::plan::{AcceptWhen, Tails};
use crate::space::LineSet;

pub use grid::default_points;
pub use observation::Observation;
pub use pose::pose;
pub use shape::Shape;
pub use stages::Stage;

/// A problem that makes sense: the null is a non-empty proper part of the space, requirements lie in the alternative.
#[derive(Clone, Debug)]
pub struct Problem {
    /// The family of the observations.
    pub family: Arc<dyn Family>,
    /// The parameter space Θ.
    pub space: LineSet,
    /// The null subset Θ₀.
    pub null: LineSet,
    /// The alternative Θ∖Θ₀.
    pub alternative: LineSet,
    /// The shape of the null, its ends as observed.
    pub shape: Shape,
    /// How inspection sees the parameter.
    pub observation: Observation,
    /// The level α.
    pub alpha: Exact,
    /// How α is shared between two tails.
    pub tails: Tails,
    /// The amount of inspection.
    pub amount: AmountRequest,
    /// A region to audit instead of deriving one.
    pub given_region: Option<Region>,
    /// Stages of a staged or sequential design; empty for a single sample.
    pub stages: Vec<Stage>,
    /// How many tries the null gets: one more than the retests allowed.
    pub tries: u32,
    /// Requirements on the power.
    pub requirements: Vec<Requirement>,
    /// Points of the power table that the plan asks for.
    pub points: Vec<Exact>,
    /// Points asked for that the parameter cannot take: left out of the report.
    pub points_left_out: usize,
    /// Which outcome releases the lot.
    pub accept_when: AcceptWhen,
    /// Lot size of rectifying inspection.
    pub rectified_lot: Option<u64>,
    /// Where the sample size stands in the plan, for messages.
    pub amount_span: Span,
    /// Where the critical region or the null stands, for messages.
    pub region_span: Span,
}

/// The amount of inspection: given or searched for.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum AmountRequest {
    /// Given.
    Given(Exact),
    /// The smallest multiple of the step that will do.
    Smallest {
        /// One for counts.
        step: Exact,
    },
}

/// A requirement: the infimum of the power over the set.
#[derive(Clone, Debug)]
pub struct Requirement {
    /// Where.
    pub set: LineSet,
    /// The least infimum wanted.
    pub at_least: Exact,
    /// The plan's reason.
    pub because: Option<String>,
    /// Where it stands in the plan.
    pub span: Span,
}
