//! The command line of assize.

use std::process::ExitCode;

fn main() -> ExitCode {
    assize::command::run()
}
