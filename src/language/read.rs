//! From text to a typed plan: a pure function that reports everything it finds in one run.
//!
//! The order is: locate (places, strict subset) → shape (keys and kinds, by the schema) → values (numbers, sets, words)
//! → a second reading by serde_yaml, which must agree with the first.

use crate::language::diagnostic::{CautionGrade, Diagnostic, Located, Span};
use crate::language::families;
use crate::language::fields::Fields;
use crate::language::grid;
use crate::language::locate::{MOST_FINDINGS, locate};
use crate::language::plan::{
    AcceptWhen, Characteristic, Decision, Plan, Requirement, Test, WaivedRule,
};
use crate::language::shape;
use crate::language::source::Source;
use crate::language::suggestion::shown;
use crate::language::test_block;
use crate::language::tree::Node;
use crate::language::yaml;

/// More requirements than any plan has.
const MOST_REQUIREMENTS: usize = 100;

/// Blocks that are printed and enter no figure.
const DESCRIPTIVE: [&str; 10] = [
    "requirement",
    "risk_link",
    "population",
    "sampling",
    "measurement",
    "assumptions",
    "rationale",
    "references",
    "approvals",
    "change",
];

/// What reading a text gave.
#[derive(Clone, Debug)]
pub struct Reading {
    /// The plan, unless there was an error.
    pub plan: Option<Plan>,
    /// What could be read of a plan with errors, as far as its test goes: good for finding more errors, never for solving.
    pub doubtful: Option<Plan>,
    /// Errors and cautions, in the order of the text.
    pub diagnostics: Vec<Diagnostic>,
}

/// Reads a plan. Never panics, whatever the text; every finding lies within the text.
pub fn read(text: &str) -> Reading {
    let source = Source::new(text);
    let (tree, diagnostics) = locate(text, &source);
    let mut fields = Fields {
        source: &source,
        diagnostics,
    };
    let plan = tree.and_then(|tree| from_tree(text, &tree, &mut fields));
    let mut diagnostics = fields.diagnostics;
    for diagnostic in &mut diagnostics {
        diagnostic.span = source.clip(diagnostic.span);
    }
    diagnostics.sort_by_key(|found| found.span);
    diagnostics.dedup();
    let sound = !diagnostics.iter().any(Diagnostic::is_error);
    cap(&mut diagnostics);
    let (plan, doubtful) = match plan {
        Some((plan, complete)) if complete && sound => (Some(plan), None),
        Some((plan, _)) => (None, Some(plan)),
        None => (None, None),
    };
    Reading {
        plan,
        doubtful,
        diagnostics,
    }
}

/// Nobody reads more than [`MOST_FINDINGS`]; errors are kept before cautions.
fn cap(diagnostics: &mut Vec<Diagnostic>) {
    if diagnostics.len() <= MOST_FINDINGS {
        return;
    }
    let beyond = diagnostics.len() - MOST_FINDINGS;
    if diagnostics.iter().any(Diagnostic::is_error) {
        diagnostics.retain(Diagnostic::is_error);
    }
    diagnostics.truncate(MOST_FINDINGS);
    if let Some(last) = diagnostics.last().map(|found| found.span) {
        let message = format!("there are at least {beyond} more findings");
        diagnostics.push(
            Diagnostic::error("too-many", last, message)
                .with_help("mend these first, then check again"),
        );
    }
}

/// The plan and whether all of it was there.
fn from_tree(text: &str, tree: &Node, fields: &mut Fields<'_>) -> Option<(Plan, bool)> {
    let start = Span {
        line: tree.span.line,
        column: tree.span.column,
        width: 1,
    };
    let family = test_block::family(fields, tree);
    let named = tree
        .get("test")
        .and_then(|test| test.get("family"))
        .and_then(Node::given);
    let skip = named.and_then(families::not_yet).map(|_| "test");
    let shape = shape::check(tree, fields.source, start, skip);
    fields.diagnostics.extend(shape);
    language_version(fields, tree.get("assize"));
    let test = match skip {
        Some(_) => None,
        None => test_block::test(fields, tree, family),
    };
    let requirements = match skip {
        Some(_) => Vec::new(),
        None => requirements(fields, tree.get("power")),
    };
    let plan = values(text, tree, (test, requirements), start, fields);
    if !fields.diagnostics.iter().any(Diagnostic::is_error)
        && let Err(disagreement) = yaml::agrees(text, tree, start)
    {
        fields.diagnostics.push(disagreement);
    }
    plan
}

