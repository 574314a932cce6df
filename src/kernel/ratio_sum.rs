//! Probabilities of counts as enclosures, from ratios of neighbouring terms.
//!
//! Terms are taken relative to the one where the sum starts, walked outwards and summed, inside the event and over the
//! whole support; the quotient of the two sums is the probability. All terms are positive, so relative errors only add
//! up, and they are counted: each step multiplies by a ratio with a known number of roundings, each block of terms adds
//! its share. What is left out beyond the last term is bounded by a geometric series, because the ratios fall
//! (log-concavity), and added to the upper end. In doubles the result is good to about 1e-12; where the counted error
//! is larger, the same walk is done again in pairs of doubles.

use super::arithmetic::Arithmetic;
use super::enclosure::Enclosure;
use super::law::{Law, PreparedRatio, RatioLaw, WaitingLaw};
use super::region::Region;

/// Widest relative enclosure taken from doubles; beyond it pairs of doubles are used.
const WIDEST_IN_DOUBLES: f64 = 4e-12;
/// Below this neither precision tells more than "positive, and below every normal double".
const SMALLEST: f64 = 1e-307;
/// Terms are rescaled when they fall below this, far above underflow in either precision.
const TINY: f64 = 1.0 / HUGE;
/// 2⁵⁰⁰.
const HUGE: f64 =
    (1u128 << 125) as f64 * (1u128 << 125) as f64 * (1u128 << 125) as f64 * (1u128 << 125) as f64;
/// How often terms may be rescaled before the probability is below every double.
const DEEPEST: u32 = 3;
/// A tail may be left out when it is below this fraction of the sum it belongs to.
const NEGLIGIBLE: f64 = 1.0 / (1u64 << 60) as f64 / 1024.0;
/// No walk over an endless support comes this far.
const FARTHEST: u64 = 1 << 40;
/// Longest walk on one side: beyond it the answer is "unknown", never a program that hangs.
const LONGEST: u64 = 1 << 28;
/// Terms a block: error counts and stopping rules are looked at once a block.
const BLOCK: u64 = 64;

/// The probability of an event under a law: relative width at most 1e-11 (1e-10 below 1e-100) for laws of up to 10⁶
/// units; below the smallest normal double the enclosure is `[0, 2.3e-308]`.
pub fn probability(law: &Law, event: &Region) -> Enclosure {
    match law {
        Law::Point(at) => certain(event.contains(*at)),
        Law::Beyond => certain(event.is_unbounded()),
        Law::Ratios(law) => of_ratio_law(law, event),
        Law::Waiting(law) => of_waiting_law(law, event, &probability),
    }
}

/// The same by pairs of doubles alone: relative width about 1e-15, the last roundings to doubles. For decisions that
/// doubles leave open.
pub fn probability_in_double_doubles(law: &Law, event: &Region) -> Enclosure {
    match law {
        Law::Ratios(law) => match reduced(law, event) {
            Reduced::Certain(answer) => certain(answer),
            Reduced::Event(event) => {
                Walk::new(law, &event, &law.ratio.in_double_doubles()).enclosure()
            }
        },
        Law::Waiting(law) => of_waiting_law(law, event, &probability_in_double_doubles),
        Law::Point(_) | Law::Beyond => probability(law, event),
    }
}

/// The r-th nonconforming unit comes by the m-th exactly if m units hold at least r (Feller 1968, VI.8): so the tails of
/// a waiting law are tails of binomial laws. Ranges between the tails are summed by the law's own ratios.
fn of_waiting_law(
    law: &WaitingLaw,
    event: &Region,
    probability: &dyn Fn(&Law, &Region) -> Enclosure,
) -> Enclosure {
    let event = event.within(law.target, None);
    let mut sum = Enclosure::ZERO;
    for range in event.ranges() {
        let part = match (range.from == law.target, range.to) {
            (true, None) => Enclosure::ONE,
            (true, Some(to)) => probability(&law.count_in(to), &Region::at_least(Some(law.target))),
            (false, None) => probability(
                &law.count_in(range.from - 1),
                &Region::at_most(law.target.checked_sub(1)),
            ),
            (false, Some(to)) => between(law, range.from, to, probability),
        };
        sum = sum.plus(part);
    }
    sum.as_probability()
}

