//! What is filed: every figure of a solved plan, with its bounds and where it comes from.

mod build;
mod canonical;
mod content;
mod findings;
#[cfg(test)]
pub(crate) mod fixture;
mod seal;

pub use build::{LANGUAGE, build, hexadecimal};
pub use canonical::{Unwritable, canonical, pretty};
pub use content::*;
pub use findings::{cautions, waivers};
pub use seal::{checksum_line, record_json, seal, sha256_hex};
