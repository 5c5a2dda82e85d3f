//! The command line told to others: completions for a shell, manual pages.

use std::io::{self, Write};

use clap::CommandFactory;
use clap_complete::Shell;
use clap_mangen::Man;

use crate::cli::Typed;

/// Writes the completions of a shell.
///
/// # Errors
/// What the stream reports.
pub fn completions(shell: Shell, out: &mut dyn Write) -> io::Result<()> {
    // Collected first: the generator takes a refusing stream for a fault of the program.
    let mut text = Vec::new();
    clap_complete::generate(shell, &mut Typed::command(), "ventrise", &mut text);
    out.write_all(&text)
}

/// Writes the manual page of a command, or of the program; nothing for a command that is none.
///
/// # Errors
/// What the stream reports.
pub fn page(command: Option<&str>, out: &mut dyn Write) -> io::Result<()> {
    let mut program = Typed::command();
    program.build();
    let told = match command {
        Some(name) => program.find_subcommand(name).cloned(),
        None => Some(program),
    };
    told.map_or(Ok(()), |command| Man::new(command).render(&mut &mut *out))
}
