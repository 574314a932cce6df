//! `compile`: the main job, from plans to filed reports.

mod cabinet;
mod checksums;
mod identity;
mod job;
mod queue;
mod summary;

use std::num::NonZeroUsize;
use std::path::PathBuf;
use std::thread;

use clap::Args;

use super::progress;
use super::status::Status;
use super::{file_text, terminal};
use cabinet::Cabinet;
use job::Outcome;

/// Compile plans into sealed reports.
///
/// For each plan the files ID-REVISION.md, .html and .json are written: the report to read in version control, the report
/// to print and file, and the record with every figure. SHA256SUMS lists them for `sha256sum --check`.
///
/// Every plan that compiles is filed, whatever the others do. Filed reports are never changed silently: if the same plan
/// number and revision would now give another content, the plan is refused unless --replace is given. Two plans of one
/// run must not claim the same files. A report that was interrupted is made whole by running the command again.
#[derive(Debug, Args)]
#[command(after_long_help = EXAMPLES)]
pub struct Arguments {
    /// The plans; a folder stands for all *.yaml and *.yml below it
    #[arg(value_name = "PLAN-or-DIR", required = true)]
    plans: Vec<PathBuf>,
    /// The folder for the reports; made if it is not there
    #[arg(long, value_name = "DIR", default_value = "reports")]
    out: PathBuf,
    /// Write over reports filed with other content under the same plan number and revision
    #[arg(long)]
    replace: bool,
    /// How many plans are compiled at the same time; as many as there are processors when left out
    #[arg(long, value_name = "N")]
    jobs: Option<NonZeroUsize>,
}

const EXAMPLES: &str = "\
Examples:
  assize compile plans                             every plan of a folder, into `reports`
  assize compile plans/VP-0031.yaml --out filed    one plan, into `filed`
  cd filed && sha256sum --check SHA256SUMS

Exit status, the worst of all plans:
  0  every plan is filed and every requirement is met
  1  a requirement is not met, or a given region exceeds the level; the report says so
  2  a plan has an error, cannot be read or is refused; or the folder cannot be written
  3  internal error: two computations of one figure disagree; nothing is filed for that plan";

pub fn run(arguments: &Arguments) -> Status {
    // A report names the hash of a file that an auditor can be shown.
    if arguments
        .plans
        .iter()
        .any(|plan| file_text::is_standard_input(plan))
    {
        terminal::complain("`compile` takes files and folders, not standard input");
        return Status::BadInput;
    }
    let gathered = file_text::gather(&arguments.plans);
    gathered.tell();
    let mut status = gathered.status();
    if gathered.paths.is_empty() {
        return status;
    }
    let cabinet = match Cabinet::open(&arguments.out, arguments.replace) {
        Ok(cabinet) => cabinet,
        Err(reason) => {
            terminal::complain_about(&file_text::shown(&arguments.out), &reason);
            return Status::BadInput;
        }
    };
    let outcomes = compile_all(&gathered.paths, &cabinet, workers(arguments.jobs));
    let mut checksums = Vec::new();
    for outcome in &outcomes {
        if !outcome.messages.is_empty() {
            terminal::say(outcome.messages.trim_end());
        }
        status = status.max(outcome.status);
        checksums.extend(outcome.checksums.iter().cloned());
    }
    if let Err(reason) = cabinet.list(checksums) {
        terminal::complain_about(&file_text::shown(&arguments.out), &reason);
        status = status.max(Status::BadInput);
    }
    terminal::result(&summary::table(&outcomes, &arguments.out), status)
}

fn workers(asked: Option<NonZeroUsize>) -> usize {
    asked
        .or_else(|| thread::available_parallelism().ok())
        .map_or(1, NonZeroUsize::get)
}

/// The outcomes in the order of the plans, whichever is ready first.
fn compile_all(paths: &[PathBuf], cabinet: &Cabinet, workers: usize) -> Vec<Outcome> {
    let identities = queue::in_parallel(paths, workers, |path| identity::of(path));
    let rivals = identity::rivals(&identities);
    let bar = progress::over_plans(paths.len());
    let jobs: Vec<usize> = (0..paths.len()).collect();
    let outcomes = queue::in_parallel(&jobs, workers, |at| {
        let told = progress::Told(&bar);
        let outcome = match rivals.get(at) {
            Some(rival) => {
                Outcome::contested(&paths[*at], &paths[*rival], identities[*at].as_ref())
            }
            None => job::compile_one(&paths[*at], identities[*at].as_ref(), cabinet, &told),
        };
        bar.inc(1);
        outcome
    });
    bar.finish_and_clear();
    outcomes
}
