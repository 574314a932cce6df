//! Why a problem has no solution.

use crate::kernel::exact::Exact;

/// What stands between a problem and its solution.
#[derive(Clone, Debug, PartialEq)]
pub enum Obstacle {
    /// No non-empty region has a size of at most the level at this amount.
    LevelUnreachable {
        /// The region that comes nearest.
        rule: String,
        /// Its size, the smallest that a non-empty region has here.
        smallest: f64,
        /// Whether each of two tails was held to half the level.
        halved: bool,
        /// The smallest amount at which the level can be reached, if one was found.
        needed: Option<Exact>,
    },
    /// The region that the plan gives holds no outcome that can occur at this amount.
    ImpossibleRegion,
    /// No amount up to the limit meets level and requirements.
    SearchExhausted {
        /// The largest amount tried.
        limit: Exact,
        /// What still failed there.
        failing: String,
    },
    /// Enclosures and exact arithmetic within its budget leave the question open.
    NotProved {
        /// The open question.
        question: String,
    },
    /// The region would have no largest count.
    NoLargestRegion,
    /// The sample is larger than the lots that are to be sorted.
    SampleBeyondLot {
        /// The amount of inspection.
        amount: Exact,
        /// Units in a lot.
        lot: u64,
    },
    /// Sorting of lots is derived only where lots are released at small counts.
    NoRectification,
    /// The caller asked to stop.
    Stopped,
}
