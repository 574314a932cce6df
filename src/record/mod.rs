//! What is filed: every figure of a solved plan, with its bounds and where it comes from.

mod build;
mod content;

pub use build::{LANGUAGE, build, hexadecimal};
pub use content::*;
