//! A value of a parameter: a rational number or an infinity.

use std::fmt;

use crate::kernel::exact::Exact;

/// A point of the extended line.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Value {
    /// Below every number.
    MinusInfinity,
    /// A number.
    Finite(Exact),
    /// Above every number.
    Infinity,
}

impl Value {
    /// A whole number.
    pub fn whole(value: u64) -> Self {
        Self::Finite(Exact::from(value))
    }

    /// The number, unless infinite.
    pub fn finite(&self) -> Option<&Exact> {
        match self {
            Self::Finite(value) => Some(value),
            _ => None,
        }
    }

    /// The nearest double, infinities included.
    pub fn to_f64(&self) -> f64 {
        match self {
            Self::MinusInfinity => f64::NEG_INFINITY,
            Self::Finite(value) => value.to_f64(),
            Self::Infinity => f64::INFINITY,
        }
    }
}

impl From<Exact> for Value {
    fn from(value: Exact) -> Self {
        Self::Finite(value)
    }
}

impl fmt::Display for Value {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::MinusInfinity => out.write_str("-inf"),
            Self::Finite(value) => value.fmt(out),
            Self::Infinity => out.write_str("inf"),
        }
    }
}