fn language_version(fields: &mut Fields<'_>, node: Option<&Node>) {
    let Some((node, text)) = node.and_then(|node| Some((node, node.given()?))) else {
        return;
    };
    if text != "1" {
        fields.error(
            "language-version",
            node.span,
            format!(
                "this program does not know version `{}` of the plan language",
                shown(text)
            ),
            "write `assize: 1`",
        );
    }
}

/// The plan around its test. Every block is read before anything is given up, so that all findings are reported.
fn values(
    text: &str,
    tree: &Node,
    (test, requirements): (Option<Test>, Vec<Requirement>),
    start: Span,
    fields: &mut Fields<'_>,
) -> Option<(Plan, bool)> {
    let identity = tree.get("plan");
    let of = |key: &str| identity.and_then(|plan| plan.get(key));
    let id = fields.identifier(of("id"), "the plan number");
    let revision = fields.identifier(of("revision"), "the revision");
    let title = fields.text(of("title"));
    fields.date(of("date"), "the date");
    fields.date(of("effective_date"), "the effective date");
    supersedes(fields, of("supersedes"), revision.as_ref());
    let characteristic = characteristic(fields, tree.get("characteristic"));
    let decision = decision(fields, tree.get("decision"));
    let power_at = grid::power_at(
        fields,
        tree.get("report").and_then(|report| report.get("power_at")),
    );
    let waivers = waivers(fields, tree.get("waive"));
    let complete = id.is_some()
        && revision.is_some()
        && title.is_some()
        && characteristic.is_some()
        && decision.is_some();
    // Stands in for what is missing, so that the sets can still be held against each other.
    let nothing = || Located::new(String::new(), start);
    let plan = Plan {
        text: text.to_owned(),
        id: id.unwrap_or_else(nothing),
        revision: revision.unwrap_or_else(nothing),
        title: title.unwrap_or_else(nothing),
        characteristic: characteristic.unwrap_or_else(|| Characteristic {
            name: nothing(),
            counts: None,
            measures: None,
            unit: None,
            hazard: None,
        }),
        test: test?,
        requirements,
        decision: decision.unwrap_or_else(|| Decision {
            accept_when: Located::new(AcceptWhen::NullRejected, start),
            if_rejected: None,
            if_retained: None,
        }),
        power_at,
        waivers,
        declared: declared(tree),
        blocks: tree
            .entries()
            .iter()
            .map(|entry| (entry.key.value.clone(), entry.key.span))
            .collect(),
        start,
    };
    Some((plan, complete))
}

fn supersedes(fields: &mut Fields<'_>, node: Option<&Node>, revision: Option<&Located<String>>) {
    let Some(node) = node else { return };
    let earlier = fields.identifier(node.get("revision"), "the superseded revision");
    if let (Some(earlier), Some(revision)) = (earlier, revision)
        && earlier.value == revision.value
    {
        fields.error(
            "supersedes-itself",
            earlier.span,
            format!("revision {} cannot supersede itself", revision.value),
            "name the revision that this one replaces",
        );
    }
    let Some((record, text)) = node
        .get("record")
        .and_then(|record| Some((record, record.given()?)))
    else {
        return;
    };
    let is_hash = text
        .strip_prefix("sha256:")
        .is_some_and(|digits| digits.len() == 64 && digits.bytes().all(|b| b.is_ascii_hexdigit()));
    if !is_hash {
        fields.diagnostics.push(
            Diagnostic::caution(
                CautionGrade::Warning,
                "bad-hash",
                record.span,
                "this is not the hash of a record",
            )
            .with_help("write `sha256:` and the 64 hexadecimal digits that the earlier record's seal shows"),
        );
    }
}

