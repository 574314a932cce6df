//! Behind the curve: the null subset, the level, the axes and their names.

use std::fmt::Write;

use crate::kernel::exact::Exact;
use crate::report::words::rule::accepts_by_rejecting;
use crate::report::words::subject::Meaning;

use super::drawing::Drawing;
use super::scale::{coordinate, ticks};
use super::{Layout, plain};

impl Drawing<'_> {
    pub(super) fn null_subset(&mut self) {
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

    pub(super) fn grid(&mut self) {
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
    pub(super) fn tick_text(&self, tick: &Exact) -> String {
        match self.subject.meaning {
            Meaning::Fraction | Meaning::FractionOfLot => (tick * &Exact::from(100u64)).to_string(),
            _ => tick.to_string(),
        }
    }

    pub(super) fn level(&mut self) {
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

    pub(super) fn names(&mut self) {
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
        let symbol = &self.record.problem.parameter;
        let room = if self.layout == Layout::Phone { 30 } else { 84 };
        let parameter = plain(&self.subject.parameter());
        let name = if parameter.chars().count() <= room {
            format!("{parameter} ({symbol}{unit})")
        } else {
            format!("{symbol}{unit}")
        };
        self.label(
            "name middle",
            f64::midpoint(left, right),
            bottom + 40.0,
            &name,
        );
    }
}
