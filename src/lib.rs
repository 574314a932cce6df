//! **assize** compiles a declarative test plan into a sealed audit report.

pub mod kernel;
pub mod language;
pub mod record;
pub mod space;
