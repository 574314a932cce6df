//! The terms a report uses, each in a sentence of our own. Only terms that the report in hand uses are printed.

use crate::record::Record;

use super::rule::accepts_by_rejecting;
use super::{Fact, fact};

/// The glossary of a report.
pub fn terms(record: &Record) -> Vec<Fact> {
    let mut terms = vec![
        (
            "Parameter space Θ",
            "All values of the parameter that are thought possible.",
        ),
        (
            "Null subset Θ₀",
            "The values that the test may wrongly reject only with a small probability, the level.",
        ),
        (
            "Alternative Θ∖Θ₀",
            "All other values: what is concluded when the null is rejected.",
        ),
        (
            "Critical region",
            "The results on which the null is rejected; fixed before any data are seen.",
        ),
        ("Level α", "The largest size the plan allows."),
        (
            "Size",
            "The largest probability of rejecting the null anywhere in the null subset: what the plan really risks, at most α.",
        ),
        (
            "Power",
            "The probability of rejecting the null, as a function of the parameter; in the alternative, large is good.",
        ),
        (
            "Envelope",
            "The highest power that any test of this level could have at a point, tests that toss a coin included.",
        ),
        (
            "Consumer's risk",
            "The probability that a lot is accepted that should not be.",
        ),
        (
            "Producer's risk",
            "The probability that a lot is not accepted that should be.",
        ),
    ];
    if accepts_by_rejecting(record) {
        terms.push((
            "Confidence",
            "One minus the size: how often, at the least, a lot within the null would have failed.",
        ));
    }
    if record.problem.family == "hypergeometric" {
        terms.push((
            "Isolated lot",
            "A lot judged by itself; what is claimed is claimed for its units only.",
        ));
    }
    terms.push(("Enclosure", "A lower and an upper bound between which the true value is proved to lie; printed figures are the end that does not flatter the plan."));
    terms.push(("Seal", "Hashes that change with any alteration of what they cover; they do not show who made a record, and are not signatures."));
    terms
        .into_iter()
        .map(|(term, meaning)| fact(term, meaning))
        .collect()
}
