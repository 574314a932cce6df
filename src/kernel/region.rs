//! Sets of counts: where a statistic may fall.

/// A closed range of counts; without `to` it has no end.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub struct Range {
    /// Smallest count.
    pub from: u64,
    /// Largest count.
    pub to: Option<u64>,
}

impl Range {
    fn holds(&self, count: u64) -> bool {
        self.from <= count && self.to.is_none_or(|to| count <= to)
    }
}

/// A set of counts as disjoint, ascending ranges with a gap between neighbours. The infinite outcome (inspection that
/// never ends) belongs to it when its last range has no end.
#[derive(Clone, Debug, PartialEq, Eq, Default)]
pub struct Region {
    ranges: Vec<Range>,
}

impl Region {
    /// No count at all.
    pub fn empty() -> Self {
        Self::default()
    }

    /// `from..=to`; empty if `to < from`.
    pub fn between(from: u64, to: u64) -> Self {
        Self::union_of([Range { from, to: Some(to) }])
    }

    /// `0..=to`; empty for `None`, the tail that holds nothing.
    pub fn at_most(to: Option<u64>) -> Self {
        to.map_or_else(Self::empty, |to| Self::between(0, to))
    }

    /// Everything from a count on; empty for `None`.
    pub fn at_least(from: Option<u64>) -> Self {
        from.map_or_else(Self::empty, |from| {
            Self::union_of([Range { from, to: None }])
        })
    }

    /// The union of ranges in any order.
    pub fn union_of(ranges: impl IntoIterator<Item = Range>) -> Self {
        let mut sorted: Vec<Range> = ranges
            .into_iter()
            .filter(|range| range.to.is_none_or(|to| range.from <= to))
            .collect();
        sorted.sort_unstable();
        let mut merged: Vec<Range> = Vec::with_capacity(sorted.len());
        for range in sorted {
            match merged.last_mut() {
                Some(last) if last.to.is_none_or(|to| range.from <= to.saturating_add(1)) => {
                    last.to = match (last.to, range.to) {
                        (Some(a), Some(b)) => Some(a.max(b)),
                        _ => None,
                    };
                }
                _ => merged.push(range),
            }
        }
        Self { ranges: merged }
    }

    /// The ranges, ascending.
    pub fn ranges(&self) -> &[Range] {
        &self.ranges
    }

    /// Whether it holds no count.
    pub fn is_empty(&self) -> bool {
        self.ranges.is_empty()
    }

    /// Whether it holds the count.
    pub fn contains(&self, count: u64) -> bool {
        let after = self.ranges.partition_point(|range| range.from <= count);
        after > 0 && self.ranges[after - 1].holds(count)
    }

    /// Whether it goes on without end.
    pub fn is_unbounded(&self) -> bool {
        self.ranges.last().is_some_and(|range| range.to.is_none())
    }

    /// Both sets together.
    pub fn union(&self, other: &Self) -> Self {
        Self::union_of(self.ranges.iter().chain(&other.ranges).copied())
    }

    /// What both sets hold.
    pub fn intersection(&self, other: &Self) -> Self {
        Self::union_of(
            other
                .ranges
                .iter()
                .flat_map(|range| self.within(range.from, range.to).ranges),
        )
    }

    /// All counts that it does not hold.
    pub fn complement(&self) -> Self {
        let mut gaps = Vec::with_capacity(self.ranges.len() + 1);
        let mut next = Some(0u64);
        for range in &self.ranges {
            if let Some(from) = next
                && from < range.from
            {
                gaps.push(Range {
                    from,
                    to: Some(range.from - 1),
                });
            }
            next = range.to.and_then(|to| to.checked_add(1));
        }
        if let Some(from) = next {
            gaps.push(Range { from, to: None });
        }
        Self { ranges: gaps }
    }

    /// The set as an expression in a statistic whose outcomes are `low..=high` (or without end).
    pub fn in_words(&self, statistic: &str, (low, high): (u64, Option<u64>)) -> String {
        let cut = self.within(low, high);
        if cut.is_empty() {
            return "none".to_owned();
        }
        let parts: Vec<String> = cut
            .ranges
            .iter()
            .map(|range| match (range.from == low, range.to) {
                (true, to) if to == high => format!("{statistic} >= {low}"),
                (true, Some(to)) => format!("{statistic} <= {to}"),
                (false, to) if to == high => format!("{statistic} >= {}", range.from),
                (false, Some(to)) if to == range.from => format!("{statistic} = {to}"),
                (false, Some(to)) => format!("{} <= {statistic} <= {to}", range.from),
                (_, None) => format!("{statistic} >= {}", range.from),
            })
            .collect();
        parts.join(" or ")
    }

    /// What of it lies in `low..=high`; the end stays open where the support has none.
    pub fn within(&self, low: u64, high: Option<u64>) -> Self {
        let cut = self.ranges.iter().map(|range| Range {
            from: range.from.max(low),
            to: match (range.to, high) {
                (Some(a), Some(b)) => Some(a.min(b)),
                (a, b) => a.or(b),
            },
        });
        Self::union_of(cut)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn complement_of_complement_is_itself() {
        let region = Region::at_most(Some(3)).union(&Region::at_least(Some(9)));
        assert_eq!(region.complement(), Region::between(4, 8));
        assert_eq!(region.complement().complement(), region);
        assert_eq!(Region::empty().complement(), Region::at_least(Some(0)));
    }

    #[test]
    fn neighbours_merge() {
        assert_eq!(
            Region::between(0, 2).union(&Region::between(3, 5)),
            Region::between(0, 5)
        );
        assert!(Region::between(5, 4).is_empty());
    }

    #[test]
    fn membership_follows_the_ranges() {
        let region = Region::between(2, 3).union(&Region::at_least(Some(7)));
        let inside: Vec<u64> = (0..10).filter(|&k| region.contains(k)).collect();
        assert_eq!(inside, [2, 3, 7, 8, 9]);
    }
}
