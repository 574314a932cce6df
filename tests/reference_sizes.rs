//! Smallest sample sizes held against sizes found by trying every one: `tests/reference/sample_sizes.csv`.

#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic)]

mod tables;

use assize::record::{Amount, Record, SampleSizeSearch};
use assize::{Silent, compile};
use tables::{Row, missed, number, report, rows};

const TABLE: &str = include_str!("reference/sample_sizes.csv");

/// The plan of a row with a size, `smallest` or a number.
fn plan(row: &Row, size: &str) -> String {
    let space = match row.get("family") {
        "poisson" => "lambda >= 0".to_owned(),
        "hypergeometric" => format!("0 <= D <= {}", row.setup("lot").unwrap()),
        _ => "0 <= p <= 1".to_owned(),
    };
    let size = match row.get("family") {
        "negative_binomial" => format!("  stop_at: {{nonconforming: {size}}}\n"),
        _ => format!("  sample_size: {size}\n"),
    };
    let mut text = format!(
        "assize: 1\nplan: {{id: {}, revision: A, title: Reference}}\n\
         characteristic: {{name: nonconformity, counts: nonconforming units}}\n\
         test:\n  family: {}\n  parameter_space: \"{space}\"\n  null_subset: \"{}\"\n  alpha: {}\n{size}",
        row.get("id"),
        row.get("family"),
        row.get("null_subset"),
        row.get("alpha"),
    );
    if let Some(lot) = row.setup("lot") {
        text += &format!("  lot_size: {lot}\n");
    }
    if !row.get("given_region").is_empty() {
        text += &format!("  critical_region: {}\n", row.get("given_region"));
    }
    if row.get("family") == "poisson" && size.contains("smallest") {
        let step = if row.get("step").is_empty() {
            "1"
        } else {
            row.get("step")
        };
        text += &format!("  step: {step}\n");
    }
    let requirements = row.list("requirements");
    if !requirements.is_empty() {
        text += "power:\n";
    }
    for requirement in requirements {
        let (set, at_least) = requirement.split_once(": ").unwrap();
        text += &format!("  - {{where: \"{set}\", at_least: {at_least}}}\n");
    }
    text + "decision: {accept_when: null_rejected, if_rejected: Release., if_retained: Hold.}\n"
}

fn shown(amount: Amount) -> f64 {
    match amount {
        Amount::Count(count) => count as f64,
        Amount::Real(value) => value,
    }
}

fn differences(row: &Row, record: &Record, search: &SampleSizeSearch) -> Vec<String> {
    let mut found = Vec::new();
    let mut same = |what: &str, shown: f64, wanted: &str| {
        if wanted.parse() != Ok(shown) {
            found.push(format!("{what} {shown} instead of {wanted}"));
        }
    };
    same("smallest", shown(search.smallest), row.get("smallest"));
    if !row.get("every_from").is_empty() {
        same(
            "every n from",
            search.every_n_from.map_or(0.0, shown),
            row.get("every_from"),
        );
    }
    if record.critical_region.reject_when != row.get("region") {
        found.push(format!(
            "region {} instead of {}",
            record.critical_region.reject_when,
            row.get("region")
        ));
    }
    let mut enclosed = vec![(
        "size",
        record.size.lower,
        record.size.upper,
        row.get("size"),
    )];
    for (result, power) in record.requirements.iter().zip(row.list("powers")) {
        enclosed.push(("power", result.attained.lower, result.attained.upper, power));
    }
    for (what, lower, upper, value) in enclosed {
        if let Some(instead) = missed(lower, upper, &number(value)) {
            found.push(format!("{what} {instead} misses {value}"));
        }
    }
    found
}

#[test]
fn every_smallest_size_is_the_one_found_by_trying_all() {
    let mut findings = Vec::new();
    for row in rows(TABLE, 40) {
        let head = format!(
            "{} {} {} null {} requirements {} region {}",
            row.get("id"),
            row.get("family"),
            row.get("setup"),
            row.get("null_subset"),
            row.get("requirements"),
            row.get("given_region")
        );
        let compilation = compile(&plan(&row, "smallest"), &Silent).unwrap();
        let Some(record) = compilation.record else {
            findings.push(format!("{head}: no record, {:?}", compilation.diagnostics));
            continue;
        };
        match &record.sample_size_search {
            None => findings.push(format!("{head}: no search in the record")),
            Some(search) => findings.extend(
                differences(&row, &record, search)
                    .into_iter()
                    .map(|difference| format!("{head}: {difference}")),
            ),
        }
    }
    report(&findings);
}

/// Whether a stated size meets the level and every requirement.
fn works(row: &Row, size: &str) -> bool {
    let compilation = compile(&plan(row, size), &Silent).unwrap();
    compilation.record.is_some_and(|record| {
        record.size.within_level && record.requirements.iter().all(|result| result.met)
    })
}

/// The sizes to try: one less than the first, both ends of every stretch that fails, and the neighbours that work.
fn tried(row: &Row) -> Vec<(String, bool)> {
    let mut sizes = vec![
        (row.get("smallest").to_owned(), true),
        (row.get("every_from").to_owned(), true),
    ];
    let less = row
        .get("smallest")
        .parse::<u64>()
        .map_or(0, |first| first - 1);
    if less > 0 && row.get("step").is_empty() {
        sizes.push((less.to_string(), false));
    }
    for stretch in row
        .get("failing_between")
        .split(' ')
        .filter(|text| !text.is_empty())
    {
        let ends = stretch.split_once('-').unwrap_or((stretch, stretch));
        sizes.push((ends.0.to_owned(), false));
        sizes.push((ends.1.to_owned(), false));
    }
    sizes
}

#[test]
fn sizes_between_the_first_and_the_settled_one_fail_where_the_table_says_so() {
    let mut findings = Vec::new();
    for row in rows(TABLE, 40) {
        for (size, good) in tried(&row) {
            if works(&row, &size) != good {
                let word = if good { "fails" } else { "works" };
                findings.push(format!(
                    "{} {}: {size} {word}",
                    row.get("id"),
                    row.get("null_subset")
                ));
            }
        }
    }
    report(&findings);
}
