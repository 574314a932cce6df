//! The plan language as JSON Schema 2020-12, derived from the document's types.

use std::sync::LazyLock;

use schemars::Schema;
use schemars::generate::SchemaSettings;
use schemars::transform::{Transform, transform_subschemas};
use serde_json::Value;

use crate::language::document::Document;

/// The schema, made once.
static SCHEMA: LazyLock<Value> = LazyLock::new(make);

/// The schema of a plan. Scalars accept what an editor's YAML reader makes of them.
pub fn json_schema() -> Value {
    SCHEMA.clone()
}

/// The same without a copy.
pub fn shared() -> &'static Value {
    &SCHEMA
}

fn make() -> Value {
    let derived = SchemaSettings::draft2020_12()
        .with_transform(PlanTransform)
        .into_generator()
        .into_root_schema_for::<Document>()
        .to_value();
    let mut schema = serde_json::Map::new();
    let title = "assize test plan, language version 1";
    schema.insert("$schema".into(), DRAFT.into());
    schema.insert("title".into(), title.into());
    if let Value::Object(derived) = derived {
        schema.extend(
            derived
                .into_iter()
                .filter(|(key, _)| !matches!(key.as_str(), "$schema" | "title")),
        );
    }
    Value::Object(schema)
}

/// The edition of JSON Schema.
const DRAFT: &str = "https://json-schema.org/draft/2020-12/schema";

/// A key that is left out is absent, never null: so no schema accepts null. Nor does a list that says nothing pass.
#[derive(Clone)]
struct PlanTransform;

impl Transform for PlanTransform {
    fn transform(&mut self, schema: &mut Schema) {
        transform_subschemas(self, schema);
        if schema.get("items").is_some() {
            schema.insert("minItems".into(), 1.into());
        }
        if let Some(Value::Array(kinds)) = schema.get_mut("type") {
            kinds.retain(|kind| kind != "null");
            if let [only] = kinds.as_slice() {
                let only = only.clone();
                schema.insert("type".into(), only);
            }
        }
        let Some(Value::Array(choices)) = schema.get_mut("anyOf") else {
            return;
        };
        choices.retain(|choice| choice.get("type").and_then(Value::as_str) != Some("null"));
        if let [Value::Object(only)] = choices.as_slice() {
            let only = only.clone();
            schema.remove("anyOf");
            for (key, value) in only {
                schema.insert(key, value);
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Every schema within a schema.
    fn all<'a>(schema: &'a Value, found: &mut Vec<&'a Value>) {
        found.push(schema);
        match schema {
            Value::Object(entries) => entries.values().for_each(|each| all(each, found)),
            Value::Array(items) => items.iter().for_each(|each| all(each, found)),
            _ => {}
        }
    }

    #[test]
    fn names_its_edition_and_what_it_is() {
        let schema = json_schema();
        assert_eq!(schema["$schema"], DRAFT);
        assert!(
            schema["title"]
                .as_str()
                .unwrap()
                .contains("language version 1")
        );
        assert_eq!(
            schema["required"],
            serde_json::json!(["assize", "plan", "characteristic", "test", "decision"])
        );
    }

    #[test]
    fn every_reference_leads_somewhere_and_nothing_is_null() {
        let schema = json_schema();
        let mut every = Vec::new();
        all(&schema, &mut every);
        let references: Vec<&str> = every
            .iter()
            .filter_map(|each| each.get("$ref")?.as_str())
            .collect();
        assert!(references.len() > 50);
        for reference in references {
            let name = reference.strip_prefix("#/$defs/").unwrap();
            assert!(schema["$defs"].get(name).is_some(), "{reference}");
        }
        assert!(!every.iter().any(|each| each.is_null() || *each == "null"));
    }

    #[test]
    fn every_key_says_what_it_is_and_no_other_is_allowed() {
        let schema = json_schema();
        let mut every = Vec::new();
        all(&schema, &mut every);
        for each in every {
            let Some(Value::Object(properties)) = each.get("properties") else {
                continue;
            };
            if properties
                .values()
                .all(|property| property.get("description").is_some())
            {
                assert_eq!(each["additionalProperties"], false);
            } else {
                panic!("a key without a description: {properties:?}");
            }
        }
    }

    #[test]
    fn words_are_those_that_are_read() {
        let schema = json_schema();
        let words =
            |block: &str, key: &str| schema["$defs"][block]["properties"][key]["enum"].clone();
        assert_eq!(
            words("TestBlock", "family"),
            serde_json::json!(crate::language::families::DERIVED)
        );
        assert_eq!(
            words("TestBlock", "tails"),
            serde_json::json!(["equal", "joint", "unbiased"])
        );
        assert_eq!(
            words("DecisionBlock", "accept_when"),
            serde_json::json!(["null_rejected", "null_retained"])
        );
    }
}
