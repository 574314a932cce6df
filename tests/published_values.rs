//! Figures printed in standards, handbooks and papers, each reached through a plan of its own, from text to record:
//! `tests/published/attribute_plans.csv` gives the source of every row and whether it was read in a copy.

#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic)]

mod tables;

use std::collections::BTreeMap;

use assize::record::{Amount, PowerRow, Record};
use assize::{Silent, compile};
use tables::{Row, exact, report, rows};

const TABLE: &str = include_str!("published/attribute_plans.csv");

/// A published plan as its numbers by name: `n`, `c`, `n1`, …
fn plan_of(row: &Row) -> BTreeMap<&str, &str> {
    row.get("plan")
        .split(' ')
        .filter_map(|part| part.split_once('='))
        .collect()
}

fn float(text: &str) -> f64 {
    exact(text).to_f64()
}

/// A plan whose null is rejected at the good end; `design` holds the keys of the test block below `alpha`.
fn text(row: &Row, null: &str, alpha: &str, design: &str, points: &[String]) -> String {
    let space = match row.get("family") {
        "poisson" => "lambda >= 0".to_owned(),
        "hypergeometric" => format!("0 <= D <= {}", row.get("lot")),
        _ => "0 <= p <= 1".to_owned(),
    };
    let lot = match row.get("family") {
        "hypergeometric" => format!("  lot_size: {}\n", row.get("lot")),
        _ => String::new(),
    };
    let report = match points {
        [] => String::new(),
        _ => format!("report: {{power_at: [{}]}}\n", points.join(", ")),
    };
    format!(
        "assize: 1\nplan: {{id: {}, revision: A, title: Published}}\n\
         characteristic: {{name: nonconformity, counts: nonconforming units}}\n\
         test:\n  family: {}\n  parameter_space: {space}\n  null_subset: {null}\n  alpha: {alpha}\n{lot}{design}\
         decision: {{accept_when: null_rejected, if_rejected: Release., if_retained: Hold.}}\n{report}",
        row.get("id"),
        row.get("family"),
    )
}

fn compiled(text: &str) -> Result<Record, String> {
    let compilation = compile(text, &Silent).map_err(|error| error.to_string())?;
    compilation
        .record
        .ok_or_else(|| format!("no record: {:?}", compilation.diagnostics))
}

fn at(record: &Record, point: f64) -> Result<&PowerRow, String> {
    record
        .power
        .iter()
        .find(|line| line.at.values().next() == Some(&point))
        .ok_or_else(|| format!("no row at {point}"))
}

/// A null so bad that no point of the row lies in it.
fn worst_null(row: &Row) -> &'static str {
    match row.get("family") {
        "poisson" => "lambda >= 1000",
        "hypergeometric" => "D >= 4000",
        _ => "p >= 99.9 %",
    }
}

/// The single plan `n`, `c` with more keys, and its rejection probability at the points.
fn single(row: &Row, points: &[f64], more: &str) -> Result<Record, String> {
    let plan = plan_of(row);
    let design = format!(
        "  sample_size: {}\n  critical_region: x <= {}\n{more}",
        plan["n"], plan["c"]
    );
    let points: Vec<String> = points.iter().map(f64::to_string).collect();
    compiled(&text(row, worst_null(row), "0.5", &design, &points))
}

/// Chance of at most `c` nonconforming units.
fn acceptance(row: &Row, point: f64) -> Result<f64, String> {
    let plan = plan_of(row);
    let record = if plan.contains_key("n1") {
        staged(row, point)?
    } else {
        single(row, &[point], "")?
    };
    Ok(at(&record, point)?.value)
}

