//! How long the main work takes. Prints one line a figure: name, median and minimum of the runs in milliseconds.
//!
//! `cargo bench` runs it; `benches/beside_scipy.py` runs it and the same work by SciPy, and prints ratios.

#![allow(clippy::unwrap_used)] // a bench that cannot pose its plan has nothing to say

use std::hint::black_box;
use std::time::Instant;

use assize::kernel::exact::Exact;
use assize::kernel::law;
use assize::kernel::ratio_sum;
use assize::kernel::region::Region;
use assize::{Silent, compile, problem, solving};

const RUNS: usize = 15;

/// A small, complete plan.
fn plan(null: &str, requirement: &str, sample: &str) -> String {
    format!(
        "assize: 1\nplan: {{id: B-1, revision: A, title: Bench}}\ncharacteristic: {{name: fault, counts: faults, unit: unit}}\n\
         test:\n  family: binomial\n  parameter_space: 0 <= p <= 1\n  null_subset: {null}\n  alpha: 0.05\n  \
         sample_size: {sample}\npower:\n  - {{where: {requirement}, at_least: 0.95}}\n\
         decision: {{accept_when: null_rejected}}\n"
    )
}

fn report(name: &str, mut work: impl FnMut()) {
    work();
    let mut times: Vec<f64> = (0..RUNS)
        .map(|_| {
            let begun = Instant::now();
            work();
            begun.elapsed().as_secs_f64() * 1e3
        })
        .collect();
    times.sort_by(f64::total_cmp);
    println!("{name}\t{:.3}\t{:.3}", times[RUNS / 2], times[0]);
}

/// The power of a lower tail at 1,000 evenly spaced values up to `highest` parts in a thousand.
fn table(units: u64, limit: u64, highest: i64) -> f64 {
    let event = Region::at_most(Some(limit));
    (1..=1000)
        .map(|i| {
            let p = Exact::fraction(i * highest, 1_000_000).unwrap();
            ratio_sum::probability(&law::binomial(units, &p), &event).lower()
        })
        .sum()
}

fn main() {
    let text = plan("p >= 0.0002", "p <= 0.00005", "smallest");
    let posed = assize::language::read::read(&text).plan.unwrap();
    let posed = problem::pose(&posed).unwrap();
    report("smallest n near 6e4, every larger one included", || {
        let found = solving::smallest(&posed, &Exact::one(), &Silent).unwrap();
        black_box(found);
    });
    report("1,000-point power table, n = 1e6, p to 0.02", || {
        black_box(table(1_000_000, 9_800, 20));
    });
    report("1,000-point power table, n = 1e6, p to 0.6", || {
        black_box(table(1_000_000, 300_000, 600));
    });
    report("compile in memory, smallest n near 6e4", || {
        black_box(compile(&text, &Silent).unwrap());
    });
    let text = plan("p <= 0.2 or p >= 0.4", "0.29 <= p <= 0.31", "smallest");
    report("compile in memory, equivalence, smallest n", || {
        black_box(compile(&text, &Silent).unwrap());
    });
}
