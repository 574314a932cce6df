//! Inner ranges, for equivalence: the null lies on both sides of the alternative.
//!
//! For totally positive families the probability of an inner range is largest outside an interval at one of the
//! interval's ends, provided that it peaks inside (variation diminishing, Karlin 1968). So a range is judged at the two
//! null points next to the alternative, and where it peaks is checked in the end.

use std::cmp::Ordering;

use crate::kernel::enclosure::Enclosure;
use crate::kernel::exact::Exact;
use crate::kernel::law::Law;
use crate::kernel::ratio_sum;
use crate::kernel::region::Region;
use crate::space::Value;

use super::extremum::{Goal, extremum};
use super::judgement::{Level, over_tries};
use super::obstacle::Obstacle;
use super::operating::{Operating, last_true};

/// A power below this is that of a test that never rejects.
const NEVER: f64 = 1e-15;
/// Most inner ranges compared before the search gives up.
const MOST_CANDIDATES: u64 = 200_000;
/// Largest sample for which inner ranges are compared.
const MOST_UNITS: u64 = 20_000_000;
/// Margins that differ by less than this may belong to the best range.
const CLOSE: f64 = 1e-9;

/// An inner range and how good it is.
#[derive(Clone, Copy, Debug)]
struct Inner {
    from: u64,
    to: u64,
    /// Smallest (attained − required), or the power at the middle where nothing is required.
    margin: f64,
    /// Power in the middle of the alternative.
    middle: f64,
}

struct InnerSearch<'a, 'b> {
    operating: &'a Operating<'b>,
    /// Laws at the null points next to the alternative.
    low: Law,
    high: Law,
    alpha: &'a Level,
    /// The middle of the alternative, and the law there.
    middle: Value,
    law_in_middle: Law,
    /// Laws at the ends of the requirements' sets as observed, and what is required there.
    wanted: Vec<(Law, f64)>,
    first: u64,
    last: u64,
}

/// Among the inner ranges of size at most α that no larger one contains: the one with the greatest smallest
/// (attained − required); then the greatest power in the middle of the alternative; then the smallest start.
pub fn inner_region(
    operating: &Operating<'_>,
    low: &Value,
    high: &Value,
    alpha: &Level,
) -> Result<Region, Obstacle> {
    let problem = operating.problem;
    let (first, last) = operating.outcomes();
    if last.is_some_and(|last| last > MOST_UNITS) {
        return Err(Obstacle::NotProved {
            question: format!("the best inner range for more than {MOST_UNITS} units"),
        });
    }
    let wanted = problem
        .requirements
        .iter()
        .flat_map(|requirement| {
            let at_least = requirement.at_least.to_f64();
            let observed = problem.observation.image(&requirement.set);
            observed
                .pieces()
                .iter()
                .flat_map(|piece| [piece.low().at.clone(), piece.high().at.clone()])
                .map(|at| (operating.law(&at), at_least))
                .collect::<Vec<_>>()
        })
        .collect();
    let middle = middle_of_alternative(operating);
    let search = InnerSearch {
        operating,
        low: operating.law(low),
        high: operating.law(high),
        alpha,
        law_in_middle: operating.law(&middle),
        middle,
        wanted,
        first,
        last: operating.search_end([low, high]),
    };
    search.best()
}

/// The middle of the alternative, on a lattice rounded down, as observed.
fn middle_of_alternative(operating: &Operating<'_>) -> Value {
    let problem = operating.problem;
    let ends = (
        problem.alternative.infimum().and_then(Value::finite),
        problem.alternative.supremum().and_then(Value::finite),
    );
    let (Some(low), Some(high)) = ends else {
        return Value::Infinity;
    };
    let middle = low.midpoint(high);
    let middle = match problem.family.lattice() {
        None => Value::Finite(middle),
        Some(lattice) => {
            let steps = (&middle * &Exact::from(lattice.scale)).floor();
            lattice.value(steps.to_u64().unwrap_or(0))
        }
    };
    let (least, most) = problem.observation.images(&middle);
    match (least.finite(), most.finite()) {
        (Some(a), Some(b)) => Value::Finite(a.midpoint(b)),
        _ => least,
    }
}

impl InnerSearch<'_, '_> {
    fn best(&self) -> Result<Region, Obstacle> {
        let mut candidates = self.candidates()?;
        // The best first; equal margins are told apart by the middle, then by the start.
        candidates.sort_by(|a, b| {
            near(b.margin, a.margin)
                .then(near(b.middle, a.middle))
                .then(a.from.cmp(&b.from))
        });
        for candidate in candidates {
            if self.peaks_inside(&candidate)? {
                return Ok(Region::between(candidate.from, candidate.to));
            }
        }
        Ok(Region::empty())
    }

    /// Every maximal range that could be best: one start each, with the farthest end that fits.
    fn candidates(&self) -> Result<Vec<Inner>, Obstacle> {
        let centre = self
            .operating
            .problem
            .family
            .expected_count(&self.middle, &self.operating.amount);
        let centre = if centre.is_finite() {
            (centre as u64).clamp(self.first, self.last)
        } else {
            self.first
        };
        let Some(anchor) = self.around(centre)? else {
            return self.smallest_ranges();
        };
        let floor = anchor.margin;
        let earliest = self.earliest(centre, floor)?;
        let mut found = Vec::new();
        let mut from = earliest;
        let mut previous_to = match from.checked_sub(1) {
            Some(before) if before >= self.first => self.farthest(before, before)?,
            _ => None,
        };
        let mut count = 0;
        while from <= self.last && self.bound_from(from) >= floor - CLOSE {
            count += 1;
            if count > MOST_CANDIDATES {
                return Err(Obstacle::NotProved {
                    question: "which of very many inner ranges is best".to_owned(),
                });
            }
            if let Some(to) = self.farthest(from, previous_to.unwrap_or(from).max(from))? {
                if previous_to.is_none_or(|previous| to > previous) {
                    found.push(self.rated(from, to));
                }
                previous_to = Some(to);
            }
            from += 1;
        }
        Ok(found)
    }

