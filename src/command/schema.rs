//! `schema`: the plan language for editors.

use clap::Args;

use crate::language::schema;

use super::status::Status;
use super::terminal;

/// Print the plan language as JSON Schema 2020-12, for editors.
#[derive(Debug, Args)]
#[command(after_long_help = EXAMPLES)]
pub struct Arguments {}

const EXAMPLES: &str = "\
Examples:
  assize schema > plan.schema.json

An editor with a YAML language server then completes and checks plans that begin with
  # yaml-language-server: $schema=plan.schema.json
The schema knows keys and kinds. What needs thought (sets, ranges, risks) only `check` knows.";

pub fn run(_: &Arguments) -> Status {
    match serde_json::to_string_pretty(schema::shared()) {
        Ok(text) => terminal::result(&format!("{text}\n"), Status::Fine),
        Err(fault) => {
            terminal::complain(&format!("the schema cannot be written: {fault}"));
            Status::Internal
        }
    }
}
