//! Inspection that sometimes errs: what is seen is not what is there.

use crate::record::Record;
use crate::report::escape::inline;
use crate::report::words::claim::percent;

use super::{Fact, fact, sentence};

/// The declared error rates and what they do to the observed parameter; none where inspection is taken as perfect.
pub fn facts(record: &Record) -> Vec<Fact> {
    let Some(errors) = &record.inspection else {
        return Vec::new();
    };
    vec![
        fact(
            "Misses",
            range(errors.misses, "of what is nonconforming is passed"),
        ),
        fact(
            "False alarms",
            range(
                errors.false_alarms,
                "of what conforms is called nonconforming",
            ),
        ),
        fact("What is seen", sentence(&errors.observed)),
        fact(
            "Effect",
            inline(
                "All figures of this report are for what is there, judged by this inspection; of a range the worse end counts.",
            ),
        ),
    ]
}

fn range([least, most]: [f64; 2], of_what: &str) -> String {
    if least == most {
        format!("{} {of_what}.", percent(least))
    } else {
        format!("{} to {} {of_what}.", percent(least), percent(most))
    }
}
