//! Enclosures of single events held against values computed at 90 digits and, in doubles, by a second library:
//! `tests/reference/probabilities.csv` names both with their versions.

#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic)]

mod tables;

use assize::family::{Settings, registration};
use assize::kernel::enclosure::Enclosure;
use assize::kernel::law::Law;
use assize::kernel::ratio_sum;
use assize::kernel::region::{Range, Region};
use assize::space::Value;
use tables::{Row, exact, missed, number, report, rows};

const TABLE: &str = include_str!("reference/probabilities.csv");

/// What the second library is trusted with, relatively; its row is empty where it misses this.
const DOUBLES: f64 = 1e-9;

fn law(row: &Row) -> Law {
    let registration = registration(row.get("family")).unwrap();
    let lot_size = row.setup("lot").map_or(0, |lot| lot.parse().unwrap());
    let family = (registration.build)(&Settings {
        parameter: registration.parameters[0],
        lot_size,
    });
    let amount = row.setup("n").or(row.setup("r")).unwrap();
    family.law(&Value::Finite(exact(row.get("parameter"))), &exact(amount))
}

fn event(row: &Row) -> Region {
    Region::union_of([Range {
        from: row.get("from").parse().unwrap_or(0),
        to: row.get("to").parse().ok(),
    }])
}

fn described(row: &Row) -> String {
    format!(
        "{} {} {} {} from {} to {}",
        row.get("id"),
        row.get("family"),
        row.get("setup"),
        row.get("parameter"),
        row.get("from"),
        row.get("to")
    )
}

fn enclosed() -> Vec<(Row, Enclosure)> {
    rows(TABLE, 1000)
        .into_iter()
        .map(|row| {
            let enclosure = ratio_sum::probability(&law(&row), &event(&row));
            (row, enclosure)
        })
        .collect()
}

#[test]
fn every_enclosure_holds_the_value_of_ninety_digits_and_is_narrow() {
    let mut findings = Vec::new();
    for (row, enclosure) in enclosed() {
        let value = number(row.get("probability"));
        if let Some(instead) = missed(enclosure.lower(), enclosure.upper(), &value) {
            findings.push(format!(
                "{}: {instead} misses {}",
                described(&row),
                row.get("probability")
            ));
        }
        let widest = if enclosure.upper() < 1e-100 {
            1e-10
        } else {
            1e-11
        };
        if enclosure.relative_width() > widest {
            findings.push(format!(
                "{}: relative width {:e}",
                described(&row),
                enclosure.relative_width()
            ));
        }
    }
    report(&findings);
}

#[test]
fn a_second_library_agrees_in_doubles() {
    let mut findings = Vec::new();
    let mut compared = 0;
    for (row, enclosure) in enclosed() {
        let Ok(witness) = row.get("scipy").parse::<f64>() else {
            continue;
        };
        compared += 1;
        let middle = enclosure.middle();
        if (witness - middle).abs() > DOUBLES * witness {
            findings.push(format!(
                "{}: {middle:e} against {witness:e}",
                described(&row)
            ));
        }
    }
    assert!(
        compared >= 300,
        "only {compared} rows have a second witness"
    );
    report(&findings);
}
