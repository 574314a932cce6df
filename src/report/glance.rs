//! What a terminal shows of a record: the same sentences and the same rounded figures as the report, without markup.

use std::cmp::Ordering;

use pulldown_cmark::{Event, Parser};

use crate::record::{Design, Record, RequirementResult, Stage};

use super::page::status_word;
use super::power_table;
use super::words::quantity::amount_text;
use super::words::subject::{Subject, coordinate};
use super::words::{claim, rule, sample, stages};

/// The essence of a record as plain text.
#[derive(Clone, Debug)]
pub struct Glance {
    /// Plan number, revision and title.
    pub heading: String,
    /// Facts with a label each.
    pub facts: Vec<(String, String)>,
    /// The requirements, and whether each is met.
    pub requirements: Vec<(String, bool)>,
    /// `Proved`, or what stands against it.
    pub status: &'static str,
    /// The limits of a staged design: inspected so far, accept at, refuse at.
    pub stages: Vec<[String; 3]>,
    /// Headings of the power table.
    pub columns: Vec<String>,
    /// Rows of the power table.
    pub rows: Vec<GlanceRow>,
}

/// A row of the power table.
#[derive(Clone, Debug)]
pub struct GlanceRow {
    /// A cell for each column.
    pub cells: Vec<String>,
    /// Probability of rejecting the null, between 0 and 1.
    pub rejects: f64,
    /// The highest rejection probability that any test of this level could have here.
    pub envelope: Option<f64>,
}

/// A record at a glance.
pub fn glance(record: &Record) -> Glance {
    let subject = Subject::new(record);
    Glance {
        heading: format!(
            "{}, revision {}: {}",
            record.plan.id,
            record.plan.revision,
            plain(&crate::report::escape::inline(&record.plan.title))
        ),
        facts: facts(record, &subject),
        requirements: record
            .requirements
            .iter()
            .map(|each| {
                let words = claim::requirement(record, &subject, each);
                (plain(&rule::capitalised(&words)), each.met)
            })
            .collect(),
        status: status_word(record),
        stages: stages::rows(record)
            .into_iter()
            .map(|row| [row.inspected, row.accept, row.refuse].map(|cell| plain(&cell)))
            .collect(),
        columns: columns(record),
        rows: rows(record, &subject),
    }
}

/// A record in one line of a table.
#[derive(Clone, Debug)]
pub struct Brief {
    /// The sample: a number, or what ends the inspection.
    pub sample: String,
    /// The critical region.
    pub rejects_when: String,
    /// The proved size, rounded up.
    pub size: String,
    /// The requirement that is missed by most, or else met by least: what is attained and what is required.
    pub tightest: Option<String>,
    /// `Proved`, or what stands against it.
    pub status: &'static str,
}

/// A record in brief.
pub fn brief(record: &Record) -> Brief {
    let margin = |each: &RequirementResult| each.attained.lower - each.at_least;
    let tightest = record.requirements.iter().min_by(|a, b| {
        (a.met, margin(a))
            .partial_cmp(&(b.met, margin(b)))
            .unwrap_or(Ordering::Equal)
    });
    Brief {
        sample: sample_of(&record.design),
        rejects_when: record.critical_region.reject_when.clone(),
        size: claim::size(record),
        tightest: tightest.map(|each| {
            let attained = claim::power(each.attained, each.at_least, each.met);
            let sign = if each.met { "≥" } else { "<" };
            format!("{attained} {sign} {}", claim::percent(each.at_least))
        }),
        status: status_word(record),
    }
}

fn sample_of(design: &Design) -> String {
    match (design.stop_at_nonconforming, design.sample_size) {
        (Some(stop), _) => format!("until {stop}"),
        (None, Some(size)) => amount_text(size),
        (None, None) => stages_of(&design.stages),
    }
}

/// The units inspected when each stage is complete: `99/198`; of many stages only the last.
fn stages_of(stages: &[Stage]) -> String {
    let sizes = stages
        .iter()
        .map(|stage| amount_text(stage.cumulative_size));
    match stages {
        [_, _, _, _, .., last] => format!("up to {}", amount_text(last.cumulative_size)),
        _ => sizes.collect::<Vec<_>>().join("/"),
    }
}