/// A plan of two stages: a double plan, or one that only stops early for futility.
fn staged(row: &Row, point: f64) -> Result<Record, String> {
    let plan = plan_of(row);
    let (null, first, last) = match plan.get("c1") {
        Some(c1) => (
            "p >= 99.9 %",
            format!("reject_null: x <= {c1}, retain_null: x >= {}", plan["r1"]),
            format!("reject_null: x <= {}", plan["c2"]),
        ),
        None => (
            "p <= 0.1 %",
            format!("retain_null: x <= {}", plan["r1"]),
            format!("reject_null: x > {}", plan["r"]),
        ),
    };
    let design = format!(
        "  stages:\n    - {{size: {}, {first}}}\n    - {{size: {}, {last}}}\n",
        plan["n1"], plan["n2"]
    );
    compiled(&text(row, null, "0.5", &design, &[point.to_string()]))
}

/// The chance that inspection ends with the first sample, from the expected number of units.
fn ends_at_first(row: &Row, point: f64) -> Result<f64, String> {
    let plan = plan_of(row);
    let record = staged(row, point)?;
    let expected = at(&record, point)?.expected_sample_size;
    let units = expected.ok_or("no expected sample size")?.value;
    Ok(1.0 - (units - float(plan["n1"])) / float(plan["n2"]))
}

/// The chance of `x <= count` in a first sample, by a plan of that sample alone.
fn first_sample(row: &Row, point: f64, count: u64) -> Result<f64, String> {
    let plan = plan_of(row);
    let design = format!(
        "  sample_size: {}\n  critical_region: x <= {count}\n",
        plan["n1"]
    );
    let record = compiled(&text(
        row,
        "p >= 99.9 %",
        "0.5",
        &design,
        &[point.to_string()],
    ))?;
    Ok(at(&record, point)?.value)
}

fn smallest(row: &Row) -> Result<f64, String> {
    let parameter = if row.get("family") == "poisson" {
        "lambda"
    } else {
        "p"
    };
    let step = if row.get("family") == "poisson" {
        "  step: 1\n"
    } else {
        ""
    };
    let design = format!(
        "  sample_size: smallest\n{step}  critical_region: x <= {}\n",
        plan_of(row)["c"]
    );
    let null = format!("{parameter} >= {}", row.get("parameter"));
    let record = compiled(&text(row, &null, row.get("at"), &design, &[]))?;
    match record.sample_size_search.ok_or("no search")?.smallest {
        Amount::Count(count) => Ok(count as f64),
        Amount::Real(value) => Ok(value),
    }
}

/// The largest lower tail at the level, solved: no region is given.
fn critical_count(row: &Row) -> Result<f64, String> {
    let design = format!("  sample_size: {}\n", plan_of(row)["n"]);
    let null = format!("p >= {}", row.get("parameter"));
    let record = compiled(&text(row, &null, row.get("at"), &design, &[]))?;
    let to = record.critical_region.intervals[0].to;
    to.map(|to| to as f64)
        .ok_or_else(|| "open region".to_owned())
}

/// The size of an upper tail.
fn upper_tail(row: &Row) -> Result<f64, String> {
    let plan = plan_of(row);
    let design = format!(
        "  sample_size: {}\n  critical_region: x >= {}\n",
        plan["n"], plan["from"]
    );
    let null = format!("p <= {}", row.get("parameter"));
    Ok(compiled(&text(row, &null, "0.5", &design, &[]))?.size.value)
}

fn sorted(row: &Row, point: f64, total: bool) -> Result<f64, String> {
    let more = format!("  rectification: {{lot_size: {}}}\n", row.get("lot"));
    let record = single(row, &[point], &more)?;
    let sorting = record.rectification.ok_or("no rectification")?;
    let line = sorting
        .rows
        .iter()
        .find(|line| line.at.values().next() == Some(&point))
        .ok_or("no row")?;
    Ok(if total {
        line.ati.value
    } else {
        line.aoq.value
    })
}

