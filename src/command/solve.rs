//! `solve`: region, size and power in the terminal.

use std::path::PathBuf;

use clap::Args;

use crate::language::diagnostic::Diagnostic;
use crate::language::source::Source;
use crate::record::{self, Record};
use crate::{InternalError, compile};

use super::progress::Line;
use super::status::Status;
use super::{check, file_text, picture, terminal};

/// Print the decision rule of a plan with its size, power and requirements.
///
/// Nothing is written to disk. Every probability is rounded against the plan: risks up, powers down.
#[derive(Debug, Args)]
#[command(after_long_help = EXAMPLES)]
pub struct Arguments {
    /// The plan; `-` reads standard input
    #[arg(value_name = "PLAN")]
    plan: PathBuf,
    /// Print the whole record as JSON, with both ends of every figure
    #[arg(long)]
    json: bool,
}

const EXAMPLES: &str = "\
Examples:
  assize solve plans/VP-0031.yaml
  assize draft lot-release | assize solve -
  assize solve --json plans/VP-0031.yaml > record.json

Exit status:
  0  every requirement is met
  1  a requirement is not met, or a given region exceeds the level
  2  the plan has an error or cannot be read
  3  internal error";

pub fn run(arguments: &Arguments) -> Status {
    let name = file_text::shown(&arguments.plan);
    let text = match file_text::read(&arguments.plan) {
        Ok(text) => text,
        Err(unread) => {
            unread.tell(&name);
            return unread.status();
        }
    };
    let progress = Line::new();
    let compiled = compile(&text, &progress);
    progress.done();
    match compiled {
        Err(InternalError(reason)) => {
            terminal::complain_about(&name, &format!("internal error: {reason}"));
            Status::Internal
        }
        Ok(compilation) => {
            let errors = tell_errors(&compilation.diagnostics, &name, &text);
            match compilation.record {
                None => Status::BadInput,
                Some(record) => {
                    let cautions = compilation.diagnostics.len() - errors;
                    show(record, arguments.json, &name, cautions)
                }
            }
        }
    }
}

/// Prints the errors; cautions are the affair of `check`.
fn tell_errors(diagnostics: &[Diagnostic], name: &str, text: &str) -> usize {
    let source = Source::new(text);
    let errors = diagnostics.iter().filter(|found| found.is_error());
    errors
        .map(|found| terminal::say(terminal::finding(found, name, &source).trim_end()))
        .count()
}

fn show(mut record: Record, json: bool, name: &str, cautions: usize) -> Status {
    let status = Status::of(&record);
    let text = if json {
        match record::seal(&mut record).and_then(|()| record::record_json(&record)) {
            Ok(text) => text,
            Err(fault) => {
                terminal::complain_about(name, &format!("internal error: {fault}"));
                return Status::Internal;
            }
        }
    } else {
        picture::of(&record, terminal::width())
    };
    let status = terminal::result(&text, status);
    if let Some(shortfall) = check::shortfall(&record) {
        let word = terminal::styled("finding", terminal::YELLOW);
        terminal::say(&format!("{name}: {word}: {shortfall}"));
    }
    if cautions > 0 {
        let number = match cautions {
            1 => "1 caution".to_owned(),
            more => format!("{more} cautions"),
        };
        terminal::say(&format!("{name}: {number}; `assize check` prints them"));
    }
    status
}