fn facts(record: &Record, subject: &Subject<'_>) -> Vec<(String, String)> {
    let problem = &record.problem;
    let reached = if record.size.attained {
        "at"
    } else {
        "approached at"
    };
    let place = coordinate(record, &record.size.at).map_or_else(String::new, |at| {
        format!(" {reached} {}", subject.figure(at))
    });
    let mut facts = vec![
        ("Family".to_owned(), problem.family.replace('_', " ")),
        ("Space".to_owned(), problem.parameter_space.clone()),
        ("Null".to_owned(), problem.null_subset.clone()),
        ("Alternative".to_owned(), problem.alternative.clone()),
        ("Rule".to_owned(), rule::sentence(record, subject)),
        (
            "Rejects when".to_owned(),
            record.critical_region.reject_when.clone(),
        ),
        (
            "Size".to_owned(),
            format!(
                "{}{place}; the level is {}",
                claim::size(record),
                claim::percent(problem.alpha)
            ),
        ),
        (
            "Optimality".to_owned(),
            format!(
                "{} ({})",
                record.optimality.claim, record.optimality.theorem
            ),
        ),
    ];
    let search = record.sample_size_search.as_ref();
    facts.extend(
        search
            .map(|_| sample::facts(record, subject))
            .unwrap_or_default()
            .into_iter()
            .map(|fact| (fact.label, fact.text)),
    );
    facts
        .into_iter()
        .map(|(label, text)| (label, plain(&text)))
        .collect()
}

fn columns(record: &Record) -> Vec<String> {
    let mut columns = vec![
        record.problem.parameter.clone(),
        "rejects".to_owned(),
        "lot accepted".to_owned(),
    ];
    if record.power.iter().any(|row| row.envelope.is_some()) {
        columns.push("envelope".to_owned());
    }
    columns
}

fn rows(record: &Record, subject: &Subject<'_>) -> Vec<GlanceRow> {
    let table = power_table::table(record, subject);
    table
        .rows
        .into_iter()
        .zip(&record.power)
        .map(|(row, point)| {
            let mut cells = vec![plain(&row.at), row.rejects, row.accepted];
            if table.has_envelope {
                cells.push(row.envelope);
            }
            GlanceRow {
                cells,
                rejects: point.value,
                envelope: point.envelope,
            }
        })
        .collect()
}

/// Markdown without its markup.
fn plain(markdown: &str) -> String {
    let mut out = String::new();
    // A text that begins like a list or a heading is still one line of text here.
    let guarded = format!("\u{2060}{markdown}");
    for event in Parser::new(&guarded) {
        match event {
            Event::Text(text) | Event::Code(text) => out.push_str(&text),
            Event::SoftBreak | Event::HardBreak => out.push(' '),
            _ => {}
        }
    }
    out.trim_start_matches('\u{2060}').to_owned()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::record::{Amount, fixture};

    #[test]
    fn markup_is_taken_away_and_text_is_kept() {
        assert_eq!(plain(r"**Proved**: `x <= 1`, a\*b"), "Proved: x <= 1, a*b");
        assert_eq!(plain("0 <= p <= 1"), "0 <= p <= 1");
        assert_eq!(plain("- one"), "- one");
        assert_eq!(plain("1. one"), "1. one");
    }

    #[test]
    fn few_stages_are_listed_and_many_are_summed_up() {
        let stages = |number: u64| {
            let stage = |at| Stage {
                cumulative_size: Amount::Count(50 * at),
                retain_null: None,
                reject_null: None,
            };
            stages_of(&(1..=number).map(stage).collect::<Vec<_>>())
        };
        assert_eq!(stages(2), "50/100");
        assert_eq!(stages(9), "up to 450");
    }

    #[test]
    fn figures_are_those_of_the_report() {
        let record = fixture::pouches();
        let glance = glance(&record);
        let report = crate::report::markdown(&record).unwrap();
        for row in &glance.rows {
            assert!(report.contains(&row.cells[1]), "{row:?}");
        }
        assert_eq!(glance.rows.len(), record.power.len());
    }
}
