//! The `test` block: family, sets, risks, and which keys belong to which family.

use crate::kernel::exact::Exact;
use crate::language::diagnostic::{Located, Span};
use crate::language::families::{DERIVED, not_yet};
use crate::language::fields::{Fields, MOST_UNITS};
use crate::language::plan::{Inspection, SequentialRequest, StageRequest, Tails, Test};
use crate::language::suggestion::{nearest, one_of, shown};
use crate::language::tree::Node;

/// More stages than any inspection has.
const MOST_STAGES: usize = 50;
/// More retests than any procedure allows.
const MOST_RETESTS: u64 = 100;

/// The family of a tree, if it names one this version derives; otherwise why not.
pub fn family(fields: &mut Fields<'_>, tree: &Node) -> Option<Located<String>> {
    let node = tree.get("test")?.get("family")?;
    let name = node.given()?;
    if DERIVED.contains(&name) {
        return Some(Located::new(name.to_owned(), node.span));
    }
    if let Some(instead) = not_yet(name) {
        fields.error(
            "not-yet-derived",
            node.span,
            format!("tests for the family `{name}` cannot be derived yet"),
            format!("the nearest thing that works: {instead}"),
        );
        return None;
    }
    let help = match nearest(name, DERIVED) {
        Some(meant) => format!("did you mean `{meant}`?"),
        None => format!("the families are {}", one_of(&DERIVED)),
    };
    fields.error(
        "unknown-family",
        node.span,
        format!("there is no family `{}`", shown(name)),
        help,
    );
    None
}

/// The whole block; nothing if a key that it needs is missing or wrong.
pub fn test(fields: &mut Fields<'_>, tree: &Node, family: Option<Located<String>>) -> Option<Test> {
    let entry = tree.entry("test")?;
    let block = &entry.value;
    let span = entry.key.span;
    let fractional = family
        .as_ref()
        .is_some_and(|family| family.value == "poisson");
    if let Some(family) = &family {
        keys_of_family(fields, block, &family.value, span);
    }

    let parameter_space = fields.set(block.get("parameter_space"));
    let null_subset = fields.set(block.get("null_subset"));
    let alpha = fields.level(block.get("alpha"), "alpha");
    let sample_size = fields.sample_size(block.get("sample_size"), "the sample size", fractional);
    let stop_at = block.get("stop_at");
    Some(Test {
        span,
        sample_size,
        step: fields.amount(block.get("step"), "the step"),
        lot_size: fields.count(block.get("lot_size"), "the lot size", MOST_UNITS),
        stop_at_nonconforming: fields.sample_size(
            stop_at.and_then(|stop| stop.get("nonconforming")),
            "the number of nonconforming units",
            false,
        ),
        critical_region: fields.set(block.get("critical_region")),
        tails: fields.word(
            block.get("tails"),
            &[
                ("equal", Tails::Equal),
                ("joint", Tails::Joint),
                ("unbiased", Tails::Unbiased),
            ],
        ),
        inspection: inspection(fields, block.get("inspection")),
        stages: stages(fields, block.get("stages"), fractional),
        sequential: sequential(fields, block.get("sequential"), fractional),
        retest_times: fields.count(
            block.get("retest").and_then(|retest| retest.get("times")),
            "the number of retests",
            MOST_RETESTS,
        ),
        rectification_lot_size: fields.count(
            block
                .get("rectification")
                .and_then(|lot| lot.get("lot_size")),
            "the lot size",
            MOST_UNITS,
        ),
        family: family?,
        parameter_space: parameter_space?,
        null_subset: null_subset?,
        alpha: alpha?,
    })
}