/// A range between the tails: a single outcome by P(N = m) = (r/m)·P(Binomial(m, p) = r), more as a difference of tails
/// where it keeps enough digits, else by the law's own ratios, which may be many steps.
fn between(
    law: &WaitingLaw,
    from: u64,
    to: u64,
    probability: &dyn Fn(&Law, &Region) -> Enclosure,
) -> Enclosure {
    let counted = |units: u64, event: &Region| probability(&law.count_in(units), event);
    if from == to {
        let term = counted(from, &Region::between(law.target, law.target));
        let share = law.target as f64 / from as f64;
        let (lower, upper) = (
            (term.lower() * share.next_down()).next_down(),
            (term.upper() * share.next_up()).next_up(),
        );
        return Enclosure::new(lower.max(0.0), upper.min(1.0)).unwrap_or(Enclosure::UNKNOWN);
    }
    let (enough, few) = (
        Region::at_least(Some(law.target)),
        Region::at_most(law.target.checked_sub(1)),
    );
    let by_lower = difference(counted(to, &enough), counted(from - 1, &enough));
    let by_upper = difference(counted(from - 1, &few), counted(to, &few));
    let better = if by_lower.relative_width() < by_upper.relative_width() {
        by_lower
    } else {
        by_upper
    };
    if better.relative_width() <= WIDEST_IN_DOUBLES {
        return better;
    }
    probability(&Law::Ratios(law.ratios.clone()), &Region::between(from, to))
}

fn difference(larger: Enclosure, smaller: Enclosure) -> Enclosure {
    Enclosure::new(
        (larger.lower() - smaller.upper()).next_down().max(0.0),
        (larger.upper() - smaller.lower()).next_up().max(0.0),
    )
    .unwrap_or(Enclosure::UNKNOWN)
}

fn certain(holds: bool) -> Enclosure {
    if holds {
        Enclosure::ONE
    } else {
        Enclosure::ZERO
    }
}

enum Reduced {
    Certain(bool),
    Event(Region),
}

/// The event cut to the support; events that hold nothing or everything of it need no sum.
fn reduced(law: &RatioLaw, event: &Region) -> Reduced {
    let event = event.within(law.low, law.high);
    match event.ranges() {
        [] => Reduced::Certain(false),
        [only] if only.from == law.low && only.to == law.high => Reduced::Certain(true),
        _ => Reduced::Event(event),
    }
}

fn of_ratio_law(law: &RatioLaw, event: &Region) -> Enclosure {
    match reduced(law, event) {
        Reduced::Certain(answer) => certain(answer),
        Reduced::Event(event) => {
            let quick = law.ratio.in_doubles(law.low, law.high.unwrap_or(FARTHEST));
            let enclosure = Walk::new(law, &event, &quick).enclosure();
            let vanishes = enclosure.lower() == 0.0 && enclosure.upper() < SMALLEST;
            if vanishes || enclosure.relative_width() <= WIDEST_IN_DOUBLES {
                return enclosure;
            }
            let fine = Walk::new(law, &event, &law.ratio.in_double_doubles()).enclosure();
            if fine.relative_width() < enclosure.relative_width() {
                fine
            } else {
                enclosure
            }
        }
    }
}

/// A running sum of positive terms with its counted error.
#[derive(Clone, Copy)]
struct Sum<T> {
    value: T,
    /// Absolute error bound in units of `T::UNIT`.
    error: f64,
    /// What was left out, at most.
    remainder: f64,
}

impl<T: Arithmetic> Sum<T> {
    fn starting_with(value: T) -> Self {
        Self {
            value,
            error: 0.0,
            remainder: 0.0,
        }
    }

    /// Adds a block of terms whose relative error is at most `roundings` units.
    fn add(&mut self, block: T, roundings: f64) {
        self.value = self.value.plus(block);
        // The addition itself rounds the new total once.
        self.error += block.lead() * roundings + self.value.lead();
    }

    /// Relative error, with room for the rounding of the count itself and for (1 + u)ⁿ − 1 > n·u.
    fn relative_error(&self) -> f64 {
        (self.error / self.value.lead()) * T::UNIT * 1.001 + 2.0 * T::UNIT
    }
}

/// One outward walk over the support.
struct Walk<'a, T> {
    law: &'a RatioLaw,
    event: &'a Region,
    ratio: PreparedRatio<T>,
    total: Sum<T>,
    inside: Sum<T>,
    /// `inside` is relative to the start times 2^(−500·depth).
    depth: u32,
}

/// Which way.
#[derive(Clone, Copy, PartialEq)]
enum Side {
    Up,
    Down,
}

/// The state of one side of a walk.
struct Step<T> {
    term: T,
    /// Steps taken from the start.
    count: u64,
    /// Rescalings so far.
    depth: u32,
}

