//! Reads the committed tables of reference values: lines that begin with `#` are the header, the first other line names
//! the columns, a field with commas stands in quotes.

#![allow(dead_code)]

use std::collections::BTreeMap;

use assize::kernel::exact::Exact;
use num_bigint::BigInt;
use num_rational::BigRational;

/// One row: its fields by column name.
#[derive(Clone, Debug)]
pub struct Row(BTreeMap<String, String>);

impl Row {
    /// A field; a misspelt column name fails the test.
    pub fn get(&self, column: &str) -> &str {
        self.0
            .get(column)
            .unwrap_or_else(|| panic!("no column `{column}`"))
    }

    /// A field that holds several values.
    pub fn list(&self, column: &str) -> Vec<&str> {
        let field = self.get(column);
        if field.is_empty() {
            return Vec::new();
        }
        field.split(';').map(str::trim).collect()
    }

    /// A part of the set-up, written `name=value`.
    pub fn setup(&self, name: &str) -> Option<&str> {
        self.get("setup")
            .split(' ')
            .filter_map(|part| part.split_once('='))
            .find(|(key, _)| *key == name)
            .map(|(_, value)| value)
    }
}

/// All rows of a table, which must be at least so many: an empty file is no evidence.
pub fn rows(text: &str, at_least: usize) -> Vec<Row> {
    let mut lines = text.lines().filter(|line| !line.starts_with('#'));
    let names = fields(lines.next().unwrap());
    let rows: Vec<Row> = lines
        .map(|line| {
            let fields = fields(line);
            assert_eq!(fields.len(), names.len(), "{line}");
            Row(names.iter().cloned().zip(fields).collect())
        })
        .collect();
    assert!(rows.len() >= at_least, "only {} rows", rows.len());
    rows
}

fn fields(line: &str) -> Vec<String> {
    let mut found = vec![String::new()];
    let mut quoted = false;
    for character in line.chars() {
        match character {
            '"' => quoted = !quoted,
            ',' if !quoted => found.push(String::new()),
            other => found.last_mut().unwrap().push(other),
        }
    }
    found
}

/// The exact value of a decimal such as `0.05`, `1.25e-7`, `5 %`, `200 ppm`, or of a fraction such as `1/3`.
pub fn number(text: &str) -> BigRational {
    let text = text.trim();
    if let Some(rest) = text.strip_suffix('%') {
        return number(rest) / BigInt::from(100);
    }
    if let Some(rest) = text.strip_suffix("ppm") {
        return number(rest) / BigInt::from(1_000_000);
    }
    if let Some((above, below)) = text.split_once('/') {
        return number(above) / number(below);
    }
    let (digits, exponent) = text.split_once('e').unwrap_or((text, "0"));
    let (whole, part) = digits.split_once('.').unwrap_or((digits, ""));
    let mantissa: BigInt = format!("{whole}{part}").parse().unwrap();
    let exponent = exponent.parse::<i32>().unwrap() - part.len() as i32;
    let power = BigInt::from(10).pow(exponent.unsigned_abs());
    if exponent < 0 {
        BigRational::new(mantissa, power)
    } else {
        BigRational::from_integer(mantissa * power)
    }
}

/// The same as a number of the program.
pub fn exact(text: &str) -> Exact {
    Exact::from_rational(number(text))
}

/// How far an enclosure misses a value known to 25 significant digits; `None` if it holds it.
pub fn missed(lower: f64, upper: f64, value: &BigRational) -> Option<String> {
    let digits = BigRational::new(BigInt::from(1), BigInt::from(10).pow(24));
    let slack = value * digits;
    let bound = |end: f64| BigRational::from_float(end).unwrap();
    let holds = bound(lower) <= value + &slack && value - &slack <= bound(upper);
    (!holds).then(|| format!("[{lower:e}, {upper:e}]"))
}

/// Fails with every finding, not only the first.
pub fn report(findings: &[String]) {
    assert!(
        findings.is_empty(),
        "{} rows disagree:\n{}",
        findings.len(),
        findings.join("\n")
    );
}
