//! The table at the end of a run: one line a plan.

use std::fmt::Write;
use std::path::Path;

use crate::command::file_text;
use crate::command::status::Status;
use crate::command::terminal::{BOLD, GREEN, RED, YELLOW, cut, cut_front, styled};

use super::cabinet::Filed;
use super::job::Outcome;

const HEADINGS: [&str; 7] = [
    "plan",
    "rev",
    "n",
    "rejects when",
    "size",
    "tightest requirement",
    "status",
];
/// No cell is wider, but for the last.
const WIDEST_CELL: usize = 36;

/// The table of a run, and a line that counts.
pub fn table(outcomes: &[Outcome], folder: &Path) -> String {
    let rows: Vec<[String; 7]> = outcomes.iter().map(cells).collect();
    let widths: Vec<usize> = (0..HEADINGS.len())
        .map(|column| {
            let cells = rows.iter().map(|row| row[column].chars().count());
            cells.max().unwrap_or_default().max(HEADINGS[column].len())
        })
        .collect();
    let mut out = String::new();
    let headings = line(&HEADINGS.map(str::to_owned), &widths);
    let _ = writeln!(out, "{}", styled(headings.trim_end(), BOLD));
    for (row, outcome) in rows.iter().zip(outcomes) {
        let all = line(row, &widths);
        let (figures, status) = all.split_at(all.len() - row[6].len());
        let _ = writeln!(out, "{figures}{}", styled(status, style(outcome.status)));
    }
    let _ = writeln!(out, "\n{}", closing(outcomes, folder));
    out
}

fn line(cells: &[String; 7], widths: &[usize]) -> String {
    let mut out = String::new();
    for (at, (cell, width)) in cells.iter().zip(widths).enumerate() {
        match at {
            0 => {}
            _ => out.push_str("  "),
        }
        let _ = match at {
            2 | 4 => write!(out, "{cell:>width$}"),
            6 => write!(out, "{cell}"),
            _ => write!(out, "{cell:<width$}"),
        };
    }
    out
}

fn cells(outcome: &Outcome) -> [String; 7] {
    let (plan, revision) = match &outcome.identity {
        Some(identity) => (identity.id.clone(), identity.revision.clone()),
        None => (
            cut_front(&file_text::shown(&outcome.path), WIDEST_CELL),
            String::new(),
        ),
    };
    let dash = || "–".to_owned();
    let (sample, rule, size, requirement) = match &outcome.brief {
        Some(brief) => (
            brief.sample.clone(),
            brief.rejects_when.clone(),
            brief.size.clone(),
            brief.tightest.clone().unwrap_or_else(dash),
        ),
        None => (dash(), dash(), dash(), dash()),
    };
    let [plan, revision, sample, rule, size, requirement] =
        [plan, revision, sample, rule, size, requirement].map(|cell| cut(&cell, WIDEST_CELL));
    [
        plan,
        revision,
        sample,
        rule,
        size,
        requirement,
        status(outcome),
    ]
}

fn status(outcome: &Outcome) -> String {
    let word = match &outcome.brief {
        _ if outcome.refused => "refused",
        _ if outcome.status == Status::Internal => "internal error",
        Some(brief) => brief.status,
        None => "error",
    };
    let mut status = word.to_lowercase();
    match outcome.filed {
        Some(Filed::Same) => status.push_str(", as filed before"),
        Some(Filed::Replaced) => status.push_str(", replaced"),
        Some(Filed::New) | None => {}
    }
    match outcome.cautions {
        0 => {}
        1 => status.push_str(", 1 caution"),
        more => {
            let _ = write!(status, ", {more} cautions");
        }
    }
    status
}

fn style(status: Status) -> anstyle::Style {
    match status {
        Status::Fine => GREEN,
        Status::Finding => YELLOW,
        Status::BadInput | Status::Internal => RED,
    }
}

fn closing(outcomes: &[Outcome], folder: &Path) -> String {
    let filed = outcomes
        .iter()
        .filter(|outcome| outcome.filed.is_some())
        .count();
    let plans = match outcomes.len() {
        1 => "1 plan".to_owned(),
        more => format!("{more} plans"),
    };
    format!("{filed} of {plans} filed in {}", file_text::shown(folder))
}
