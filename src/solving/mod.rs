//! From problem to solution: region, size, power, envelope, sample size, each with its proof.

mod acceptance;
mod branch_and_bound;
mod double_entry;
mod envelope;
mod extremum;
mod general;
mod inner_range;
mod joint_tails;
mod judgement;
mod obstacle;
mod operating;
mod rectification;
mod region;
mod rule;
mod sample_size;
mod solution;
mod staged;
mod tail_bound;
mod threshold;

pub use double_entry::DoubleEntry;
pub use envelope::envelope;
pub use extremum::{Extremum, Goal, extremum};
pub use obstacle::Obstacle;
pub use operating::Operating;
pub use rectification::{Rectified, RectifiedPoint};
pub use region::{Form, derive, form_of};
pub use rule::Rule;
pub use sample_size::{Search, smallest};
pub use solution::{
    Optimality, Placed, PowerPoint, RequirementOutcome, Solution, SolvedStage, solve,
};
pub use staged::StagedRule;

/// Where long work says how far it is. Pure callers use [`Silent`].
pub trait Progress: Sync {
    /// A step of something is done; `false` asks to stop.
    fn step(&self, what: &str, done: u64, of: Option<u64>) -> bool;
}

/// Says nothing and never stops.
#[derive(Clone, Copy, Debug, Default)]
pub struct Silent;

impl Progress for Silent {
    fn step(&self, _what: &str, _done: u64, _of: Option<u64>) -> bool {
        true
    }
}
