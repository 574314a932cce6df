//! What an imperfect inspection sees of the parameter.
//!
//! A unit is called nonconforming with probability π(p) = f + p·(1 − m − f): it is nonconforming and not missed, or
//! conforming and a false alarm. π rises in p and f and falls in m, so ranges of m and f give an interval of π, and the
//! worst end of it counts in every supremum and infimum.

use crate::kernel::exact::Exact;
use crate::space::{End, Interval, LineSet, Value};

/// The observed parameter as a function of the true one.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Observation {
    /// Inspection does not err.
    Perfect,
    /// Units are misjudged at these rates (smallest, largest).
    OfUnits {
        /// Nonconforming units that pass.
        misses: (Exact, Exact),
        /// Conforming units called nonconforming.
        false_alarms: (Exact, Exact),
    },
    /// Nonconformities are overlooked at this rate (smallest, largest): λ becomes λ(1 − m).
    OfNonconformities {
        /// Nonconformities overlooked.
        misses: (Exact, Exact),
    },
}

impl Observation {
    /// The smallest and largest observed value at a true value.
    pub fn images(&self, at: &Value) -> (Value, Value) {
        let Some(value) = at.finite() else {
            return (at.clone(), at.clone());
        };
        match self {
            Self::Perfect => (at.clone(), at.clone()),
            Self::OfUnits {
                misses,
                false_alarms,
            } => (
                Value::Finite(seen(value, &misses.1, &false_alarms.0)),
                Value::Finite(seen(value, &misses.0, &false_alarms.1)),
            ),
            Self::OfNonconformities { misses } => (
                Value::Finite(value * &(&Exact::one() - &misses.1)),
                Value::Finite(value * &(&Exact::one() - &misses.0)),
            ),
        }
    }

    /// All observed values of a set of true values.
    pub fn image(&self, set: &LineSet) -> LineSet {
        LineSet::union_of(set.pieces().iter().filter_map(|piece| {
            Interval::new(
                End {
                    at: self.images(&piece.low().at).0,
                    closed: piece.low().closed,
                },
                End {
                    at: self.images(&piece.high().at).1,
                    closed: piece.high().closed,
                },
            )
        }))
    }

    /// The true value behind an observed one, cut to the hull of a set of true values: by the smallest image where the
    /// observed value came from a lower end, else by the largest.
    pub fn preimage(&self, observed: &Value, lower: bool, set: &LineSet) -> Value {
        let Some(value) = observed.finite() else {
            return observed.clone();
        };
        let rate = |rates: &(Exact, Exact), largest: bool| {
            if largest {
                rates.1.clone()
            } else {
                rates.0.clone()
            }
        };
        let found = match self {
            Self::Perfect => return observed.clone(),
            Self::OfUnits {
                misses,
                false_alarms,
            } => {
                let alarm = rate(false_alarms, !lower);
                let slope = &(&Exact::one() - &rate(misses, lower)) - &alarm;
                (value - &alarm).checked_div(&slope)
            }
            Self::OfNonconformities { misses } => {
                value.checked_div(&(&Exact::one() - &rate(misses, lower)))
            }
        };
        let found = found.map_or_else(|| observed.clone(), Value::Finite);
        match (set.infimum(), set.supremum()) {
            (Some(low), Some(high)) => found.max(low.clone()).min(high.clone()),
            _ => found,
        }
    }

    /// Whether a true value is observed as one value.
    pub fn is_sharp(&self) -> bool {
        match self {
            Self::Perfect => true,
            Self::OfUnits {
                misses,
                false_alarms,
            } => misses.0 == misses.1 && false_alarms.0 == false_alarms.1,
            Self::OfNonconformities { misses } => misses.0 == misses.1,
        }
    }
}

/// π(p) = f + p·(1 − m − f).
fn seen(p: &Exact, misses: &Exact, false_alarms: &Exact) -> Exact {
    let slope = &(&Exact::one() - misses) - false_alarms;
    false_alarms + &(p * &slope)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn exact(text: &str) -> Exact {
        text.parse().unwrap()
    }

    #[test]
    fn misses_lower_and_false_alarms_raise_what_is_seen() {
        let observation = Observation::OfUnits {
            misses: (exact("0.05"), exact("0.20")),
            false_alarms: (exact("0"), exact("0.005")),
        };
        let (low, high) = observation.images(&Value::Finite(exact("0.01")));
        assert_eq!(low, Value::Finite(exact("0.008")));
        assert_eq!(high, Value::Finite(exact("0.01445")));
    }
}
