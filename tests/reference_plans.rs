//! Whole plans, from text to record, held against regions, sizes, powers and envelopes found by exhaustive search in exact
//! arithmetic: `tests/reference/plans.csv` says by what.

#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic)]

mod tables;

use assize::record::Record;
use assize::{Silent, compile};
use num_rational::BigRational;
use num_traits::Zero;
use tables::{Row, missed, number, report, rows};

const TABLE: &str = include_str!("reference/plans.csv");

/// An envelope is an upper bound: it may exceed the true one by this much and never fall below it.
const ENVELOPE_SLACK: f64 = 1e-9;

fn plan(row: &Row) -> String {
    let quoted = |text: &str| format!("\"{text}\"");
    let mut text = format!(
        "assize: 1\nplan: {{id: {}, revision: A, title: Reference}}\n\
         characteristic: {{name: nonconformity, counts: nonconforming units}}\n\
         test:\n  family: {}\n  parameter_space: {}\n  null_subset: {}\n  alpha: {}\n",
        row.get("id"),
        row.get("family"),
        quoted(row.get("parameter_space")),
        quoted(row.get("null_subset")),
        row.get("alpha"),
    );
    if let Some(n) = row.setup("n") {
        text += &format!("  sample_size: {n}\n");
    }
    if let Some(lot) = row.setup("lot") {
        text += &format!("  lot_size: {lot}\n");
    }
    if let Some(r) = row.setup("r") {
        text += &format!("  stop_at: {{nonconforming: {r}}}\n");
    }
    if !row.get("tails").is_empty() {
        text += &format!("  tails: {}\n", row.get("tails"));
    }
    let requirements = row.list("requirements");
    if !requirements.is_empty() {
        text += "power:\n";
    }
    for requirement in requirements {
        let (set, at_least) = requirement.split_once(": ").unwrap();
        text += &format!("  - {{where: {}, at_least: {at_least}}}\n", quoted(set));
    }
    text += "decision: {accept_when: null_rejected, if_rejected: Release., if_retained: Hold.}\nreport:\n  power_at:\n";
    for point in row.list("points") {
        text += &format!("    - {}\n", quoted(point));
    }
    text
}

fn record(row: &Row) -> Result<Record, String> {
    let compilation = compile(&plan(row), &Silent).map_err(|error| error.to_string())?;
    compilation
        .record
        .ok_or_else(|| format!("no record: {:?}", compilation.diagnostics))
}

/// Whether the plan is refused because no region that rejects anything has so small a size.
fn level_unreachable(row: &Row) -> bool {
    let compilation = compile(&plan(row), &Silent).unwrap();
    compilation.record.is_none()
        && compilation
            .diagnostics
            .iter()
            .any(|found| found.code == "level-unreachable")
}

/// The region in the notation of the table: an end of the support is left open.
fn region(record: &Record, row: &Row) -> String {
    let low: u64 = row.setup("r").map_or(0, |r| r.parse().unwrap());
    let high: Option<u64> = match row.get("family") {
        "binomial" | "hypergeometric" => row.setup("n").map(|n| n.parse().unwrap()),
        _ => None,
    };
    let parts: Vec<String> = record
        .critical_region
        .intervals
        .iter()
        .map(|range| {
            let from = range.from.filter(|from| *from > low);
            let to = range.to.filter(|to| high.is_none_or(|high| *to < high));
            let shown = |end: Option<u64>| end.map_or(String::new(), |end| end.to_string());
            format!("{}..{}", shown(from), shown(to))
        })
        .collect();
    parts.join(" ")
}

fn at(point: &std::collections::BTreeMap<String, f64>) -> f64 {
    *point.values().next().unwrap()
}

fn value_at(row: &Row, text: &str) -> f64 {
    let _ = row;
    assize::kernel::exact::Exact::from_rational(number(text)).to_f64()
}

/// Everything in which a record differs from its row.
fn differences(row: &Row, record: &Record) -> Vec<String> {
    let mut found = Vec::new();
    let mut compare = |what: &str, lower: f64, upper: f64, value: &str| {
        if let Some(instead) = missed(lower, upper, &number(value)) {
            found.push(format!("{what} {instead} misses {value}"));
        }
    };
    compare(
        "size",
        record.size.lower,
        record.size.upper,
        row.get("size"),
    );
    for (result, attained) in record.requirements.iter().zip(row.list("attained")) {
        compare(
            "attained",
            result.attained.lower,
            result.attained.upper,
            attained,
        );
    }
    for (point, power) in row.list("points").into_iter().zip(row.list("powers")) {
        match power_row(row, record, point) {
            Some(line) => compare(&format!("power at {point}"), line.lower, line.upper, power),
            None => compare(
                &format!("power at {point}, which has no row,"),
                -1.0,
                -1.0,
                power,
            ),
        }
    }
    if region(record, row) != row.get("region") {
        found.push(format!(
            "region {} instead of {}",
            region(record, row),
            row.get("region")
        ));
    }
    if !row.get("worst_at").is_empty() && at(&record.size.at) != value_at(row, row.get("worst_at"))
    {
        found.push(format!(
            "size at {} instead of {}",
            at(&record.size.at),
            row.get("worst_at")
        ));
    }
    found.extend(envelope_differences(row, record));
    found
}

fn power_row<'a>(
    row: &Row,
    record: &'a Record,
    point: &str,
) -> Option<&'a assize::record::PowerRow> {
    let wanted = value_at(row, point);
    record.power.iter().find(|line| at(&line.at) == wanted)
}

fn envelope_differences(row: &Row, record: &Record) -> Vec<String> {
    let envelopes = row.get("envelopes").split(';').map(str::trim);
    row.list("points")
        .into_iter()
        .zip(envelopes)
        .filter(|(_, envelope)| !envelope.is_empty())
        .filter_map(|(point, envelope)| {
            let shown = power_row(row, record, point)?.envelope;
            let Some(shown) = shown else {
                return Some(format!("no envelope at {point}"));
            };
            let true_bound = number(envelope);
            let above = BigRational::from_float(shown).unwrap() - &true_bound;
            let slack = BigRational::from_float(ENVELOPE_SLACK).unwrap();
            let rounding = &true_bound * number("1e-24");
            (above < BigRational::zero() - rounding || above > slack)
                .then(|| format!("envelope at {point} {shown:e} instead of {envelope}"))
        })
        .collect()
}

#[test]
fn every_plan_compiles_to_the_region_and_the_figures_found_by_exhaustive_search() {
    let mut findings = Vec::new();
    for row in rows(TABLE, 150) {
        let head = format!(
            "{} {} {} null {} alpha {}",
            row.get("id"),
            row.get("family"),
            row.get("setup"),
            row.get("null_subset"),
            row.get("alpha")
        );
        if row.get("region") == "none" {
            if !level_unreachable(&row) {
                findings.push(format!("{head}: no region fits, and no finding says so"));
            }
            continue;
        }
        match record(&row) {
            Err(reason) => findings.push(format!("{head}: {reason}")),
            Ok(record) => findings.extend(
                differences(&row, &record)
                    .into_iter()
                    .map(|difference| format!("{head}: {difference}")),
            ),
        }
    }
    report(&findings);
}
