//! `completions` and `manual`: from the same definitions as the command line itself.

use std::io::Write;

use clap::CommandFactory;

use crate::args::{Args, Completions};
use crate::failure::Failure;

pub(crate) fn completions(args: &Completions) -> Result<(), Failure> {
    let mut text = Vec::new();
    clap_complete::generate(args.shell, &mut Args::command(), "ohmwright", &mut text);
    Ok(std::io::stdout().lock().write_all(&text)?)
}

/// One page: the program, then every command.
pub(crate) fn manual() -> Result<(), Failure> {
    let mut command = Args::command();
    command.build();
    let mut page = Vec::new();
    let man = clap_mangen::Man::new(command.clone());
    man.render(&mut page)?;
    for sub in command.get_subcommands().filter(|c| c.get_name() != "help") {
        let man = clap_mangen::Man::new(sub.clone());
        writeln!(page, ".SH {}", sub.get_name().to_uppercase())?;
        man.render_description_section(&mut page)?;
        man.render_synopsis_section(&mut page)?;
        man.render_options_section(&mut page)?;
    }
    Ok(std::io::stdout().lock().write_all(&page)?)
}