impl<'a, T: Arithmetic> Walk<'a, T> {
    fn new(law: &'a RatioLaw, event: &'a Region, ratio: &PreparedRatio<T>) -> Self {
        let inside = if event.contains(law.start) {
            T::ONE
        } else {
            T::ZERO
        };
        Self {
            law,
            event,
            ratio: *ratio,
            total: Sum::starting_with(T::ONE),
            inside: Sum::starting_with(inside),
            depth: 0,
        }
    }

    fn enclosure(mut self) -> Enclosure {
        // The side on which the event comes nearest goes first, so that the other may stop early.
        let first = if self.event.ranges().iter().any(|r| r.from >= self.law.start) {
            Side::Up
        } else {
            Side::Down
        };
        for side in [
            first,
            if first == Side::Up {
                Side::Down
            } else {
                Side::Up
            },
        ] {
            self.one_side(side);
        }
        self.quotient()
    }

    fn one_side(&mut self, side: Side) {
        let mut step = Step {
            term: T::ONE,
            count: 0,
            depth: 0,
        };
        let mut at = self.law.start;
        while let Some((end, in_event)) = self.stretch(side, at) {
            while at != end {
                let length = at.abs_diff(end).min(BLOCK);
                at = self.block(side, at, length, in_event, &mut step);
                if self.may_stop(side, at, &step) {
                    return;
                }
            }
        }
    }

    /// From `at` outwards: the last count of the stretch that lies wholly in the event or wholly out of it.
    fn stretch(&self, side: Side, at: u64) -> Option<(u64, bool)> {
        let next = match side {
            Side::Up if self.law.high == Some(at) => return None,
            Side::Up => at + 1,
            Side::Down if self.law.low == at => return None,
            Side::Down => at - 1,
        };
        let ranges = self.event.ranges();
        let after = ranges.partition_point(|range| range.from <= next);
        let holding = after
            .checked_sub(1)
            .map(|index| ranges[index])
            .filter(|range| range.to.is_none_or(|to| next <= to));
        let end = match (side, holding) {
            (Side::Up, Some(range)) => range.to,
            (Side::Up, None) => ranges.get(after).map(|range| range.from - 1),
            (Side::Down, Some(range)) => Some(range.from),
            (Side::Down, None) => Some(
                after
                    .checked_sub(1)
                    .and_then(|index| ranges[index].to)
                    .map_or(self.law.low, |to| to + 1),
            ),
        };
        let edge = match side {
            Side::Up => self.law.high.unwrap_or(u64::MAX),
            Side::Down => self.law.low,
        };
        Some((end.unwrap_or(edge), holding.is_some()))
    }

    /// Walks `length` terms outwards from `at`, adds them, and returns the last count.
    fn block(
        &mut self,
        side: Side,
        at: u64,
        length: u64,
        in_event: bool,
        step: &mut Step<T>,
    ) -> u64 {
        let mut block = T::ZERO;
        let mut term = step.term;
        let mut here = at;
        for _ in 0..length {
            let ratio = match side {
                Side::Up => {
                    here += 1;
                    self.ratio.up(here - 1)
                }
                Side::Down => {
                    here -= 1;
                    self.ratio.down(here)
                }
            };
            term = term.times(ratio);
            if term.lead() < TINY {
                self.flush(block, in_event, step);
                block = T::ZERO;
                term = term.scaled(HUGE);
                step.depth += 1;
                if step.depth > DEEPEST {
                    step.count += here.abs_diff(at);
                    step.term = term;
                    return here;
                }
            }
            block = block.plus(term);
        }
        step.count += length;
        step.term = term;
        self.flush(block, in_event, step);
        here
    }

    fn flush(&mut self, block: T, in_event: bool, step: &Step<T>) {
        if block.lead() == 0.0 {
            return;
        }
        // Every term of the block has at most this many roundings, the additions inside the block included.
        let roundings = (step.count + BLOCK) as f64 * self.ratio.roundings + BLOCK as f64;
        if step.depth == 0 {
            self.total.add(block, roundings);
        } else {
            self.total.remainder += 1.01 * block.lead() * TINY;
        }
        if !in_event {
            return;
        }
        if self.inside.value.lead() == 0.0 {
            self.depth = step.depth;
        }
        match step.depth.cmp(&self.depth) {
            std::cmp::Ordering::Equal => self.inside.add(block, roundings),
            std::cmp::Ordering::Greater if step.depth == self.depth + 1 => {
                self.inside.add(block.scaled(TINY), roundings);
            }
            std::cmp::Ordering::Greater => {
                self.inside.remainder += 1.01 * self.at_inside_depth(block.lead(), step.depth);
            }
            std::cmp::Ordering::Less => {
                // A nearer stretch of the event on this side outweighs what was found deeper on the other.
                let deeper = std::mem::replace(&mut self.inside, Sum::starting_with(T::ZERO));
                let gap = self.depth - step.depth;
                self.depth = step.depth;
                self.inside.add(block, roundings);
                if gap == 1 {
                    let relative = deeper.relative_error() / T::UNIT;
                    self.inside.add(deeper.value.scaled(TINY), relative);
                    self.inside.remainder += deeper.remainder * TINY;
                } else {
                    self.inside.remainder += 1.01 * deeper.value.lead() * TINY * TINY;
                }
            }
        }
    }