/// The limit of a ratio test after some units: the good end is the null here, so accepting is retaining it.
fn ratio_limit(row: &Row, accepting: bool) -> Result<f64, String> {
    let plan = plan_of(row);
    let units = row.get("parameter");
    let design = format!(
        "  sequential: {{against: p = {}, beta: {}, stop_by: 100}}\n",
        plan["p2"], plan["beta"]
    );
    let null = format!("p <= {}", plan["p1"]);
    let record = compiled(&text(row, &null, plan["alpha"], &design, &[]))?;
    let stage = record
        .design
        .stages
        .iter()
        .find(|stage| match stage.cumulative_size {
            Amount::Count(count) => count.to_string() == units,
            Amount::Real(value) => value == float(units),
        })
        .ok_or("no such look")?;
    let limit = if accepting {
        stage.retain_null.and_then(|range| range.to)
    } else {
        stage.reject_null.and_then(|range| range.from)
    };
    limit
        .map(|limit| limit as f64)
        .ok_or_else(|| "no limit".to_owned())
}

/// Where the plan accepts with the printed probability: within the tolerance of the printed quality it must pass from
/// above that probability to below it.
fn quality_accepted(row: &Row) -> Result<String, String> {
    let scale = if row.get("quantity") == "mean_accepted" {
        1.0
    } else {
        100.0
    };
    let (value, tolerance) = (float(row.get("value")), float(row.get("tolerance")));
    let (good, bad) = ((value - tolerance) / scale, (value + tolerance) / scale);
    let record = single(row, &[good, bad], "")?;
    let probability = float(row.get("at"));
    let (above, below) = (at(&record, good)?.upper, at(&record, bad)?.lower);
    if above >= probability && probability >= below {
        Ok(String::new())
    } else {
        Err(format!(
            "accepted with {above} at {good} and {below} at {bad}"
        ))
    }
}

fn derived(row: &Row) -> Result<f64, String> {
    let point = || float(row.get("parameter"));
    match row.get("quantity") {
        "acceptance" => acceptance(row, point()),
        "acceptance_percent" => acceptance(row, point()).map(|chance| 100.0 * chance),
        "rejection" => acceptance(row, point()).map(|chance| 1.0 - chance),
        "rejection_percent" => acceptance(row, point()).map(|chance| 100.0 - 100.0 * chance),
        "smallest_n" => smallest(row),
        "critical_count" => critical_count(row),
        "upper_tail" => upper_tail(row),
        "average_outgoing_quality" => sorted(row, point(), false),
        "average_total_inspection" => sorted(row, point(), true),
        "accepted_at_first" => first_sample(row, point(), plan_of(row)["c1"].parse().unwrap()),
        "rejected_at_first" => {
            let accepted: u64 = plan_of(row)["r1"].parse().unwrap();
            first_sample(row, point(), accepted - 1).map(|chance| 1.0 - chance)
        }
        "stopped_at_first" => ends_at_first(row, point()),
        "expected_size" => {
            let record = staged(row, point())?;
            let expected = at(&record, point())?.expected_sample_size;
            Ok(expected.ok_or("no expected sample size")?.value)
        }
        "acceptance_number" => ratio_limit(row, true),
        "rejection_number" => ratio_limit(row, false),
        other => Err(format!("unknown quantity {other}")),
    }
}

#[test]
fn every_printed_figure_comes_out() {
    let mut findings = Vec::new();
    for row in rows(TABLE, 130) {
        let outcome = match row.get("quantity") {
            "quality_accepted" | "mean_accepted" => quality_accepted(&row),
            _ => derived(&row).and_then(|found| {
                let printed = float(row.get("value"));
                if (found - printed).abs() <= float(row.get("tolerance")) {
                    Ok(String::new())
                } else {
                    Err(format!("{found} instead of {printed}"))
                }
            }),
        };
        if let Err(reason) = outcome {
            findings.push(format!(
                "{} {} {} {} ({}): {reason}",
                row.get("id"),
                row.get("plan"),
                row.get("quantity"),
                row.get("parameter"),
                row.get("source")
            ));
        }
    }
    report(&findings);
}

#[test]
fn every_row_names_its_source_and_whether_it_was_read() {
    for row in rows(TABLE, 130) {
        assert!(row.get("source").len() > 5, "{}", row.get("id"));
        assert!(
            ["read in a copy", "from memory"].contains(&row.get("seen")),
            "{}",
            row.get("id")
        );
    }
}
