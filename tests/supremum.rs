//! The size is a supremum over the whole null: a dense grid of null points never finds more, and no outcome could be
//! added to a region of a general null. The grid's probabilities are sums of exact rational terms rounded once.

#![allow(clippy::unwrap_used)] // a failed unwrap fails the test

use assize::{Silent, compile};
use proptest::prelude::*;

/// P(X = k) for X ~ Binomial(n, p) by its textbook recursion from k = 0; fine for the small n here.
fn terms(n: u32, p: f64) -> Vec<f64> {
    let mut term = (0..n).fold(1.0, |product, _| product * (1.0 - p));
    let mut all = Vec::new();
    for k in 0..=n {
        all.push(term);
        term *= f64::from(n - k) / f64::from(k + 1) * p / (1.0 - p);
    }
    all
}

struct Solved {
    size: (f64, f64),
    rejects: Vec<bool>,
}

fn solved(n: u32, null: &str, alpha: f64, more: &str) -> Option<Solved> {
    let text = format!(
        "assize: 1\nplan: {{id: T-1, revision: A, title: Supremum}}\ncharacteristic: {{name: fault, counts: faults}}\n\
         test:\n  family: binomial\n  parameter_space: 0 <= p <= 1\n  null_subset: {null}\n  alpha: {alpha}\n  \
         sample_size: {n}\n{more}decision: {{accept_when: null_rejected}}\n"
    );
    let record = compile(&text, &Silent).unwrap().record?;
    let rejects = (0..=u64::from(n))
        .map(|k| {
            record
                .critical_region
                .intervals
                .iter()
                .any(|range| range.from.unwrap() <= k && range.to.is_none_or(|to| k <= to))
        })
        .collect();
    Some(Solved {
        size: (record.size.lower, record.size.upper),
        rejects,
    })
}

fn rejection(solved: &Solved, n: u32, p: f64) -> f64 {
    let terms = terms(n, p);
    solved
        .rejects
        .iter()
        .zip(terms)
        .filter(|(rejects, _)| **rejects)
        .map(|(_, term)| term)
        .sum()
}

/// Points of an interval given in thousandths.
fn grid(from: u32, to: u32) -> impl Iterator<Item = f64> {
    (0..=400).map(move |i| {
        let step = f64::from(to - from) / 400.0;
        ((f64::from(from) + step * f64::from(i)) / 1000.0).clamp(1e-9, 1.0 - 1e-9)
    })
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(60))]

    #[test]
    fn of_two_intervals_and_a_point(
        n in 5u32..60,
        cuts in proptest::collection::btree_set(1u32..999, 5),
        alpha in 0.02f64..0.3,
    ) {
        let cuts: Vec<u32> = cuts.into_iter().collect();
        let milli = |cut: u32| format!("{}", f64::from(cut) / 1000.0);
        let null = format!(
            "{} <= p <= {} or {} <= p <= {} or p = {}",
            milli(cuts[0]), milli(cuts[1]), milli(cuts[2]), milli(cuts[3]), milli(cuts[4])
        );
        let Some(solved) = solved(n, &null, alpha, "") else { return Ok(()) };
        prop_assert!(solved.size.1 <= alpha * (1.0 + 1e-12));
        let points: Vec<f64> = grid(cuts[0], cuts[1])
            .chain(grid(cuts[2], cuts[3]))
            .chain([f64::from(cuts[4]) / 1000.0])
            .collect();
        let highest = points.iter().map(|&p| rejection(&solved, n, p)).fold(0.0, f64::max);
        prop_assert!(highest <= solved.size.1 * (1.0 + 1e-9), "grid {highest} above {:?}", solved.size);
        prop_assert!(highest >= solved.size.0 * 0.999, "grid {highest} far below {:?}", solved.size);
        // Nothing can be added: each outcome left out would push some grid point (nearly) above the level.
        for outcome in (0..=n as usize).filter(|&k| !solved.rejects[k]) {
            let worst = points
                .iter()
                .map(|&p| rejection(&solved, n, p) + terms(n, p)[outcome])
                .fold(0.0, f64::max);
            prop_assert!(worst > alpha * 0.999, "{outcome} could be added: {worst} at level {alpha}");
        }
    }

    #[test]
    fn of_a_given_region(n in 5u32..60, from in 0u32..900, width in 1u32..99, a in 0u32..60, b in 0u32..60) {
        let (a, b) = (a.min(b).min(n), a.max(b).min(n));
        let null = format!("{} <= p <= {}", f64::from(from) / 1000.0, f64::from(from + width) / 1000.0);
        for region in [format!("{a} <= x <= {b}"), format!("x <= {a} or x >= {}", b + 1), format!("x = {a} or x = {b} or x = {n}")] {
            let Some(solved) = solved(n, &null, 0.05, &format!("  critical_region: {region}\n")) else { continue };
            let highest = grid(from, from + width).map(|p| rejection(&solved, n, p)).fold(0.0, f64::max);
            prop_assert!(highest <= solved.size.1 * (1.0 + 1e-9) + 1e-15, "{region}: grid {highest} above {:?}", solved.size);
            prop_assert!(highest >= solved.size.0 * 0.999 - 1e-15, "{region}: grid {highest} far below {:?}", solved.size);
            prop_assert!(solved.size.1 - solved.size.0 <= 1e-10, "{region}: {:?} is wide", solved.size);
        }
    }
}
