//! The reference of the plan language names every key of the schema, and its worked example does what it says.

#![allow(clippy::unwrap_used)]

use assize::language::schema::json_schema;
use assize::record::Amount;
use assize::{Silent, compile};
use serde_json::Value;

const PAGE: &str = include_str!("../docs/language.md");

/// Names of all properties, at every depth.
fn keys(schema: &Value, found: &mut Vec<String>) {
    match schema {
        Value::Object(entries) => {
            if let Some(Value::Object(properties)) = entries.get("properties") {
                found.extend(properties.keys().cloned());
            }
            entries.values().for_each(|entry| keys(entry, found));
        }
        Value::Array(items) => items.iter().for_each(|item| keys(item, found)),
        _ => {}
    }
}

#[test]
fn every_key_is_in_the_reference() {
    let mut found = Vec::new();
    keys(&json_schema(), &mut found);
    assert!(found.len() > 60, "the schema has keys");
    let reference = PAGE.split_once("## Reference").unwrap().1;
    for key in found {
        let named = [format!("`{key}`"), format!("{{{key}:"), format!(" {key}:")];
        assert!(
            named.iter().any(|name| reference.contains(name)),
            "`{key}` is not in docs/language.md"
        );
    }
}

#[test]
fn the_worked_example_does_what_the_page_says() {
    let example = PAGE.split("```yaml\n").nth(1).unwrap();
    let example = example.split("```").next().unwrap();
    let record = compile(example, &Silent).unwrap().record.unwrap();
    assert_eq!(record.design.sample_size, Some(Amount::Count(93)));
    assert_eq!(record.critical_region.reject_when, "x <= 1");
    // Binomial sums with SciPy 1.17.1: 0.049975795 at 5 %, 0.946117842 at 0.4 %.
    assert!((record.size.value - 0.049_975_795).abs() < 1e-9);
    assert!((record.requirements[0].attained.value - 0.946_117_842).abs() < 1e-9);
    assert!(PAGE.contains("(4.998 %, at p = 5 %) and the power (94.6 % at 0.4 %)"));
}
