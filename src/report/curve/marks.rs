//! What is marked on the curve: the quality accepted so often, the requirements, and the legend that explains it all.

use std::fmt::Write;

use crate::record::Record;
use crate::report::round::Toward;
use crate::report::words::claim;
use crate::report::words::rule::accepts_by_rejecting;
use crate::report::words::subject::coordinate as tested;

use super::Layout;
use super::drawing::Drawing;
use super::line::Place;
use super::scale::coordinate;

impl Drawing<'_> {
    /// The quality accepted 95 %, 50 % and 10 % of the time: a ring on the curve and its value beside it.
    pub(super) fn acceptance(&mut self) {
        let rises = match (self.points.first(), self.points.last()) {
            (Some(first), Some(last)) => last.1.lot_accepted.value > first.1.lot_accepted.value,
            _ => false,
        };
        for (key, share) in [
            ("probability_0.95_at", 0.95),
            ("probability_0.50_at", 0.5),
            ("probability_0.10_at", 0.1),
        ] {
            let at = self
                .record
                .acceptance
                .get(key)
                .and_then(|point| tested(self.record, point));
            let Some(at) = at.filter(|at| self.across.holds(*at)) else {
                continue;
            };
            let Some(height) = self.acceptance_height(at, share) else {
                continue;
            };
            let place = Place {
                x: self.across.place(at),
                y: self.up.place(height),
            };
            let toward = if rises == (share < 0.3) {
                Toward::Down
            } else {
                Toward::Up
            };
            let value = self.subject.computed(at, toward);
            let said = if self.subject.is_lattice() {
                format!("at least {} % accepted up to {value}", share_text(share))
            } else {
                format!("{} % accepted at {value}", share_text(share))
            };
            self.line("drop", place.x, place.y, place.x, self.measures.plot[3]);
            self.circle("ring", place, 4.5);
            let lift = if share < 0.3 { -8.0 } else { 4.0 };
            self.note(place, rises, lift, &said);
        }
    }

    /// Words beside a ring, on the side that the curve leaves free, and never beyond the sheet.
    fn note(&mut self, ring: Place, to_the_left: bool, lift: f64, words: &str) {
        // About the width of a letter; there is nothing to measure with.
        let width = 6.5 * words.chars().count() as f64;
        let [left, _, right, _] = self.measures.plot;
        let y = ring.y + lift;
        if to_the_left && ring.x - 10.0 - width >= left {
            self.label("note end", ring.x - 10.0, y, words);
        } else if !to_the_left && ring.x + 10.0 + width > right {
            self.label("note end", right, y, words);
        } else {
            self.label("note", ring.x + 10.0, y, words);
        }
    }

    /// How high the ring stands: at the share itself, or where the parameter moves in steps at the point that the table
    /// holds there.
    pub(super) fn acceptance_height(&self, at: f64, share: f64) -> Option<f64> {
        if !self.subject.is_lattice() {
            return Some(share);
        }
        self.points
            .iter()
            .find(|point| point.0 == at)
            .map(|point| point.1.lot_accepted.value)
    }

    /// A bracket at the height that the requirement asks for: acceptance must stay on the side that the arrow shows.
    pub(super) fn requirements(&mut self) {
        let accepts = accepts_by_rejecting(self.record);
        let wanted: Vec<(String, f64)> = self
            .record
            .requirements
            .iter()
            .map(|each| (each.where_set.clone(), each.at_least))
            .collect();
        for (set, at_least) in wanted {
            let height = if accepts { at_least } else { 1.0 - at_least };
            let y = self.up.place(height);
            let side = if accepts { -1.0 } else { 1.0 };
            for (from, to) in self.stretches(&set) {
                let (from, to) = if to - from < 8.0 {
                    let middle = f64::midpoint(from, to);
                    (middle - 4.0, middle + 4.0)
                } else {
                    (from, to)
                };
                let foot = coordinate(y - side * 7.0);
                let _ = writeln!(
                    self.out,
                    "<path class=\"required\" d=\"M{} {foot}V{}H{}V{foot}\"/>",
                    coordinate(from),
                    coordinate(y),
                    coordinate(to)
                );
                let middle = f64::midpoint(from, to);
                let _ = writeln!(
                    self.out,
                    "<path class=\"arrow\" d=\"M{} {}h8l-4 {}z\"/>",
                    coordinate(middle - 4.0),
                    coordinate(y),
                    coordinate(side * 7.0)
                );
            }
        }
    }

    pub(super) fn legend_rows(&mut self) {
        let [left, _, right, bottom] = self.measures.plot;
        let columns = if self.layout == Layout::Page { 2 } else { 1 };
        let column_width = (right - left) / columns as f64;
        let legend = std::mem::take(&mut self.legend);
        for (at, (kind, words)) in legend.iter().enumerate() {
            let x = left + (at % columns) as f64 * column_width;
            let y = bottom + 62.0 + (at / columns) as f64 * 22.0;
            self.sample(kind, x, y);
            self.label("key", x + 34.0, y + 4.0, words);
        }
    }

    /// A sample of what a line of the legend explains.
    pub(super) fn sample(&mut self, kind: &str, x: f64, y: f64) {
        match kind {
            "point" => self.circle("point", Place { x: x + 13.0, y }, 3.2),
            "ring" => self.circle("ring", Place { x: x + 13.0, y }, 4.5),
            "null" => {
                for (fill, pattern) in [
                    ("null", String::new()),
                    (
                        "hatched",
                        format!(" fill=\"url(#{}-hatch)\"", self.measures.name),
                    ),
                ] {
                    let _ = writeln!(
                        self.out,
                        "<rect class=\"{fill}\"{pattern} x=\"{}\" y=\"{}\" width=\"26\" height=\"12\"/>",
                        coordinate(x),
                        coordinate(y - 6.0)
                    );
                }
            }
            "required" => {
                let _ = writeln!(
                    self.out,
                    "<path class=\"required\" d=\"M{} {}v-5h22v5\"/>",
                    coordinate(x + 2.0),
                    coordinate(y + 4.0)
                );
            }
            other => self.line(other, x, y, x + 26.0, y),
        }
    }
}

/// The lines of the legend: what is drawn, and nothing else.
pub(super) fn legend(record: &Record) -> Vec<(&'static str, String)> {
    let lattice = record.problem.family == "hypergeometric";
    let accepts = accepts_by_rejecting(record);
    let alpha = claim::percent(record.problem.alpha);
    let mut lines = vec![(
        if lattice { "point" } else { "power" },
        "this plan".to_owned(),
    )];
    if record
        .power
        .iter()
        .any(|row| row.envelope.is_some() && row.subset == "alternative")
    {
        let bound = if accepts { "most" } else { "least" };
        lines.push((
            "envelope",
            format!("{bound} that any test of level {alpha} could do"),
        ));
    }
    lines.push(("null", "null subset".to_owned()));
    lines.push((
        "level",
        if accepts {
            format!("level: at most {alpha} accepted")
        } else {
            format!("level: at most {alpha} not accepted")
        },
    ));
    if !record.requirements.is_empty() {
        lines.push((
            "required",
            if accepts {
                "required: acceptance above"
            } else {
                "required: acceptance below"
            }
            .to_owned(),
        ));
    }
    if !record.acceptance.is_empty() {
        lines.push(("ring", "accepted 95, 50, 10 % of the time".to_owned()));
    }
    lines
}

fn share_text(share: f64) -> &'static str {
    if share > 0.9 {
        "95"
    } else if share > 0.3 {
        "50"
    } else {
        "10"
    }
}
