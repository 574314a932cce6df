//! Numbers: exact rationals, enclosures, and the laws of the discrete families. Knows no plan and no YAML.

pub mod enclosure;
pub mod exact;
