//! Sorting of lots that are not released, against values by SciPy (`tests/reference/sorting.py`). The stages matter: a
//! lot released after the first stage leaves more units unseen than one released after the last.

#![allow(clippy::unwrap_used)]

use assize::record::Rectification;
use assize::{Silent, compile};

const EXPECTED: &str = include_str!("reference/sorting.csv");
/// The limit is found by branch and bound to a relative width of 1e-6.
const LIMIT_TOLERANCE: f64 = 2e-6;

const PLAN: &str = "assize: 1
plan: {id: S-1, revision: A, title: Double sampling with sorting}
characteristic: {name: foreign body, counts: trays with a foreign body, unit: tray}
test:
  family: binomial
  parameter_space: 0 <= p <= 1
  null_subset: p >= 4 %
  alpha: 0.05
  stages:
    - {size: 99, retain_null: x >= 3, reject_null: x <= 0}
    - {size: 99, retain_null: x >= 4, reject_null: x <= 3}
  rectification: {lot_size: 10000}
decision: {accept_when: null_rejected}
report:
  power_at: [0, 0.5 %, 1 %, 1.5 %, 2 %, 3 %]
";

fn sorted() -> Rectification {
    let record = compile(PLAN, &Silent).unwrap().record.unwrap();
    record.rectification.unwrap()
}

#[test]
fn outgoing_quality_and_inspection_follow_the_stages() {
    let found = sorted();
    let mut checked = 0;
    for line in EXPECTED.lines().filter(|line| line.starts_with("0.")) {
        let figures: Vec<f64> = line.split(',').map(|each| each.parse().unwrap()).collect();
        let row = found
            .rows
            .iter()
            .find(|row| row.at["p"] == figures[0])
            .unwrap();
        for (bounds, expected) in [(row.aoq, figures[1]), (row.ati, figures[2])] {
            assert!(bounds.lower <= expected * (1.0 + 1e-11), "{line}");
            assert!(bounds.upper >= expected * (1.0 - 1e-11), "{line}");
            assert!(bounds.upper - bounds.lower <= 1e-9 * expected, "{line}");
        }
        checked += 1;
    }
    assert_eq!(checked, 5);
}

#[test]
fn a_perfect_lot_costs_the_first_stage_only() {
    let found = sorted();
    assert!((found.rows[0].ati.upper - 99.0).abs() < 1e-9);
    assert!(found.rows[0].aoq.upper < 1e-300);
}

#[test]
fn the_limit_bounds_every_outgoing_quality() {
    let found = sorted();
    let line = EXPECTED
        .lines()
        .find(|line| line.starts_with("limit"))
        .unwrap();
    let expected: f64 = line.split(',').nth(1).unwrap().parse().unwrap();
    assert!(found.aoql.upper >= expected * (1.0 - 1e-11));
    assert!(found.aoql.upper <= expected * (1.0 + LIMIT_TOLERANCE));
    assert!(
        found
            .rows
            .iter()
            .all(|row| row.aoq.lower <= found.aoql.upper)
    );
}
