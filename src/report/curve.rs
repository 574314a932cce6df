//! The power function as a picture.
use crate::record::Record;

/// For which width a picture is drawn.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Layout {
    /// A page or a desktop window.
    Page,
    /// A telephone.
    Phone,
}

/// The picture.
pub fn svg(_record: &Record, _layout: Layout) -> String {
    "<svg></svg>".to_owned()
}

/// What the picture shows.
pub fn caption(_record: &Record) -> String {
    String::new()
}
