//! The plan language: from text to a typed plan with a place for every value. Knows no mathematics.

mod characters;
pub mod codes;
pub mod description;
pub mod diagnostic;
pub mod document;
pub mod expression;
pub mod families;
pub mod fields;
pub mod grid;
pub mod locate;
pub mod plan;
pub mod read;
pub mod render;
pub mod scalar;
pub mod schema;
pub mod set;
pub mod shape;
pub mod source;
pub mod suggestion;
mod syntax;
pub mod test_block;
pub mod tree;
pub mod yaml;
