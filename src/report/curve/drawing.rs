//! The parts of the picture, from the back to the front.

use std::fmt::Write;

use crate::kernel::exact::Exact;
use crate::record::{PowerRow, Record};
use crate::report::html::text;
use crate::report::round::Toward;
use crate::report::words::claim;
use crate::report::words::rule::accepts_by_rejecting;
use crate::report::words::sets::{Piece, pieces};
use crate::report::words::subject::{Meaning, Subject, coordinate as tested};

use super::line::{Place, path};
use super::scale::{Axis, coordinate, ticks};
use super::{Layout, description, plain, title};

/// More points than the eye can tell apart on paper.
const MOST_POINTS: usize = 240;

/// Sizes of a layout, in units of the picture.
struct Measures {
    width: f64,
    plot: [f64; 4],
    height: f64,
    across: u64,
    name: &'static str,
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
                plot: [42.0, 34.0, 330.0, bottom],
                height: bottom + 56.0 + 22.0 * rows,
                across: 4,
                name: "curve-phone",
            }
        }
    }
}

/// The picture being drawn.
pub struct Drawing<'a> {
    record: &'a Record,
    subject: Subject<'a>,
    layout: Layout,
    measures: Measures,
    across: Axis,
    up: Axis,
    ends: (f64, f64),
    points: Vec<(f64, &'a PowerRow)>,
    legend: Vec<(&'static str, String)>,
    out: String,
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
    fn stretches(&self, set: &str) -> Vec<(f64, f64)> {
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
    fn half_step(&self) -> f64 {
        let [left, _, right, _] = self.measures.plot;
        let steps = self.points.len().saturating_sub(1).max(1) as f64;
        ((right - left) / steps / 2.0).min(6.0)
    }

    fn null_subset(&mut self) {
        let [_, top, _, bottom] = self.measures.plot;
        for (from, to) in self.stretches(&self.record.problem.null_subset) {
            let width = (to - from).max(2.0);
            for fill in ["null", "hatched"] {
                let pattern = if fill == "hatched" {
                    format!(" fill=\"url(#{}-hatch)\"", self.measures.name)
                } else {
                    String::new()
                };
                let _ = writeln!(
                    self.out,
                    "<rect class=\"{fill}\"{pattern} x=\"{}\" y=\"{}\" width=\"{}\" height=\"{}\"/>",
                    coordinate(from),
                    coordinate(top),
                    coordinate(width),
                    coordinate(bottom - top)
                );
            }
        }
    }

    fn grid(&mut self) {
        let [left, top, right, bottom] = self.measures.plot;
        for share in [0u32, 20, 40, 60, 80, 100] {
            let y = self.up.place(f64::from(share) / 100.0);
            self.line(if share == 0 { "axis" } else { "grid" }, left, y, right, y);
            self.label("tick end", left - 7.0, y + 4.0, &format!("{share} %"));
        }
        let whole = self.subject.meaning == Meaning::CountInLot;
        for tick in ticks(self.ends.0, self.ends.1, self.measures.across, whole) {
            let x = self.across.place(tick.to_f64());
            self.line("axis", x, bottom, x, bottom + 5.0);
            let said = self.tick_text(&tick);
            self.label("tick middle", x, bottom + 19.0, &said);
        }
        let _ = top;
    }

    /// A tick of a fraction is said in per cent without the sign, which the name of the axis bears.
    fn tick_text(&self, tick: &Exact) -> String {
        match self.subject.meaning {
            Meaning::Fraction | Meaning::FractionOfLot => (tick * &Exact::from(100u64)).to_string(),
            _ => tick.to_string(),
        }
    }

    fn level(&mut self) {
        let alpha = self.record.problem.alpha;
        let height = if accepts_by_rejecting(self.record) {
            alpha
        } else {
            1.0 - alpha
        };
        let y = self.up.place(height);
        for (from, to) in self.stretches(&self.record.problem.null_subset) {
            self.line("level", from, y, to.max(from + 2.0), y);
        }
    }

    /// The envelope over the alternative, up to the nearest point of the null on either side.
    fn envelope(&mut self) {
        let mut runs: Vec<Vec<Place>> = Vec::new();
        let mut before: Option<Place> = None;
        let mut inside = false;
        for (at, row) in &self.points {
            let place = row
                .envelope
                .map(|envelope| self.envelope_place(*at, envelope));
            let alternative = row.subset == "alternative";
            if let Some(place) = place.filter(|_| alternative || inside) {
                if !inside {
                    runs.push(before.into_iter().collect());
                }
                if let Some(run) = runs.last_mut() {
                    run.push(place);
                }
            }
            inside = alternative && place.is_some();
            before = place;
        }
        for run in runs.iter().filter(|run| run.len() > 1) {
            let _ = writeln!(self.out, "<path class=\"envelope\" d=\"{}\"/>", path(run));
        }
    }

    fn envelope_place(&self, at: f64, envelope: f64) -> Place {
        let accepted = if accepts_by_rejecting(self.record) {
            envelope
        } else {
            1.0 - envelope
        };
        Place {
            x: self.across.place(at),
            y: self.up.place(accepted),
        }
    }

    fn power(&mut self) {
        let places: Vec<Place> = self
            .points
            .iter()
            .map(|(at, row)| Place {
                x: self.across.place(*at),
                y: self.up.place(row.lot_accepted.value),
            })
            .collect();
        if self.subject.is_lattice() {
            let bottom = self.measures.plot[3];
            for place in &places {
                self.line("stem", place.x, bottom, place.x, place.y);
                self.circle("point", *place, if places.len() > 60 { 1.6 } else { 3.2 });
            }
        } else {
            let _ = writeln!(self.out, "<path class=\"power\" d=\"{}\"/>", path(&places));
        }
    }

    /// The quality accepted 95 %, 50 % and 10 % of the time: a ring on the curve and its value beside it.
    fn acceptance(&mut self) {
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
            let place = Place {
                x: self.across.place(at),
                y: self.up.place(share),
            };
            let toward = if rises == (share < 0.3) {
                Toward::Down
            } else {
                Toward::Up
            };
            let value = self.subject.computed(at, toward);
            let class = if rises { "note end" } else { "note" };
            let aside = if rises { -10.0 } else { 10.0 };
            let bottom = self.measures.plot[3];
            self.line("drop", place.x, place.y, place.x, bottom);
            self.circle("ring", place, 4.5);
            let said = format!("{} % accepted at {value}", share_text(share));
            self.label(
                class,
                place.x + aside,
                place.y + if share < 0.3 { -8.0 } else { 4.0 },
                &said,
            );
        }
    }

    /// A bracket at the height that the requirement asks for: acceptance must stay on the side that the arrow shows.
    fn requirements(&mut self) {
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

    fn names(&mut self) {
        let [left, top, right, bottom] = self.measures.plot;
        let meaning = if accepts_by_rejecting(self.record) {
            "Lot accepted (the power of the test)"
        } else {
            "Lot accepted (one minus the power)"
        };
        self.label(
            "name",
            left - 44.0
                + if self.layout == Layout::Phone {
                    8.0
                } else {
                    0.0
                },
            top - 18.0,
            meaning,
        );
        let unit = match self.subject.meaning {
            Meaning::Fraction | Meaning::FractionOfLot => ", %",
            _ => "",
        };
        let room = if self.layout == Layout::Phone { 44 } else { 96 };
        let parameter = shortened(&plain(&self.subject.parameter()), room);
        let name = format!("{parameter} ({}{unit})", self.record.problem.parameter);
        self.label(
            "name middle",
            f64::midpoint(left, right),
            bottom + 40.0,
            &name,
        );
    }

    fn legend_rows(&mut self) {
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
    fn sample(&mut self, kind: &str, x: f64, y: f64) {
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

    fn line(&mut self, class: &str, x1: f64, y1: f64, x2: f64, y2: f64) {
        let _ = writeln!(
            self.out,
            "<path class=\"{class}\" d=\"M{} {}L{} {}\"/>",
            coordinate(x1),
            coordinate(y1),
            coordinate(x2),
            coordinate(y2)
        );
    }

    fn circle(&mut self, class: &str, at: Place, radius: f64) {
        let _ = writeln!(
            self.out,
            "<circle class=\"{class}\" cx=\"{}\" cy=\"{}\" r=\"{}\"/>",
            coordinate(at.x),
            coordinate(at.y),
            coordinate(radius)
        );
    }

    fn label(&mut self, class: &str, x: f64, y: f64, words: &str) {
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

/// The lines of the legend: what is drawn, and nothing else.
fn legend(record: &Record) -> Vec<(&'static str, String)> {
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
        lines.push((
            "ring",
            "quality accepted 95, 50, 10 % of the time".to_owned(),
        ));
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

fn shortened(words: &str, most: usize) -> String {
    if words.chars().count() <= most {
        return words.to_owned();
    }
    let kept: String = words.chars().take(most.saturating_sub(1)).collect();
    format!("{}…", kept.trim_end())
}
