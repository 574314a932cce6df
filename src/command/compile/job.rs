//! One plan's way from file to files.

use std::fmt::Display;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::path::{Path, PathBuf};

use crate::command::file_text::{self, Unread};
use crate::command::status::Status;
use crate::command::terminal;
use crate::language::diagnostic::Diagnostic;
use crate::language::source::Source;
use crate::record::{self, Record};
use crate::report::{self, Brief, brief};
use crate::{Progress, compile};

use super::cabinet::{Cabinet, Filed, Refusal};
use super::identity::Identity;

/// What became of one plan.
pub struct Outcome {
    /// Its file.
    pub path: PathBuf,
    /// Plan number and revision, if it has any.
    pub identity: Option<Identity>,
    /// The figures of the summary table.
    pub brief: Option<Brief>,
    /// Whether it compiles but must not be filed.
    pub refused: bool,
    /// What was filed.
    pub filed: Option<Filed>,
    /// How many cautions the plan has.
    pub cautions: usize,
    /// What is to be said on standard error.
    pub messages: String,
    /// File names and their lines in the list of hashes.
    pub checksums: Vec<(String, String)>,
    /// What the plan means for the exit status.
    pub status: Status,
}

impl Outcome {
    fn nothing(path: &Path, identity: Option<&Identity>, status: Status) -> Self {
        Self {
            path: path.to_owned(),
            identity: identity.cloned(),
            brief: None,
            refused: false,
            filed: None,
            cautions: 0,
            messages: String::new(),
            checksums: Vec::new(),
            status,
        }
    }

    /// An outcome with a message and nothing filed.
    fn trouble(
        path: &Path,
        identity: Option<&Identity>,
        status: Status,
        what: impl Display,
    ) -> Self {
        let word = terminal::styled("error", terminal::RED);
        let mut outcome = Self::nothing(path, identity, status);
        outcome.messages = format!("{}: {word}: {what}\n", file_text::shown(path));
        outcome
    }

    /// A plan whose files another plan of the same run claims too.
    pub fn contested(path: &Path, rival: &Path, identity: Option<&Identity>) -> Self {
        let mut outcome = Self::trouble(
            path,
            identity,
            Status::BadInput,
            format_args!("{} claims the same files", file_text::shown(rival)),
        );
        outcome.refused = true;
        outcome
            .messages
            .push_str("    help: give each plan a number or revision of its own; capitals alone do not tell them apart\n");
        outcome
    }
}

/// Compiles and files one plan. A panic, which no input is known to cause, ends this plan only.
pub fn compile_one(
    path: &Path,
    identity: Option<&Identity>,
    cabinet: &Cabinet,
    progress: &dyn Progress,
) -> Outcome {
    let attempt = catch_unwind(AssertUnwindSafe(|| {
        attempt(path, identity, cabinet, progress)
    }));
    attempt.unwrap_or_else(|_| {
        let what = "internal error: the program stopped in the middle of this plan";
        Outcome::trouble(path, identity, Status::Internal, what)
    })
}

fn attempt(
    path: &Path,
    identity: Option<&Identity>,
    cabinet: &Cabinet,
    progress: &dyn Progress,
) -> Outcome {
    let text = match file_text::read(path) {
        Ok(text) => text,
        Err(Unread::File(reason)) => {
            return Outcome::trouble(path, identity, Status::BadInput, reason);
        }
        Err(Unread::Text(found, text)) => {
            return with_errors(path, identity, std::slice::from_ref(&*found), &text);
        }
    };
    let compilation = match compile(&text, progress) {
        Ok(compilation) => compilation,
        Err(fault) => return Outcome::trouble(path, identity, Status::Internal, fault),
    };
    let Some(mut sealed) = compilation.record else {
        return with_errors(path, identity, &compilation.diagnostics, &text);
    };
    let Some(identity) = identity.filter(|identity| {
        identity.id == sealed.plan.id && identity.revision == sealed.plan.revision
    }) else {
        let what = "the plan was changed while it was being compiled";
        return Outcome::trouble(path, None, Status::BadInput, what);
    };
    let parts = match parts(&mut sealed, &identity.stem()) {
        Ok(parts) => parts,
        Err(reason) => return Outcome::trouble(path, Some(identity), Status::Internal, reason),
    };
    let mut outcome = filed(path, identity, cabinet, &parts, &sealed);
    outcome.cautions = compilation.diagnostics.len();
    outcome
}

fn with_errors(
    path: &Path,
    identity: Option<&Identity>,
    diagnostics: &[Diagnostic],
    text: &str,
) -> Outcome {
    let source = Source::new(text);
    let name = file_text::shown(path);
    let mut outcome = Outcome::nothing(path, identity, Status::BadInput);
    for found in diagnostics.iter().filter(|found| found.is_error()) {
        outcome
            .messages
            .push_str(&terminal::finding(found, &name, &source));
    }
    outcome
}

/// The files of a report, by name, in the order in which they get their names: the one people open first comes last.
fn parts(sealed: &mut Record, stem: &str) -> Result<Vec<(String, String)>, String> {
    let internal = |fault: &dyn Display| format!("internal error: {fault}");
    record::seal(sealed).map_err(|fault| internal(&fault))?;
    let json = record::record_json(sealed).map_err(|fault| internal(&fault))?;
    let markdown = report::markdown(sealed).map_err(|fault| internal(&fault))?;
    let html = report::html(&markdown, sealed).map_err(|fault| internal(&fault))?;
    Ok(vec![
        (format!("{stem}.json"), json),
        (format!("{stem}.md"), markdown),
        (format!("{stem}.html"), html),
    ])
}

fn filed(
    path: &Path,
    identity: &Identity,
    cabinet: &Cabinet,
    parts: &[(String, String)],
    sealed: &Record,
) -> Outcome {
    let mut outcome = match cabinet.file(parts) {
        Ok(filed) => {
            let mut outcome = Outcome::nothing(path, Some(identity), Status::of(sealed));
            outcome.filed = Some(filed);
            outcome.checksums = parts
                .iter()
                .map(|(name, content)| {
                    let line = record::checksum_line(name, content.as_bytes());
                    (name.clone(), line)
                })
                .collect();
            outcome
        }
        Err(refusal) => {
            let mut outcome = Outcome::trouble(path, Some(identity), Status::BadInput, &refusal);
            outcome.refused = true;
            if matches!(refusal, Refusal::Differs(_)) {
                outcome.messages.push_str(
                    "    help: raise the revision of the plan, or write over the filed report with --replace\n",
                );
            }
            outcome
        }
    };
    outcome.brief = Some(brief(sealed));
    outcome
}
