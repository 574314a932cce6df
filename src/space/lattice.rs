//! Parameters that take only finitely many, evenly spaced values: the number of nonconforming units in a lot.

use crate::kernel::exact::Exact;

use super::interval::Interval;
use super::line_set::LineSet;
use super::value::Value;

/// The values `0/scale, 1/scale, …, last/scale`.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Lattice {
    /// Index of the last value.
    pub last: u64,
    /// Steps per unit of the parameter: 1 for a count, N for a fraction of a lot of N.
    pub scale: u64,
}

impl Lattice {
    /// The value at an index.
    pub fn value(&self, index: u64) -> Value {
        let step = Exact::from(self.scale);
        Value::Finite(
            Exact::from(index)
                .checked_div(&step)
                .unwrap_or_else(Exact::zero),
        )
    }

    /// The index of a value that belongs to the lattice.
    pub fn index(&self, value: &Value) -> Option<u64> {
        let scaled = value.finite()? * &Exact::from(self.scale);
        scaled.to_u64().filter(|&index| index <= self.last)
    }

    /// The indices of the lattice values in an interval, first and last.
    pub fn indices_in(&self, interval: &Interval) -> Option<(u64, u64)> {
        let scale = Exact::from(self.scale);
        let first = match interval.low().at.finite() {
            None => 0,
            Some(low) => {
                let scaled = low * &scale;
                let up = scaled.ceil();
                let skip = u64::from(!interval.low().closed && up == scaled);
                if scaled.is_negative() {
                    0
                } else {
                    up.to_u64()?.checked_add(skip)?
                }
            }
        };
        let last = match interval.high().at.finite() {
            None => self.last,
            Some(high) => {
                let scaled = high * &scale;
                let down = scaled.floor();
                let skip = u64::from(!interval.high().closed && down == scaled);
                if scaled.is_negative() {
                    return None;
                }
                down.to_u64()
                    .unwrap_or(u64::MAX)
                    .checked_sub(skip)?
                    .min(self.last)
            }
        };
        (first <= last).then_some((first, last))
    }

    /// The part of a set that lies on the lattice, as closed intervals between lattice values.
    pub fn meet(&self, set: &LineSet) -> LineSet {
        let mut runs: Vec<(u64, u64)> = Vec::new();
        for (first, last) in set
            .pieces()
            .iter()
            .filter_map(|piece| self.indices_in(piece))
        {
            match runs.last_mut() {
                Some(run) if first <= run.1 + 1 => run.1 = run.1.max(last),
                _ => runs.push((first, last)),
            }
        }
        LineSet::union_of(runs.into_iter().filter_map(|(first, last)| {
            Interval::new(
                super::End::closed(self.value(first)),
                super::End::closed(self.value(last)),
            )
        }))
    }

    /// Lattice values that are in one set (already met with the lattice) and not in another.
    pub fn without(&self, set: &LineSet, other: &LineSet) -> LineSet {
        self.meet(&set.without(other))
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::space::End;

    fn number(numerator: i64, denominator: i64) -> Value {
        Value::Finite(Exact::fraction(numerator, denominator).unwrap())
    }

    #[test]
    fn fractions_meet_the_lattice_inwards() {
        let lattice = Lattice {
            last: 240,
            scale: 240,
        };
        let null = LineSet::between(number(5, 100), number(1, 1));
        assert_eq!(lattice.meet(&null).infimum(), Some(&number(12, 240)));
        let open = LineSet::from_ends(End::open(number(5, 100)), End::closed(number(1, 1)));
        assert_eq!(lattice.meet(&open).infimum(), Some(&number(13, 240)));
        let rest = lattice.without(&lattice.meet(&LineSet::line()), &null);
        assert_eq!(rest.supremum(), Some(&number(11, 240)));
    }

    #[test]
    fn neighbouring_lattice_runs_merge() {
        let lattice = Lattice { last: 10, scale: 1 };
        let set = LineSet::between(number(0, 1), number(3, 1))
            .union(&LineSet::between(number(7, 2), number(5, 1)));
        assert_eq!(
            lattice.meet(&set),
            LineSet::between(number(0, 1), number(5, 1))
        );
        let gap = LineSet::between(number(1, 3), number(2, 3));
        assert!(lattice.meet(&gap).is_empty());
    }
}
