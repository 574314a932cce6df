//! The demo plans: each compiles, meets its requirements, and has the size, region and power that an independent search
//! finds (`tests/reference/demo_plans.py`); the poor one trips the rules that it is there to trip.

#![allow(clippy::unwrap_used)]

use std::collections::BTreeSet;
use std::fs;
use std::path::{Path, PathBuf};

use assize::language::diagnostic::Diagnostic;
use assize::record::{Amount, Record};
use assize::{Compilation, Silent, compile};

const EXPECTED: &str = include_str!("reference/demo_plans.csv");
/// SciPy's doubles are printed with ten digits.
const TOLERANCE: f64 = 1e-8;

fn folder() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("plans")
}

fn compiled(path: &Path) -> Compilation {
    compile(&fs::read_to_string(path).unwrap(), &Silent).unwrap()
}

/// Plan names of a folder, sorted.
fn names(folder: &Path) -> BTreeSet<String> {
    fs::read_dir(folder)
        .unwrap()
        .map(|entry| entry.unwrap().path())
        .filter(|path| path.extension().is_some_and(|kind| kind == "yaml"))
        .map(|path| path.file_stem().unwrap().to_string_lossy().into_owned())
        .collect()
}

/// A row of the table: plan, amount, region, size, power.
fn rows() -> Vec<Vec<&'static str>> {
    EXPECTED
        .lines()
        .filter(|line| !line.starts_with('#'))
        .skip(1)
        .map(|line| line.split(',').collect())
        .collect()
}

fn amount(record: &Record) -> Amount {
    let design = &record.design;
    design
        .sample_size
        .or(design.stop_at_nonconforming.map(Amount::Count))
        .or(design.stages.last().map(|stage| stage.cumulative_size))
        .unwrap()
}

fn close(found: f64, expected: &str) -> bool {
    let expected: f64 = expected.parse().unwrap();
    (found - expected).abs() <= TOLERANCE * expected
}

#[test]
fn every_demo_plan_has_its_row() {
    let listed: BTreeSet<String> = rows().iter().map(|row| row[0].to_owned()).collect();
    assert_eq!(names(&folder()), listed);
    let page = fs::read_to_string(folder().join("README.md")).unwrap();
    for name in &listed {
        assert!(
            page.contains(&format!("`{name}.yaml`")),
            "{name} is not in plans/README.md"
        );
    }
}

#[test]
fn demo_plans_are_what_an_independent_search_finds() {
    for row in rows() {
        let name = row[0];
        let compilation = compiled(&folder().join(format!("{name}.yaml")));
        let record = compilation.record.unwrap();
        assert_eq!(
            amount(&record),
            Amount::Count(row[1].parse().unwrap()),
            "{name}"
        );
        assert_eq!(record.critical_region.reject_when, row[2], "{name}");
        assert!(
            close(record.size.value, row[3]),
            "{name}: size {}",
            record.size.value
        );
        assert!(record.size.within_level, "{name}");
        let attained = record.requirements[0].attained.value;
        assert!(close(attained, row[4]), "{name}: power {attained}");
        assert!(record.requirements.iter().all(|each| each.met), "{name}");
    }
}

/// Demo plans are to be copied from, so none leaves a caution behind but those that belong to its mathematics.
#[test]
fn demo_plans_are_sound() {
    for name in names(&folder()) {
        let compilation = compiled(&folder().join(format!("{name}.yaml")));
        for found in &compilation.diagnostics {
            let of_the_saw = found.rule == Some("L15");
            let of_certainty = found.rule == Some("L23") && name == "grayle-glass-flaws";
            assert!(of_the_saw || of_certainty, "{name}: {found:#?}");
        }
        for waiver in &compilation.record.unwrap().waivers {
            assert!(waiver.applies, "{name} waives {} for nothing", waiver.rule);
        }
    }
}

#[test]
fn a_revision_is_another_document_of_the_same_plan() {
    let of = |revision: &str| {
        compiled(&folder().join(format!("brindle-hub-leak-{revision}.yaml")))
            .record
            .unwrap()
    };
    let (a, b) = (of("a"), of("b"));
    assert_eq!(a.plan.id, b.plan.id);
    assert_eq!(
        (a.plan.revision.as_str(), b.plan.revision.as_str()),
        ("A", "B")
    );
    assert_eq!(b.declared["plan"]["supersedes"]["revision"], "A");
    assert_eq!(b.inspection.unwrap().misses, [0.2, 0.2]);
    assert!(a.inspection.is_none());
}

#[test]
fn the_poor_plan_is_taken_apart() {
    let compilation = compiled(&folder().join("poor/legacy-screen.yaml"));
    assert!(!compilation.diagnostics.iter().any(Diagnostic::is_error));
    let record = compilation.record.unwrap();
    let broken: BTreeSet<&str> = compilation
        .diagnostics
        .iter()
        .filter_map(|found| found.rule)
        .collect();
    let expected = [
        "L01", "L02", "L03", "L04", "L05", "L06", "L08", "L09", "L10", "L11", "L12", "L19", "L20",
        "L23", "L25", "L28", "L29", "L31", "L32", "L33",
    ];
    assert_eq!(broken, expected.into_iter().collect());
    assert_eq!(
        record.cautions.len(),
        compilation.diagnostics.len(),
        "all are filed"
    );
    // 1 - 0.99^30, computed with SciPy 1.17.1: binom.sf(0, 30, 0.01).
    assert!(
        close(record.size.value, "0.2602996266"),
        "{}",
        record.size.value
    );
    assert!(!record.size.within_level);
}

/// The short plan that opens the documentation leaves most of a record out: it compiles, with cautions.
#[test]
fn a_short_plan_compiles_with_cautions_only() {
    let short = include_str!("plans/good-design.yaml");
    let compilation = compile(short, &Silent).unwrap();
    assert!(compilation.record.is_some());
    assert!(!compilation.diagnostics.iter().any(Diagnostic::is_error));
    let broken: BTreeSet<&str> = compilation
        .diagnostics
        .iter()
        .filter_map(|found| found.rule)
        .collect();
    assert_eq!(
        broken,
        ["L01", "L02", "L09", "L10", "L28"].into_iter().collect()
    );
}
