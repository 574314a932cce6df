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
    let mut schema = SchemaSettings::draft2020_12()
        .with_transform(NoNulls)
        .into_generator()
        .into_root_schema_for::<Document>();
    schema.insert(
        "title".into(),
        "assize test plan, language version 1".into(),
    );
    schema.to_value()
}

/// A key that is left out is absent, never null: so no schema accepts null.
#[derive(Clone)]
struct NoNulls;

impl Transform for NoNulls {
    fn transform(&mut self, schema: &mut Schema) {
        transform_subschemas(self, schema);
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
