//! The command line: the only room with files, a terminal and threads. One file a command.
//!
//! Results go to standard output, everything said about them to standard error. Nothing here writes with the printing
//! macros of the standard library, because those panic when a reader has gone away.

#![deny(clippy::print_stdout, clippy::print_stderr)]

mod check;
mod compile;
mod completions;
mod draft;
mod file_text;
mod manual;
mod picture;
mod progress;
mod sarif;
mod schema;
mod solve;
mod status;
mod terminal;
mod whole_file;

use std::process::ExitCode;

use clap::{Parser, Subcommand};

use status::Status;

/// Compiles declarative test plans into proved critical regions and sealed audit reports.
///
/// A plan is a YAML file that states sets and risks: which values of the parameter count as bad, with what risk a wrong
/// decision may be made, and how many units are inspected. The program derives the decision rule, proves its risks and
/// files a report.
#[derive(Debug, Parser)]
#[command(
    name = "assize",
    version,
    subcommand_required = true,
    arg_required_else_help = true,
    after_help = status::HELP,
    after_long_help = LONG_HELP
)]
pub struct CommandLine {
    #[command(subcommand)]
    command: Command,
}

const LONG_HELP: &str = "\
Begin here:
  assize draft lot-release --out my-plan.yaml     a commented plan to start from
  assize check my-plan.yaml                       what is wrong with it, and where
  assize solve my-plan.yaml                       the rule and its risks, in the terminal
  assize compile my-plan.yaml --out reports       the sealed report

Exit status:
  0  fine
  1  a finding: a requirement is not met, or the size of a given region is above the level
  2  bad input or usage: a plan with an error, a file that cannot be read or written
  3  internal error: two computations of one figure disagree; nothing was filed

Colours are used on a terminal only; NO_COLOR turns them off.";

#[derive(Debug, Subcommand)]
enum Command {
    Draft(draft::Arguments),
    Check(check::Arguments),
    Solve(solve::Arguments),
    Compile(compile::Arguments),
    Schema(schema::Arguments),
    Completions(completions::Arguments),
    Man(manual::Arguments),
}

/// Reads the command line, does what it asks and gives the exit status.
pub fn run() -> ExitCode {
    // clap ends the process itself for help (status 0) and for wrong usage (status 2).
    let line = CommandLine::parse();
    // No input is known to make the program panic. Should one, it is an internal error like any other.
    let outcome = std::panic::catch_unwind(|| obey(&line.command));
    outcome.unwrap_or(Status::Internal).into()
}

fn obey(command: &Command) -> Status {
    match command {
        Command::Draft(arguments) => draft::run(arguments),
        Command::Check(arguments) => check::run(arguments),
        Command::Solve(arguments) => solve::run(arguments),
        Command::Compile(arguments) => compile::run(arguments),
        Command::Schema(arguments) => schema::run(arguments),
        Command::Completions(arguments) => completions::run(arguments),
        Command::Man(arguments) => manual::run(arguments),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use clap::CommandFactory;

    #[test]
    fn the_command_line_is_sound() {
        CommandLine::command().debug_assert();
    }
}
