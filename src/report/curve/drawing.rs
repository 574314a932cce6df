//! The sheet on which the picture is drawn: sizes, axes, points, and the few strokes that all parts use.

use std::fmt::Write;

use crate::record::{PowerRow, Record};
use crate::report::html::text;
use crate::report::words::sets::{Piece, pieces};
use crate::report::words::subject::{Subject, coordinate as tested};

use super::line::Place;
use super::marks::legend;
use super::scale::{Axis, coordinate};
use super::{Layout, description, title};

/// More points than the eye can tell apart on paper.
const MOST_POINTS: usize = 240;

/// Sizes of a layout, in units of the picture.
pub(super) struct Measures {
    pub(super) width: f64,
    pub(super) plot: [f64; 4],
    pub(super) height: f64,
    pub(super) across: u64,
    pub(super) name: &'static str,
}

fn measures(layout: Layout, legend_rows: usize) -> Measures {
    let rows = legend_rows as f64;
    match layout {
        Layout::Page => {
            let bottom = 330.0;
            Measures {
                width: 720.0,
                plot: [52.0, 34.0, 704.0, bottom],
                height: bottom + 56.0 + 22.0 * rows,
                across: 8,
                name: "curve-page",
            }
        }
        Layout::Phone => {
            let bottom = 262.0;
            Measures {
                width: 340.0,
                plot: [46.0, 34.0, 330.0, bottom],
                height: bottom + 56.0 + 22.0 * rows,
                across: 4,
                name: "curve-phone",
            }
        }
    }
}

/// The picture being drawn.
pub struct Drawing<'a> {
    pub(super) record: &'a Record,
    pub(super) subject: Subject<'a>,
    pub(super) layout: Layout,
    pub(super) measures: Measures,
    pub(super) across: Axis,
    pub(super) up: Axis,
    pub(super) ends: (f64, f64),
    pub(super) points: Vec<(f64, &'a PowerRow)>,
    pub(super) legend: Vec<(&'static str, String)>,
    pub(super) out: String,
}

impl<'a> Drawing<'a> {
    /// A drawing of a record.
    pub fn new(record: &'a Record, layout: Layout) -> Self {
        let points = drawn_points(record);
        let least = points.first().map_or(0.0, |point| point.0);
        let greatest = points.last().map_or(1.0, |point| point.0);
        let legend = legend(record);
        let rows = match layout {
            Layout::Page => legend.len().div_ceil(2),
            Layout::Phone => legend.len(),
        };
        let measures = measures(layout, rows);
        let [left, top, right, bottom] = measures.plot;
        Self {
            record,
            subject: Subject::new(record),
            layout,
            across: Axis::new(least, greatest, left, right),
            up: Axis::new(0.0, 1.0, bottom, top),
            measures,
            ends: (least, greatest),
            points,
            legend,
            out: String::new(),
        }
    }

    /// Draws it, with the given style inside.
    pub fn draw(mut self, style: &str) -> String {
        let Measures {
            width,
            height,
            name,
            ..
        } = self.measures;
        let _ = writeln!(
            self.out,
            "<svg class=\"curve\" xmlns=\"http://www.w3.org/2000/svg\" viewBox=\"0 0 {} {}\" role=\"img\" aria-labelledby=\"{name}-title {name}-desc\">",
            coordinate(width),
            coordinate(height)
        );
        let _ = writeln!(
            self.out,
            "<title id=\"{name}-title\">{}</title>",
            title(self.record)
        );
        let _ = writeln!(
            self.out,
            "<desc id=\"{name}-desc\">{}</desc>",
            description(self.record)
        );
        self.out.push_str(style);
        let _ = writeln!(
            self.out,
            "<defs><pattern id=\"{name}-hatch\" width=\"7\" height=\"7\" patternUnits=\"userSpaceOnUse\" patternTransform=\"rotate(45)\"><path class=\"hatch\" d=\"M0 0V7\"/></pattern></defs>"
        );
        let _ = writeln!(
            self.out,
            "<rect class=\"sheet\" width=\"{}\" height=\"{}\"/>",
            coordinate(width),
            coordinate(height)
        );
        self.null_subset();
        self.grid();
        self.level();
        self.envelope();
        self.acceptance();
        self.requirements();
        self.power();
        self.names();
        self.legend_rows();
        self.out.push_str("</svg>");
        self.out
    }

    /// The parts of a set that lie on the axis, as places from and to.
    pub(super) fn stretches(&self, set: &str) -> Vec<(f64, f64)> {
        let (least, greatest) = self.ends;
        pieces(set)
            .iter()
            .filter_map(|piece| {
                let (from, to) = match piece {
                    Piece::Point(at) => (at.to_f64(), at.to_f64()),
                    Piece::Between(low, high) => (
                        low.as_ref().map_or(least, |end| end.value.to_f64()),
                        high.as_ref().map_or(greatest, |end| end.value.to_f64()),
                    ),
                };
                (from <= greatest && to >= least).then(|| {
                    let half = if self.subject.is_lattice() {
                        self.half_step()
                    } else {
                        0.0
                    };
                    let [left, _, right, _] = self.measures.plot;
                    (
                        (self.across.place(from) - half).max(left),
                        (self.across.place(to) + half).min(right),
                    )
                })
            })
            .collect()
    }

    /// Half the width of a column where the parameter moves in steps.
    pub(super) fn half_step(&self) -> f64 {
        let [left, _, right, _] = self.measures.plot;
        let steps = self.points.len().saturating_sub(1).max(1) as f64;
        ((right - left) / steps / 2.0).min(6.0)
    }

    pub(super) fn line(&mut self, class: &str, x1: f64, y1: f64, x2: f64, y2: f64) {
        let _ = writeln!(
            self.out,
            "<path class=\"{class}\" d=\"M{} {}L{} {}\"/>",
            coordinate(x1),
            coordinate(y1),
            coordinate(x2),
            coordinate(y2)
        );
    }

    pub(super) fn circle(&mut self, class: &str, at: Place, radius: f64) {
        let _ = writeln!(
            self.out,
            "<circle class=\"{class}\" cx=\"{}\" cy=\"{}\" r=\"{}\"/>",
            coordinate(at.x),
            coordinate(at.y),
            coordinate(radius)
        );
    }

    pub(super) fn label(&mut self, class: &str, x: f64, y: f64, words: &str) {
        let _ = writeln!(
            self.out,
            "<text class=\"{class}\" x=\"{}\" y=\"{}\">{}</text>",
            coordinate(x),
            coordinate(y),
            text(words)
        );
    }
}

/// The points of the power table that can be drawn, in order, no more than the eye can tell apart.
fn drawn_points(record: &Record) -> Vec<(f64, &PowerRow)> {
    let mut points: Vec<(f64, &PowerRow)> = record
        .power
        .iter()
        .filter_map(|row| tested(record, &row.at).map(|at| (at, row)))
        .filter(|(at, _)| at.abs() < 1e300)
        .collect();
    points.sort_by(|a, b| a.0.total_cmp(&b.0));
    let every = points.len().div_ceil(MOST_POINTS).max(1);
    let last = points.len().saturating_sub(1);
    points
        .into_iter()
        .enumerate()
        .filter(|(at, _)| at % every == 0 || *at == last)
        .map(|(_, point)| point)
        .collect()
}
