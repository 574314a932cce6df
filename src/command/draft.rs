//! `draft`: a commented plan to start from.

use std::fmt::Write;
use std::path::{Path, PathBuf};

use clap::Args;

use crate::language::suggestion;

use super::status::Status;
use super::whole_file::{write_new, write_whole};
use super::{file_text, terminal};

/// Write a commented starter plan for a kind of problem.
///
/// A draft compiles as it stands, with invented figures. Replace the words and the figures by your own; the comments say
/// what each line decides.
#[derive(Debug, Args)]
#[command(after_long_help = EXAMPLES)]
pub struct Arguments {
    /// The kind of problem; `assize draft --list` names them all
    #[arg(value_name = "KIND", required_unless_present = "list")]
    kind: Option<String>,
    /// Name the kinds, a line each
    #[arg(long)]
    list: bool,
    /// Write to this file instead of standard output; an existing file is kept
    #[arg(long, value_name = "FILE", conflicts_with = "list")]
    out: Option<PathBuf>,
    /// Write over an existing file
    #[arg(long, requires = "out")]
    replace: bool,
}

const EXAMPLES: &str = "\
Examples:
  assize draft --list
  assize draft lot-release > my-plan.yaml
  assize draft zero-failures --out plans/VP-0031.yaml

Exit status: 0, or 2 when the kind is not known or the file cannot be written.";

/// A kind of problem.
struct Draft {
    kind: &'static str,
    about: &'static str,
    text: &'static str,
}

macro_rules! drafts {
    ($($kind:literal: $about:literal),+ $(,)?) => {
        &[$(Draft {
            kind: $kind,
            about: $about,
            text: include_str!(concat!("../../templates/drafts/", $kind, ".yaml")),
        }),+]
    };
}

/// The drafts, the commonest first.
const DRAFTS: &[Draft] = drafts! {
    "lot-release": "a lot is released only if the sample speaks against bad quality (binomial)",
    "lot-audit": "a lot is refused only if the sample speaks against good quality (binomial)",
    "zero-failures": "how many units without a single failure show a reliability (binomial)",
    "finite-lot": "a claim about one lot of known size, sampled without replacement (hypergeometric)",
    "count-rate": "flaws per area, or events per time (Poisson)",
    "until-failures": "inspection ends at a number of nonconforming units (negative binomial)",
    "equivalence": "a fraction shown to lie between two margins (binomial)",
    "two-sided": "a fraction tested against one value, both ways (binomial)",
};

pub fn run(arguments: &Arguments) -> Status {
    if arguments.list {
        return terminal::result(&list(), Status::Fine);
    }
    let asked = arguments.kind.as_deref().unwrap_or_default();
    let Some(draft) = DRAFTS.iter().find(|draft| draft.kind == asked) else {
        terminal::complain(&format!(
            "there is no draft of the kind `{}`",
            crate::language::render::harmless(asked)
        ));
        let kinds = DRAFTS.iter().map(|draft| draft.kind);
        terminal::say(&match suggestion::nearest(asked, kinds) {
            Some(meant) => format!("    help: did you mean `{meant}`?"),
            None => format!("    help: the kinds are\n{}", list().trim_end()),
        });
        return Status::BadInput;
    };
    match &arguments.out {
        None => terminal::result(draft.text, Status::Fine),
        Some(path) => to_file(path, draft.text, arguments.replace),
    }
}

fn list() -> String {
    let mut out = String::new();
    for draft in DRAFTS {
        let _ = writeln!(out, "  {:<15} {}", draft.kind, draft.about);
    }
    out
}

fn to_file(path: &Path, text: &str, replace: bool) -> Status {
    let folder = match path.parent() {
        Some(folder) if folder != Path::new("") => folder,
        _ => Path::new("."),
    };
    let written = match path.file_name().and_then(|name| name.to_str()) {
        None => Err(std::io::Error::other("this is not the name of a file")),
        Some(name) if replace => write_whole(folder, name, text.as_bytes()),
        Some(name) => write_new(folder, name, text.as_bytes()),
    };
    match written {
        Ok(()) => Status::Fine,
        Err(fault) => {
            let shown = file_text::shown(path);
            if fault.kind() == std::io::ErrorKind::AlreadyExists {
                terminal::complain_about(&shown, "this file exists and is kept");
                terminal::say("    help: choose another name, or write over it with --replace");
            } else {
                terminal::complain_about(&shown, &format!("cannot be written: {fault}"));
            }
            Status::BadInput
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::{Silent, compile};

    /// A draft is what a newcomer sees first: it has neither an error nor an unmet requirement, nor anything that an
    /// auditor would object to.
    #[test]
    fn every_draft_compiles() {
        for draft in DRAFTS {
            let compiled = compile(draft.text, &Silent).unwrap();
            let record = compiled
                .record
                .unwrap_or_else(|| panic!("{}: {:#?}", draft.kind, compiled.diagnostics));
            assert_eq!(Status::of(&record), Status::Fine, "{}", draft.kind);
            let grave = record.cautions.iter().find(|caution| caution.grade == "E");
            assert!(grave.is_none(), "{}: {grave:?}", draft.kind);
        }
    }

    #[test]
    fn kinds_and_plan_numbers_are_told_apart() {
        let kinds: std::collections::BTreeSet<_> = DRAFTS.iter().map(|draft| draft.kind).collect();
        assert_eq!(kinds.len(), DRAFTS.len());
    }
}
