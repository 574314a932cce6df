//! Sums of single probabilities over ranges of counts, largest terms first.

use crate::kernel::region::Region;

/// Longest sum on one side of a start.
const MOST_TERMS: u64 = 2_000_000;
/// A term this small beside the sum ends the sum: terms fall at least geometrically by then.
const NEGLIGIBLE: f64 = 1e-19;

/// Σ of the terms over an event, for a unimodal law with a mode near `mode` and outcomes `low..=high`.
pub fn over(event: &Region, (low, high): (u64, u64), mode: u64, term: impl Fn(u64) -> f64) -> f64 {
    let mut ranges: Vec<(u64, u64)> = event
        .within(low, Some(high))
        .ranges()
        .iter()
        .map(|range| (range.from, range.to.unwrap_or(high)))
        .collect();
    // The largest contributions come from the ranges nearest to the mode.
    ranges.sort_by_key(|&(from, to)| mode.clamp(from, to).abs_diff(mode));
    let mut sum = 0.0;
    for (from, to) in ranges {
        let start = mode.clamp(from, to);
        sum += outwards(start, start..=to, &term);
        if let Some(below) = start.checked_sub(1).filter(|&below| below >= from) {
            sum += downwards(below, from, &term);
        }
    }
    sum
}

fn outwards(start: u64, counts: std::ops::RangeInclusive<u64>, term: &impl Fn(u64) -> f64) -> f64 {
    collect(counts.take_while(|&count| count - start < MOST_TERMS), term)
}

fn downwards(start: u64, from: u64, term: &impl Fn(u64) -> f64) -> f64 {
    let counts = (from..=start).rev();
    collect(counts.take_while(|&count| start - count < MOST_TERMS), term)
}

/// Adds terms until they no longer matter; compensated (Neumaier 1974), so that long sums keep their digits.
fn collect(counts: impl Iterator<Item = u64>, term: &impl Fn(u64) -> f64) -> f64 {
    let (mut sum, mut lost) = (0.0f64, 0.0f64);
    let mut previous = 0.0;
    for count in counts {
        let value = term(count);
        let next = sum + value;
        lost += if sum >= value {
            (sum - next) + value
        } else {
            (value - next) + sum
        };
        sum = next;
        let falling = value < previous;
        if falling && value <= NEGLIGIBLE * sum * (1.0 - value / previous) {
            break;
        }
        previous = value;
    }
    sum + lost
}
