//! The curve itself and the envelope behind it.

use std::fmt::Write;

use crate::report::words::rule::accepts_by_rejecting;

use super::drawing::Drawing;
use super::line::{Place, path};
use super::scale::coordinate;

impl Drawing<'_> {
    /// The envelope over the alternative, up to the nearest point of the null on either side.
    pub(super) fn envelope(&mut self) {
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
            let (kind, line) = if self.subject.is_lattice() {
                (" steps", dashes(run))
            } else {
                ("", path(run))
            };
            let _ = writeln!(self.out, "<path class=\"envelope{kind}\" d=\"{line}\"/>");
        }
    }

    pub(super) fn envelope_place(&self, at: f64, envelope: f64) -> Place {
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

    pub(super) fn power(&mut self) {
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
}

/// A dash at each place: where the parameter moves in steps there is nothing in between.
fn dashes(run: &[Place]) -> String {
    run.iter()
        .map(|place| format!("M{} {}h12", coordinate(place.x - 6.0), coordinate(place.y)))
        .collect()
}
