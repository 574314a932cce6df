//! Intervals with open or closed ends.

use super::value::Value;

/// One end of an interval.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct End {
    /// Where.
    pub at: Value,
    /// Whether the value itself belongs to the interval.
    pub closed: bool,
}

impl End {
    /// An end that belongs to the interval.
    pub fn closed(at: Value) -> Self {
        Self { at, closed: true }
    }

    /// An end that does not.
    pub fn open(at: Value) -> Self {
        Self { at, closed: false }
    }
}

/// A non-empty interval, possibly a single point.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Interval {
    low: End,
    high: End,
}

impl Interval {
    /// The interval between two ends; `None` if it would be empty. Infinite ends are open.
    pub fn new(mut low: End, mut high: End) -> Option<Self> {
        low.closed &= low.at.finite().is_some();
        high.closed &= high.at.finite().is_some();
        let holds_something = match low.at.cmp(&high.at) {
            std::cmp::Ordering::Less => true,
            std::cmp::Ordering::Equal => low.closed && high.closed,
            std::cmp::Ordering::Greater => false,
        };
        holds_something.then_some(Self { low, high })
    }

    /// The interval that holds one value only; infinities make none.
    pub fn point(at: Value) -> Option<Self> {
        Self::new(End::closed(at.clone()), End::closed(at))
    }

    /// The lower end.
    pub fn low(&self) -> &End {
        &self.low
    }

    /// The upper end.
    pub fn high(&self) -> &End {
        &self.high
    }

    /// Whether it is a single point.
    pub fn is_point(&self) -> bool {
        self.low.at == self.high.at
    }

    /// Whether it holds the value.
    pub fn contains(&self, value: &Value) -> bool {
        let above_low = match value.cmp(&self.low.at) {
            std::cmp::Ordering::Less => false,
            std::cmp::Ordering::Equal => self.low.closed,
            std::cmp::Ordering::Greater => true,
        };
        let below_high = match value.cmp(&self.high.at) {
            std::cmp::Ordering::Less => true,
            std::cmp::Ordering::Equal => self.high.closed,
            std::cmp::Ordering::Greater => false,
        };
        above_low && below_high
    }

    /// What both hold.
    pub fn intersection(&self, other: &Self) -> Option<Self> {
        Self::new(
            later(&self.low, &other.low).clone(),
            earlier(&self.high, &other.high).clone(),
        )
    }

    /// Whether no value lies between the end of this one and the start of the next, so that both make one interval.
    pub(super) fn joins(&self, next: &Self) -> bool {
        match next.low.at.cmp(&self.high.at) {
            std::cmp::Ordering::Less => true,
            std::cmp::Ordering::Equal => self.high.closed || next.low.closed,
            std::cmp::Ordering::Greater => false,
        }
    }

    /// The smallest interval that holds both.
    pub(super) fn joined(&self, next: &Self) -> Self {
        let high = if self.high.at == next.high.at {
            End {
                at: self.high.at.clone(),
                closed: self.high.closed || next.high.closed,
            }
        } else if self.high.at > next.high.at {
            self.high.clone()
        } else {
            next.high.clone()
        };
        Self {
            low: self.low.clone(),
            high,
        }
    }
}

/// Of two lower ends, the one that leaves out more.
fn later<'a>(a: &'a End, b: &'a End) -> &'a End {
    match a.at.cmp(&b.at) {
        std::cmp::Ordering::Less => b,
        std::cmp::Ordering::Greater => a,
        std::cmp::Ordering::Equal => {
            if a.closed {
                b
            } else {
                a
            }
        }
    }
}

/// Of two upper ends, the one that leaves out more.
fn earlier<'a>(a: &'a End, b: &'a End) -> &'a End {
    match a.at.cmp(&b.at) {
        std::cmp::Ordering::Less => a,
        std::cmp::Ordering::Greater => b,
        std::cmp::Ordering::Equal => {
            if a.closed {
                b
            } else {
                a
            }
        }
    }
}
