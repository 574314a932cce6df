//! **assize** compiles a declarative test plan into a sealed audit report.

pub mod family;
pub mod kernel;
pub mod language;
pub mod problem;
pub mod record;
pub mod solving;
pub mod space;
