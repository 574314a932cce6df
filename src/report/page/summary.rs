//! The page-one box: at most twelve lines, and the word that says how the plan stands.

use crate::record::{Amount, Record};
use crate::report::escape::inline;
use crate::report::words::quantity::amount_text;
use crate::report::words::subject::{Subject, coordinate};
use crate::report::words::{Fact, claim, declared, fact, family, rule};

use super::lines::field;

/// The page-one box: at most twelve lines.
pub fn summary(record: &Record, subject: &Subject<'_>) -> Vec<Fact> {
    let population = declared::facts(record, "population");
    let population = population
        .iter()
        .find(|each| matches!(each.label.as_str(), "Lot" | "Process"))
        .map_or_else(|| "**not stated**".to_owned(), |each| each.text.clone());
    vec![
        fact("Claim", claim::sentence(record, subject)),
        fact(
            "Null in words",
            format!("{}.", claim::null(record, subject)),
        ),
        fact("Sample", sample_line(record, subject)),
        fact("Rule", rule::sentence(record, subject)),
        fact("Size", size_line(record, subject)),
        fact(
            power_label(record),
            claim::power_at_good_level(record, subject),
        ),
        fact("Population", population),
        fact("Assumptions", assumptions_line(record)),
        fact("Status", status(record)),
        fact("Plan hash", format!("`{}`", record.plan.sha256)),
    ]
}

fn sample_line(record: &Record, subject: &Subject<'_>) -> String {
    let design = &record.design;
    match (
        design.stop_at_nonconforming,
        design.sample_size,
        design.lot_size,
    ) {
        (Some(stop), ..) => format!(
            "As many {} as it takes to find {}.",
            subject.unit_plural(),
            subject.some_counted(stop)
        ),
        (None, Some(size), Some(lot)) => format!(
            "n = {} of the {} {} of the lot.",
            amount_text(size),
            amount_text(Amount::Count(lot)),
            subject.unit_plural()
        ),
        (None, Some(size), None) => format!("n = {}.", subject.units(size)),
        (None, None, _) => stages_line(record, subject),
    }
}

fn assumptions_line(record: &Record) -> String {
    let entries = declared::entries(record, "assumptions");
    let supported = entries
        .iter()
        .filter(|entry| field(entry, "evidence").is_some())
        .count();
    let family = family::text_of(&record.problem.family).map_or_else(
        || inline(&record.problem.family),
        |text| text.name.to_owned(),
    );
    match entries.len() {
        0 => format!("Of the {family} family; **the plan states no evidence for them**."),
        1 if supported == 1 => {
            format!("Of the {family} family; evidence is stated for the one declared.")
        }
        all if all == supported => {
            format!("Of the {family} family; evidence is stated for each of the {all} declared.")
        }
        all => format!(
            "Of the {family} family; **evidence is stated for {supported} of the {all} declared**."
        ),
    }
}

/// The status word and what it rests on.
pub fn status_word(record: &Record) -> &'static str {
    if !record.size.within_level {
        "Level exceeded"
    } else if record.requirements.iter().any(|each| !each.met) {
        "Requirement not met"
    } else {
        "Proved"
    }
}

fn status(record: &Record) -> String {
    let met = record.requirements.iter().filter(|each| each.met).count();
    let level = if record.size.within_level {
        "the level is kept"
    } else {
        "the size is above the level"
    };
    let power = match record.requirements.len() {
        0 => "no power is required".to_owned(),
        all if met == all => format!("{met} of {all} power requirements met"),
        all => format!("**{met} of {all} power requirements met**"),
    };
    let cautions = match record.cautions.len() {
        0 => "no cautions".to_owned(),
        1 => "1 caution".to_owned(),
        more => format!("{more} cautions"),
    };
    let document =
        declared::scalar(record, "plan", "status").map_or_else(|| "not stated".to_owned(), inline);
    format!(
        "**{}**: {level}, {power}, {cautions}. Document: {document}.",
        status_word(record)
    )
}

/// The size with where it lies.
fn size_line(record: &Record, subject: &Subject<'_>) -> String {
    let size = &record.size;
    let place = coordinate(record, &size.at).map_or_else(String::new, |at| {
        let reached = if size.attained { "" } else { "approached " };
        format!(", {reached}at {}", subject.point(at))
    });
    format!(
        "{}{place}; the level is {}.",
        claim::size(record),
        claim::percent(record.problem.alpha)
    )
}

/// In the alternative the lot is good where rejection releases it, and bad where it does not.
fn power_label(record: &Record) -> &'static str {
    if rule::accepts_by_rejecting(record) {
        "Power at the good level"
    } else {
        "Power at the bad level"
    }
}

fn stages_line(record: &Record, subject: &Subject<'_>) -> String {
    let stages = &record.design.stages;
    match stages.last() {
        Some(last) => format!(
            "{} stages, at most {}.",
            stages.len(),
            subject.units(last.cumulative_size)
        ),
        None => "Not stated.".to_owned(),
    }
}
