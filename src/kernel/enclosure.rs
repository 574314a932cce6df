//! Intervals that contain a true value. A probability is never a lone double in this program.

use serde::Serialize;

/// A closed interval of doubles known to contain a real number: `lower <= value <= upper`.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
pub struct Enclosure {
    lower: f64,
    upper: f64,
}

impl Enclosure {
    /// The interval `[lower, upper]`; `None` if the ends are out of order or not numbers.
    pub fn new(lower: f64, upper: f64) -> Option<Self> {
        (lower <= upper).then_some(Self { lower, upper })
    }

    /// The interval that holds one double only: for values that are exact.
    pub fn exactly(value: f64) -> Self {
        Self {
            lower: value,
            upper: value,
        }
    }

    /// Probability zero.
    pub const ZERO: Self = Self {
        lower: 0.0,
        upper: 0.0,
    };
    /// Probability one.
    pub const ONE: Self = Self {
        lower: 1.0,
        upper: 1.0,
    };

    /// Holds every probability: the answer when nothing is known.
    pub const UNKNOWN: Self = Self {
        lower: 0.0,
        upper: 1.0,
    };

    /// The lower end.
    pub fn lower(&self) -> f64 {
        self.lower
    }

    /// The upper end.
    pub fn upper(&self) -> f64 {
        self.upper
    }

    /// A double in the middle, for searches and plots, never for a claim.
    pub fn middle(&self) -> f64 {
        self.lower + (self.upper - self.lower) / 2.0
    }

    /// Width divided by the upper end; zero for the interval `[0, 0]`.
    pub fn relative_width(&self) -> f64 {
        if self.upper == 0.0 {
            0.0
        } else {
            (self.upper - self.lower) / self.upper
        }
    }

    /// Smallest interval that contains both.
    pub fn hull(self, other: Self) -> Self {
        Self {
            lower: self.lower.min(other.lower),
            upper: self.upper.max(other.upper),
        }
    }

    /// The larger of two enclosed values.
    pub fn max(self, other: Self) -> Self {
        Self {
            lower: self.lower.max(other.lower),
            upper: self.upper.max(other.upper),
        }
    }

    /// The smaller of two enclosed values.
    pub fn min(self, other: Self) -> Self {
        Self {
            lower: self.lower.min(other.lower),
            upper: self.upper.min(other.upper),
        }
    }

    /// `1 - value`, ends moved outwards by the rounding of the subtraction and cut to `[0, 1]`.
    pub fn complement(self) -> Self {
        Self {
            lower: (1.0 - self.upper).next_down().max(0.0),
            upper: (1.0 - self.lower).next_up().min(1.0),
        }
    }

    /// Sum, rounded outwards.
    pub fn plus(self, other: Self) -> Self {
        if other == Self::ZERO {
            return self;
        }
        if self == Self::ZERO {
            return other;
        }
        Self {
            lower: (self.lower + other.lower).next_down(),
            upper: (self.upper + other.upper).next_up(),
        }
    }

    /// Cuts to `[0, 1]`, where every probability lies.
    pub fn as_probability(self) -> Self {
        Self {
            lower: self.lower.clamp(0.0, 1.0),
            upper: self.upper.clamp(0.0, 1.0),
        }
    }

    /// Whether the interval holds the value.
    pub fn contains(&self, value: f64) -> bool {
        self.lower <= value && value <= self.upper
    }
}
