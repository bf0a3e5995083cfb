//! `generate`: manual pages and completions, from the same definitions as the help.

use super::options::{Cli, Generate};
use super::output::print;
use super::stop::Stop;
use crate::pictures::write_whole;
use clap::CommandFactory;
use clap_complete::{Shell, generate as complete};
use std::fs;
use std::path::PathBuf;

/// Writes every file and prints their names.
///
/// # Errors
/// A folder that cannot be written.
pub fn generate(asked: &Generate) -> Result<(), Stop> {
    let could_not = |path: &PathBuf, e: std::io::Error| {
        let message = format!("{}: cannot be written", path.display());
        Stop::Machine(anyhow::Error::new(e).context(message))
    };
    let mut names = String::new();
    for (name, bytes) in files()? {
        let path = asked.folder.join(name);
        if let Some(folder) = path.parent() {
            fs::create_dir_all(folder).map_err(|e| could_not(&path, e))?;
        }
        write_whole(&path, &bytes).map_err(|e| could_not(&path, e))?;
        names += &format!("{}\n", path.display());
    }
    print(names.as_bytes())
}

fn files() -> Result<Vec<(String, Vec<u8>)>, Stop> {
    let mut all = Vec::new();
    let mut command = Cli::command();
    command.build();
    let mut page = |command: &clap::Command, name: String| -> Result<(), Stop> {
        let mut bytes = Vec::new();
        clap_mangen::Man::new(command.clone())
            .render(&mut bytes)
            .map_err(|e| Stop::Machine(e.into()))?;
        all.push((format!("man/{name}.1"), bytes));
        Ok(())
    };
    page(&command, "dotwright".into())?;
    for sub in command.get_subcommands().filter(|s| s.get_name() != "help") {
        page(sub, format!("dotwright-{}", sub.get_name()))?;
    }
    let shells = [
        (Shell::Bash, "dotwright.bash"),
        (Shell::Zsh, "_dotwright"),
        (Shell::Fish, "dotwright.fish"),
        (Shell::Elvish, "dotwright.elv"),
        (Shell::PowerShell, "_dotwright.ps1"),
    ];
    for (shell, name) in shells {
        let mut bytes = Vec::new();
        complete(shell, &mut Cli::command(), "dotwright", &mut bytes);
        all.push((format!("completions/{name}"), bytes));
    }
    Ok(all)
}
