//! Numbers: exact rationals, enclosures, and the laws of the discrete families. Knows no plan and no YAML.

pub mod arithmetic;
pub mod enclosure;
pub mod exact;
pub mod exact_sum;
pub mod law;
pub mod ratio_sum;
pub mod region;
pub mod rounding;
pub mod second_route;