    /// Whether all terms beyond `at` may be left out; if so, records their bound.
    fn may_stop(&mut self, side: Side, at: u64, step: &Step<T>) -> bool {
        let more_event = self.event_beyond(side, at);
        if step.count > LONGEST {
            self.total.remainder = f64::INFINITY;
            return true;
        }
        let Some(rest) = self.rest_beyond(side, at, step) else {
            return false;
        };
        if step.depth > DEEPEST {
            // The block broke off before its last term was added.
            let rest = rest + step.term.lead();
            if more_event {
                self.inside.remainder += self.at_inside_depth(rest, step.depth);
            }
            self.total.remainder += rest * TINY;
            return true;
        }
        let (rest_of_total, rest_of_inside) = (
            if step.depth == 0 { rest } else { rest * TINY },
            self.at_inside_depth(rest, step.depth),
        );
        let total_done = rest_of_total <= NEGLIGIBLE * self.total.value.lead();
        let inside_done = !more_event || rest_of_inside <= NEGLIGIBLE * self.inside.value.lead();
        if total_done && inside_done {
            self.total.remainder += rest_of_total;
            if more_event {
                self.inside.remainder += rest_of_inside;
            }
        }
        total_done && inside_done
    }

    /// A quantity at a side's depth, brought to the depth of `inside`.
    fn at_inside_depth(&self, value: f64, depth: u32) -> f64 {
        match depth.checked_sub(self.depth) {
            Some(0) => value,
            Some(1) => value * TINY,
            Some(_) => value * TINY * TINY,
            None => f64::INFINITY,
        }
    }

    fn event_beyond(&self, side: Side, at: u64) -> bool {
        let ranges = self.event.ranges();
        match side {
            Side::Up => ranges.last().is_some_and(|r| r.to.is_none_or(|to| to > at)),
            Side::Down => ranges.first().is_some_and(|r| r.from < at),
        }
    }

    /// Bound on the sum of all terms beyond `at`: t·ρ/(1−ρ) with the next ratio ρ, because ratios fall outwards. `None`
    /// where ρ is not below one.
    fn rest_beyond(&self, side: Side, at: u64, step: &Step<T>) -> Option<f64> {
        let ratio = match side {
            Side::Up if self.law.high == Some(at) => return Some(0.0),
            Side::Up => self.ratio.up(at),
            Side::Down if self.law.low == at => return Some(0.0),
            Side::Down => self.ratio.down(at - 1),
        }
        .lead();
        // Errors of ratio and term are below 1e-3 of them by far: the factor covers them.
        (ratio < 0.999_999_9).then(|| 1.01 * step.term.lead() * ratio / (1.0 - ratio - 1e-9))
    }

    fn quotient(&self) -> Enclosure {
        let inside = self.inside.value;
        if inside.lead() == 0.0 {
            return tiny();
        }
        if self.total.remainder.is_infinite() {
            return Enclosure::UNKNOWN;
        }
        let value = inside.over(self.total.value).lead();
        let relative = self.inside.relative_error()
            + self.total.relative_error()
            + self.total.remainder / self.total.value.lead()
            + 2.0 * f64::UNIT.max(T::UNIT);
        let missing = self.inside.remainder / inside.lead();
        let mut lower = value * (1.0 - relative);
        let mut upper = value * (1.0 + relative + missing);
        for _ in 0..self.depth {
            lower *= TINY;
            upper *= TINY;
        }
        if lower < f64::MIN_POSITIVE {
            return tiny();
        }
        Enclosure::new(lower.next_down().min(1.0), upper.next_up().min(1.0))
            .unwrap_or(Enclosure::UNKNOWN)
    }
}

/// Positive, but below every normal double.
fn tiny() -> Enclosure {
    Enclosure::new(0.0, f64::MIN_POSITIVE * 1.03).unwrap_or(Enclosure::UNKNOWN)
}