fn characteristic(fields: &Fields<'_>, node: Option<&Node>) -> Option<Characteristic> {
    let node = node?;
    Some(Characteristic {
        name: fields.text(node.get("name"))?,
        counts: fields.text(node.get("counts")),
        measures: fields.text(node.get("measures")),
        unit: fields.text(node.get("unit")),
        hazard: fields.text(node.get("hazard")),
    })
}

fn requirements(fields: &mut Fields<'_>, node: Option<&Node>) -> Vec<Requirement> {
    let items = node.map(Node::items).unwrap_or_default();
    if let Some(beyond) = items.get(MOST_REQUIREMENTS) {
        fields.error(
            "too-many",
            beyond.span,
            format!("a plan has at most {MOST_REQUIREMENTS} requirements on the power"),
            "keep those that decide",
        );
        return Vec::new();
    }
    items
        .iter()
        .filter_map(|item| {
            let where_set = fields.set(item.get("where"));
            let at_least = fields.level(item.get("at_least"), "a required power");
            Some(Requirement {
                where_set: where_set?,
                at_least: at_least?,
                because: fields.text(item.get("because")).map(|text| text.value),
            })
        })
        .collect()
}

fn decision(fields: &Fields<'_>, node: Option<&Node>) -> Option<Decision> {
    let node = node?;
    let words = [
        ("null_rejected", AcceptWhen::NullRejected),
        ("null_retained", AcceptWhen::NullRetained),
    ];
    Some(Decision {
        accept_when: fields.word(node.get("accept_when"), &words)?,
        if_rejected: fields.text(node.get("if_rejected")).map(|text| text.value),
        if_retained: fields.text(node.get("if_retained")).map(|text| text.value),
    })
}

fn waivers(fields: &mut Fields<'_>, node: Option<&Node>) -> Vec<WaivedRule> {
    let items = node.map(Node::items).unwrap_or_default();
    items
        .iter()
        .filter_map(|item| {
            let rule = fields.text(item.get("rule"))?;
            let because = fields.text(item.get("because"))?;
            Some(WaivedRule {
                rule,
                because: because.value,
            })
        })
        .collect()
}

/// The descriptive blocks in the order of the document.
fn declared(tree: &Node) -> serde_json::Map<String, serde_json::Value> {
    let mut found = serde_json::Map::new();
    for entry in tree.entries() {
        let name = entry.key.value.as_str();
        if name == "plan" {
            let options: serde_json::Map<_, _> = entry
                .value
                .entries()
                .iter()
                .filter(|option| !matches!(option.key.value.as_str(), "id" | "revision" | "title"))
                .map(|option| (option.key.value.clone(), option.value.to_json()))
                .collect();
            if !options.is_empty() {
                found.insert(name.to_owned(), options.into());
            }
        } else if DESCRIPTIVE.contains(&name) {
            found.insert(name.to_owned(), entry.value.to_json());
        }
    }
    found
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn reads_a_plan_of_every_common_block() {
        let reading = read(include_str!("../../tests/plans/good-design.yaml"));
        let plan = reading.plan.expect("the plan has no errors");
        assert_eq!(plan.id.value, "TP-0142");
        assert_eq!(plan.power_at.len(), 21);
        assert_eq!(plan.power_at[20].to_string(), "0.1");
        assert_eq!(plan.requirements[0].at_least.value.to_string(), "0.9");
        assert_eq!(plan.declared["plan"]["date"], "2026-11-30");
        let codes: Vec<&str> = reading.diagnostics.iter().map(|found| found.code).collect();
        assert_eq!(codes, ["bad-hash"], "the hash in it is elided");
    }
}