/// What each family needs, and what only other families have.
fn keys_of_family(fields: &mut Fields<'_>, block: &Node, family: &str, span: Span) {
    let has_size = ["sample_size", "stages", "sequential"]
        .iter()
        .any(|key| block.get(key).is_some());
    let mut needs = |code, key: &str, why: &str| {
        fields.error(code, span, format!("`{key}` is missing in `test`"), why);
    };
    if family == "negative_binomial" {
        if block.get("stop_at").is_none() {
            needs(
                "missing-sample-size",
                "stop_at",
                "inspection of a `negative_binomial` plan ends at a number of nonconforming units: add `stop_at: {nonconforming: 3}`",
            );
        }
    } else if !has_size {
        needs(
            "missing-sample-size",
            "sample_size",
            "give a number, or `smallest`",
        );
    }
    if family == "hypergeometric" && block.get("lot_size").is_none() {
        needs(
            "missing-lot-size",
            "lot_size",
            "a `hypergeometric` plan is about one lot: say how many units it has",
        );
    }
    let misplaced = [
        (
            "lot_size",
            family == "hypergeometric",
            "only a `hypergeometric` plan has a lot size; for sorted lots use `rectification: {lot_size: …}`",
        ),
        (
            "stop_at",
            family == "negative_binomial",
            "only a `negative_binomial` plan stops at a number of nonconforming units",
        ),
        (
            "step",
            family == "poisson",
            "only the amount of opportunity of a `poisson` plan has a step; units are whole",
        ),
        (
            "sample_size",
            family != "negative_binomial",
            "a `negative_binomial` plan inspects until `stop_at`; its number of units is the statistic `n`",
        ),
        (
            "stages",
            family != "negative_binomial",
            "a `negative_binomial` plan inspects until `stop_at` and has no stages",
        ),
        (
            "sequential",
            family != "negative_binomial",
            "a `negative_binomial` plan inspects until `stop_at`",
        ),
    ];
    for (key, belongs, why) in misplaced {
        if let (Some(entry), false) = (block.entry(key), belongs) {
            fields.error(
                "key-of-another-family",
                entry.key.span,
                format!("`{key}` does not belong to the family `{family}`"),
                why,
            );
        }
    }
}

fn inspection(fields: &mut Fields<'_>, node: Option<&Node>) -> Option<Located<Inspection>> {
    let node = node?;
    let misses = rate_range(fields, node.get("misses"), "the rate of misses");
    let false_alarms = rate_range(fields, node.get("false_alarms"), "the rate of false alarms");
    Some(Located::new(
        Inspection {
            misses: misses?,
            false_alarms: false_alarms?,
        },
        node.span,
    ))
}

/// One rate, or the smallest and the largest; none stated is none at all.
fn rate_range(fields: &mut Fields<'_>, node: Option<&Node>, name: &str) -> Option<(Exact, Exact)> {
    let Some(node) = node else {
        return Some((Exact::zero(), Exact::zero()));
    };
    if node.entries().is_empty() {
        let rate = fields.rate(Some(node), name)?;
        return Some((rate.value.clone(), rate.value));
    }
    let from = fields.rate(node.get("from"), name);
    let to = fields.rate(node.get("to"), name);
    let (from, to) = (from?, to?);
    if from.value > to.value {
        fields.error(
            "empty-range",
            to.span,
            "this range ends before it begins",
            "let `from` be at most `to`",
        );
        return None;
    }
    Some((from.value, to.value))
}

fn stages(fields: &mut Fields<'_>, node: Option<&Node>, fractional: bool) -> Vec<StageRequest> {
    let items = node.map(Node::items).unwrap_or_default();
    if let Some(beyond) = items.get(MOST_STAGES) {
        fields.error(
            "too-many",
            beyond.span,
            format!("a plan has at most {MOST_STAGES} stages"),
            "use `sequential` to look after every unit",
        );
        return Vec::new();
    }
    items
        .iter()
        .filter_map(|item| {
            let size = if fractional {
                fields.amount(item.get("size"), "the size of a stage")
            } else {
                fields.count(item.get("size"), "the size of a stage", MOST_UNITS)
            };
            let retain_null = fields.set(item.get("retain_null"));
            let reject_null = fields.set(item.get("reject_null"));
            Some(StageRequest {
                size: size?,
                retain_null,
                reject_null,
            })
        })
        .collect()
}

fn sequential(
    fields: &mut Fields<'_>,
    node: Option<&Node>,
    fractional: bool,
) -> Option<Located<SequentialRequest>> {
    let node = node?;
    let against = fields.set(node.get("against"));
    let beta = fields.level(node.get("beta"), "beta");
    let stop_by = if fractional {
        fields.amount(node.get("stop_by"), "the truncation")
    } else {
        fields.count(node.get("stop_by"), "the truncation", MOST_UNITS)
    };
    Some(Located::new(
        SequentialRequest {
            against: against?.value,
            beta: beta?.value,
            stop_by: stop_by?.value,
        },
        node.span,
    ))
}
