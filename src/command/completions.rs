//! `completions`: what a shell needs to complete the command line.

use clap::{Args, CommandFactory};
use clap_complete::Shell;

use super::status::Status;
use super::{CommandLine, terminal};

/// Print the completions for a shell.
#[derive(Debug, Args)]
#[command(after_long_help = EXAMPLES)]
pub struct Arguments {
    /// For which shell
    #[arg(value_name = "SHELL")]
    shell: Shell,
}

const EXAMPLES: &str = "\
Examples:
  assize completions bash > ~/.local/share/bash-completion/completions/assize
  assize completions zsh  > ~/.zfunc/_assize
  assize completions fish > ~/.config/fish/completions/assize.fish";

pub fn run(arguments: &Arguments) -> Status {
    // Written to memory first: the generator panics when its stream is closed.
    let mut script = Vec::new();
    let mut command = CommandLine::command();
    clap_complete::generate(arguments.shell, &mut command, "assize", &mut script);
    terminal::result(&String::from_utf8_lossy(&script), Status::Fine)
}
