//! Exact sets of parameter values: unions of intervals and points on the line, and lattices in it.

mod interval;
mod lattice;
mod line_set;
mod value;

pub use interval::{End, Interval};
pub use lattice::Lattice;
pub use line_set::LineSet;
pub use value::Value;