    /// Where nothing fits around the middle, single outcomes may still fit: all are looked at that the middle or a
    /// requirement gives any chance. Under an endless law ranges farther out fit every level, as all their probabilities
    /// vanish; a test that never rejects is none.
    fn smallest_ranges(&self) -> Result<Vec<Inner>, Obstacle> {
        let mut found: Vec<Inner> = Vec::new();
        let last = self.last.min(self.first + MOST_CANDIDATES);
        for from in self.first..=last {
            if self.is_hopeless_from(from) {
                break;
            }
            if let Some(to) = self.farthest(from, from)?
                && found.last().is_none_or(|previous| to > previous.to)
            {
                found.push(self.rated(from, to));
            }
        }
        Ok(found)
    }

    /// Whether no range that starts here has a chance worth the name at any point that counts.
    fn is_hopeless_from(&self, from: u64) -> bool {
        let tail = Region::at_least(Some(from));
        let never = |law: &Law| self.rejection(law, &tail).upper() < NEVER;
        never(&self.law_in_middle) && self.wanted.iter().all(|(law, _)| never(law))
    }

    /// A maximal range that holds the centre, if one fits.
    fn around(&self, centre: u64) -> Result<Option<Inner>, Obstacle> {
        let Some(to) = self.farthest(centre, centre)? else {
            return Ok(None);
        };
        // Give up half of the way upwards, then take all that fits downwards.
        let to = centre + (to - centre) / 2;
        let shortest = last_true(0, 0, centre - self.first, |below| {
            self.fits(centre - below, to)
        })?
        .unwrap_or(0);
        let from = centre - shortest;
        let to = self.farthest(from, to)?.unwrap_or(to);
        Ok(Some(self.rated(from, to)))
    }

    /// The first start from which a range could reach the floor: its end must be far enough up.
    fn earliest(&self, centre: u64, floor: f64) -> Result<u64, Obstacle> {
        let hopeless = last_true(centre, self.first, centre, |from| {
            Ok::<bool, Obstacle>(match self.farthest(from, from)? {
                None => true,
                Some(to) => self.bound_to(to) < floor - CLOSE,
            })
        })?;
        Ok(hopeless.map_or(self.first, |from| (from + 1).min(centre)))
    }

    fn rejection(&self, law: &Law, region: &Region) -> Enclosure {
        over_tries(
            ratio_sum::probability(law, region),
            self.operating.problem.tries,
        )
    }

    fn fits(&self, from: u64, to: u64) -> Result<bool, Obstacle> {
        let region = Region::between(from, to);
        let judge = |law| self.operating.judge(law, &region, self.alpha);
        Ok(judge(&self.low)?.is_le() && judge(&self.high)?.is_le())
    }

    /// The farthest end of a range that starts here and fits.
    fn farthest(&self, from: u64, start: u64) -> Result<Option<u64>, Obstacle> {
        last_true(start, from, self.last, |to| self.fits(from, to))
    }

    fn rated(&self, from: u64, to: u64) -> Inner {
        let region = Region::between(from, to);
        let power = |law: &Law| self.rejection(law, &region).middle();
        let middle = power(&self.law_in_middle);
        let margin = self
            .wanted
            .iter()
            .map(|(at, at_least)| power(at) - at_least)
            .reduce(f64::min)
            .unwrap_or(middle);
        Inner {
            from,
            to,
            margin,
            middle,
        }
    }

    /// No range that starts here has a larger margin.
    fn bound_from(&self, from: u64) -> f64 {
        self.bound(&Region::at_least(Some(from)))
    }

    /// No range that ends here has a larger margin.
    fn bound_to(&self, to: u64) -> f64 {
        self.bound(&Region::at_most(Some(to)))
    }

    fn bound(&self, region: &Region) -> f64 {
        let power = |law: &Law| self.rejection(law, region).upper();
        self.wanted
            .iter()
            .map(|(at, at_least)| power(at) - at_least)
            .reduce(f64::min)
            .unwrap_or_else(|| power(&self.law_in_middle))
    }

    /// Whether the size over the whole null is at most α: at once where the probability in the middle exceeds that at
    /// both ends, because it then peaks between them.
    fn peaks_inside(&self, candidate: &Inner) -> Result<bool, Obstacle> {
        let region = Region::between(candidate.from, candidate.to);
        let at = |law: &Law| self.rejection(law, &region).upper();
        let middle = self.rejection(&self.law_in_middle, &region).lower();
        if middle >= at(&self.low).max(at(&self.high)) {
            return Ok(true);
        }
        let problem = self.operating.problem;
        let null = problem.observation.image(&problem.null);
        let size = extremum(self.operating, &region, &null, Goal::Supremum);
        Ok(size.value.upper() <= self.alpha.above())
    }
}

fn near(a: f64, b: f64) -> Ordering {
    if (a - b).abs() <= 1e-13 * a.abs().max(b.abs()) {
        Ordering::Equal
    } else {
        a.total_cmp(&b)
    }
}
