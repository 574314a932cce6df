//! `report.power_at`: a list of values, or an even grid.

use crate::kernel::exact::Exact;
use crate::language::fields::Fields;
use crate::language::tree::Node;

/// The most rows of a power table.
pub const MOST_POINTS: u64 = 2000;

/// The points asked for, in the order of the plan; none when something is wrong or nothing is asked for.
pub fn power_at(fields: &mut Fields<'_>, node: Option<&Node>) -> Vec<Exact> {
    let Some(node) = node else { return Vec::new() };
    if node.entries().is_empty() {
        return list(fields, node);
    }
    even(fields, node).unwrap_or_default()
}

fn list(fields: &mut Fields<'_>, node: &Node) -> Vec<Exact> {
    if node.items().len() as u64 > MOST_POINTS {
        too_many(fields, node);
        return Vec::new();
    }
    let mut points: Vec<Exact> = Vec::new();
    for item in node.items() {
        if let Some(point) = fields.number(Some(item)) {
            points.push(point.value);
        }
    }
    points
}

fn even(fields: &mut Fields<'_>, node: &Node) -> Option<Vec<Exact>> {
    let from = fields.number(node.get("from"));
    let to = fields.number(node.get("to"));
    let step = fields.number(node.get("step"));
    let (from, to, step) = (from?, to?, step?);
    if step.value <= Exact::zero() {
        fields.error(
            "out-of-range",
            step.span,
            "the step must be more than 0",
            "give the distance between neighbouring values",
        );
        return None;
    }
    if from.value >= to.value {
        fields.error(
            "empty-range",
            to.span,
            "this range ends before it begins",
            "let `from` be less than `to`",
        );
        return None;
    }
    let steps = (&to.value - &from.value)
        .checked_div(&step.value)?
        .floor()
        .to_u64()
        .filter(|steps| *steps < MOST_POINTS);
    let Some(steps) = steps else {
        too_many(fields, node);
        return None;
    };
    Some(
        (0..=steps)
            .map(|index| &from.value + &(&Exact::from(index) * &step.value))
            .collect(),
    )
}

fn too_many(fields: &mut Fields<'_>, node: &Node) {
    fields.error(
        "too-many",
        node.span,
        format!("a power table has at most {MOST_POINTS} rows"),
        "take a wider step",
    );
}
