//! `check`: what is wrong with plans, and where.

use std::fmt::Write;
use std::path::{Path, PathBuf};

use clap::Args;

use crate::language::diagnostic::{CautionGrade, Diagnostic, Grade};
use crate::language::render::harmless;
use crate::language::source::Source;
use crate::record::Record;
use crate::{InternalError, compile};

use super::file_text::{self, Unread};
use super::progress::Line;
use super::sarif;
use super::status::Status;
use super::terminal;

/// Say what is wrong with plans, and where.
///
/// All errors and cautions of all plans are printed to standard error, each with its place, its line and what to do.
/// Nothing is written to disk. An error stops a plan from being compiled. A caution does not: it names something that an
/// auditor would object to (grade E), a weakness (W), or something worth knowing (I).
#[derive(Debug, Args)]
#[command(after_long_help = EXAMPLES)]
pub struct Arguments {
    /// The plans; a folder stands for all *.yaml and *.yml below it, `-` for standard input
    #[arg(value_name = "PLAN", required = true)]
    plans: Vec<PathBuf>,
    /// Print the findings to standard output in the SARIF format 2.1.0, which code-review tools read
    #[arg(long)]
    sarif: bool,
    /// End with status 1 if a caution of grade E or W is left
    #[arg(long)]
    strict: bool,
}

const EXAMPLES: &str = "\
Examples:
  assize check plans/VP-0031.yaml
  assize check --strict plans
  assize check --sarif plans > findings.sarif

Exit status:
  0  no error; cautions may have been printed
  1  a requirement is not met, or a given region exceeds the level;
     with --strict also: a caution of grade E or W is left
  2  a plan with an error, or a file that cannot be read
  3  internal error";

/// What was found about one file.
pub struct Checked {
    /// The file as it is shown.
    pub name: String,
    /// The file.
    pub path: PathBuf,
    /// Its text as far as it could be read.
    pub text: String,
    /// Errors and cautions, with a place.
    pub findings: Vec<Diagnostic>,
    /// What has no place: the file cannot be read, or the program contradicts itself.
    pub trouble: Option<String>,
    /// What the file means for the exit status.
    pub status: Status,
}

pub fn run(arguments: &Arguments) -> Status {
    let gathered = file_text::gather(&arguments.plans);
    gathered.tell();
    let mut status = gathered.status();
    let mut all = Vec::new();
    for path in &gathered.paths {
        let checked = examine(path, arguments.strict);
        status = status.max(checked.status);
        if arguments.sarif {
            all.push(checked);
        } else {
            tell(&checked);
        }
    }
    if arguments.sarif {
        return terminal::result(&sarif::log(&all, status), status);
    }
    status
}

fn examine(path: &Path, strict: bool) -> Checked {
    let mut checked = Checked {
        name: file_text::shown(path),
        path: path.to_owned(),
        text: String::new(),
        findings: Vec::new(),
        trouble: None,
        status: Status::BadInput,
    };
    match file_text::read(path) {
        Err(Unread::File(reason)) => checked.trouble = Some(reason),
        Err(Unread::Text(diagnostic, text)) => {
            checked.findings.push(*diagnostic);
            checked.text = text;
        }
        Ok(text) => {
            checked.text = text;
            judge(&mut checked, strict);
        }
    }
    checked
}

fn judge(checked: &mut Checked, strict: bool) {
    let progress = Line::new();
    let compiled = compile(&checked.text, &progress);
    progress.done();
    match compiled {
        Err(InternalError(reason)) => {
            checked.trouble = Some(format!("internal error: {reason}"));
            checked.status = Status::Internal;
        }
        Ok(compilation) => {
            checked.findings = compilation.diagnostics;
            checked.status = match &compilation.record {
                None => Status::BadInput,
                Some(record) => {
                    checked.trouble = shortfall(record);
                    Status::of(record).max(strictly(&checked.findings, strict))
                }
            };
        }
    }
}

fn strictly(findings: &[Diagnostic], strict: bool) -> Status {
    let grave = findings.iter().any(|found| {
        matches!(
            found.grade,
            Grade::Caution(CautionGrade::Grave | CautionGrade::Warning)
        )
    });
    if strict && grave {
        Status::Finding
    } else {
        Status::Fine
    }
}

/// What a compiled plan fails to do.
pub fn shortfall(record: &Record) -> Option<String> {
    let unmet = record.requirements.iter().filter(|each| !each.met).count();
    match (record.size.within_level, unmet) {
        (true, 0) => None,
        (false, 0) => Some("the size of the given region is above the level".to_owned()),
        (true, 1) => Some("a requirement is not met".to_owned()),
        (true, more) => Some(format!("{more} requirements are not met")),
        (false, _) => Some(
            "the size of the given region is above the level, and requirements are not met"
                .to_owned(),
        ),
    }
}

fn tell(checked: &Checked) {
    let source = Source::new(&checked.text);
    let mut out = String::new();
    for found in &checked.findings {
        out.push_str(&terminal::finding(found, &checked.name, &source));
    }
    if let Some(trouble) = &checked.trouble {
        let style = terminal::styled("error", terminal::RED);
        let finding = terminal::styled("finding", terminal::YELLOW);
        let word = if checked.status == Status::Finding {
            finding
        } else {
            style
        };
        let _ = writeln!(out, "{}: {word}: {}", checked.name, harmless(trouble));
    }
    // Nobody counts the findings of a text that nobody could read.
    if checked.trouble.is_none() || checked.status == Status::Finding {
        let _ = write!(out, "{}: {}", checked.name, counted(&checked.findings));
    }
    terminal::say(out.trim_end());
}

/// `2 errors, 1 caution`, or that there is nothing to say.
fn counted(findings: &[Diagnostic]) -> String {
    let errors = findings.iter().filter(|found| found.is_error()).count();
    let parts: Vec<String> = [(errors, "error"), (findings.len() - errors, "caution")]
        .iter()
        .filter(|(number, _)| *number > 0)
        .map(|(number, word)| match number {
            1 => format!("1 {word}"),
            more => format!("{more} {word}s"),
        })
        .collect();
    if parts.is_empty() {
        "no error, no caution".to_owned()
    } else {
        parts.join(", ")
    }
}
