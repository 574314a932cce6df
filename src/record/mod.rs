//! What is filed: every figure of a solved plan, with its bounds and where it comes from.

mod content;

pub use content::*;
