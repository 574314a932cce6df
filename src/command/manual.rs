//! `man`: the manual pages, made from the same words as the help.

use std::fs;
use std::io;
use std::path::{Path, PathBuf};

use clap::{Args, CommandFactory};
use clap_mangen::Man;

use super::status::Status;
use super::whole_file::write_whole;
use super::{CommandLine, file_text, terminal};

/// Print the manual page, or write all of them to a folder.
#[derive(Debug, Args)]
#[command(after_long_help = EXAMPLES)]
pub struct Arguments {
    /// Write a page for the program and one for each command to this folder
    #[arg(long, value_name = "DIR")]
    out: Option<PathBuf>,
}

const EXAMPLES: &str = "\
Examples:
  assize man | man -l -
  assize man --out ~/.local/share/man/man1";

pub fn run(arguments: &Arguments) -> Status {
    let done = match &arguments.out {
        None => page(CommandLine::command())
            .map(|page| terminal::result(&String::from_utf8_lossy(&page), Status::Fine)),
        Some(folder) => all(folder).map(|()| Status::Fine),
    };
    done.unwrap_or_else(|fault| {
        let place = arguments.out.as_deref().map(file_text::shown);
        let place = place.unwrap_or_else(|| "standard output".to_owned());
        terminal::complain_about(&place, &format!("the manual cannot be written: {fault}"));
        Status::BadInput
    })
}

fn page(command: clap::Command) -> io::Result<Vec<u8>> {
    let mut page = Vec::new();
    Man::new(command).render(&mut page)?;
    Ok(page)
}

fn all(folder: &Path) -> io::Result<()> {
    fs::create_dir_all(folder)?;
    let mut program = CommandLine::command();
    program.build();
    let commands = program.get_subcommands();
    for command in commands.filter(|command| command.get_name() != "help") {
        let name = format!("assize-{}.1", command.get_name());
        write_whole(folder, &name, &page(command.clone())?)?;
    }
    write_whole(folder, "assize.1", &page(program)?)
}
