//! Which plan it is, and what is tested.

use crate::record::Record;
use crate::report::escape::inline;
use crate::report::words::{Fact, declared, fact};

pub fn identity(record: &Record) -> Vec<Fact> {
    let mut facts = vec![
        fact("Plan", inline(&record.plan.id)),
        fact("Revision", inline(&record.plan.revision)),
        fact("Title", inline(&record.plan.title)),
    ];
    facts.extend(declared::facts(record, "plan"));
    facts.push(
        match record
            .declared
            .get("plan")
            .and_then(|plan| plan.get("supersedes"))
        {
            Some(earlier) => fact("Supersedes", supersedes(earlier)),
            None => fact("Supersedes", "No earlier revision is named."),
        },
    );
    facts.extend(declared::facts(record, "change"));
    facts
}

pub fn requirement(record: &Record) -> Vec<Fact> {
    let characteristic = &record.characteristic;
    let mut facts = declared::facts(record, "requirement");
    facts.push(fact("Characteristic", inline(&characteristic.name)));
    for (label, text) in [
        ("Counted", &characteristic.counts),
        ("Measured", &characteristic.measures),
        ("Unit", &characteristic.unit),
        ("Hazard", &characteristic.hazard),
    ] {
        facts.extend(text.as_deref().map(|text| fact(label, inline(text))));
    }
    facts.extend(declared::facts(record, "risk_link"));
    facts
}

fn supersedes(earlier: &serde_json::Value) -> String {
    let field = |key: &str| earlier.get(key).map(declared::text);
    match (field("revision"), field("record")) {
        (Some(revision), Some(record)) => format!("Revision {revision}, record {record}."),
        (Some(revision), None) => format!("Revision {revision}; its record is not named."),
        _ => declared::text(earlier),
    }
}
