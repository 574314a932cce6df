//! The power function as a picture: the probability that the lot is accepted over the parameter, with the null subset,
//! the level, the envelope and the requirements marked.
//!
//! Everything is told apart by form and not by colour alone: the null is hatched, the envelope dashed, requirements are
//! brackets, points of equal acceptance rings. Colours are custom properties of the page, so that the picture follows it
//! into the dark and onto paper.

mod background;
mod drawing;
mod line;
mod lines;
mod marks;
mod scale;

use crate::record::Record;

use super::html::text;
use super::words::rule::accepts_by_rejecting;
use super::words::subject::Subject;
use super::{claim, round};

use drawing::Drawing;

const STYLE: &str = include_str!("../../../templates/curve.css");
const COLOURS: &str = include_str!("../../../templates/colours.css");

/// For which width a picture is drawn.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Layout {
    /// A page or a desktop window.
    Page,
    /// A telephone.
    Phone,
}

/// The picture as a file of its own, with its colours for light and dark.
pub fn svg(record: &Record, layout: Layout) -> String {
    let style = format!("<style>{}{}</style>", COLOURS.trim_end(), STYLE.trim_end());
    let picture = Drawing::new(record, layout).draw(&style);
    format!("{picture}\n")
}

/// The picture as part of a page that holds the colours.
pub fn within_page(record: &Record, layout: Layout) -> String {
    Drawing::new(record, layout).draw("")
}

/// The style that the picture wants of its page.
pub fn style() -> &'static str {
    STYLE
}

/// What the picture shows, in plain text: its name.
pub fn title(record: &Record) -> String {
    let subject = Subject::new(record);
    format!(
        "Probability that the lot is accepted, by {}",
        text(&plain(&subject.parameter()))
    )
}

/// What the picture shows, in plain text: for those who do not see it.
pub fn description(record: &Record) -> String {
    let subject = Subject::new(record);
    let mut said = Vec::new();
    if let (Some(first), Some(last)) = (record.power.first(), record.power.last()) {
        let place = |row: &crate::record::PowerRow| {
            super::words::subject::coordinate(record, &row.at)
                .map_or_else(String::new, |at| subject.figure(at))
        };
        said.push(format!(
            "From {} at {} to {} at {}.",
            percent(first.lot_accepted.value),
            place(first),
            percent(last.lot_accepted.value),
            place(last)
        ));
    }
    let bound = if accepts_by_rejecting(record) {
        "accepted"
    } else {
        "not accepted"
    };
    said.push(format!(
        "In the null subset, {}, the lot is {bound} with a probability of at most {}.",
        plain(&record.problem.null_subset),
        claim::size(record)
    ));
    for requirement in &record.requirements {
        said.push(format!(
            "{}.",
            plain(&claim::requirement(record, &subject, requirement))
        ));
    }
    text(&said.join(" "))
}

fn percent(probability: f64) -> String {
    round::nearest(probability)
}

/// Escaped Markdown as plain text.
fn plain(markdown: &str) -> String {
    let mut out = String::with_capacity(markdown.len());
    let mut characters = markdown.chars();
    while let Some(character) = characters.next() {
        match character {
            '\\' => out.extend(characters.next()),
            '`' => {}
            other => out.push(other),
        }
    }
    out
}
