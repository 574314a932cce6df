//! The plan language: from text to a typed plan with a place for every value. Knows no mathematics.

pub mod diagnostic;
pub mod plan;
pub mod set;
