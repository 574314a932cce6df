//! Staged and sequential plans, retests, sorted lots and imperfect inspection held against exact figures followed unit by
//! unit: `tests/reference/staged_plans.csv`.

#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic)]

mod tables;

use assize::record::{PowerRow, Record};
use assize::{Silent, compile};
use num_rational::BigRational;
use tables::{Row, exact, missed, number, report, rows};

const TABLE: &str = include_str!("reference/staged_plans.csv");

/// The value that follows a word in the set-up.
fn after<'a>(setup: &'a str, word: &str) -> &'a str {
    setup
        .split(',')
        .find_map(|part| part.trim().strip_prefix(word))
        .unwrap_or_else(|| panic!("no {word} in {setup}"))
        .trim()
}

fn stages(setup: &str) -> String {
    let mut text = "  stages:\n".to_owned();
    for stage in setup.split(';') {
        let mut fields = Vec::new();
        for part in stage.split(',').map(str::trim) {
            let (word, rest) = part.split_once(' ').unwrap();
            fields.push(match word {
                "size" => format!("size: {rest}"),
                "retain" => format!("retain_null: {rest}"),
                _ => format!("reject_null: {rest}"),
            });
        }
        text += &format!("    - {{{}}}\n", fields.join(", "));
    }
    text
}

/// The part of the test block that makes the plan more than one look at one sample.
fn design(row: &Row) -> String {
    let setup = row.get("setup");
    let single = || {
        format!(
            "  sample_size: {}\n  critical_region: {}\n",
            after(setup, "n "),
            after(setup, "reject ")
        )
    };
    match row.get("kind") {
        "stages" => stages(setup),
        "sequential" => format!(
            "  sequential: {{against: {}, beta: {}, stop_by: {}}}\n",
            after(setup, "against "),
            after(setup, "beta "),
            after(setup, "stop_by ")
        ),
        "retest" => single() + &format!("  retest: {{times: {}}}\n", after(setup, "times ")),
        "rectification" => {
            single()
                + &format!(
                    "  rectification: {{lot_size: {}}}\n",
                    after(setup, "lot_size ")
                )
        }
        _ => {
            single()
                + &format!(
                    "  inspection: {{misses: {}, false_alarms: {}}}\n",
                    after(setup, "misses "),
                    after(setup, "false_alarms ")
                )
        }
    }
}

fn plan(row: &Row) -> String {
    let alpha = match row.get("kind") {
        "sequential" => after(row.get("setup"), "alpha ").to_owned(),
        _ => "0.2".to_owned(),
    };
    format!(
        "assize: 1\nplan: {{id: {}, revision: A, title: Reference}}\n\
         characteristic: {{name: nonconformity, counts: nonconforming units}}\n\
         test:\n  family: binomial\n  parameter_space: 0 <= p <= 1\n  null_subset: \"{}\"\n  alpha: {alpha}\n{}\
         decision: {{accept_when: null_rejected, if_rejected: Release., if_retained: Hold.}}\n\
         report: {{power_at: [\"{}\"]}}\n",
        row.get("id"),
        row.get("null_subset"),
        design(row),
        row.get("point")
    )
}

fn power<'a>(record: &'a Record, row: &Row) -> Option<&'a PowerRow> {
    let wanted = exact(row.get("point")).to_f64();
    record
        .power
        .iter()
        .find(|line| line.at.get("p") == Some(&wanted))
}

/// The enclosure of the quantity of a row.
fn quantity(record: &Record, row: &Row) -> Option<(f64, f64)> {
    let sorted = || {
        let wanted = exact(row.get("point")).to_f64();
        let sorting = record.rectification.as_ref()?;
        sorting
            .rows
            .iter()
            .find(|line| line.at.get("p") == Some(&wanted))
    };
    match row.get("quantity") {
        "rejection" => power(record, row).map(|line| (line.lower, line.upper)),
        "expected_sample_size" => {
            let bounds = power(record, row)?.expected_sample_size?;
            Some((bounds.lower, bounds.upper))
        }
        "aoq" => sorted().map(|line| (line.aoq.lower, line.aoq.upper)),
        "ati" => sorted().map(|line| (line.ati.lower, line.ati.upper)),
        _ => {
            let limit = &record.rectification.as_ref()?.aoql;
            Some((limit.lower, limit.upper))
        }
    }
}

#[test]
fn every_figure_of_a_plan_with_more_than_one_look_is_the_exact_one() {
    let mut findings = Vec::new();
    for row in rows(TABLE, 120) {
        let head = format!(
            "{} {} {} null {} at {}: {}",
            row.get("id"),
            row.get("kind"),
            row.get("setup"),
            row.get("null_subset"),
            row.get("point"),
            row.get("quantity")
        );
        let compilation = compile(&plan(&row), &Silent).unwrap();
        let Some(record) = compilation.record else {
            findings.push(format!("{head}: no record, {:?}", compilation.diagnostics));
            continue;
        };
        let Some((lower, upper)) = quantity(&record, &row) else {
            findings.push(format!("{head}: not in the record"));
            continue;
        };
        let value: BigRational = number(row.get("value"));
        if let Some(instead) = missed(lower, upper, &value) {
            findings.push(format!("{head} {instead} misses {}", row.get("value")));
        }
        let widest = if row.get("quantity") == "aoql" {
            1e-6
        } else {
            1e-9
        };
        if upper - lower > widest * upper {
            findings.push(format!("{head} is wide: [{lower:e}, {upper:e}]"));
        }
    }
    report(&findings);
}
