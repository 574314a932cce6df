//! A record as text for a terminal: facts, requirements, and the power function as a table with bars.

use std::fmt::Write;

use crate::language::render::harmless;
use crate::record::Record;
use crate::report::{Glance, GlanceRow, glance};

use super::terminal::{BOLD, DIM, GREEN, RED, styled, wrapped};

/// A bar wider than this tells no more.
const WIDEST_BAR: usize = 40;
/// A bar narrower than this tells nothing and is left out.
const NARROWEST_BAR: usize = 8;
/// A block cut from the left in eighths.
const EIGHTHS: [char; 8] = [' ', '▏', '▎', '▍', '▌', '▋', '▊', '▉'];

/// What the blocks of a bar mean.
const LEGEND: [(char, &str); 2] = [
    ('█', "probability of rejecting the null"),
    ('░', "what the best test of this level could add"),
];

/// The picture of a record in so many columns.
pub fn of(record: &Record, width: usize) -> String {
    let glance = glance(record);
    let mut out = String::new();
    for line in wrapped(&harmless(&glance.heading), width) {
        let _ = writeln!(out, "{}", styled(&line, BOLD));
    }
    out.push('\n');
    facts(&mut out, &glance, width);
    stages(&mut out, &glance);
    requirements(&mut out, &glance, width);
    power(&mut out, &glance, width);
    out
}

fn facts(out: &mut String, glance: &Glance, width: usize) {
    let column = glance
        .facts
        .iter()
        .map(|(label, _)| label.chars().count())
        .max()
        .unwrap_or_default();
    for (label, text) in &glance.facts {
        let lines = wrapped(&harmless(text), width.saturating_sub(column + 2).max(20));
        for (at, line) in lines.iter().enumerate() {
            let label = if at == 0 { label.as_str() } else { "" };
            let padded = format!("{label:<column$}");
            let _ = writeln!(out, "{}  {line}", styled(&padded, DIM));
        }
    }
}

/// The table of limits that the rule of a staged design refers to.
fn stages(out: &mut String, glance: &Glance) {
    if glance.stages.is_empty() {
        return;
    }
    let headings = ["inspected", "accept at", "refuse at"].map(str::to_owned);
    let widths = widths_of(&headings, glance.stages.iter().map(<[String; 3]>::as_slice));
    let _ = writeln!(out, "\n{}", styled(&line_of(&headings, &widths), BOLD));
    for row in &glance.stages {
        let _ = writeln!(out, "{}", line_of(row, &widths));
    }
}

fn requirements(out: &mut String, glance: &Glance, width: usize) {
    let style = if glance.status == "Proved" {
        GREEN
    } else {
        RED
    };
    let _ = writeln!(out, "\n{}", styled(glance.status, style));
    for (text, met) in &glance.requirements {
        let (mark, style) = if *met {
            ("met    ", GREEN)
        } else {
            ("not met", RED)
        };
        for (at, line) in wrapped(&harmless(text), width.saturating_sub(9).max(20))
            .iter()
            .enumerate()
        {
            let mark = if at == 0 {
                styled(mark, style)
            } else {
                " ".repeat(7)
            };
            let _ = writeln!(out, "{mark}  {line}");
        }
    }
}

fn power(out: &mut String, glance: &Glance, width: usize) {
    let rows = glance.rows.iter().map(|row| row.cells.as_slice());
    let widths = widths_of(&glance.columns, rows);
    let taken: usize = widths.iter().map(|width| width + 2).sum();
    let bar = Some(width.saturating_sub(taken).min(WIDEST_BAR)).filter(|bar| *bar >= NARROWEST_BAR);
    let heading = line_of(&glance.columns, &widths);
    let _ = writeln!(out, "\n{}", styled(heading.trim_end(), BOLD));
    for row in &glance.rows {
        let cells = line_of(&row.cells, &widths);
        let bar = bar.map_or_else(String::new, |bar| bar_of(row, bar));
        let _ = writeln!(out, "{}", format!("{cells}  {bar}").trim_end());
    }
    if bar.is_some() {
        for (mark, meaning) in LEGEND {
            let _ = writeln!(out, "{}", styled(&format!("{mark} {meaning}"), DIM));
        }
    }
}

/// How wide each column must be.
fn widths_of<'a>(headings: &[String], rows: impl Iterator<Item = &'a [String]>) -> Vec<usize> {
    let columns = |text: &String| text.chars().count();
    let mut widths: Vec<usize> = headings.iter().map(columns).collect();
    for row in rows {
        for (width, cell) in widths.iter_mut().zip(row) {
            *width = columns(cell).max(*width);
        }
    }
    widths
}

fn line_of(cells: &[String], widths: &[usize]) -> String {
    let cells: Vec<String> = cells
        .iter()
        .zip(widths)
        .map(|(cell, width)| format!("{cell:>width$}"))
        .collect();
    cells.join("  ")
}

/// The rejection probability in full blocks, and after it what the envelope has more, in light ones.
fn bar_of(row: &GlanceRow, width: usize) -> String {
    let full = eighths(row.rejects, width);
    let mut bar = "█".repeat(full / 8);
    let mut cells = full / 8;
    if !full.is_multiple_of(8) {
        bar.push(EIGHTHS[full % 8]);
        cells += 1;
    }
    let envelope = eighths(row.envelope.unwrap_or_default(), width).div_ceil(8);
    bar.push_str(&"░".repeat(envelope.saturating_sub(cells)));
    bar
}

/// A probability as a length in eighths of a column. It only paints a bar.
#[allow(clippy::cast_possible_truncation, clippy::cast_sign_loss)]
fn eighths(probability: f64, width: usize) -> usize {
    (probability.clamp(0.0, 1.0) * 8.0 * width as f64).floor() as usize
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::record::fixture;

    fn row(rejects: f64, envelope: Option<f64>) -> GlanceRow {
        GlanceRow {
            cells: Vec::new(),
            rejects,
            envelope,
        }
    }

    #[test]
    fn bars_are_as_long_as_the_probability() {
        assert_eq!(bar_of(&row(1.0, None), 10), "██████████");
        assert_eq!(bar_of(&row(0.25, None), 10), "██▌");
        assert_eq!(bar_of(&row(0.25, Some(0.5)), 10), "██▌░░");
        assert_eq!(bar_of(&row(0.0, Some(0.0)), 10), "");
    }

    #[test]
    fn no_line_is_wider_than_the_terminal() {
        let record = fixture::pouches();
        for width in [60, 80, 100, 120] {
            let text = anstream::adapter::strip_str(&of(&record, width)).to_string();
            for line in text.lines() {
                assert!(line.chars().count() <= width, "{width}: {line}");
            }
        }
    }
}
